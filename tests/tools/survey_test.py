"""tambour-survey: the whole job, on our phantom and on stacks that other programs wrote."""

import json
import signal
import subprocess
import time
import unittest

import h5py
import mrcfile
import numpy
import tifffile

from tool_case import BIN, ToolCase, body, noise_stack

FILES = ["images.csv", "centres.csv", "orders.csv", "coefficients.h5", "descriptors.npy", "descriptors.npy.json", "report.html"]


def rings(images, size, fold, seed=2, noise=0.7):
    """Rings of Gaussian subunits with known centres and turns."""
    random = numpy.random.default_rng(seed)
    y, x = numpy.indices((size, size))
    stack, truth = [], []
    for _ in range(images):
        cx, cy = (size - 1) / 2 + random.uniform(-1.5, 1.5, 2)
        turn = random.uniform(0, 2 * numpy.pi)
        image = random.normal(0, noise, (size, size))
        for m in range(fold):
            angle = turn + 2 * numpy.pi * m / fold
            image += 2 * numpy.exp(-((x - cx - 0.28 * size * numpy.cos(angle)) ** 2 +
                                     (y - cy - 0.28 * size * numpy.sin(angle)) ** 2) / (2 * 1.8 ** 2))
        stack.append(image)
        truth.append((cx, cy, numpy.degrees(turn) % (360 / fold)))
    return numpy.array(stack, dtype=numpy.float32), numpy.array(truth)


class Survey(ToolCase):
    def test_writes_every_file_and_finds_what_is_there(self):
        stack, truth = rings(24, 64, 7)
        with mrcfile.new(self.path("rings.mrcs")) as file:
            file.set_data(stack)
            file.set_image_stack()
            file.voxel_size = 2.5
        done = self.tool("survey", "rings.mrcs", "-o", "out", "--json")
        document = self.document(done)
        self.assertEqual(document["results"]["images"], 24)
        self.assertEqual(self.files(), {"rings.mrcs"} | {f"out/{name}" for name in FILES})
        rows = self.table("out/images.csv")
        self.assertEqual([row["fold"] for row in rows], ["7"] * 24)
        self.assertEqual({row["verdict"] for row in rows}, {"best_supported"})
        self.assertEqual({row["p_structure"] + row["q_value"] for row in rows}, {""})
        found = numpy.array([[float(row["centre_x"]), float(row["centre_y"])] for row in rows])
        # 48 squared errors over their reported variances: the mean is 1, with a standard deviation of 0.2.
        se = numpy.array([[float(row["se_x"]), float(row["se_y"])] for row in rows])
        self.assertLess((((found - truth[:, :2]) / se) ** 2).mean(), 1.7)
        # Angles share their zero within the fold: their differences from the truth agree.
        difference = numpy.array([float(row["angle"]) for row in rows]) - truth[:, 2]
        phase = numpy.exp(2j * numpy.pi * difference / (360 / 7))
        self.assertGreater(abs(phase.mean()), 0.98)
        with h5py.File(self.path("out/coefficients.h5")) as file:
            self.assertEqual(file["coefficients"].shape[0], 24)
            self.assertTrue(numpy.iscomplexobj(file["coefficients"][:1]))
            self.assertAlmostEqual(file.attrs["pixel_size"], 2.5, places=5)
        descriptors = numpy.load(self.path("out/descriptors.npy"))
        layout = json.loads(self.path("out/descriptors.npy.json").read_text())
        self.assertEqual(descriptors.shape, (24, layout["size"]))
        self.assertEqual(len(self.table("out/centres.csv")), 24)
        page = self.path("out/report.html").read_text()
        self.assertIn("rings.mrcs", page)
        self.assertNotIn("src=\"http", page)

    def test_takes_a_stack_of_another_program_and_names_what_it_skips(self):
        stack, _ = rings(10, 64, 6)
        stack[3, 5, 7] = numpy.nan
        stack[6] = 4
        tifffile.imwrite(self.path("rings.tif"), stack)
        done = self.tool("survey", "rings.tif", "-o", "out", "--radius", 25, code=4)
        self.assertIn("image 3", done.stderr)
        self.assertIn("x 7, y 5", done.stderr)
        self.assertIn("constant", done.stderr)
        rows = self.table("out/images.csv")
        self.assertEqual([row["verdict"] for row in rows].count("skipped"), 2)
        self.assertEqual({row["fold"] for row in rows if row["status"] == "ok"}, {"6"})
        self.assertTrue(numpy.isnan(numpy.load(self.path("out/descriptors.npy"))[3]).all())
        page = self.path("out/report.html").read_text()
        self.assertIn("x 7, y 5", page)
        self.tool("survey", "rings.tif", "-o", "out", "--radius", 25, "--max-skipped", 2, "--force")

    def test_does_not_depend_on_threads_or_batch(self):
        self.save("stack.npy", rings(12, 48, 5)[0])
        for name, extra in (("a", ["--threads", 1]), ("b", ["--threads", 3, "--batch", 5])):
            self.tool("survey", "stack.npy", "-o", name, "--radius", 18, *extra)
        for name in ("images.csv", "centres.csv", "orders.csv"):
            self.assertEqual(body(self.path(f"a/{name}")), body(self.path(f"b/{name}")))
        self.assertEqual(self.path("a/descriptors.npy").read_bytes(), self.path("b/descriptors.npy").read_bytes())

    def test_stack_of_noise_is_inconclusive(self):
        self.save("noise.npy", noise_stack(12, 64, 64))
        self.tool("survey", "noise.npy", "-o", "out", "--radius", 24, "--alpha", "0.001")
        self.assertLessEqual([row["verdict"] for row in self.table("out/images.csv")].count("best_supported"), 1)

    def test_refuses(self):
        self.save("noise.npy", noise_stack(2, 48, 48))
        self.refused("survey", "none.mrc", "-o", "out", code=3, says=["none.mrc"])
        self.refused("survey", "noise.npy", "-o", "out", "--radius", 3, code=2, says=["radius", "4"])
        self.refused("survey", "noise.npy", "-o", "out", "--radius", 24, code=3, says=["noise.npy"])
        self.refused("survey", "noise.npy", "-o", "out", "--folds", "1:4", code=2, says=["folds"])
        self.refused("survey", "noise.npy", "-o", "noise.npy", code=3, says=["noise.npy"])
        self.path("out").mkdir()
        self.path("out/images.csv").write_text("mine")
        self.refused("survey", "noise.npy", "-o", "out", "--radius", 16, code=3, says=["images.csv", "--force"])
        self.assertEqual(self.path("out/images.csv").read_text(), "mine")

    def test_interrupted_leaves_nothing_half_written(self):
        self.save("noise.npy", noise_stack(4000, 64, 64))
        process = subprocess.Popen([BIN / "tambour-survey", "noise.npy", "-o", "out", "--radius", "24"], cwd=self.folder,
                                   stdout=subprocess.PIPE, stderr=subprocess.PIPE, text=True)
        while not list(self.path(".").glob("out/*")):
            time.sleep(0.01)
        process.send_signal(signal.SIGINT)
        _, problem = process.communicate(timeout=120)
        self.assertEqual(process.returncode, 130, problem)
        self.assertEqual(self.files(), {"noise.npy"})


if __name__ == "__main__":
    unittest.main()
