"""What the end-to-end tests share: a scratch folder, running a tool, making inputs, reading tables."""

import csv
import json
import os
import pathlib
import shutil
import subprocess
import tempfile
import unittest

import numpy

SOURCE = pathlib.Path(os.environ.get("TAMBOUR_SOURCE", pathlib.Path(__file__).resolve().parents[2]))
BIN = pathlib.Path(os.environ.get("TAMBOUR_BIN", SOURCE / "build" / "release" / "bin")).resolve()
TOOLS = ["locate", "analyse", "synthesise", "spectrum", "symmetry", "describe", "phantom"]


class ToolCase(unittest.TestCase):
    """Every test runs in a scratch folder of its own, which is also the current one of the tools."""

    def setUp(self):
        self.folder = pathlib.Path(tempfile.mkdtemp(prefix="tambour-test-"))
        self.addCleanup(shutil.rmtree, self.folder, ignore_errors=True)

    def tool(self, name, *arguments, code=0, **options):
        """Runs tambour-NAME and checks its exit code; returns the finished process with text output."""
        command = [str(BIN / f"tambour-{name}"), *map(str, arguments)]
        done = subprocess.run(
            command, cwd=self.folder, capture_output="stdout" not in options, text=True, timeout=600, **options)
        self.assertEqual(done.returncode, code, f"{command}\nstdout: {done.stdout}\nstderr: {done.stderr}")
        return done

    def phantom(self, name="stack.mrc", *arguments, images=8, size=48, radius=16, snr=2):
        self.tool("phantom", "-o", name, "--images", images, "--size", size, "--radius", radius, "--snr", snr,
                  "--quiet", *arguments)
        return self.folder / name

    def refused(self, name, *arguments, code, says, leaves=(), **options):
        """The tool ends with `code`, one clear sentence that holds every text in `says`, and no file but `leaves`."""
        before = self.files()
        done = self.tool(name, *arguments, code=code, **options)
        for text in says:
            self.assertIn(text, done.stderr)
        self.assertEqual(done.stdout, "")
        self.assertTrue(done.stderr.startswith(f"tambour-{name}: "), done.stderr)
        self.assertEqual(self.files(), before | set(leaves))
        return done.stderr

    def files(self):
        return {str(path.relative_to(self.folder)) for path in self.folder.rglob("*") if not path.is_dir()}

    def table(self, name):
        return read_table(self.folder / name)

    def document(self, done):
        """Standard output as the one JSON document that it must be."""
        return json.loads(done.stdout)

    def path(self, name):
        return self.folder / name

    def save(self, name, array):
        numpy.save(self.folder / name, array)
        return name


def read_table(path):
    """Rows of a CSV table as dictionaries; comment lines stand above the header only."""
    with open(path, newline="") as file:
        lines = file.read().splitlines()
    while lines[0].startswith("#"):
        lines.pop(0)
    return list(csv.DictReader(lines))


def body(path):
    """A table without its comments, which name the command and so differ between runs."""
    return [line for line in path.read_text().splitlines() if not line.startswith("#")]


def noise_stack(images=4, rows=48, columns=48, seed=1):
    return numpy.random.default_rng(seed).normal(size=(images, rows, columns)).astype(numpy.float32)
