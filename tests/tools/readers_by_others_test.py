#!/usr/bin/env python3
"""What this library writes, read by libraries that are not ours: mrcfile, NumPy, tifffile and h5py.

Usage: readers_by_others_test.py WRITE_SAMPLES, the program made from tests/support/write_samples.cpp.
"""
import io
import pathlib
import subprocess
import sys
import tempfile
import unittest
import warnings

import h5py
import mrcfile
import numpy as np
import tifffile
from scipy import special

PROGRAM = sys.argv.pop()
PATTERN = (7 * np.arange(3)[:, None, None] + 3 * np.arange(24)[None, :, None]
           + np.arange(20)[None, None, :]) * 0.375 - 11.5


class ReadersByOthers(unittest.TestCase):
    @classmethod
    def setUpClass(cls):
        cls.scratch = tempfile.TemporaryDirectory()
        cls.folder = pathlib.Path(cls.scratch.name)
        subprocess.run([PROGRAM, cls.scratch.name], check=True)

    @classmethod
    def tearDownClass(cls):
        cls.scratch.cleanup()

    def test_nothing_is_left_beside_the_files(self):
        self.assertEqual(sorted(path.name for path in self.folder.iterdir()),
                         sorted(["stack.mrcs", "unsized.mrc", "single.h5", "double.h5"]
                                + [f"stack{bits}.{kind}" for bits in (32, 64) for kind in ("npy", "tif", "h5")]))

    def test_mrcfile_finds_nothing_to_complain_of(self):
        for name in ("stack.mrcs", "unsized.mrc"):
            complaints = io.StringIO()
            with warnings.catch_warnings():
                warnings.simplefilter("error")
                valid = mrcfile.validate(self.folder / name, print_file=complaints)
            self.assertEqual(complaints.getvalue().splitlines()[1:], ["File appears to be valid."])
            self.assertTrue(valid)

    def test_mrcfile_reads_an_image_stack(self):
        with mrcfile.open(self.folder / "stack.mrcs") as file:
            self.assertTrue(file.is_image_stack())
            self.assertEqual(file.data.dtype.newbyteorder("="), np.float32)
            np.testing.assert_array_equal(file.data, PATTERN)
            self.assertAlmostEqual(float(file.voxel_size.x), 1.35, places=6)
            self.assertAlmostEqual(float(file.voxel_size.y), 1.35, places=6)
            self.assertAlmostEqual(float(file.header.dmean), PATTERN.mean(), places=5)
            self.assertAlmostEqual(float(file.header.rms), PATTERN.std(), places=5)
            self.assertEqual((file.header.dmin, file.header.dmax), (PATTERN.min(), PATTERN.max()))
            self.assertIn("tambour", str(file.header.label[0]))
        with mrcfile.open(self.folder / "unsized.mrc") as file:
            self.assertEqual(float(file.voxel_size.x), 0)

    def test_numpy(self):
        for bits in (32, 64):
            array = np.load(self.folder / f"stack{bits}.npy")
            self.assertEqual(array.dtype, np.dtype(f"f{bits // 8}"))
            np.testing.assert_array_equal(array, PATTERN)
            self.assertEqual(np.load(self.folder / f"stack{bits}.npy", mmap_mode="r").offset % 64, 0)

    def test_tifffile(self):
        for bits in (32, 64):
            with tifffile.TiffFile(self.folder / f"stack{bits}.tif") as file:
                self.assertEqual(len(file.pages), 3)
                for page, expected in zip(file.pages, PATTERN):
                    self.assertEqual(page.dtype, np.dtype(f"f{bits // 8}"))
                    np.testing.assert_array_equal(page.asarray(), expected)
                    across = page.tags["XResolution"].value
                    self.assertEqual(page.tags["ResolutionUnit"].value, 3)  # centimetre
                    np.testing.assert_allclose(across[0] / across[1], 1e8 / 1.35, rtol=1e-6)

    def test_h5py_stack(self):
        for bits in (32, 64):
            with h5py.File(self.folder / f"stack{bits}.h5") as file:
                self.assertEqual(file["images"].dtype, np.dtype(f"f{bits // 8}"))
                np.testing.assert_array_equal(file["images"], PATTERN)
                self.assertEqual(file["images"].attrs["pixel_size"], 1.35)
                self.assertEqual(file["images"].attrs["unit"], "angstrom")

    def test_h5py_reads_coefficients_as_complex_numbers(self):
        for name, kind in (("single", "c8"), ("double", "c16")):
            with h5py.File(self.folder / f"{name}.h5") as file:
                orders, indices = file["terms/angular_order"][:], file["terms/radial_index"][:]
                roots, gain = file["terms/root"][:], file["terms/white_noise_gain"][:]
                terms = len(roots)
                coefficients = file["coefficients"]
                self.assertEqual(coefficients.dtype, np.dtype(kind))
                self.assertEqual(coefficients.shape, (3, terms))
                np.testing.assert_array_equal(coefficients[:].real, np.repeat([[1], [2], [3]], terms, 1))
                np.testing.assert_array_equal(coefficients[:].imag, np.tile(np.arange(terms) / 4, (3, 1)))

                # The terms are those of SciPy: every root of J_n up to pi R beta, counted from 1.
                limit = np.pi * file.attrs["radius"] * file.attrs["bandlimit"]
                expected = [(n, k, root) for n in range(orders.max() + 2)
                            for k, root in enumerate(special.jn_zeros(n, 12), 1) if root <= limit]
                np.testing.assert_array_equal(orders, [n for n, _, _ in expected])
                np.testing.assert_array_equal(indices, [k for _, k, _ in expected])
                np.testing.assert_allclose(roots, [root for _, _, root in expected], rtol=1e-11)
                self.assertTrue(np.all((gain > 0.5) & (gain < 1.5)))

                self.assertEqual(file.attrs["edge"], "dirichlet")
                self.assertEqual((file.attrs["rows"], file.attrs["columns"]), (24, 20))
                self.assertEqual((file.attrs["pixel_size"], file.attrs["unit"]), (1.35, "angstrom"))
                self.assertEqual(file.attrs["schema_version"], 1)
                self.assertEqual(file.attrs["precision"], name)
                self.assertEqual(file.attrs["preparation_background"], "quadratic")
                self.assertEqual(file.attrs["preparation_scaling"], "none")
                self.assertEqual(file.attrs["preparation_invert_contrast"], 0)
                self.assertIn("solver", file.attrs)
                np.testing.assert_array_equal(file["images/centre"], [[9.5, 11.5], [10.5, 11.5], [11.5, 11.5]])
                self.assertEqual(list(file["images/source"].asstr()), [f"stack.mrc#{i}" for i in range(3)])
                self.assertEqual(list(file["images/status"].asstr()), ["ok", "ok", "constant image"])
                np.testing.assert_array_equal(file["images/noise_sd"], [0, 0.5, 1])
                np.testing.assert_array_equal(file["images/noise_frequency"], [1, 10, 30])
                np.testing.assert_array_equal(file["images/noise_spectrum"], [[1, 2, 3]] * 3)
                np.testing.assert_array_equal(file["images/background"][:, 3], [0, 1, 2])
                provenance = file["provenance"]
                self.assertEqual(provenance.attrs["command"], "tambour-analyse stack.mrc -o c.h5")
                self.assertRegex(provenance.attrs["version"], r"^\d+\.\d+\.\d+$")
                self.assertEqual(provenance["inputs"].asstr()[:].tolist(), [["stack.mrc", "a" * 64]])
                self.assertEqual(provenance["options"].asstr()[:].tolist(), [["radius", "12"]])
                self.assertEqual(provenance["libraries"].asstr()[:].tolist(), [["HDF5", "x.y"]])


if __name__ == "__main__":
    unittest.main()
