"""The same chain as chain.py, vectorised over energies for fits: one set of W' for the whole scan, coarser panels (1e-7).

Only for constant widths and vertices far above threshold, Gaussian spread; checked against chain.py when run.
"""
import numpy as np
from numpy.polynomial.legendre import leggauss
import chain as c


def sigma_rad(scan, d, n=8, ratio=2.5):
    """sigma_rad at many W' = M_1 + d."""
    w_min = scan["chain"]["w_min_gev"]
    if w_min is None:
        return c.born_nb(scan, d)
    m_ref = c.reference(scan)
    wp = m_ref + d
    reach = d + (m_ref - w_min)
    beta = 2 * c.ALPHA / np.pi * (np.log(wp ** 2 / scan["beams"]["first"]["mass_gev"] ** 2) - 1)
    poles = [(r["mass_gev"] - m_ref, r["width_gev"]) for r in scan["hypothesis"]["resonances"]]
    first = 1e-4 * min(g for _, g in poles)
    top = float(reach.max())
    grow = first * ratio ** np.arange(0, np.log(top / first) / np.log(ratio) + 1)
    cols = [np.broadcast_to(grow, (len(d), len(grow)))]
    for p, g in poles:
        k = 0.4 * g * ratio ** np.arange(0, np.log(top / g) / np.log(ratio) + 2)
        up = (d - p)[:, None]
        cols += [up + k, up - k, up]
    e = np.sort(np.clip(np.concatenate([x for x in cols] + [reach[:, None]], axis=1), first, reach[:, None]), axis=1)
    x0, w0 = leggauss(n)
    h, mid = np.diff(e, axis=1) / 2, (e[:, 1:] + e[:, :-1]) / 2
    u = (mid[..., None] + h[..., None] * x0).reshape(len(d), -1)
    wu = (h[..., None] * w0).reshape(len(d), -1)
    xs = lambda u: u * (2 * wp[:, None] - u) / wp[:, None] ** 2
    b = beta[:, None]
    x = xs(u)
    f = b * x ** (b - 1) * c.radiator_soft(b) + c.radiator_hard(b, x)
    total = np.sum(wu * 2 * (wp[:, None] - u) / wp[:, None] ** 2 * f * c.born_nb(scan, d[:, None] - u), axis=1)
    # soft end: sigma is constant there to 1e-4 of a width; one linear step, y = x^beta and the hard part
    xf = xs(np.full((len(d), 1), first))
    y = xf ** b * (x0 + 1) / 2
    xx = y ** (1 / b)
    uu = wp[:, None] * xx / (1 + np.sqrt(1 - xx))
    total += np.sum(w0 / 2 * xf ** b * c.radiator_soft(b) * c.born_nb(scan, d[:, None] - uu), axis=1)
    xl = xf * (x0 + 1) / 2
    total += np.sum(w0 / 2 * xf * c.radiator_hard(b, xl), axis=1) * c.born_nb(scan, d)
    return total


def sigma_obs(scan, v, n=8, sigma=None):
    """sigma_obs at nominal W = M_1 + v (array); sigma: one number or one per energy, default from the scan."""
    v = np.asarray(v, float)
    m_ref = c.reference(scan)
    sig = np.broadcast_to(np.array([c.sigma_of(scan, m_ref + x) for x in v]) if sigma is None else sigma, v.shape)
    s = sig.max()
    lo, hi = v.min() - 8 * s, v.max() + 8 * s
    edges = [np.arange(lo, hi + 1.2 * s, 1.2 * s)]
    for r in scan["hypothesis"]["resonances"]:
        p, g = r["mass_gev"] - m_ref, r["width_gev"]
        k = 0.5 * g * 2.0 ** np.arange(0, max(1, np.log2(4 * s / g) + 1))
        edges += [p + k, p - k, [p]]
    e = np.unique(np.clip(np.concatenate(edges), lo, hi))
    keep = [(a, b) for a, b in zip(e[:-1], e[1:]) if np.any((v > a - 8 * s) & (v < b + 8 * s))]
    x0, w0 = leggauss(n)
    a, b = np.array(keep).T
    d = ((a + b)[:, None] / 2 + (b - a)[:, None] / 2 * x0).ravel()
    wd = ((b - a)[:, None] / 2 * w0).ravel()
    rad = sigma_rad(scan, d, n)
    kernel = np.exp(-0.5 * ((d[None] - v[:, None]) / sig[:, None]) ** 2) / (sig[:, None] * np.sqrt(2 * np.pi))
    return kernel @ (wd * rad)


if __name__ == "__main__":
    import json
    import os
    import time
    d = json.load(open(os.path.join(os.path.dirname(os.path.abspath(__file__)), "lineshape_nested.json")))
    for case in d["cases"]:
        if "invented" in case["source"]:
            v = np.array([p["offset_gev"] for p in case["points"]])
            t = time.time()
            o = sigma_obs(case["scan"], v)
            print(case["name"], f"{time.time() - t:.3f} s, largest deviation {max(abs(o / [p['observed_nb'] for p in case['points']] - 1)):.1e}")
