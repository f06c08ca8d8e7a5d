"""Every *_test.cpp of the tree is compiled, and every *_test.py is run."""
import json
import pathlib
import sys

root, build = pathlib.Path(sys.argv[1]), pathlib.Path(sys.argv[2])
compiled = {pathlib.Path(entry["file"]).resolve()
            for entry in json.loads((build / "compile_commands.json").read_text())}
registered = "".join(path.read_text() for path in build.rglob("CTestTestfile.cmake"))
lost = [path for path in (root / "tests").rglob("*_test.cpp") if path.resolve() not in compiled]
lost += [path for path in (root / "tests").rglob("*_test.py") if path.name not in registered]
for path in lost:
    print(f"{path.relative_to(root)}: not in the build")
sys.exit(bool(lost))
