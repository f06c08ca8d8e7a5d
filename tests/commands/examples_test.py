"""Every console example of the README, the manual and the demo runs does what the page shows.

In a ```console block, a line `$ command`, carried on by lines `> more`, is run, and the lines below
it are what it prints, errors included. A line `...` stands for any lines, `...` within a line for anything in that line. A
command whose lines show `clickwise: ` at a line's start must fail, any other must succeed. The
blocks of one page run in order, in a folder that holds the demo runs.
"""
import pathlib
import re
import subprocess
import tempfile
import unittest

import program

PAGES = [program.ROOT / "README.md", *sorted((program.ROOT / "docs/manual").glob("*.md")),
         *sorted((program.ROOT / "demo-runs").glob("*/README.md"))]
BLOCK = re.compile(r"^```console\n(.*?)^```$", re.MULTILINE | re.DOTALL)


class Example:
    def __init__(self, page, line, command):
        self.page, self.line, self.command, self.lines = page, line, command, []

    def pattern(self):
        parts = []
        for line in self.lines:
            if line == "...":
                parts.append(r"(?:.*\n)*?")
            else:
                parts.append(".*".join(map(re.escape, line.rstrip().split("..."))) + r" *\n")
        return re.compile("".join(parts))

    def fails(self):
        return any(line.startswith("clickwise: ") for line in self.lines)


def examples_of(page):
    text = page.read_text()
    examples = []
    for block in BLOCK.finditer(text):
        first = text.count("\n", 0, block.start(1)) + 1
        for number, line in enumerate(block[1].splitlines(), first):
            if line.startswith("$ "):
                examples.append(Example(page, number, line[2:]))
            elif line.startswith("> "):
                examples[-1].command += "\n" + line[2:]
            else:
                examples[-1].lines.append(line)
    return examples


class Examples(unittest.TestCase):
    def check(self, example, folder):
        done = subprocess.run(["sh", "-c", example.command], cwd=folder, text=True,
                              stdin=subprocess.DEVNULL, stdout=subprocess.PIPE,
                              stderr=subprocess.STDOUT, timeout=program.LONGEST_S,
                              env=program.ENVIRONMENT)
        where = f"{example.page.relative_to(program.ROOT)}:{example.line}: {example.command}"
        with self.subTest(where):
            self.assertEqual(done.returncode != 0, example.fails(),
                             f"status {done.returncode}\n{done.stdout}")
            shown = "\n".join(example.lines)
            self.assertIsNotNone(example.pattern().fullmatch(done.stdout),
                                 f"the page shows\n{shown}\nbut it prints\n{done.stdout}")

    def test_every_page_shows_what_the_program_prints(self):
        for page in PAGES:
            with tempfile.TemporaryDirectory(prefix="clickwise-") as folder:
                program.copy_demos(pathlib.Path(folder))
                for example in examples_of(page):
                    self.check(example, folder)

    def test_every_command_has_a_page_with_an_example(self):
        help_text = program.run("--help", cwd=program.ROOT).out
        commands = re.findall(r"^  (\w+) {2,}", help_text.split("Subcommands:")[1], re.MULTILINE)
        self.assertGreaterEqual(len(commands), 4)
        for command in commands:
            page = program.ROOT / "docs/manual" / f"{command}.md"
            self.assertTrue(any(f"clickwise {command} " in example.command
                                for example in examples_of(page)), page)
            options = set(re.findall(r"--[a-z]+", program.run(command, "--help",
                                                              cwd=program.ROOT).out))
            missing = {option for option in options if option not in page.read_text()}
            self.assertFalse(missing, f"{page.name} does not tell of these options")


program.main()
