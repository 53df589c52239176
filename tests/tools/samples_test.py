"""The samples run, and show what they promise."""

import os
import pathlib
import re
import subprocess
import sys
import unittest

from tool_case import BIN, ToolCase

SOURCE = pathlib.Path(os.environ["TAMBOUR_SOURCE"])


class Samples(ToolCase):
    def sample(self, *command):
        environment = dict(os.environ, TAMBOUR_BIN=str(BIN))
        return subprocess.run(command, cwd=self.folder, env=environment, check=True, capture_output=True, text=True).stdout

    def test_quickstart_names_the_folds_and_the_report(self):
        printed = self.sample("bash", SOURCE / "samples/quickstart.sh", "out")
        counts = {words[0]: [int(word) for word in words[1:]]
                  for words in (line.split() for line in printed.splitlines()) if words and re.match(r"(ring|broken):", words[0])}
        for kind, column in (("ring:12", 1), ("ring:13", 2)):
            images, right = counts[kind][0], counts[kind][column]
            self.assertGreaterEqual(right, 0.9 * images, printed)
            self.assertEqual(sum(counts[kind][1:]), images)
        self.assertIn("Report: out/survey/report.html", printed)
        self.assertTrue(self.path("out/survey/report.html").exists())

    def test_photographs_are_kept_better_by_the_edge_that_fits(self):
        printed = self.sample(sys.executable, SOURCE / "samples/photographs.py", "out")
        left = {}
        for line in printed.splitlines():
            words = line.split()
            if len(words) == 6 and words[1] in ("neumann", "dirichlet"):
                left[words[0], words[1]] = float(words[2])
        pictures = {name for name, _ in left}
        self.assertGreaterEqual(len(pictures), 3)
        for name in pictures:
            self.assertLess(left[name, "neumann"], 0.05, printed)
            self.assertLess(left[name, "neumann"], left[name, "dirichlet"] / 2, printed)
            self.assertTrue(self.path(f"out/{name}.png").exists())


if __name__ == "__main__":
    unittest.main()
