"""Nested double integrals of radiation and spread, Gamma/sigma_W from 1e-4 to 1e4, with interference, thresholds and far tails.

Writes lineshape_nested.json: every input (layout of the scan as in chain.py, which is the plain-data layout of the
core's own scan), the energy as offset from the first resonance's mass, Born, radiated and observed cross section in nb
and the error of this calculation (difference of two rules).
`python lineshape_nested.py` recomputes all (some minutes); `--mpmath` adds three points by literal nested mpmath quadrature.
"""
import json
import os
import sys
import numpy as np
from concurrent.futures import ProcessPoolExecutor
import chain as c

OUT = os.path.join(os.path.dirname(os.path.abspath(__file__)), "lineshape_nested.json")
MUON, ELECTRON, PROTON = c.lepton("mu", c.M_MU), c.lepton(), c.lepton("p", c.M_P)
DEG = np.pi / 180


def cases():
    """(name, source or purpose, scan, offsets from M_1 in GeV)."""
    out = []
    m, sigma = 3.1, 1.0e-3
    continuum = lambda phase: {"kind": "one_photon", "c_nb": 1.9, "w0_gev": m, "phase_rad": phase * DEG}
    for ratio, spread in ((1e-4, sigma), (1e-2, sigma), (1.0, sigma), (1e2, 2e-4), (1e4, 1e-5)):
        g = ratio * spread
        unit = max(g, spread)
        s = c.scan(c.beams(ELECTRON), 2, [c.resonance(m, g, {"kind": "branchings", "b_in": 6e-4, "b_f": 0.06})], 2.5, c.gaussian(spread), continuum(-130))
        out.append((f"vector + continuum, Gamma/sigma_W = {ratio:g}", "own; constant width and vertices", s,
                    [-25 * unit, -4 * unit, -1.3 * unit, -0.2 * unit, 0.0, 0.35 * unit, 1.1 * unit, 3 * unit, 12 * unit]))
    g = 1e-7
    out.append(("narrow vector, peak far off (11 sigma_W), no continuum", "own; a narrow peak within 12 sigma_W must be seen",
                c.scan(c.beams(ELECTRON), 2, [c.resonance(m, g, {"kind": "gamma_in_bf", "gev": 3e-8})], 2.5, c.gaussian(sigma)), [-11e-3, -9e-3, 11e-3]))
    psi = [c.resonance(3.68596, 300e-6, {"kind": "partial_widths", "gamma_in_gev": 2.19e-6, "gamma_f_gev": 300e-6})]
    out.append(("psi(2S)", "Wang, Yuan & Mo 2002 (parameters)", c.scan(c.beams(ELECTRON), 2, psi, 0.5, c.gaussian(1.3e-3)),
                [-8e-3, -1.3e-3, 0.0, 1e-5, 1.352e-4, 2e-3, 12e-3]))
    a = c.scan(c.beams(ELECTRON), 2, [c.resonance(2.8742, 0.62e-3, {"kind": "gamma_in_bf", "gev": 24.6e-9})], 2.65, c.gaussian(0.71e-3),
               {"kind": "one_photon", "c_nb": 1.9, "w0_gev": 2.8742, "phase_rad": -130 * DEG})
    out.append(("invented vector at 2.8742 GeV", "own; invented scenario", a, [x * 1e-3 for x in (-30, -4, -2.9, -2.2, -1.5, -1, -0.6, 0, 0.25, 0.6, 1, 1.5, 2.4, 5)]))
    phi_l1 = lambda a, b: {"kind": "two_body", "m1_gev": a, "m2_gev": b, "l": 1, "radius_per_gev": 0.0}
    kk = {"kind": "running", "m1_gev": 0.497611, "m2_gev": 0.497611, "l": 1, "radius_per_gev": 0.0}
    phi = c.resonance(1.0194556, 4.2432e-3, {"kind": "gamma_in_bf", "gev": 4.2863e-7}, entrance={"kind": "one_photon"}, exit=kk, form={
        "kind": "running_width", "channels": [
            {"name": "K+K-", "fraction": 0.501, "shape": phi_l1(0.493677, 0.493677)}, {"name": "KSKL", "fraction": 0.336, "shape": phi_l1(0.497611, 0.497611)},
            {"name": "rho pi", "fraction": 0.150, "shape": phi_l1(0.7753, 0.138)}, {"name": "eta gamma", "fraction": 0.013, "shape": phi_l1(0.54786, 0.0)}]})
    p = c.scan(c.beams(ELECTRON), 2, [phi], 0.995222, c.gaussian(0.3e-3), {"kind": "shared_vertices", "c": 0.941}, final=0.995222)
    out.append(("phi -> K_S K_L, running width, shared-vertex background", "own; masses and channels of the CMD-3 refit", p,
                [-0.0239, -0.015, -0.003, 0.0, 0.002, 0.01, 0.02, 0.04]))
    p2 = c.scan(c.beams(ELECTRON), 2, [phi], 0.995222, c.gaussian(1.0e-3, 1.02, 2.0), {"kind": "shared_vertices", "c": 0.941}, final=0.995222)
    out.append(("phi, threshold inside the spread, sigma_W growing as W^2", "own", p2, [0.995222 - 1.0194556 + x for x in (-1e-3, 0.0, 5e-4, 2e-3)]))
    higgs = [c.resonance(125.7, 4.2e-3, {"kind": "branchings", "b_in": 5e-9, "b_f": 0.58})]
    for w_min in (100.0,):
        out.append(("scalar of 125.7 GeV in e+e-", "arXiv:1509.02406 (mass, width, spread)", c.scan(c.beams(ELECTRON), 0, higgs, w_min, c.gaussian(4.2e-3)),
                    [-0.05, -4e-3, 0.0, 1.5e-3, 8e-3, 0.1]))
    s = c.scan(c.beams(MUON), 0, [c.resonance(47.3042, 3.1e-3, {"kind": "branchings", "b_in": 9.7e-5, "b_f": 0.8})], 40.0, c.gaussian(1.34e-3),
               incoherent={"kind": "power", "c0_nb": 14e-3, "w0_gev": 47.3, "n": 2.0})
    out.append(("invented scalar at 47.3 GeV in mu+mu-", "own; invented scenario", s, [-0.0162, -0.003, 0.0, 0.00025, 0.004, 0.02]))
    two = [c.resonance(3.2180, 0.90e-3, {"kind": "bin_bf", "product": 3.0e-6}), c.resonance(3.2202, 1.50e-3, {"kind": "bin_bf", "product": 1.6e-6}, 115 * DEG)]
    b = c.scan(c.beams(PROTON), 4, two, None, c.gaussian(192e-6))
    out.append(("two overlapping 2++ states, antiprotons, no radiation", "own; invented scenario", b, [-8e-3, -6e-4, 0.0, 0.6e-3, 1.2e-3, 1.8e-3, 2.4e-3, 8e-3]))
    t = c.scan(c.beams(ELECTRON), 2, [c.resonance(m, 1e-4, {"kind": "branchings", "b_in": 6e-4, "b_f": 0.06})], 2.5,
               {"Table": {"rows": [[-2e-3, 0.0], [-5e-4, 1.0], [3e-4, 0.8], [1.5e-3, 0.0]]}}, continuum(60))
    out.append(("tabulated spread", "own", t, [-3e-3, -1e-3, 0.0, 4e-4, 2.1e-3]))
    z = c.scan(c.beams(ELECTRON), 2, [c.resonance(91.1875, 2.4952, {"kind": "branchings", "b_in": 0.033632, "b_f": 0.69911}, form={"kind": "massless_channels"},
                                                  entrance={"kind": "massless"}, exit={"kind": "massless"})], 9.11875, c.gaussian(0.055))
    out.append(("Z -> hadrons, massless channels", "hep-ex/0509008 (parameters)", z, [-3.0, -1.0, 0.0, 0.1, 2.0, 4.0]))
    poly = c.scan(c.beams(ELECTRON), 2, [c.resonance(m, 5e-3, {"kind": "branchings", "b_in": 6e-4, "b_f": 0.06})], 2.8, c.gaussian(sigma),
                  {"kind": "polynomial", "w0_gev": m, "coefficients": [2e-4, -1e-3, 5e-3], "phase_rad": 2.0},
                  {"kind": "polynomial", "w0_gev": m, "coefficients_nb": [0.5, -0.3, 0.2]})
    out.append(("coherent and incoherent polynomials", "own", poly, [-0.03, -3e-3, 0.0, 4e-3, 0.05]))
    return out


