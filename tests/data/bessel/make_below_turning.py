#!/usr/bin/python3
"""Prints below_turning.csv, J_n far below its turning point: ./make_below_turning.py > below_turning.csv"""
import random

import mpmath

mpmath.mp.dps = 60
random.seed(20)
print(f"# J_n(x) and J_n'(x) for x < n by mpmath {mpmath.__version__} besselj, 60 digits; error below 1e-25 relative.")
print("# The first rows are points where cyl_bessel_j of Boost 1.74 is off by 1e-14 to 1e-13.")
print("n,x,J,Jprime")
points = [(344, 250.54251891560853), (237, 153.15350979757494), (986, 882.00226344633847), (306, 134.30405817822526)]
while len(points) < 120:
    n = round(2 * 2500 ** random.random())
    x = n * random.uniform(0.02, 1)
    if mpmath.besselj(n, x) > mpmath.mpf("1e-305"):
        points.append((n, x))
for n, x in points:
    value, slope = mpmath.besselj(n, mpmath.mpf(x)), mpmath.besselj(n, mpmath.mpf(x), 1)
    print(f"{n},{x!r},{mpmath.nstr(value, 25)},{mpmath.nstr(slope, 25)}")
