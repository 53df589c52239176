"""Ctrl-C in mid-run: exit code 130 (128 + SIGINT, the custom of shells), 143 for SIGTERM, and nothing left behind."""

import signal
import subprocess
import time
import unittest

from tool_case import BIN, ToolCase


class Interrupt(ToolCase):
    def interrupted(self, name, *arguments, wait=0.7, kind=signal.SIGINT):
        before = self.files()
        command = [str(BIN / f"tambour-{name}"), *map(str, arguments)]
        process = subprocess.Popen(command, cwd=self.folder, stdout=subprocess.PIPE, stderr=subprocess.PIPE, text=True)
        time.sleep(wait)
        self.assertIsNone(process.poll(), "the run ended before it could be interrupted: make it longer")
        started = time.monotonic()
        process.send_signal(kind)
        out, err = process.communicate(timeout=60)
        self.assertEqual(process.returncode, 128 + kind, err)
        self.assertLess(time.monotonic() - started, 20)
        self.assertEqual(out, "")
        self.assertRegex(err, rf"^tambour-{name}: .*(interrupt|stopped)")
        self.assertEqual(self.files(), before)

    def test_of_making_a_stack(self):
        for kind in [signal.SIGINT, signal.SIGTERM]:
            self.interrupted("phantom", "-o", "p.mrc", "--truth", "t.csv", "--images", 500000, kind=kind)

    def test_of_work_on_a_stack(self):
        self.phantom("x.mrc", images=4000, size=96, radius=36)
        self.interrupted("locate", "x.mrc", "-o", "l.csv", "--radius", 36, "--threads", 1)
        self.interrupted("analyse", "x.mrc", "-o", "c.h5", "--radius", 36, "--precision", "double", "--threads", 1)
        self.interrupted("symmetry", "x.mrc", "-o", "s.csv", "--radius", 36, "--stack", "--threads", 1)

    def test_of_drawing_the_null_law(self):
        self.phantom("x.mrc", images=2, size=256, radius=110)
        self.interrupted("symmetry", "x.mrc", "-o", "s.csv", "--radius", 110, wait=1.0)

    def test_leaves_an_older_result_as_it_is(self):
        self.path("p.mrc").write_text("precious")
        self.interrupted("phantom", "-o", "p.mrc", "--images", 500000, "--force")
        self.assertEqual(self.path("p.mrc").read_text(), "precious")


if __name__ == "__main__":
    unittest.main()