def one(job):
    s, v = job
    bare = {**s, "chain": {**s["chain"], "spread": "None"}}
    rad, e1 = c.with_error(c.radiated_nb, bare, v, (10, 14))
    obs, e2 = c.with_error(c.observed_nb, s, v, (8, 11))
    return {"offset_gev": v, "w_gev": c.reference(s) + v, "born_nb": float(c.born_nb(s, v)), "radiated_nb": rad, "observed_nb": obs, "error_rel": max(e1, e2)}


def literal(s, v, dps=20):
    """The formula as written, nested mpmath quadrature: nothing but y = x^beta and the positions of the peaks are put in.
    Only for a single resonance of constant width and vertices with one-photon continuum, Gaussian spread."""
    import mpmath as mp
    mp.mp.dps = dps
    r, bg = s["hypothesis"]["resonances"][0], s["hypothesis"]["coherent"]
    m0, g, sg = mp.mpf(r["mass_gev"]), mp.mpf(r["width_gev"]), mp.mpf(s["chain"]["spread"]["Gaussian"]["sigma_gev"])
    gg = mp.mpf(float(c.strength_product(r)))
    me, al, wmin = mp.mpf(s["beams"]["first"]["mass_gev"]), mp.mpf(1) / mp.mpf("137.035999177"), mp.mpf(s["chain"]["w_min_gev"])
    hc2 = mp.mpf("389379.3721718595")

    def born(w):
        ss = w * w
        u = mp.mpf(3) / 4 * 4 * mp.pi / (ss / 4 - me ** 2) * hc2
        t = -m0 * mp.sqrt(gg) / (ss - m0 ** 2 + 1j * m0 * g)
        if bg:
            t += mp.sqrt(mp.mpf(bg["c_nb"]) * (mp.mpf(bg["w0_gev"]) / w) ** 2 / u) * mp.expj(mp.mpf(bg["phase_rad"]))
        return u * abs(t) ** 2

    def rad(wp):
        ss = wp * wp
        b = 2 * al / mp.pi * (mp.log(ss / me ** 2) - 1)
        soft = 1 + 3 * b / 4 + al / mp.pi * (mp.pi ** 2 / 3 - 0.5) + b ** 2 * (mp.mpf(9) / 32 - mp.pi ** 2 / 12)
        hard = lambda x: -b * (1 - x / 2) + b ** 2 / 8 * (4 * (2 - x) * mp.log(1 / x) - (1 + 3 * (1 - x) ** 2) / x * mp.log1p(-x) - 6 + x)
        top = 1 - wmin ** 2 / ss
        pole = 1 - m0 ** 2 / ss
        cut = [pole + k * g / m0 for k in (-64, -16, -4, -1, 0, 1, 4, 16, 64, 256, 1024)] + [g / m0 * 4 ** k for k in range(-12, 8)]
        cut = sorted([x for x in cut if 0 < x < top])
        ycut = [mp.mpf(0)] + [x ** b for x in cut] + [top ** b]
        soft_part = mp.quad(lambda y: born(wp * mp.sqrt(1 - y ** (1 / b))), ycut, method="gauss-legendre", maxdegree=4)
        return soft * soft_part + mp.quad(lambda x: hard(x) * born(wp * mp.sqrt(1 - x)), [mp.mpf(0)] + cut + [top], method="gauss-legendre", maxdegree=4)

    w = m0 + mp.mpf(v)
    cut = [w + k * sg for k in range(-10, 11, 2)] + [m0 + s_ * g * 4 ** k for s_ in (-1, 1) for k in range(0, 12)] + [m0]
    cut = sorted(x for x in cut if w - 10 * sg <= x <= w + 10 * sg)
    gauss = lambda wp: mp.exp(-((wp - w) / sg) ** 2 / 2) / (sg * mp.sqrt(2 * mp.pi))
    return float(mp.quad(lambda wp: gauss(wp) * rad(wp), cut, method="gauss-legendre", maxdegree=3))


def main():
    with ProcessPoolExecutor(2) as pool:
        out = []
        for name, source, s, offsets in cases():
            points = list(pool.map(one, [(s, v) for v in offsets]))
            out.append({"name": name, "source": source, "scan": s, "points": points})
            print(f"{name}: {len(points)} points, error {max(p['error_rel'] for p in points):.1e}", flush=True)
    json.dump({"about": __doc__.split("\n")[0], "unit": "nb, GeV, rad", "script": "lineshape_nested.py", "cases": out}, open(OUT, "w"), indent=1)


if __name__ == "__main__":
    if "--mpmath" in sys.argv:
        cs = cases()
        for i, j in ((1, 4), (2, 2), (6, 4)):
            name, _, s, offs = cs[i]
            ours = c.observed_nb(s, offs[j], 10)
            lit = literal(s, offs[j])
            print(f"{name} at {offs[j]:g}: panels {ours:.12g}, literal mpmath {lit:.12g}, relative {lit / ours - 1:.1e}", flush=True)
    else:
        main()
