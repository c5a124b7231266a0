"""1,000 random points of the line-shape chain over Gamma/sigma_W, M/sigma_W, position and interference, computed once.

Writes accuracy_map.json (columns). `python accuracy_map.py --check SEED` recomputes 20 of them with finer rules and compares.
One vector resonance of constant width with one-photon continuum, leptonic radiation, Gaussian spread; rules of 8 and 12
nodes on graded panels (fast_chain.py, checked against chain.py there); the difference is the error quoted.
"""
import json
import os
import sys
import numpy as np
from concurrent.futures import ProcessPoolExecutor
import chain as c
import fast_chain as f

OUT = os.path.join(os.path.dirname(os.path.abspath(__file__)), "accuracy_map.json")
COLUMNS = ["mass_gev", "width_gev", "sigma_w_gev", "strength_gev", "continuum_nb", "phase_rad", "w_min_gev", "offset_gev"]


def draw(rng):
    m = 10 ** rng.uniform(0, 2)
    sigma = m * 10 ** rng.uniform(-5.3, -2.7)
    g = min(sigma * 10 ** rng.uniform(-4, 4), 0.1 * m)
    if g / sigma < 1e-4 or rng.random() < 0.02:
        g = 1e-4 * sigma
    unit = max(g, sigma)
    offset = unit * rng.choice([-1, 1]) * 10 ** rng.uniform(-3, 1.3)
    offset = max(offset, -0.2 * m)
    born = 10 ** rng.uniform(-1, 4)                                   # peak over continuum
    k2 = m * m / 4
    gee = born * k2 * g / (3 * np.pi * c.HBARC2_GEV2_NB)              # continuum 1 nb at M
    return [m, g, sigma, gee, 1.0, rng.uniform(-np.pi, np.pi), m * rng.uniform(0.3, 0.75), offset]


def scan_of(row):
    m, g, sigma, gee, cont, phase, w_min, _ = row
    return c.scan(c.beams(c.lepton()), 2, [c.resonance(m, g, {"kind": "gamma_in_bf", "gev": gee})], w_min, c.gaussian(sigma, m),
                  {"kind": "one_photon", "c_nb": cont, "w0_gev": m, "phase_rad": phase})


def value(row, n):
    return float(f.sigma_obs(scan_of(row), np.array([row[7]]), n=n)[0])


def one(row):
    a, b = value(row, 8), value(row, 12)
    return [b, abs(a / b - 1)]


if __name__ == "__main__":
    if "--check" in sys.argv:
        d = json.load(open(OUT))
        rng = np.random.default_rng(int(sys.argv[sys.argv.index("--check") + 1]))
        worst = 0.0
        for i in rng.choice(len(d["rows"]), 20, replace=False):
            r = d["rows"][i]
            worst = max(worst, abs(c.observed_nb(scan_of(r[:8]), r[7], 8) / r[8] - 1))
        print(f"20 of {len(d['rows'])} points recomputed by the other integrator: largest relative deviation {worst:.1e}")
        print("1 passed, 0 failed" if worst < 1e-8 else "0 passed, 1 failed")
        sys.exit(worst >= 1e-8)
    rng = np.random.default_rng(1000)
    rows = [draw(rng) for _ in range(1000)]
    rows = [[float(f"{x:.12g}") for x in r] for r in rows]
    with ProcessPoolExecutor(2) as pool:
        values = list(pool.map(one, rows, chunksize=20))
    err = sorted(v[1] for v in values)
    print(f"own error: median {err[500]:.1e}, 99 % {err[990]:.1e}, largest {err[-1]:.1e}")
    body = ",\n".join(json.dumps(r + v) for r, v in zip(rows, values))
    head = json.dumps({"about": __doc__.split("\n")[0], "script": "accuracy_map.py", "columns": COLUMNS + ["observed_nb", "error_rel"]}, indent=1)
    open(OUT, "w").write(head[:-2] + ',\n "rows": [\n' + body + "\n]}\n")
