"""Small d-functions up to J = 4: d^J_{lambda mu}(beta) = <lambda|exp(-i beta J_y)|mu> with the exact J_y of sympy and the matrix
exponential of mpmath (30 digits); Wigner's sum does not enter. Condon-Shortley phases, as in the PDG table. Writes wigner_d.csv.
"""
from pathlib import Path

import mpmath as mp
from sympy import I, Rational, sqrt, zeros

mp.mp.dps = 30
rows = ["# d^J_{lambda mu}, PDG convention, from exp(-i beta J_y); made by wigner_d.py", "twice_j,twice_lambda,twice_mu,cos,d"]
for twice_j in range(1, 9):
    j = Rational(twice_j, 2)
    m = [j - k for k in range(twice_j + 1)]
    plus = zeros(twice_j + 1)                       # J_+ |m> = sqrt(j(j+1) - m(m+1)) |m+1>
    for k in range(1, twice_j + 1):
        plus[k - 1, k] = sqrt(j * (j + 1) - m[k] * (m[k] + 1))
    jy = (plus - plus.T) / (2 * I)
    generator = mp.matrix([[mp.mpmathify((-I * x).evalf(30)) for x in jy.row(r)] for r in range(twice_j + 1)])
    for c in ("-0.75", "0.125", "0.9375"):
        d = mp.expm(generator * mp.acos(mp.mpf(c)))
        for a in range(twice_j + 1):
            for b in range(twice_j + 1):
                rows.append(f"{twice_j},{2 * m[a]},{2 * m[b]},{c},{float(mp.re(d[a, b])):.17g}")
Path(__file__).with_suffix(".csv").write_text("\n".join(rows) + "\n")
