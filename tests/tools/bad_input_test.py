"""What bad input gets: one sentence that names file, image, value and what is allowed; the exit code; nothing half-written."""

import os
import resource
import signal
import struct
import unittest

import h5py
import mrcfile
import numpy
import tifffile

from tool_case import ToolCase, noise_stack


class Inputs(ToolCase):
    """Each through locate and analyse, which read images in the same way."""

    def refused_by_both(self, *images, says, code=3):
        self.refused("locate", *images, "-o", "out.csv", "--radius", "16", code=code, says=says)
        self.refused("analyse", *images, "-o", "out.h5", "--radius", "16", code=code, says=says)

    def test_no_such_file(self):
        self.refused_by_both("missing.mrc", says=["missing.mrc"])

    def test_empty_file(self):
        self.path("empty.mrc").write_bytes(b"")
        self.refused_by_both("empty.mrc", says=["empty.mrc"])

    def test_empty_stack(self):
        self.save("none.npy", numpy.zeros((0, 48, 48)))
        self.refused_by_both("none.npy", says=["none.npy"])

    def test_empty_list(self):
        self.path("names.txt").write_text("# nothing\n")
        self.refused_by_both("@names.txt", says=["names.txt"])

    def test_not_an_image(self):
        self.path("notes.txt").write_text("some notes about rings, long enough to be looked at twice\n" * 30)
        self.refused_by_both("notes.txt", says=["notes.txt"])

    def test_truncated_file(self):
        stack = self.phantom()
        whole = stack.read_bytes()
        self.path("cut.mrc").write_bytes(whole[: len(whole) // 2])
        self.refused_by_both("cut.mrc", says=["cut.mrc"])

    def test_lying_header(self):
        data = bytearray(self.phantom().read_bytes())
        data[8:12] = struct.pack("<i", 1000)  # the number of images
        self.path("lying.mrc").write_bytes(data)
        self.refused_by_both("lying.mrc", says=["lying.mrc"])

    def test_absurd_size_allocates_nothing(self):
        data = bytearray(self.phantom().read_bytes())
        data[0:12] = struct.pack("<iii", 2**31 - 1, 2**31 - 1, 2**31 - 1)
        self.path("absurd.mrc").write_bytes(data)
        header = numpy.lib.format.header_data_from_array_1_0(numpy.zeros((1, 2, 2)))
        header["shape"] = (10**6, 10**6, 10**6)
        with open(self.path("absurd.npy"), "wb") as file:
            numpy.lib.format.write_array_header_1_0(file, header)
            file.write(b"\0" * 100)
        # 4 GiB of address space: an allocation by the header would fail with another message.
        limit = 4 << 30
        for name in ["absurd.mrc", "absurd.npy"]:
            self.refused("locate", name, "-o", "out.csv", "--radius", "16", "--threads", "1", code=3, says=[name],
                         preexec_fn=lambda: resource.setrlimit(resource.RLIMIT_AS, (limit, limit)))

    def test_images_outside_the_sizes_of_the_transform(self):
        self.save("tiny.npy", noise_stack(rows=4, columns=40))
        self.refused_by_both("tiny.npy", says=["tiny.npy", "4 rows by 40 columns", "8 to 16384"])

    def test_another_size_in_a_list_is_skipped(self):
        self.save("a.npy", noise_stack(2))
        self.save("b.npy", noise_stack(1, rows=50))
        self.path("names.txt").write_text("a.npy\nb.npy\na.npy\n")
        done = self.tool("locate", "@names.txt", "-o", "out.csv", "--radius", "16", code=4)
        self.assertRegex(done.stderr, r"image 2 \(.*b\.npy.*\) skipped: .*50")
        self.assertEqual([row["status"] == "ok" for row in self.table("out.csv")], [True, True, False, True, True])

    def test_a_bad_file_in_a_list_is_skipped(self):
        self.save("a.npy", noise_stack(2))
        self.path("names.txt").write_text("a.npy\nmissing.npy\n")
        done = self.tool("locate", "@names.txt", "-o", "out.csv", "--radius", "16", code=4)
        self.assertRegex(done.stderr, r"image 2 \(.*missing\.npy.*\) skipped")

    def test_colour_is_read_as_luma_and_said_so(self):
        rng = numpy.random.default_rng(1)
        colour = rng.integers(0, 255, size=(48, 48, 3), dtype=numpy.uint8)
        tifffile.imwrite(self.path("colour.tif"), colour, photometric="rgb")
        done = self.tool("analyse", "colour.tif", "-o", "luma.h5", "--radius", "16")
        self.assertRegex(done.stderr, r"colour\.tif.*luma")
        self.tool("analyse", "colour.tif", "-o", "green.h5", "--radius", "16", "--channel", "1")
        # ITU-R BT.601 luma.
        weights = {"luma.h5": (0.299, 0.587, 0.114), "green.h5": (0, 1, 0)}
        for name, weight in weights.items():
            self.save("grey.npy", (colour @ numpy.array(weight)))
            self.tool("analyse", "grey.npy", "-o", "grey.h5", "--radius", "16", "--force")
            with h5py.File(self.path(name)) as ours, h5py.File(self.path("grey.h5")) as wanted:
                numpy.testing.assert_allclose(ours["coefficients"][:], wanted["coefficients"][:], rtol=1e-4, atol=1e-3)
        self.refused("analyse", "colour.tif", "-o", "out.h5", "--radius", "16", "--channel", "3", code=3,
                     says=["colour.tif", "3"])

    def test_every_image_bad_is_said_for_each(self):
        self.save("flat.npy", numpy.ones((3, 48, 48)))
        done = self.tool("symmetry", "flat.npy", "-o", "out.csv", "--radius", "16", "--stack", code=4)
        self.assertEqual(done.stderr.count("constant"), 3)
        self.assertEqual({row["verdict"] for row in self.table("out.csv")}, {"skipped"})
        self.assertEqual(self.table("stack.csv")[0]["images"], "0")
        done = self.tool("analyse", "flat.npy", "-o", "out.h5", "--radius", "16", code=4)
        with h5py.File(self.path("out.h5")) as file:
            self.assertFalse(file["coefficients"][:].any())


class Disks(ToolCase):
    def setUp(self):
        super().setUp()
        self.save("x.npy", noise_stack())

    def test_that_leaves_the_frame_for_all(self):
        says = ["x.npy", "30"]
        self.refused("analyse", "x.npy", "-o", "out.h5", "--radius", "30", code=3, says=says)
        self.refused("locate", "x.npy", "-o", "out.csv", "--radius", "30", code=3, says=says)
        self.refused("symmetry", "x.npy", "-o", "out.csv", "--radius", "30", code=3, says=says)
        self.refused("analyse", "x.npy", "-o", "out.h5", "--radius", "16", "--centre", "40,24", code=3, says=["40"])

    def test_that_leaves_the_frame_for_one_image_skips_it(self):
        self.path("centres.csv").write_text("image,x,y\n0,23.5,23.5\n1,44,23.5\n2,20,24\n3,23.5,23.5\n")
        done = self.tool("analyse", "x.npy", "-o", "out.h5", "--radius", "16", "--centres", "centres.csv", code=4)
        self.assertRegex(done.stderr, r"image 1 \(x\.npy.*\) skipped: .*44")
        with h5py.File(self.path("out.h5")) as file:
            self.assertEqual([bool(row.any()) for row in file["coefficients"][:]], [True, False, True, True])

    def test_radius_out_of_range(self):
        for name, out in [("locate", "o.csv"), ("symmetry", "o.csv"), ("analyse", "o.h5")]:
            self.refused(name, "x.npy", "-o", out, "--radius", "3.9", code=2, says=["3.9", "4"])
            self.refused(name, "x.npy", "-o", out, "--radius", "nan", code=2, says=["nan"])

    def test_band_limit_out_of_range(self):
        self.refused("analyse", "x.npy", "-o", "o.h5", "--radius", "16", "--bandlimit", "1.5", code=2, says=["1.5"])
        self.refused("analyse", "x.npy", "-o", "o.h5", "--radius", "16", "--bandlimit", "0", code=2, says=["0"])

    def test_folds_out_of_range(self):
        for folds, says in [("1:24", "1"), ("2:500", "500"), ("9:3", "3"), ("two", "two"), ("2:3:4", "2:3:4")]:
            self.refused("symmetry", "x.npy", "-o", "o.csv", "--radius", "16", "--folds", folds, code=2, says=[says])
        self.refused("symmetry", "x.npy", "-o", "o.csv", "--radius", "16", "--alpha", "0.5", code=2, says=["0.5"])

    def test_no_room_for_the_background_that_was_asked_for(self):
        self.save("tight.npy", noise_stack(rows=8, columns=8))
        self.refused("analyse", "tight.npy", "-o", "o.h5", "--radius", "4", "--background", "linear", code=2,
                     says=["background", "20 pixels", "radius 4"])
        self.tool("analyse", "tight.npy", "-o", "o.h5", "--radius", "4")

    def test_no_room_to_search(self):
        self.refused("locate", "x.npy", "-o", "o.csv", "--radius", "24", code=3, says=["x.npy", "24", "up to 23", "search"])

    def test_frame_too_small_for_any_disk(self):
        self.save("small.npy", noise_stack(rows=10, columns=10))
        self.refused("locate", "small.npy", "-o", "o.csv", code=3, says=["small.npy", "10"])


class CentreTables(ToolCase):
    def setUp(self):
        super().setUp()
        self.save("x.npy", noise_stack(3))

    def refused_table(self, text, says, code=3):
        self.path("centres.csv").write_text(text)
        self.refused("analyse", "x.npy", "-o", "o.h5", "--radius", "16", "--centres", "centres.csv", code=code, says=says)

    def test_missing(self):
        self.refused("analyse", "x.npy", "-o", "o.h5", "--radius", "16", "--centres", "no.csv", code=3, says=["no.csv"])

    def test_wrong(self):
        self.refused_table("image,x\n0,1\n", ["centres.csv", "\"y\""])
        self.refused_table("image,x,y\n7,24,24\n", ["centres.csv", "line 2", "7", "0 to 2"])
        self.refused_table("image,x,y\n0,24,24\n0,24,24\n", ["centres.csv", "line 3", "second row"])
        self.refused_table("image,x,y\n0,24,middle\n", ["centres.csv", "line 2", "middle"])

    def test_rows_that_are_not_ok_or_missing_skip_their_image(self):
        self.path("centres.csv").write_text('image,x,y,status\n0,24,24,ok\n2,,,"dark, and empty"\n')
        done = self.tool("analyse", "x.npy", "-o", "o.h5", "--radius", "16", "--centres", "centres.csv", code=4)
        self.assertRegex(done.stderr, r"image 1 .* skipped: centres\.csv has no row")
        self.assertRegex(done.stderr, r"image 2 .* skipped: dark, and empty")

    def test_centre_and_centres_exclude_each_other(self):
        self.refused("analyse", "x.npy", "-o", "o.h5", "--radius", "16", "--centres", "c.csv", "--centre", "1,2", code=2,
                     says=["--centre"])
        self.refused("analyse", "x.npy", "-o", "o.h5", "--radius", "16", "--centre", "1;2", code=2, says=["1;2", "X,Y"])


class CoefficientFiles(ToolCase):
    def test_wrong(self):
        self.path("text.h5").write_text("no HDF5\n")
        with h5py.File(self.path("other.h5"), "w") as file:
            file["images"] = numpy.zeros((2, 8, 8))
        for name, out in [("synthesise", "o.npy"), ("spectrum", "o.csv"), ("describe", "o.npy")]:
            for bad in ["missing.h5", "text.h5", "other.h5"]:
                self.refused(name, bad, "-o", out, code=3, says=[bad])

    def test_cut_short(self):
        self.save("x.npy", noise_stack())
        self.tool("analyse", "x.npy", "-o", "c.h5", "--radius", "16")
        whole = self.path("c.h5").read_bytes()
        self.path("cut.h5").write_bytes(whole[: len(whole) * 2 // 3])
        self.refused("spectrum", "cut.h5", "-o", "o.csv", code=3, says=["cut.h5"])

    def test_options_out_of_range(self):
        self.save("x.npy", noise_stack())
        self.tool("analyse", "x.npy", "-o", "c.h5", "--radius", "16")
        self.refused("spectrum", "c.h5", "-o", "o.csv", "--rings", "513", code=2, says=["--rings is 513", "1 to 512"])
        self.refused("describe", "c.h5", "-o", "o.npy", "--kind", "moments", code=2, says=["moments", "gram"])
        self.refused("describe", "c.h5", "-o", "o.npy", "--bandlimit", "-1", code=2, says=["-1"])

    def test_a_scaled_stack_has_no_way_back(self):
        self.save("x.npy", noise_stack())
        self.tool("analyse", "x.npy", "-o", "c.h5", "--radius", "12", "--scaling", "outside-sd")
        self.refused("synthesise", "c.h5", "-o", "o.npy", "--add-background", code=3, says=["c.h5", "outside-sd"])


class Outputs(ToolCase):
    def setUp(self):
        super().setUp()
        self.save("x.npy", noise_stack())
        self.tool("analyse", "x.npy", "-o", "c.h5", "--radius", "16")

    RUNS = [("phantom", [], ".mrc"), ("locate", ["x.npy", "--radius", "16"], ".csv"),
            ("analyse", ["x.npy", "--radius", "16"], ".h5"), ("synthesise", ["c.h5"], ".npy"),
            ("spectrum", ["c.h5"], ".csv"), ("symmetry", ["x.npy", "--radius", "16"], ".csv"),
            ("describe", ["c.h5"], ".npy")]

    def test_no_such_folder(self):
        for name, arguments, extension in self.RUNS:
            self.refused(name, *arguments, "-o", "no/such/out" + extension, code=3, says=["no/such/out" + extension])

    def test_a_folder_that_nobody_may_write(self):
        # Tests may run as root, whom permissions do not stop: a path below a file, and the kernel's own folder.
        self.path("file").write_text("")
        for name, arguments, extension in self.RUNS:
            for folder in ["file", "/proc"]:
                self.refused(name, *arguments, "-o", f"{folder}/out{extension}", code=3, says=[f"{folder}/out{extension}"])

    def test_a_folder_in_place_of_the_file(self):
        for name, arguments, extension in self.RUNS:
            self.path("out" + extension).mkdir(exist_ok=True)
            self.refused(name, *arguments, "-o", "out" + extension, "--force", code=3, says=["out" + extension])

    def test_unknown_extension(self):
        self.refused("phantom", "-o", "out.jpeg", code=2, says=["out.jpeg", ".mrc"])
        self.refused("synthesise", "c.h5", "-o", "out.bmp", code=2, says=["out.bmp", ".npy"])
        self.refused("describe", "c.h5", "-o", "out.mrc", code=2, says=["out.mrc", ".npy"])

    def test_a_full_disk_leaves_nothing(self):
        def limit():
            signal.signal(signal.SIGXFSZ, signal.SIG_DFL)  # Python ignores it; a shell does not
            # Writing then fails with EFBIG, as on a full disk with ENOSPC.
            resource.setrlimit(resource.RLIMIT_FSIZE, (600, 600))

        for name, arguments, extension in self.RUNS:
            self.refused(name, *arguments, "-o", "out" + extension, code=3, says=["out" + extension],
                         preexec_fn=limit)

    def test_a_full_device(self):
        for name, arguments in [("locate", ["x.npy", "--radius", "16"]), ("spectrum", ["c.h5"])]:
            self.refused(name, *arguments, "-o", "/dev/full", "--force", code=3, says=["/dev/full"])

    def test_the_name_of_the_stack_table_is_taken(self):
        self.refused("symmetry", "x.npy", "-o", "stack.csv", "--radius", "16", "--stack", code=2, says=["stack.csv"])


class Phantoms(ToolCase):
    def test_mixes_that_cannot_be(self):
        for mix, says in [("disc:3", "disc:3"), ("ring", "ring:12"), ("ring:1", "2 to 200"), ("noise:3", "without a number"),
                          ("ring:3=-1", "0 or more"), ("ring:3=0", "sum to 0"), ("ring:3=a", "finite number")]:
            self.refused("phantom", "-o", "p.mrc", "--mix", mix, code=2, says=[says])

    def test_frames_that_cannot_be(self):
        self.refused("phantom", "-o", "p.mrc", "--size", "32", "--radius", "24", code=2, says=["24", "32"])
        self.refused("phantom", "-o", "p.mrc", "--size", "4", code=2, says=["4", "8 to 16384"])
        self.refused("phantom", "-o", "p.mrc", "--images", "0", code=2, says=["--images is 0"])
        self.refused("phantom", "-o", "p.mrc", "--pixel-size", "0", code=2, says=["--pixel-size is 0"])
        self.refused("phantom", "-o", "p.mrc", "--unit", "nanometre", code=2, says=["--pixel-size"])


class OutputsThatAreInputs(ToolCase):
    def test_are_never_overwritten(self):
        self.save("a.npy", noise_stack(2))
        self.path("list.txt").write_text("a.npy\n")
        before = self.path("a.npy").read_bytes()
        says = ["is an input"]
        self.refused("analyse", "a.npy", "-o", "./a.npy", "--radius", 16, "--force", code=3, says=says)
        self.refused("locate", "@list.txt", "-o", "list.txt", "--radius", 16, "--force", code=3, says=says)
        self.tool("analyse", "a.npy", "-o", "c.h5", "--radius", 16)
        for name in ("describe", "spectrum", "synthesise"):
            self.refused(name, "c.h5", "-o", "c.h5", "--force", code=3, says=says)
        self.assertEqual(self.path("a.npy").read_bytes(), before)


if __name__ == "__main__":
    unittest.main()
