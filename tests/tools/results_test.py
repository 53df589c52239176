"""What the tools find is what was put in; tables have the promised columns; threads and batches do not matter."""

import hashlib
import json
import math
import unittest

import h5py
import mrcfile
import numpy

from tool_case import ToolCase, body

SYMMETRY_COLUMNS = ("image,source,status,centre_x,centre_y,se_x,se_y,radius,noise_sd,fold,ln_bf,p_noise,p_structure,"
                    "q_value,verdict,angle,se_angle").split(",")


def numbers(rows, column):
    return numpy.array([float(row[column]) for row in rows])


class Phantom(ToolCase):
    def test_truth_table_and_stack(self):
        self.phantom("p.mrc", "--truth", "t.csv", "--mix", "ring:7=2,broken:7,scattered:7,blobs,field,noise",
                     "--pixel-size", "1.5", images=60)
        rows = self.table("t.csv")
        self.assertEqual(list(rows[0]), "image,kind,fold,centre_x,centre_y,angle,snr,information".split(","))
        self.assertEqual([int(row["image"]) for row in rows], list(range(60)))
        kinds = {row["kind"]: row for row in rows}
        self.assertEqual(set(kinds), {"ring:7", "broken:7", "scattered:7", "blobs", "field", "noise"})
        self.assertEqual({kind: row["fold"] for kind, row in kinds.items()},
                         {"ring:7": "7", "broken:7": "1", "scattered:7": "1", "blobs": "1", "field": "", "noise": ""})
        for row in rows:
            if row["kind"] == "ring:7":
                self.assertLess(float(row["angle"]), 360 / 7)
        stack, voxel = read_mrc(self.path("p.mrc"))
        self.assertEqual(stack.shape, (60, 48, 48))
        self.assertAlmostEqual(voxel, 1.5, places=6)

    def test_signal_to_noise_and_centre_are_as_told(self):
        self.phantom("clean.npy", "--truth", "t.csv", "--noise", "none", "--mix", "ring:6", images=3, size=64, radius=24)
        stack = numpy.load(self.path("clean.npy")).astype(float)
        for image, row in zip(stack, self.table("t.csv")):
            x, y = float(row["centre_x"]), float(row["centre_y"])
            inside = disk(image.shape, x, y, 24)
            self.assertAlmostEqual(image[inside].var(), 1, places=5)
            # A six-fold pattern has its centre of mass in its centre.
            rows, columns = numpy.indices(image.shape)
            self.assertAlmostEqual((image * columns).sum() / image.sum(), x, places=2)
            self.assertAlmostEqual((image * rows).sum() / image.sum(), y, places=2)
            self.assertLessEqual(math.hypot(x - 31.5, y - 31.5), 2)
            self.assertEqual((row["snr"], row["information"]), ("", ""))

    def test_noise_has_unit_variance_and_the_stated_spectrum(self):
        self.phantom("white.npy", "--mix", "noise", images=200)
        self.phantom("coloured.npy", "--mix", "noise", "--noise", "coloured", images=200)
        q = 2 * numpy.pi * numpy.hypot(*numpy.meshgrid(numpy.fft.fftfreq(48), numpy.fft.fftfreq(48)))
        shape = 0.15 + 1 / (1 + (q / 0.5) ** 2)
        for name, wanted in [("white.npy", numpy.ones((48, 48))), ("coloured.npy", shape / shape.mean())]:
            power = (abs(numpy.fft.fft2(numpy.load(self.path(name)))) ** 2).mean(axis=0) / 48**2
            # 200 images x 2304 frequencies: the mean of the ratio has a standard error of 0.0015 to 0.002.
            self.assertAlmostEqual((power / wanted).mean(), 1, delta=0.01)
            self.assertAlmostEqual((power / wanted)[q < 0.5].mean(), 1, delta=0.05)

    def test_information_is_that_of_a_shift(self):
        """The table against the derivatives of the noise-free image, by its Fourier transform."""
        self.phantom("p.npy", "--noise", "none", "--centre-spread", "0", images=1, size=64, radius=24)
        image = numpy.load(self.path("p.npy"))[0].astype(float)
        q = 2j * numpy.pi * numpy.fft.fftfreq(64)
        transform = numpy.fft.fft2(image)
        along_x, along_y = numpy.fft.ifft2(transform * q).real, numpy.fft.ifft2(transform * q[:, None]).real
        wanted = 0.5 * ((along_x**2).sum() + (along_y**2).sum()) * 0.3
        self.phantom("n.npy", "--truth", "n.csv", "--centre-spread", "0", images=1, size=64, radius=24, snr=0.3)
        told = float(self.table("n.csv")[0]["information"])
        self.assertAlmostEqual(wanted / told, 1, places=5)

    def test_is_the_same_for_a_seed_whatever_the_threads(self):
        flags = ["--mix", "ring:5,broken:5,field", "--noise", "coloured", "--gradient", 1, "--contaminant", 0.5]
        self.phantom("a.mrc", "--truth", "a.csv", "--threads", 1, *flags)
        self.phantom("b.mrc", "--truth", "b.csv", "--threads", 3, *flags)
        self.phantom("c.mrc", "--truth", "c.csv", "--seed", 2, *flags)
        self.assertEqual(self.path("a.mrc").read_bytes(), self.path("b.mrc").read_bytes())
        self.assertEqual(body(self.path("a.csv")), body(self.path("b.csv")))
        self.assertNotEqual(body(self.path("a.csv")), body(self.path("c.csv")))

    def test_first_images_do_not_depend_on_how_many_follow(self):
        self.phantom("few.npy", images=3)
        self.phantom("many.npy", images=9)
        numpy.testing.assert_array_equal(numpy.load(self.path("few.npy")), numpy.load(self.path("many.npy"))[:3])

    def test_frames_need_not_be_square(self):
        self.phantom("wide.npy", "--truth", "t.csv", "--noise", "none", images=2, size="80x48", radius=16)
        self.assertEqual(numpy.load(self.path("wide.npy")).shape, (2, 48, 80))
        self.assertAlmostEqual(float(self.table("t.csv")[0]["centre_x"]), 39.5, delta=2)
        self.assertAlmostEqual(float(self.table("t.csv")[0]["centre_y"]), 23.5, delta=2)


