"""Two-point function J(s) = B0(s) - B0(0) by its Feynman-parameter integral (mpmath, 34 digits); no closed form.

J = -int_0^1 dx ln[(x m1^2 + (1-x) m2^2 - x(1-x) s - i eps)/(x m1^2 + (1-x) m2^2)]; for real s the integral is split at the
zeros of the logarithm's argument, above threshold the imaginary part is pi times the length where it is negative.
Writes two_point.csv: m1, m2, Re s, Im s, Re J, Im J, Re J', Im J'. Rows with Im s = 0 mean s + i eps.
"""
from pathlib import Path

import mpmath as mp

mp.mp.dps = 34


def roots(m1, m2, s):
    # x m1^2 + (1-x) m2^2 - x(1-x) s = s x^2 + (m1^2 - m2^2 - s) x + m2^2
    b = m1**2 - m2**2 - s
    d = b * b - 4 * s * m2**2
    if s == 0 or d <= 0:
        return []
    return sorted(x for x in ((-b - mp.sqrt(d)) / (2 * s), (-b + mp.sqrt(d)) / (2 * s)) if 0 < x < 1)


def j(a, b, s):
    low = lambda x: x * a**2 + (1 - x) * b**2
    if mp.im(s) == 0:
        s = mp.re(s)
        cuts = roots(a, b, s)
        vertex = [x for x in [(s + b**2 - a**2) / (2 * s) if s else mp.mpf(0)] if 0 < x < 1]
        near = [x + d for x in vertex for d in (-mp.mpf("1e-3"), mp.mpf(0), mp.mpf("1e-3")) if 0 < x + d < 1]
        path = sorted({*near, mp.mpf(0), mp.mpf("1e-8"), mp.mpf("1e-4"), mp.mpf("0.01"), mp.mpf("0.5"), mp.mpf("0.99"), mp.mpf("0.9999"), mp.mpf(1), *cuts})
        re = -mp.quad(lambda x: mp.log(abs(low(x) - x * (1 - x) * s)) - mp.log(low(x)), path)
        im = mp.pi * (cuts[1] - cuts[0]) if len(cuts) == 2 else mp.mpf(0)
        return mp.mpc(re, im)
    f = lambda x: mp.log1p(-x * (1 - x) * s / low(x))
    return -mp.quad(f, [0, 1e-8, 1e-4, 0.01, 0.25, 0.5, 0.75, 0.99, 0.9999, 1])


rows = ["# J(s) and J'(s) by Feynman parameters, mpmath; made by two_point.py; Im s = 0 means s + i eps", "m1,m2,re_s,im_s,re_j,im_j,re_dj,im_dj"]
for m1, m2 in (("1", "1"), ("0.2", "0.2"), ("1", "0.5"), ("1", "0.01"), ("0.3", "0.1"), ("1", "0.999")):
    a, b = mp.mpf(float(m1)), mp.mpf(float(m2))
    th = (a + b) ** 2
    for f, im in (("-1e4", 0), ("-3", 0), ("-0.5", 0), ("-1e-3", 0), ("-1e-9", 0), ("1e-12", 0), ("1e-5", 0), ("0.15", 0), ("0.19", 0), ("0.21", 0),
                  ("0.5", 0), ("0.97", 0), ("0.999999", 0), ("1.000001", 0), ("1.25", 0), ("3", 0), ("50", 0), ("1e5", 0),
                  ("0.05", "0.1"), ("0.7", "-0.2"), ("2", "0.3"), ("2", "-0.3"), ("-1", "-0.5"), ("1", "1e-3")):
        re_s = float(mp.mpf(f) * th)
        im_s = float(mp.mpf(im) * th)
        s = mp.mpc(re_s, im_s)
        h = mp.mpf("1e-8") * min(abs(s), abs(s - th), th)
        value = j(a, b, s)
        mp.mp.dps = 44
        slope = (j(a, b, s + h) - j(a, b, s - h)) / (2 * h)
        mp.mp.dps = 34
        rows.append(",".join([m1, m2, repr(re_s), repr(im_s)] + [mp.nstr(x, 17) for x in (value.real, value.imag, slope.real, slope.imag)]))
Path(__file__).with_suffix(".csv").write_text("\n".join(rows) + "\n")
print(len(rows) - 2, "rows")
