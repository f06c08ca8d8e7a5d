"""The program under test, and scratch folders to run it in."""
import os
import pathlib
import shutil
import subprocess
import sys
import tempfile
import time
import unittest

ROOT = pathlib.Path(sys.argv[1]).resolve()
BINARY = pathlib.Path(sys.argv[2]).resolve()
LONGEST_S = 600  # the sanitized program, on two busy cores

# A crash found by a sanitizer must not pass for one of the program's own statuses.
ENVIRONMENT = {**os.environ, "ASAN_OPTIONS": "exitcode=99", "UBSAN_OPTIONS": "halt_on_error=1:exitcode=99",
               "LSAN_OPTIONS": f"print_suppressions=0:suppressions={ROOT}/tests/commands/leaks_of_libraries.txt",
               "PATH": f"{BINARY.parent}:{os.environ['PATH']}", "LC_ALL": "C.UTF-8"}


class Result:
    def __init__(self, done, seconds):
        self.status = done.returncode
        self.out = done.stdout
        self.err = done.stderr
        self.seconds = seconds


def run(*arguments, cwd, stdin=subprocess.DEVNULL, **environment):
    """One clickwise command; its output as text."""
    begin = time.monotonic()
    done = subprocess.run([BINARY, *map(str, arguments)], cwd=cwd, stdin=stdin, text=True,
                          capture_output=True, timeout=LONGEST_S,
                          env={**ENVIRONMENT, **environment})
    return Result(done, time.monotonic() - begin)


class Scratch(unittest.TestCase):
    """Tests that share one folder, filled once by fill(folder)."""

    @classmethod
    def setUpClass(cls):
        cls._keeper = tempfile.TemporaryDirectory(prefix="clickwise-")
        cls.folder = pathlib.Path(cls._keeper.name)
        cls.fill()

    @classmethod
    def fill(cls):
        pass

    @classmethod
    def tearDownClass(cls):
        cls._keeper.cleanup()

    def run_ok(self, *arguments, **more):
        result = run(*arguments, cwd=self.folder, **more)
        self.assertEqual(result.status, 0, result.err)
        return result


def copy_demos(folder):
    shutil.copytree(ROOT / "demo-runs", folder / "demo-runs")


def main():
    unittest.main(argv=sys.argv[:1] + sys.argv[3:])