class Locate(ToolCase):
    def test_finds_centres_within_their_error(self):
        for size in ["64", "80x64"]:
            self.phantom("p.mrc", "--truth", "t.csv", "--force", images=60, size=size, radius=24, snr=1)
            self.tool("locate", "p.mrc", "-o", "l.csv", "--radius", 24, "--force")
            rows, truth = self.table("l.csv"), self.table("t.csv")
            self.assertEqual(list(rows[0]), "image,x,y,se_x,se_y,cov_xy,status".split(","))
            for ours, theirs, se in [("x", "centre_x", "se_x"), ("y", "centre_y", "se_y")]:
                error = numbers(rows, ours) - numbers(truth, theirs)
                bound = numpy.sqrt(1 / numbers(truth, "information"))
                # The bound is that of a known pattern. Over 60 images a ratio has a standard error of 9 %; measured: 1.10
                # to 1.34 times the bound, and 0.86 to 1.05 times the error that is told.
                self.assertLess(rms(error / bound), 1.6)
                self.assertTrue(0.73 < rms(error / numbers(rows, se)) < 1.27, rms(error / numbers(rows, se)))

    def test_says_when_the_border_of_the_search_is_hit(self):
        self.phantom("p.npy", "--noise", "none", "--centre-spread", "0", images=1, size=64, radius=16)
        shifted = numpy.roll(numpy.load(self.path("p.npy")), 5, axis=2)
        self.save("s.npy", shifted)
        done = self.tool("locate", "s.npy", "-o", "l.csv", "--radius", 16, "--search", 2)
        self.assertIn("border of the searched square", done.stderr)
        done = self.tool("locate", "s.npy", "-o", "m.csv", "--radius", 16, "--search", 8)
        self.assertNotIn("border", done.stderr)
        self.assertAlmostEqual(float(self.table("m.csv")[0]["x"]), 36.5, delta=0.3)


