"""Published numbers reproduced by chain.py: psi(2S), the radiation factors of the CMD-3 phi scan, a 125.7 GeV scalar,
the Z peak; and the fits of the CMD-3 and LEP points with iminuit. Writes published.json.

Sources beside each number. Fits: r^T V^-1 r with the points' energy errors added to V through the derivative of the curve
being fitted, at the current parameters, no ln det term; common factors act on the model.
"""
import csv
import json
import os
import numpy as np
from iminuit import Minuit
from scipy.optimize import minimize_scalar
import chain as c

HERE = os.path.dirname(os.path.abspath(__file__))


def rows(name):
    with open(os.path.join(HERE, "data", name)) as fh:
        return [{k: float(v) for k, v in r.items()} for r in csv.DictReader(x for x in fh if not x.startswith("#"))]


def psi():
    s = c.scan(c.beams(c.lepton()), 2, [c.resonance(3.68596, 300e-6, {"kind": "partial_widths", "gamma_in_gev": 2.19e-6, "gamma_f_gev": 300e-6})], 0.5, c.gaussian(1.3e-3))
    r = minimize_scalar(lambda v: -c.radiated_nb(s, v, 14), bracket=(5e-6, 9e-6, 14e-6), tol=1e-10)
    x = np.linspace(-2e-5, 4e-5, 13) + 1.352e-4                       # parabola through the top of the observed peak
    y = np.array([c.observed_nb(s, v, 8) for v in x])
    p = np.polyfit(x - 1.352e-4, y, 4)
    top = -p[3] / (2 * p[2])
    return {"reduction": -r.fun / float(c.born_nb(s, 0.0)), "shift_kev": r.x * 1e6, "observed_peak_nb": float(np.polyval(p, top)), "observed_peak_at_mev": (top + 1.352e-4) * 1e3,
            "published": "Wang, Yuan & Mo 2002: 0.51, 9 keV, 640 nb at +0.14 MeV", "stated": [0.5129, 9.56, 638.66, 0.1352]}


def higgs():
    s = c.scan(c.beams(c.lepton()), 0, [c.resonance(125.7, 4.2e-3, {"kind": "branchings", "b_in": 5e-9, "b_f": 0.58})], 100.0, c.gaussian(4.2e-3))
    b = float(c.born_nb(s, 0.0))
    scan_rad = minimize_scalar(lambda v: -c.radiated_nb(s, v, 12), bounds=(-1e-3, 2e-3), method="bounded")
    scan_obs = minimize_scalar(lambda v: -c.observed_nb(s, v, 8), bounds=(-1e-3, 4e-3), method="bounded", options={"xatol": 1e-5})
    return {"radiated_at_m": c.radiated_nb(s, 0.0, 14) / b, "observed_at_m": c.observed_nb(s, 0.0, 10) / b, "radiated_peak": -scan_rad.fun / b, "observed_peak": -scan_obs.fun / b,
            "published": "arXiv:1509.02406 abstract: 0.347 and 0.170"}


def phi_model(m, gamma, strength, cc):
    l1 = lambda a, b: {"kind": "two_body", "m1_gev": a, "m2_gev": b, "l": 1, "radius_per_gev": 0.0}
    k0, kp = 0.497611, 0.493677
    r = c.resonance(m, gamma, {"kind": "gamma_in_bf", "gev": strength}, entrance={"kind": "one_photon"}, exit={**l1(k0, k0), "kind": "running"}, form={
        "kind": "running_width", "channels": [{"fraction": f, "shape": l1(a, b)} for f, a, b in ((0.501, kp, kp), (0.336, k0, k0), (0.150, 0.7753, 0.138), (0.013, 0.54786, 0.0))]})
    return c.scan(c.beams(c.lepton(mass=1e-9)), 2, [r], 2 * k0, "None", {"kind": "shared_vertices", "c": cc} if cc is not None else None, final=2 * k0)


def cmd3_factors():
    s = phi_model(1.0194556, 4.2432e-3, 4.2863e-7, 0.941)
    s = {**s, "beams": c.beams(c.lepton())}
    out = []
    for r in rows("cmd3_2016_kskl_phi_scan.csv"):
        v = r["Ecm_MeV"] * 1e-3 - 1.0194556
        out.append({"w_mev": r["Ecm_MeV"], "ours": c.radiated_nb(s, v, 12) / float(c.born_nb(s, v)), "table": r["one_plus_delta_rad"]})
    return out


def slope(model, w, h):
    return (model(w + h) - model(w - h)) / (2 * h)


def profile(mi, name):
    mi.minos(name)
    e = mi.merrors[name]
    return [float(e.lower), float(e.upper)]


