"""Flags that every tool has, exit codes, and what goes to which stream."""

import json
import os
import subprocess
import unittest

import numpy

from tool_case import BIN, TOOLS, ToolCase, body, noise_stack

NEEDS = {"phantom": [], "locate": ["x.npy"], "analyse": ["x.npy", "--radius", "16"], "symmetry": ["x.npy"],
         "synthesise": ["c.h5"], "spectrum": ["c.h5"], "describe": ["c.h5"]}


class HelpAndVersion(ToolCase):
    def test_version_works_without_required_arguments(self):
        for name in TOOLS:
            done = self.tool(name, "--version")
            lines = done.stdout.splitlines()
            self.assertRegex(lines[0], rf"^tambour-{name} \d+\.\d+\.\d+$")
            self.assertTrue(any("hdf5" in line.lower() for line in lines), "the libraries underneath are named")
            self.assertEqual(done.stderr, "")

    def test_help_names_every_common_flag(self):
        for name in TOOLS:
            done = self.tool(name, "--help")
            for flag in ["--help", "--version", "--out", "--force", "--threads", "--quiet", "--json", "Exit codes"]:
                self.assertIn(flag, done.stdout)

    def test_usage_errors_are_exit_code_2_on_standard_error(self):
        for name in TOOLS:
            self.refused(name, code=2, says=["required"])
            self.refused(name, *NEEDS[name], "-o", "out.csv", "--no-such-flag", code=2, says=["--no-such-flag", "--help"])
            self.refused(name, *NEEDS[name], "-o", "out.csv", "--threads", "0", code=2,
                         says=["--threads is 0", "allowed is 1 to 4096"])
            self.refused(name, *NEEDS[name], "-o", "out.csv", "--threads", "two", code=2,
                         says=["--threads is 'two'", "allowed is a whole number"])


class NegativeNumbers(ToolCase):
    def test_are_values_not_flags(self):
        self.save("x.npy", noise_stack())
        for form in [["--centre", "-3,4"], ["--centre=-3,4"]]:
            text = self.refused("analyse", "x.npy", "-o", "c.h5", "--radius", "16", *form, code=3, says=["-3", "4"])
            self.assertIn("x.npy", text)

    def test_out_of_range_are_named(self):
        self.save("x.npy", noise_stack())
        self.refused("locate", "x.npy", "-o", "c.csv", "--radius", "-5", code=2, says=["-5"])
        self.refused("locate", "x.npy", "-o", "c.csv", "--search", "-1", code=2, says=["--search is -1", "1 to 64"])
        self.refused("phantom", "-o", "p.mrc", "--snr", "-0.5", code=2, says=["--snr is -0.5"])

    def test_a_centre_off_the_middle_is_taken(self):
        self.save("x.npy", noise_stack(rows=64, columns=64))
        self.tool("analyse", "x.npy", "-o", "c.h5", "--radius", "16", "--centre", "30.25,33.5")


class Json(ToolCase):
    def test_standard_output_is_one_document(self):
        self.save("x.npy", noise_stack())
        runs = [("phantom", ["-o", "p.mrc", "--images", "3", "--truth", "t.csv"], {"stack": "p.mrc", "truth": "t.csv"}),
                ("locate", ["x.npy", "-o", "l.csv", "--radius", "16"], {"centres": "l.csv"}),
                ("analyse", ["x.npy", "-o", "c.h5", "--radius", "16"], {"coefficients": "c.h5"}),
                ("synthesise", ["c.h5", "-o", "r.npy"], {"images": "r.npy"}),
                ("spectrum", ["c.h5", "-o", "o.csv"], {"orders": "o.csv"}),
                ("symmetry", ["x.npy", "-o", "s.csv", "--radius", "16", "--stack"],
                 {"symmetry": "s.csv", "stack": "stack.csv"}),
                ("describe", ["c.h5", "-o", "d.npy"], {"descriptors": "d.npy", "layout": "d.npy.json"})]
        for name, arguments, files in runs:
            document = self.document(self.tool(name, *arguments, "--json"))
            self.assertEqual(document["schema_version"], 1)
            self.assertEqual(document["tool"], f"tambour-{name}")
            self.assertEqual(document["files"], files)
            self.assertEqual(document["skipped"], [])
            self.assertGreaterEqual(document["results"]["images"], 3)
            for file in files.values():
                self.assertTrue(self.path(file).exists())

    def test_names_skipped_images(self):
        stack = noise_stack()
        stack[2, 5, 7] = numpy.nan
        self.save("x.npy", stack)
        done = self.tool("locate", "x.npy", "-o", "l.csv", "--radius", "16", "--json", code=4)
        skipped = self.document(done)["skipped"]
        self.assertEqual([entry["image"] for entry in skipped], [2])
        self.assertIn("nan", skipped[0]["reason"])

    def test_usage_error_leaves_standard_output_empty(self):
        self.refused("locate", "x.npy", "-o", "l.csv", "--radius", "3", "--json", code=2, says=["3"])

    def test_a_name_that_is_not_utf8_still_gives_json(self):
        name = os.fsdecode(b"caf\xe9.npy")
        numpy.save(self.folder / name, noise_stack())
        done = subprocess.run([BIN / "tambour-locate", name, "-o", "l.csv", "--radius", "16", "--json"],
                              cwd=self.folder, capture_output=True, timeout=600)
        self.assertEqual(done.returncode, 0, done.stderr)
        json.loads(done.stdout.decode("utf-8"))