class Coefficients(ToolCase):
    def test_layout_provenance_and_energy(self):
        stack = self.phantom("p.mrc", "--pixel-size", "0.2", "--unit", "nanometre", images=3)
        self.tool("analyse", "p.mrc", "-o", "c.h5", "--radius", 16, "--precision", "double")
        with h5py.File(self.path("c.h5")) as file:
            a = file["coefficients"][:]
            self.assertTrue(numpy.iscomplexobj(a))
            self.assertEqual(a.shape, (3, len(file["terms/root"])))
            numpy.testing.assert_allclose(file["images/centre"][:], 23.5)
            self.assertAlmostEqual(file.attrs["pixel_size"] * (10 if b"nano" in as_bytes(file.attrs["unit"]) else 1), 2.0)
            text = "\n".join(f"{name}: {item[()] if isinstance(item, h5py.Dataset) else dict(item.attrs)}"
                             for name, item in walk(file["provenance"]))
            self.assertIn(hashlib.sha256(stack.read_bytes()).hexdigest(), text)
            self.assertIn("tambour-analyse p.mrc -o c.h5 --radius 16 --precision double", text)

    def test_round_trip_of_a_compact_object(self):
        self.phantom("p.npy", "--noise", "none", "--centre-spread", "0", images=2, size=64, radius=28)
        self.tool("analyse", "p.npy", "-o", "c.h5", "--radius", 28, "--precision", "double")
        self.tool("synthesise", "c.h5", "-o", "r.npy", "--pixel-type", "float64")
        image, rebuilt = numpy.load(self.path("p.npy")).astype(float), numpy.load(self.path("r.npy"))
        # What the band limit of 0.9 and the rim cut off was measured to be 4.5e-4 of the rms.
        self.assertLess(rms(rebuilt - image) / rms(image), 0.001)
        self.assertEqual(abs(rebuilt[0, 0]).max(), 0)

    def test_analysis_of_a_synthesis_gives_the_coefficients_back(self):
        self.phantom("p.npy", images=2, size=64, radius=20)
        self.tool("analyse", "p.npy", "-o", "c.h5", "--radius", 20, "--bandlimit", 0.5, "--centre", "30.2,33.4")
        self.tool("synthesise", "c.h5", "-o", "r.npy")
        self.tool("analyse", "r.npy", "-o", "d.h5", "--radius", 20, "--bandlimit", 0.5, "--centre", "30.2,33.4")
        with h5py.File(self.path("c.h5")) as first, h5py.File(self.path("d.h5")) as second:
            a, b = first["coefficients"][:], second["coefficients"][:]
        # Outside the disk the synthesis is 0, where the functions are not band-limited: measured 7e-5.
        self.assertLess(abs(a - b).max() / abs(a).max(), 2e-4)

    def test_background_comes_back(self):
        self.phantom("p.npy", "--noise", "none", images=2, size=64, radius=20)
        rows, columns = numpy.indices((64, 64))
        slope = 3 + 0.02 * columns - 0.05 * rows + 0.001 * (columns - 30) * (rows - 20)
        image = -(numpy.load(self.path("p.npy")).astype(float) + slope)
        self.save("q.npy", image)
        self.tool("analyse", "q.npy", "-o", "c.h5", "--radius", 20, "--background", "quadratic", "--invert-contrast")
        self.tool("synthesise", "c.h5", "-o", "r.npy", "--add-background", "--pixel-type", "float64")
        rebuilt = numpy.load(self.path("r.npy"))
        inside = disk((64, 64), 31.5, 31.5, 18)
        self.assertLess(rms((rebuilt - image)[:, inside]), 0.002)  # the object has unit variance; measured 5.7e-4
        outside = ~disk((64, 64), 31.5, 31.5, 24)
        self.assertLess(rms((rebuilt - image)[:, outside]), 0.02)  # measured 0.009: the object's own tails
        done = self.tool("synthesise", "c.h5", "-o", "s.npy")
        self.assertIn("contrast was inverted", done.stderr)

    def test_pixel_size_is_passed_on(self):
        self.phantom("p.mrc", "--pixel-size", "2.5", images=2)
        self.tool("analyse", "p.mrc", "-o", "c.h5", "--radius", 16)
        self.tool("synthesise", "c.h5", "-o", "r.mrc")
        self.assertAlmostEqual(read_mrc(self.path("r.mrc"))[1], 2.5, places=5)

    def test_centres_of_locate_are_taken(self):
        self.phantom("p.mrc", images=4)
        self.tool("locate", "p.mrc", "-o", "l.csv", "--radius", 16)
        self.tool("analyse", "p.mrc", "-o", "c.h5", "--radius", 16, "--centres", "l.csv")
        with h5py.File(self.path("c.h5")) as file:
            numpy.testing.assert_allclose(file["images/centre"][:, 0], numbers(self.table("l.csv"), "x"), rtol=1e-9)
            numpy.testing.assert_allclose(file["images/centre"][:, 1], numbers(self.table("l.csv"), "y"), rtol=1e-9)


