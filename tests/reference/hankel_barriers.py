"""Centrifugal barrier polynomials from spherical Hankel functions (mpmath, 50 digits).

p_l(x^2) = x^(2l+2) |h_l(x)|^2, |h_l|^2 = j_l^2 + y_l^2 (DLMF 10.47, 10.49).
Writes hankel_barriers.csv beside this file.
"""
from pathlib import Path

from mpmath import besselj, bessely, mp, mpf, nstr, pi

mp.dps = 50
lines = ["# barrier polynomials from spherical Hankel functions, mpmath; made by hankel_barriers.py", "l,x,p_l"]
for l in range(5):
    for x in ("0.001", "0.1", "0.75", "1.5", "4", "20"):
        v = mpf(float(x))
        h2 = pi / (2 * v) * (besselj(l + mpf(1) / 2, v) ** 2 + bessely(l + mpf(1) / 2, v) ** 2)
        lines.append(f"{l},{x},{nstr(v ** (2 * l + 2) * h2, 17)}")
Path(__file__).with_suffix(".csv").write_text("\n".join(lines) + "\n")