class Streams(ToolCase):
    def test_quiet_prints_nothing(self):
        self.save("x.npy", noise_stack())
        done = self.tool("locate", "x.npy", "-o", "l.csv", "--quiet")
        self.assertEqual((done.stdout, done.stderr), ("", ""))

    def test_no_progress_where_standard_error_is_no_terminal(self):
        self.save("x.npy", noise_stack())
        self.assertNotIn("\r", self.tool("locate", "x.npy", "-o", "l.csv", "--radius", "16").stderr)

    def test_a_full_standard_output_is_exit_code_3(self):
        self.save("x.npy", noise_stack())
        for flags in [[], ["--json"]]:
            with open("/dev/full", "w") as full:
                done = self.tool("locate", "x.npy", "-o", "l.csv", "--radius", "16", "--force", *flags, code=3,
                                 stdout=full, stderr=subprocess.PIPE)
            self.assertIn("standard output cannot be written", done.stderr)
        with open("/dev/full", "w") as full:
            self.tool("locate", "--version", code=3, stdout=full, stderr=subprocess.PIPE)

    def test_a_closed_standard_output_is_exit_code_3_and_spoils_no_file(self):
        self.save("x.npy", noise_stack())
        line = f"{BIN}/tambour-locate x.npy -o l.csv --radius 16 >&-"
        done = subprocess.run(["sh", "-c", line], cwd=self.folder, stderr=subprocess.PIPE, text=True, timeout=600)
        self.assertEqual(done.returncode, 3, done.stderr)
        self.assertEqual(len(self.table("l.csv")), 4)

    def test_a_reader_that_goes_away_is_exit_code_3(self):
        self.save("x.npy", noise_stack())
        reading, writing = os.pipe()
        os.close(reading)
        done = subprocess.run([BIN / "tambour-locate", "x.npy", "-o", "l.csv", "--radius", "16"], cwd=self.folder,
                              stdout=writing, stderr=subprocess.PIPE, text=True, timeout=600)
        os.close(writing)
        self.assertEqual(done.returncode, 3, done.stderr)


class Skipping(ToolCase):
    def setUp(self):
        super().setUp()
        stack = noise_stack(5)
        stack[1, 0, 0] = numpy.inf
        stack[3] = 7
        self.save("x.npy", stack)

    def test_more_than_allowed_is_exit_code_4_and_each_is_named(self):
        for name in ["locate", "symmetry"]:
            done = self.tool(name, "x.npy", "-o", f"{name}.csv", "--radius", "16", code=4)
            self.assertRegex(done.stderr, r"image 1 \(x\.npy.*\) skipped: .*inf")
            self.assertRegex(done.stderr, r"image 3 \(x\.npy.*\) skipped: .*constant")
            statuses = [row["status"] for row in self.table(f"{name}.csv")]
            self.assertEqual([status == "ok" for status in statuses], [True, False, True, False, True])

    def test_as_many_as_allowed_is_exit_code_0(self):
        self.tool("locate", "x.npy", "-o", "l.csv", "--radius", "16", "--max-skipped", "1", code=4)
        self.tool("locate", "x.npy", "-o", "m.csv", "--radius", "16", "--max-skipped", "2")
        self.assertEqual(body(self.path("l.csv")), body(self.path("m.csv")))

    def test_is_carried_through_the_coefficient_file(self):
        self.tool("analyse", "x.npy", "-o", "c.h5", "--radius", "16", code=4)
        self.tool("synthesise", "c.h5", "-o", "r.npy", code=4)
        rebuilt = numpy.load(self.path("r.npy"))
        self.assertEqual([bool(image.any()) for image in rebuilt], [True, False, True, False, True])
        self.tool("spectrum", "c.h5", "-o", "o.csv", code=4)
        self.assertEqual({row["image"] for row in self.table("o.csv")}, {"0", "2", "4"})
        self.tool("describe", "c.h5", "-o", "d.npy", code=4)
        self.assertEqual(list(numpy.isnan(numpy.load(self.path("d.npy"))).all(axis=1)),
                         [False, True, False, True, False])
        self.tool("describe", "c.h5", "-o", "d.csv", "--max-skipped", "2")
        self.assertEqual(json.loads(self.path("d.csv.json").read_text())["skipped_images"], [1, 3])


class Overwriting(ToolCase):
    def test_needs_force(self):
        self.save("x.npy", noise_stack())
        self.tool("analyse", "x.npy", "-o", "c.h5", "--radius", "16")
        runs = {"phantom": ["--images", "2", "-o", "p.mrc"], "locate": ["x.npy", "--radius", "16", "-o", "p.csv"],
                "analyse": ["x.npy", "--radius", "16", "-o", "p.h5"], "synthesise": ["c.h5", "-o", "p.npy"],
                "spectrum": ["c.h5", "-o", "p.csv"], "symmetry": ["x.npy", "--radius", "16", "-o", "p.csv"],
                "describe": ["c.h5", "-o", "p.csv"]}
        for name, arguments in runs.items():
            out = self.path(arguments[-1])
            out.write_text("precious")
            self.refused(name, *arguments, code=3, says=[arguments[-1], "exists"])
            self.assertEqual(out.read_text(), "precious")
            self.tool(name, *arguments, "--force")
            self.assertNotEqual(out.read_bytes(), b"precious")
            out.unlink()

    def test_holds_for_what_lies_beside(self):
        self.save("x.npy", noise_stack())
        self.tool("analyse", "x.npy", "-o", "c.h5", "--radius", "16")
        for name, arguments, beside in [("symmetry", ["x.npy", "--radius", "16", "-o", "s.csv", "--stack"], "stack.csv"),
                                        ("describe", ["c.h5", "-o", "d.npy"], "d.npy.json"),
                                        ("phantom", ["-o", "p.mrc", "--truth", "t.csv"], "t.csv")]:
            self.path(beside).write_text("precious")
            self.refused(name, *arguments, code=3, says=[beside, "exists"])
            self.assertEqual(self.path(beside).read_text(), "precious")


if __name__ == "__main__":
    unittest.main()
