"""A module includes only the modules that its row in DEVELOPERS.md names, all of rows above it."""
import pathlib
import re
import sys

root = pathlib.Path(sys.argv[1])
row = re.compile(r"^\| (\d+) \| `(\w+)` \|.*\| ([^|]+) \|$")
include = re.compile(r'^\s*#\s*include\s*[<"]clickwise/(\w+)/')
fenced = {  # third-party headers and the one module that may name them
    "toml++": "io", "hdf5": "io", "H5": "io", "zlib": "io", "libdeflate": "io",
    "boost/endian": "logs", "fftw3": "signal", "boost/json": "report",
    "boost/beast": "server", "CLI/": "cli",
}

rows, allowed = {}, {}
for line in (root / "DEVELOPERS.md").read_text().splitlines():
    match = row.match(line)
    if match:
        rows[match[2]] = int(match[1])
        allowed[match[2]] = set(re.findall(r"\w+", match[3]))
assert rows, "DEVELOPERS.md has no layer table"
faults = []
for module, names in allowed.items():
    for name in names:
        if rows.get(name, 99) >= rows[module]:
            faults.append(f"DEVELOPERS.md: {module} may not stand on {name}: not in a row above")
checked = 0
for tree in ("include/clickwise", "src"):
    for path in sorted((root / tree).rglob("*.[hc]pp")):
        parts = path.relative_to(root / tree).parts
        if len(parts) < 2:
            continue
        module = parts[0]
        if module not in allowed:
            faults.append(f"{path}: module {module} is not in the layer table")
            continue
        for number, line in enumerate(path.read_text().splitlines(), 1):
            where = f"{path.relative_to(root)}:{number}"
            match = include.match(line)
            if match and match[1] != module and match[1] not in allowed[module]:
                faults.append(f"{where}: {module} may not include {match[1]}")
            third = re.match(r'^\s*#\s*include\s*[<"]([^>"]+)[>"]', line)
            if third:
                checked += 1
                for prefix, owner in fenced.items():
                    if third[1].startswith(prefix) and (tree != "src" or module not in
                                                        (owner, "server")):
                        faults.append(f"{where}: {third[1]} stays inside src/{owner}")
print("\n".join(faults) or f"{checked} includes keep the layers")
sys.exit(bool(faults))