class Spectrum(ToolCase):
    def setUp(self):
        super().setUp()
        self.phantom("p.mrc", "--mix", "ring:6", "--centre-spread", "0", images=12, size=64, radius=24, snr=4)
        self.tool("analyse", "p.mrc", "-o", "c.h5", "--radius", 24)

    def test_power_lies_in_the_multiples_of_the_fold(self):
        self.tool("spectrum", "c.h5", "-o", "o.csv")
        rows = self.table("o.csv")
        self.assertEqual(list(rows[0]), "image,angular_order,power,se,noise_power".split(","))
        power = {(int(row["image"]), int(row["angular_order"])): float(row["power"]) for row in rows}
        for image in range(12):
            largest = max((n for n in range(1, 24)), key=lambda n: power[image, n])
            self.assertEqual(largest % 6, 0)

    def test_mean_is_that_of_the_images(self):
        self.tool("spectrum", "c.h5", "-o", "o.csv")
        self.tool("spectrum", "c.h5", "-o", "m.csv", "--mean")
        rows, mean = self.table("o.csv"), self.table("m.csv")
        self.assertEqual({row["image"] for row in mean}, {"mean"})
        for row in mean[:20]:
            same = [other for other in rows if other["angular_order"] == row["angular_order"]]
            self.assertEqual(len(same), 12)
            self.assertAlmostEqual(float(row["power"]) / numbers(same, "power").mean(), 1, places=6)
            self.assertAlmostEqual(float(row["se"]) / (rms(numbers(same, "se")) / math.sqrt(12)), 1, places=6)

    def test_rings_add_up_and_hold_the_power_where_it_is(self):
        self.tool("spectrum", "c.h5", "-o", "o.csv")
        self.tool("spectrum", "c.h5", "-o", "r.csv", "--rings", 8)
        rings = [row for row in self.table("r.csv") if row["image"] == "0" and row["angular_order"] == "6"]
        self.assertEqual([float(row["ring_inner"]) for row in rings], [3.0 * ring for ring in range(8)])
        self.assertEqual([float(row["ring_outer"]) for row in rings], [3.0 * (ring + 1) for ring in range(8)])
        whole = next(row for row in self.table("o.csv") if row["image"] == "0" and row["angular_order"] == "6")
        total = numbers(rings, "power").sum()
        self.assertAlmostEqual(total / float(whole["power"]), 1, delta=0.001)  # measured 1e-4: v_nk and the radial rule
        middle = (numbers(rings, "power") * (numbers(rings, "ring_inner") + 1.5)).sum() / total
        self.assertTrue(0.35 * 24 < middle < 0.85 * 24, middle)  # subunits lie at 0.45 to 0.83 R