def cmd3_fit(with_c):
    d = rows("cmd3_2016_kskl_phi_scan.csv")
    w, ew = np.array([r["Ecm_MeV"] for r in d]) * 1e-3, np.array([r["Ecm_err_MeV"] for r in d]) * 1e-3
    y, ey = np.array([r["sigma_Born_nb"] for r in d]), np.array([r["sigma_Born_err_nb"] for r in d])

    def chi2(m_mev, gamma_mev, strength, cc):
        s = phi_model(m_mev * 1e-3, gamma_mev * 1e-3, strength * 1e-7, cc if with_c else None)
        f = lambda x: c.born_nb(s, x - m_mev * 1e-3)
        v = ey ** 2 + (slope(f, w, 1e-6) * ew) ** 2
        return float(np.sum((y - f(w)) ** 2 / v))
    mi = Minuit(chi2, m_mev=1019.45, gamma_mev=4.24, strength=4.28, cc=0.9 if with_c else 0.0)
    mi.errordef, mi.strategy, mi.tol = 1, 2, 1e-3
    mi.errors = (0.01, 0.01, 0.01, 0.1)
    if not with_c:
        mi.fixed["cc"] = True
    mi.migrad(), mi.hesse()
    free = ["m_mev", "gamma_mev", "strength"] + (["cc"] if with_c else [])
    return {"chi2": mi.fval, "dof": len(w) - len(free), "values": {k: mi.values[k] for k in free}, "errors": {k: mi.errors[k] for k in free},
            "profile_68": {k: profile(mi, k) for k in free}, "valid": bool(mi.valid), "stated": "1019.4556(84), 4.2432(141), 4.2863(107)e-4 MeV, 0.941(130), 12.42/21; without C 1019.427, 66.0/22"}


def lep_fit():
    """Massless channels; errors common to all points (energy 1.7 MeV, scale 0.07 %) as shifts of the model, peak cross section as parameter."""
    d = rows("lep_avg_hadron_7points.csv")
    w, ew = np.array([r["Ecm_GeV"] for r in d]), np.array([r["Ecm_err_GeV"] for r in d])
    y, ey = np.array([r["sigma0_had_nb"] for r in d]), np.array([r["sigma0_err_nb"] for r in d])

    def curve(x, m, g, s0):
        return s0 * x ** 2 * g ** 2 / ((x ** 2 - m ** 2) ** 2 + x ** 4 * g ** 2 / m ** 2)
    out = {}
    for name, common in (("points alone", False), ("with common errors", True)):
        def chi2(m, g, s0, e, k):
            f = lambda x: curve(x + e * 0.0017, m, g, s0) * np.exp(0.0007 * k)
            v = ey ** 2 + (slope(f, w, 1e-5) * ew) ** 2
            return float(np.sum((y - f(w)) ** 2 / v)) + e * e + k * k
        mi = Minuit(chi2, m=91.19, g=2.5, s0=41.5, e=0, k=0)
        mi.errordef, mi.strategy, mi.tol = 1, 2, 1e-3
        if not common:
            mi.fixed["e"] = mi.fixed["k"] = True
        mi.migrad(), mi.hesse()
        free = ["m", "g", "s0"]
        out[name] = {"chi2": mi.fval, "dof": 4, "values": {p: mi.values[p] for p in free}, "errors": {p: mi.errors[p] for p in free}, "profile_68": {p: profile(mi, p) for p in free}}
    out["stated"] = "91.1905(22), 2.5000(21) GeV, 41.466(33) nb, chi2 2.515/4"
    return out


def z_peak():
    """sigma0 = 12 pi B_ee B_had / M^2 (Review of Particle Physics)."""
    out = {}
    for name, m, bee, bhad in (("Review of Particle Physics branching fractions", 91.1880, 0.033632, 0.69911),):
        out[name] = 12 * np.pi * bee * bhad / m ** 2 * c.HBARC2_GEV2_NB
    return {**out, "stated": "41.51 nb; listed 41.480(33)"}


def two_solutions():
    """arXiv:1108.2760, e = g + z f of two half-width terms G/(x - M + i G): |g+zf|^2 = |g+z'f|^2/d."""
    mg, gg, mf, gf, z = 3.0, 0.4, 2.1, 0.1, 1 - 1j
    pg, pf = mg - 1j * gg, mf - 1j * gf
    # the numerator of the sum has one zero: conjugate it, expand again
    a, b = gg, z * gf
    zero, lead = (a * pf + b * pg) / (a + b), a + b
    cg = lead * (pg - np.conj(zero)) / (pg - pf)
    cf = lead * (pf - np.conj(zero)) / (pf - pg)
    x = np.linspace(-10, 10, 7)
    assert np.allclose(abs(a / (x - pg) + b / (x - pf)) ** 2, abs(cg / (x - pg) + cf / (x - pf)) ** 2, rtol=1e-12)
    d, zp = abs(gg / cg) ** 2, cf / cg * gg / gf
    return {"d": float(d), "z_prime": [float(zp.real), float(zp.imag)], "stated": [0.529412, -0.647059, 1.588235]}


def main():
    out = {"psi_2s": psi(), "scalar_125_7": higgs(), "cmd3_radiation_factors": cmd3_factors(), "cmd3_fit": {"with C": cmd3_fit(True), "without C": cmd3_fit(False)}, "lep_fit": lep_fit(),
           "z_peak_nb": z_peak(), "two_solutions": two_solutions()}
    json.dump({"about": __doc__.split("\n")[0], "script": "published.py", **out}, open(os.path.join(HERE, "published.json"), "w"), indent=1)
    for k, v in out.items():
        print(k, json.dumps(v)[:1500] if k != "cmd3_radiation_factors" else [(r["w_mev"], round(r["ours"] - r["table"], 4)) for r in v])


if __name__ == "__main__":
    main()
