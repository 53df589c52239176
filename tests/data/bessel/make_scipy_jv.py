#!/usr/bin/python3
"""Prints scipy_jv.csv, a second opinion on J_n, J_n' and the roots: ./make_scipy_jv.py > scipy_jv.csv"""
import scipy
from scipy.special import jn_zeros, jnp_zeros, jv, jvp

print(f"# J_n(x), J_n'(x) by scipy.special.jv, jvp and roots by jn_zeros, jnp_zeros; SciPy {scipy.__version__}, IEEE double.")
print("# SciPy's own error: 5e-13 of the local amplitude for these x, about 3e-16 relative for these roots.")
print("# kind jv: argument = x; kind root: argument = index k of the positive roots.")
print("kind,n,argument,value,derivative")
for n in (0, 1, 2, 5, 17, 64, 150):
    for x in (0.3, 1.9, 4.6, 11.7, 33.3, 64.25, 90.9, 149.6, 170.1, 322.8, 640.6, 999.4):
        if x > 0.5 * n:
            print(f"jv,{n},{x!r},{float(jv(n, x))!r},{float(jvp(n, x))!r}")
for n in (0, 3, 25, 100):
    # "value" is a root of J_n, "derivative" a root of J_n'; both count positive roots only.
    for k, (root, slope_root) in enumerate(zip(jn_zeros(n, 20), jnp_zeros(n, 20)), 1):
        print(f"root,{n},{k},{float(root)!r},{float(slope_root)!r}")