class Symmetry(ToolCase):
    def test_finds_the_fold_and_the_angle(self):
        self.phantom("p.mrc", "--truth", "t.csv", "--mix", "ring:7", images=40, size=64, radius=24, snr=1)
        done = self.tool("symmetry", "p.mrc", "-o", "s.csv", "--radius", 24, "--stack", "--json")
        rows, truth = self.table("s.csv"), self.table("t.csv")
        self.assertEqual(list(rows[0]), SYMMETRY_COLUMNS)
        right = [row["verdict"] == "best_supported" and row["fold"] == "7" for row in rows]
        self.assertGreaterEqual(sum(right), 36)
        self.assertEqual({row["p_structure"] + row["q_value"] for row in rows}, {""})
        # The table's angle is that of the truth but for one constant of the stack.
        apart = numpy.array([float(row["angle"]) - float(known["angle"])
                             for row, known, good in zip(rows, truth, right) if good])
        turns = numpy.exp(2j * numpy.pi * apart / (360 / 7))
        spread = numpy.angle(turns / numpy.mean(turns)) * (360 / 7) / (2 * numpy.pi)
        se = numpy.array([float(row["se_angle"]) for row, good in zip(rows, right) if good])
        self.assertLess(rms(spread), 0.75)  # degrees; measured 0.48, told 0.53; over 40 images the s.e. is 11 %
        self.assertTrue(0.67 < rms(spread) / rms(se) < 1.33, (rms(spread), rms(se)))
        stack = self.table("stack.csv")
        self.assertEqual(list(stack[0]), "fold,ln_bf,p_noise,p_structure,q_value,verdict,images".split(","))
        self.assertEqual((stack[0]["fold"], stack[0]["verdict"], stack[0]["images"]), ("7", "best_supported", "40"))
        results = self.document(done)["results"]
        self.assertEqual(results["stack"]["fold"], 7)
        self.assertIn({"fold": 7, "images": sum(right)}, results["verdicts"]["best_supported"])

    def test_noise_is_inconclusive(self):
        self.phantom("n.mrc", "--mix", "noise", images=100, size=64, radius=24)
        self.tool("symmetry", "n.mrc", "-o", "s.csv", "--radius", 24)
        rows = self.table("s.csv")
        supported = [row for row in rows if row["verdict"] == "best_supported"]
        self.assertLessEqual(len(supported), 5)  # 1 % of 100; six or more has a chance of 5e-4
        for row in rows:
            self.assertEqual(row["angle"] != "", row["verdict"] == "best_supported")

    def test_radius_is_found_in_the_stack(self):
        self.phantom("p.mrc", images=20, size=96, radius=24, snr=2)
        done = self.tool("symmetry", "p.mrc", "-o", "s.csv")
        self.assertRegex(done.stderr, r"radius \d+ px taken from 20 images")
        self.assertTrue(15 < float(self.table("s.csv")[0]["radius"]) < 36)


