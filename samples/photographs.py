#!/usr/bin/env python3
"""Fields of a light microscope and of a camera, taken apart and rebuilt; and what is left over, explained.

The pictures are scikit-image's samples: `retina.jpg`, a field cut by a circular stop, reduced to a seventh of its size, and
crops of `coins.png`. Each is expanded with both edge conditions.

Usage: photographs.py [FOLDER]; TAMBOUR_BIN names the folder of the tools (build/release/bin).
"""

import os
import pathlib
import subprocess
import sys

import numpy
import skimage
import skimage.io

SOURCE = pathlib.Path(__file__).resolve().parent.parent
BIN = pathlib.Path(os.environ.get("TAMBOUR_BIN", SOURCE / "build/release/bin")).resolve()
PICTURES = pathlib.Path(skimage.__file__).parent / "data"
LUMA = numpy.array([0.299, 0.587, 0.114])  # ITU-R BT.601
BANDLIMIT = 0.9
AMPLIFIED = 4  # residuals in the pictures


def tool(name, *arguments):
    subprocess.run([BIN / f"tambour-{name}", *map(str, arguments), "--force", "--quiet"], check=True)


def reduced(image, factor):
    """Means of square blocks."""
    rows, columns = (size // factor * factor for size in image.shape)
    return image[:rows, :columns].reshape(rows // factor, factor, columns // factor, factor).mean(axis=(1, 3))


def scenes():
    retina = reduced(skimage.io.imread(PICTURES / "retina.jpg") @ LUMA, 7)
    # The stop's rim lies at 0.49 of the frame; the disk stays a little inside it, where the field is.
    yield "retina", retina, 0.46 * min(retina.shape)
    coins = skimage.io.imread(PICTURES / "coins.png").astype(float)
    for row, column in ((20, 40), (100, 205), (165, 330)):
        crop = coins[row:row + 50, column:column + 50]
        if crop.shape == (50, 50):
            yield f"coin-{row}-{column}", crop, 24.0


def radii(shape):
    y, x = numpy.indices(shape)
    return numpy.hypot(x - (shape[1] - 1) / 2, y - (shape[0] - 1) / 2)


def beyond_the_band(image, inside):
    """Share of the variance in the disk at spatial frequencies above the band limit: what no term can hold."""
    mirrored = numpy.block([[image, image[:, ::-1]], [image[::-1], image[::-1, ::-1]]])  # as the cosine interpolant
    spectrum = numpy.fft.fft2(mirrored)
    q = numpy.hypot(*numpy.meshgrid(*(2 * numpy.fft.fftfreq(size) for size in mirrored.shape), indexing="ij"))
    fine = numpy.fft.ifft2(numpy.where(q > BANDLIMIT, spectrum, 0)).real[:image.shape[0], :image.shape[1]]
    return (fine[inside] ** 2).sum() / ((image[inside] - image[inside].mean()) ** 2).sum()


def residual(folder, name, image, radius, edge):
    numpy.save(folder / f"{name}.npy", image)
    coefficients = folder / f"{name}-{edge}.h5"
    rebuilt = folder / f"{name}-{edge}.npy"
    tool("analyse", folder / f"{name}.npy", "-o", coefficients, "--radius", radius, "--edge", edge, "--bandlimit", BANDLIMIT)
    tool("synthesise", coefficients, "-o", rebuilt)
    return image - numpy.load(rebuilt).reshape(image.shape)


def main():
    folder = pathlib.Path(sys.argv[1] if len(sys.argv) > 1 else "photographs-output")
    folder.mkdir(parents=True, exist_ok=True)
    print(f"{'picture':14} {'edge':10} {'left over':>10} {'inner':>8} {'rim':>8} {'beyond band':>12}")
    for name, image, radius in scenes():
        r = radii(image.shape)
        inside, rim = r <= radius, (r <= radius) & (r > 0.9 * radius)
        variance = ((image[inside] - image[inside].mean()) ** 2).sum()
        rows = [image]
        for edge in ("neumann", "dirichlet"):
            left = residual(folder, name, image, radius, edge)
            share = [(left[part] ** 2).sum() / variance for part in (inside, inside & ~rim, rim)]
            print(f"{name:14} {edge:10} {share[0]:10.4f} {share[1]:8.4f} {share[2]:8.4f} "
                  f"{beyond_the_band(image, inside):12.4f}")
            rows += [numpy.where(inside, image - left, image.min()),
                     numpy.where(inside, AMPLIFIED * left + image.mean(), image.min())]
        sheet = numpy.hstack(rows)
        sheet = numpy.clip((sheet - image.min()) / (image.max() - image.min()), 0, 1)
        skimage.io.imsave(folder / f"{name}.png", (255 * sheet).astype(numpy.uint8), check_contrast=False)
    print(f"""
Shares of the variance inside the disk. `inner` and `rim` (the outermost tenth of the radius) add up to `left over`.
A picture of a field does not end at the rim. Dirichlet functions vanish there, so their sum falls short at the rim however many
terms there are, and ripples inwards; Neumann functions are level there and lose only slopes. What remains with them is mostly
texture finer than the band limit, which no term holds (`beyond band`).
Pictures in {folder}: original; Neumann rebuilt, residual; Dirichlet rebuilt, residual ({AMPLIFIED} times, mid-grey is zero).""")


if __name__ == "__main__":
    main()
