"""Runs every command of the documentation: the blocks marked `sh` of README.md and docs/**/*.md, file by file, in order, each file in
an empty folder of its own with the tools on the PATH. Blocks marked otherwise (console, text, cpp) are not run."""

import os
import re
import shutil
import subprocess
import tempfile
import unittest

from tool_case import BIN, SOURCE

BLOCK = re.compile(r"^```sh\n(.*?)^```$", re.MULTILINE | re.DOTALL)


def pages():
    return [page for page in [SOURCE / "README.md", *sorted((SOURCE / "docs").rglob("*.md"))] if page.exists()]


def blocks(page):
    return BLOCK.findall(page.read_text(encoding="utf-8"))


class Commands(unittest.TestCase):
    def test_every_page_runs(self):
        for page in pages():
            found = blocks(page)
            if not found:
                continue
            with self.subTest(page=str(page.relative_to(SOURCE))):
                self.run_page(found)

    def run_page(self, found):
        folder = tempfile.mkdtemp(prefix="tambour-docs-")
        self.addCleanup(shutil.rmtree, folder, ignore_errors=True)
        environment = dict(os.environ, PATH=f"{BIN}{os.pathsep}{os.environ['PATH']}")
        for block in found:
            done = subprocess.run(["bash", "-euo", "pipefail", "-c", block], cwd=folder, env=environment, text=True,
                                  capture_output=True, timeout=900)
            self.assertEqual(done.returncode, 0, f"{block}\nstdout: {done.stdout}\nstderr: {done.stderr}")

    def test_every_tool_has_a_page_with_an_example_and_all_its_options(self):
        tools = sorted(BIN.glob("tambour-*"))
        self.assertGreaterEqual(len(tools), 8, f"{BIN} holds the tools")
        for tool in tools:
            page = SOURCE / "docs" / "tools" / f"{tool.name.removeprefix('tambour-')}.md"
            with self.subTest(tool=tool.name):
                self.assertTrue(page.exists(), page)
                self.assertTrue(any(tool.name in block for block in blocks(page)), f"{page} shows no run of {tool.name}")
                help_text = subprocess.run([tool, "--help"], capture_output=True, text=True, check=True).stdout
                told = page.read_text(encoding="utf-8")
                common = {"--help", "--version", "--out", "--force", "--threads", "--quiet", "--json"}
                for option in sorted(set(re.findall(r"^\s+(?:-\w,)?(--[a-z-]+)", help_text, re.MULTILINE)) - common):
                    self.assertIn(f"`{option}", told, f"{page} does not tell of {option}")


if __name__ == "__main__":
    unittest.main()
