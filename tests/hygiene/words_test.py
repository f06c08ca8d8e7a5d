"""No leftovers and no paths of one machine in what is kept; no file outgrows its noun."""
import pathlib
import re
import subprocess
import sys

root = pathlib.Path(sys.argv[1])
if not (root / ".git").exists():
    print("skipped: not a git checkout")
    sys.exit(0)
files = subprocess.run(["git", "ls-files"], cwd=root, capture_output=True, text=True,
                       check=True).stdout.splitlines()
fixed = {"CMakeLists.txt", "README.md", "DEVELOPERS.md", "src", "include", "tests", "demo-runs",
         "docs"}
leftovers = re.compile(r"\b(" + "|".join(["TO" + "DO", "FIX" + "ME", "XX" + "X"]) + r")\b")
faults = []
for name in files:
    top = name.split("/")[0]
    if top not in fixed and not top.startswith("."):
        faults.append(f"{name}: not one of the root's fixed entries")
    path = root / name
    if path.suffix not in {".cpp", ".hpp", ".py", ".md", ".toml", ".sh", ".txt", ".ts", ".css"}:
        continue
    text = path.read_text()
    for number, line in enumerate(text.splitlines(), 1):
        if leftovers.search(line):
            faults.append(f"{name}:{number}: leftover")
        if "/ro" + "ot/" in line or "/ho" + "me/" in line or "/wo" + "rk/" in line:
            faults.append(f"{name}:{number}: a path of one machine")
    if path.suffix in {".cpp", ".hpp"} and text.count("\n") > 450 and "tests/" not in name:
        faults.append(f"{name}: {text.count(chr(10))} lines: one noun a file")
print("\n".join(faults) or f"{len(files)} files are clean")
sys.exit(bool(faults))
