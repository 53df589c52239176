#!/usr/bin/env python3
"""Writes dctn_interpolant.csv: a small image, its cosine interpolant and some disk coefficients, all by SciPy.

The interpolant is summed from the coefficients of scipy.fft.dctn; a coefficient is an integral over the disk by
numpy.polynomial's Gauss-Legendre nodes times equispaced angles, with scipy.special's jv, jn_zeros and jnp_zeros. Nothing
comes from the library under test. Rows: geometry (n = rows, k = columns, u, v = centre, re = radius); pixel (u = x,
v = y, re = value); point (u, v = r, theta about the centre, re = interpolant); coef (edge, n, k, re, im).
"""
import numpy as np
import scipy
from scipy.fft import dctn
from scipy.special import jn_zeros, jnp_zeros, jv

ROWS, COLUMNS = 20, 24
CENTRE_X, CENTRE_Y, RADIUS = 11.3, 9.8, 9.0

rng = np.random.default_rng(20)
image = rng.integers(-50, 51, size=(ROWS, COLUMNS)).astype(float)

spectrum = dctn(image, type=2, norm=None) / (4 * ROWS * COLUMNS)
weight_y = np.where(np.arange(ROWS) == 0, 1, 2)
weight_x = np.where(np.arange(COLUMNS) == 0, 1, 2)
# norm=None: Y_k = 2 sum_j x_j cos(pi k (2 j + 1) / (2 N)), so x_j = (1 / 2N) (Y_0 + 2 sum_k Y_k cos ...).
spectrum = spectrum * weight_y[:, None] * weight_x[None, :]


def interpolant(x, y):
    along_x = np.cos(np.pi * np.multiply.outer(x + 0.5, np.arange(COLUMNS)) / COLUMNS)
    along_y = np.cos(np.pi * np.multiply.outer(y + 0.5, np.arange(ROWS)) / ROWS)
    return np.einsum("...q,qp,...p->...", along_y, spectrum, along_x)


def polar(r, theta):
    return interpolant(CENTRE_X + r * np.cos(theta), CENTRE_Y + r * np.sin(theta))


assert np.allclose(polar(np.hypot(3 - CENTRE_X, 5 - CENTRE_Y), np.arctan2(5 - CENTRE_Y, 3 - CENTRE_X)), image[5, 3])


def root_and_norm(edge, n, k):
    """lambda_nk and the integral of x J_n(lambda x)^2 over [0, 1]."""
    if edge == "dirichlet":
        root = jn_zeros(n, k)[-1]
        return root, jv(n + 1, root) ** 2 / 2
    if n == 0:
        root = 0.0 if k == 1 else jn_zeros(1, k - 1)[-1]
        return root, jv(0, root) ** 2 / 2
    root = jnp_zeros(n, k)[-1]
    return root, (1 - n**2 / root**2) * jv(n, root) ** 2 / 2


nodes, weights = np.polynomial.legendre.leggauss(80)
r = RADIUS * (nodes + 1) / 2
angles = 2 * np.pi * np.arange(160) / 160
on_rings = polar(r[:, None], angles[None, :])


def coefficient(edge, n, k):
    root, norm = root_and_norm(edge, n, k)
    ring = on_rings @ np.exp(-1j * n * angles) * (2 * np.pi / angles.size)
    return np.sum(weights * RADIUS / 2 * r * ring * jv(n, root * r / RADIUS)) / (RADIUS * np.sqrt(2 * np.pi * norm))


with open("dctn_interpolant.csv", "w") as out:
    print(f"# made by make_dctn_interpolant.py with SciPy {scipy.__version__}, NumPy {np.__version__}", file=out)
    print("kind,edge,n,k,u,v,re,im", file=out)
    print(f"geometry,,{ROWS},{COLUMNS},{CENTRE_X!r},{CENTRE_Y!r},{RADIUS!r},", file=out)
    for y in range(ROWS):
        for x in range(COLUMNS):
            print(f"pixel,,,,{x},{y},{float(image[y, x])!r},", file=out)
    for radius, theta in [(0.0, 0.0), (0.25, 2.0), (3.3, -1.0), (6.75, 3.0), (8.9, 0.5), (9.0, -2.5)]:
        print(f"point,,,,{radius},{theta},{float(polar(radius, theta))!r},", file=out)
    for edge in ("dirichlet", "neumann"):
        for n, k in [(0, 1), (0, 2), (0, 7), (1, 1), (1, 6), (2, 3), (5, 2), (9, 4), (14, 1), (19, 1)]:
            value = coefficient(edge, n, k)
            print(f"coef,{edge},{n},{k},,,{float(value.real)!r},{float(value.imag)!r}", file=out)