class Describe(ToolCase):
    def test_does_not_change_under_a_quarter_turn(self):
        self.phantom("p.npy", "--mix", "blobs", images=3, size=64, radius=24)
        stack = numpy.load(self.path("p.npy")).astype(float)
        self.save("p.npy", stack)
        self.save("q.npy", numpy.rot90(stack, axes=(1, 2)))
        self.save("m.npy", stack[:, ::-1])
        for name in "pqm":
            self.tool("analyse", f"{name}.npy", "-o", f"{name}.h5", "--radius", 24, "--precision", "double")
        for kind in ["magnitude", "gram"]:
            rows = {}
            for name in "pqm":
                self.tool("describe", f"{name}.h5", "-o", f"{name}-{kind}.npy", "--kind", kind)
                rows[name] = numpy.load(self.path(f"{name}-{kind}.npy"))
            self.assertEqual(rows["p"].ndim, 2)
            self.assertLess(change(rows["p"], rows["q"]), 1e-9)
            self.assertGreater(change(rows["p"], rows["p"][::-1]), 0.1)
        self.assertGreater(change(rows["p"], rows["m"]), 0.1)
        for name in "pm":
            self.tool("describe", f"{name}.h5", "-o", f"{name}.npy", "--mirror-invariant", "--force")
        self.assertLess(change(numpy.load(self.path("p.npy")), numpy.load(self.path("m.npy"))), 1e-9)

    def test_three_formats_hold_the_same_and_name_their_layout(self):
        self.phantom("p.mrc", images=3)
        self.tool("analyse", "p.mrc", "-o", "c.h5", "--radius", 16)
        for name in ["d.npy", "d.csv", "d.h5"]:
            self.tool("describe", "c.h5", "-o", name, "--kind", "magnitude", "--bandlimit", 0.5)
            layout = json.loads(self.path(name + ".json").read_text())
            self.assertEqual((layout["kind"], layout["bandlimit"], layout["images"]), ("magnitude", 0.5, 3))
            self.assertEqual(len(layout["names"]), layout["size"])
            self.assertEqual(layout["source"][0]["sha256"], hashlib.sha256(self.path("c.h5").read_bytes()).hexdigest())
        array = numpy.load(self.path("d.npy"))
        self.assertEqual((array.shape, array.dtype), ((3, layout["size"]), numpy.float64))
        with h5py.File(self.path("d.h5")) as file:
            numpy.testing.assert_array_equal(file["descriptors"][:], array)
        rows = self.table("d.csv")
        self.assertEqual(list(rows[0]), ["image", *layout["names"]])
        numpy.testing.assert_allclose([[float(row[name]) for name in layout["names"]] for row in rows], array, rtol=1e-9)


class Repeatability(ToolCase):
    """Same input and options, other threads and batches: the same bytes, but for the command told in them."""

    def test_of_every_tool(self):
        self.phantom("p.mrc", "--mix", "ring:5,noise", images=21)
        ways = {"a": ["--threads", 1, "--batch", 1], "b": ["--threads", 3, "--batch", 0], "c": ["--threads", 2, "--batch", 5]}
        tables, stacks, arrays = {}, {}, {}
        for way, flags in ways.items():
            threads = flags[:2]
            self.tool("locate", "p.mrc", "-o", f"{way}.csv", "--radius", 16, *flags)
            self.tool("analyse", "p.mrc", "-o", f"{way}.h5", "--radius", 16, "--centres", f"{way}.csv", *flags)
            self.tool("spectrum", f"{way}.h5", "-o", f"{way}-orders.csv", "--rings", 3, *threads)
            self.tool("symmetry", "p.mrc", "-o", f"{way}-symmetry.csv", "--radius", 16, "--stack", "--force", *flags)
            self.tool("synthesise", f"{way}.h5", "-o", f"{way}.npy", *threads)
            self.tool("describe", f"{way}.h5", "-o", f"{way}-d.npy", *threads)
            names = [f"{way}.csv", f"{way}-orders.csv", f"{way}-symmetry.csv", "stack.csv"]
            tables[way] = [body(self.path(name)) for name in names]
            arrays[way] = [self.path(f"{way}{end}.npy").read_bytes() for end in ["", "-d"]]
            with h5py.File(self.path(f"{way}.h5")) as file:
                stacks[way] = [file[name][:].tobytes() for name in ["coefficients", "images/noise_spectrum"]]
        for kind in [tables, stacks, arrays]:
            self.assertEqual(kind["a"], kind["b"])
            self.assertEqual(kind["a"], kind["c"])


def read_mrc(path):
    with mrcfile.open(path, permissive=False) as file:
        return file.data.copy(), float(file.voxel_size.x)


def disk(shape, x, y, radius):
    rows, columns = numpy.indices(shape)
    return numpy.hypot(columns - x, rows - y) <= radius


def rms(values):
    return math.sqrt(numpy.mean(numpy.square(values)))


def change(left, right):
    return numpy.linalg.norm(left - right) / numpy.linalg.norm(left)


def walk(group):
    found = [("", group)]
    group.visititems(lambda name, item: found.append((name, item)))
    return found


def as_bytes(text):
    return text if isinstance(text, bytes) else str(text).encode()


if __name__ == "__main__":
    unittest.main()
