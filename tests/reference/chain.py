"""Born cross section, radiation and spread in NumPy, written from the literature for the checks only.

Sources: Review of Particle Physics ("Resonances", "Kinematics"); Kuraev & Fadin, Sov. J. Nucl. Phys. 41 (1985) 466
(radiator, second order exponentiated, no pairs); barrier factors: x^2 |h_l(x)|^2 of the spherical Hankel functions.
Nothing here is shared with the core. Method: every integral is a composite Gauss-Legendre rule on panels that
shrink geometrically towards each pole, threshold and the soft-photon end; the rule is repeated with more nodes and the
difference is the error quoted. Distances from the pole and photon energies are the variables of integration, so that
no digits of W - M are lost in double precision.

A hypothesis is a plain dict in the layout of the JSON files beside this script (energies in GeV, phases in rad, sigma in nb).
"""
import numpy as np
from numpy.polynomial.legendre import leggauss

HBARC2_GEV2_NB = 389379.3721718595      # CODATA 2022, exact hbar, c, e
ALPHA = 1 / 137.035999177               # CODATA 2022
M_E, M_MU, M_P = 0.51099895069e-3, 0.1056583755, 0.93827208943   # GeV, CODATA 2022

BARRIER = {0: [1], 1: [1, 1], 2: [9, 3, 1], 3: [225, 45, 6, 1], 4: [11025, 1575, 135, 10, 1]}


def momentum(w, m1, m2):
    """Break-up momentum, 0 below threshold; (s-(m1+m2)^2)(s-(m1-m2)^2) factorised so that it is right at threshold."""
    w = np.asarray(w, float)
    up = (w - m1 - m2) * (w + m1 + m2) * (w - m1 + m2) * (w + m1 - m2)
    return np.sqrt(np.maximum(up, 0.0)) / (2 * w)


def two_body_growth(w, mass, c):
    """M Gamma_c(s) / (M Gamma_c(M)) of two spinless daughters."""
    l, radius = c["l"], c["radius_per_gev"]
    q, q0 = momentum(w, c["m1_gev"], c["m2_gev"]), momentum(mass, c["m1_gev"], c["m2_gev"])
    poly = lambda z: sum(a * z ** i for i, a in enumerate(BARRIER[l]))
    return (q / q0) ** (2 * l + 1) * (mass / w) * poly((q0 * radius) ** 2) / poly((q * radius) ** 2)


def growth(kind, w, mass):
    """M Gamma(s)/(M Gamma) for a vertex or a width channel."""
    k = kind["kind"]
    if k == "constant":
        return np.ones_like(w)
    if k == "one_photon":
        return (mass / w) ** 2
    if k == "massless":
        return (w / mass) ** 2
    if k in ("running", "two_body"):
        return two_body_growth(w, mass, kind)
    if k == "tabulated":
        rows = np.array(kind["rows"])
        return np.interp(w, rows[:, 0], rows[:, 1], left=0.0)
    raise ValueError(k)


def strength_product(r):
    """Gamma_a Gamma_f at M, GeV^2."""
    s, g = r["strength"], r["width_gev"]
    return {"gamma_in_bf": lambda: s["gev"] * g,
            "bin_bf": lambda: s["product"] * g * g,
            "branchings": lambda: s["b_in"] * s["b_f"] * g * g,
            "partial_widths": lambda: s["gamma_in_gev"] * s["gamma_f_gev"]}[s["kind"]]()


def amplitudes(scan, v):
    """Terms of T at W = M_1 + v, one complex array per resonance and one for the background."""
    h = scan["hypothesis"]
    m_ref = reference(scan)
    w = m_ref + v
    terms = []
    for r in h["resonances"]:
        m, g = r["mass_gev"], r["width_gev"]
        above = v + (m_ref - m)
        form = r["form"]
        run = {"constant_width": lambda: np.ones_like(w), "massless_channels": lambda: (w / m) ** 2,
               "running_width": lambda: sum(c["fraction"] * growth(c["shape"], w, m) for c in form.get("channels", []))}[form["kind"]]()
        vertex = m * np.sqrt(strength_product(r) * growth(r["entrance"], w, m) * growth(r["exit"], w, m))
        terms.append(-np.exp(1j * r["phase_rad"]) * vertex / (above * (above + 2 * m) + 1j * m * g * run))
    bg = h.get("coherent")
    if bg is not None:
        if bg["kind"] == "polynomial":
            p = sum(c * (w - bg["w0_gev"]) ** i for i, c in enumerate(bg["coefficients"]))
            terms.append(p * np.exp(1j * bg["phase_rad"]))
        elif bg["kind"] == "shared_vertices":
            r, m = h["resonances"][0], h["resonances"][0]["mass_gev"]
            vertex = m * np.sqrt(strength_product(r) * growth(r["entrance"], w, m) * growth(r["exit"], w, m))
            terms.append(bg["c"] / m ** 2 * vertex + 0j)
        elif bg["kind"] == "one_photon":
            c = bg["c_nb"] * h.get("continuum_factor", 1.0)
            terms.append(np.sqrt(c * (bg["w0_gev"] / w) ** 2 / unitarity_nb(scan, w)) * np.exp(1j * bg["phase_rad"]))
    return terms


def unitarity_nb(scan, w):
    """(2J+1)/(n_a n_b) 4 pi/k^2 in nb."""
    b = scan["beams"]
    k = momentum(w, b["first"]["mass_gev"], b["second"]["mass_gev"])
    n = b["first"]["spin_states"] * b["second"]["spin_states"]
    return (scan["hypothesis"]["twice_j"] + 1) / n * 4 * np.pi / k ** 2 * HBARC2_GEV2_NB


def reference(scan):
    r = scan["hypothesis"]["resonances"]
    return r[0]["mass_gev"] if r else 1.0


def threshold(scan):
    b = scan["beams"]
    return max(b["first"]["mass_gev"] + b["second"]["mass_gev"], scan["hypothesis"]["final_threshold_gev"])


def born_nb(scan, v):
    """sigma at W = M_1 + v."""
    v = np.asarray(v, float)
    h, w = scan["hypothesis"], reference(scan) + v
    live = w > threshold(scan)
    ws = np.where(live, w, 2 * threshold(scan) + 1)
    vs = np.where(live, v, ws - reference(scan))
    out = unitarity_nb(scan, ws) * abs(sum(amplitudes(scan, vs))) ** 2
    inc = h.get("incoherent")
    if inc is not None:
        if inc["kind"] == "power":
            out = out + inc["c0_nb"] * (inc["w0_gev"] / ws) ** inc["n"]
        else:
            out = out + sum(c * (ws - inc["w0_gev"]) ** i for i, c in enumerate(inc["coefficients_nb"]))
    return np.where(live, out, 0.0)


def radiator_soft(beta):
    """Factor of beta x^(beta-1)."""
    return 1 + 0.75 * beta + ALPHA / np.pi * (np.pi ** 2 / 3 - 0.5) + beta ** 2 * (9 / 32 - np.pi ** 2 / 12)


def radiator_hard(beta, x):
    """What is added to the soft part, beta and beta^2."""
    return -beta * (1 - x / 2) + beta ** 2 / 8 * (4 * (2 - x) * np.log(1 / x) - (1 + 3 * (1 - x) ** 2) / x * np.log1p(-x) - 6 + x)


def features(scan):
    """(offset from M_1, scale) of every pole and kink."""
    m_ref, out = reference(scan), []
    for r in scan["hypothesis"]["resonances"]:
        out.append((r["mass_gev"] - m_ref, r["width_gev"]))
        kinks = [c["shape"] for c in r["form"].get("channels", [])] + [r["entrance"], r["exit"]]
        for k in kinks:
            if "m1_gev" in k:
                out.append((k["m1_gev"] + k["m2_gev"] - m_ref, 0.0))
            for row in k.get("rows", []):
                out.append((row[0] - m_ref, 0.0))
    out.append((threshold(scan) - m_ref, 0.0))
    if scan["chain"]["w_min_gev"] is not None:
        out.append((scan["chain"]["w_min_gev"] - m_ref, 0.0))
    return out


def graded(lo, hi, centres, ratio=2.0, floor=1e-13):
    """Panel edges on [lo, hi] shrinking towards each (centre, scale); scale 0 = a kink, graded to floor*(hi-lo)."""
    edges = [np.array([lo, hi])]
    span = hi - lo
    for c, scale in centres:
        if scale == 0.0 and not lo <= c <= hi:
            continue
        least = scale / 4 if scale else floor * span
        reach = span + max(0.0, lo - c, c - hi)
        d = least * ratio ** np.arange(0, max(2, int(np.ceil(np.log(2 * reach / least) / np.log(ratio))) + 1))
        edges += [c + d, c - d, np.array([c])]
    e = np.concatenate(edges)
    e = e[(e >= lo) & (e <= hi)]
    return np.unique(e)


def rule(edges, n):
    """Nodes and weights on the panels between edges."""
    x, w = leggauss(n)
    h, c = np.diff(edges) / 2, (edges[1:] + edges[:-1]) / 2
    return (c[:, None] + h[:, None] * x).ravel(), (h[:, None] * w).ravel()


def radiated_nb(scan, d, n):
    """sigma_rad at W' = M_1 + d (one number), n nodes a panel."""
    m_ref, w_min = reference(scan), scan["chain"]["w_min_gev"]
    if w_min is None:
        return float(born_nb(scan, d))
    wp = m_ref + d
    reach = d + (m_ref - w_min)                        # largest W' - W
    if reach <= 0:
        return 0.0
    m = scan["beams"]["first"]["mass_gev"]
    beta = 2 * ALPHA / np.pi * (np.log(wp * wp / m ** 2) - 1)
    near = [(d - c, s) for c, s in features(scan)]     # in u = W' - W
    scales = [max(s, abs(u)) for u, s in near if s or u > 0] + [reach]
    first = min(1e-5 * min(scales), reach)
    xs = lambda u: u * (2 * wp - u) / wp ** 2
    # soft end: y = x^beta
    y, wy = leggauss(n + 8)
    ytop = xs(first) ** beta
    y, wy = ytop * (y + 1) / 2, wy * ytop / 2
    x = y ** (1 / beta)
    u = wp * x / (1 + np.sqrt(1 - x))
    total = np.sum(wy * born_nb(scan, d - u)) * radiator_soft(beta)
    xx, wx = leggauss(n)
    x = xs(first) * (xx + 1) / 2
    u = wp * x / (1 + np.sqrt(1 - x))
    total += np.sum(wx * xs(first) / 2 * radiator_hard(beta, x) * born_nb(scan, d - u))
    # the rest, in u; the soft end again as a point to grade towards
    if reach > first:
        e = graded(first, reach, near)
        k = np.arange(0, int(np.log2(reach / first)) + 1)
        e = np.unique(np.concatenate([e, first * 2.0 ** k]))
        u, wu = rule(e[(e >= first) & (e <= reach)], n)
        x = xs(u)
        f = beta * x ** (beta - 1) * radiator_soft(beta) + radiator_hard(beta, x)
        total += np.sum(wu * 2 * (wp - u) / wp ** 2 * f * born_nb(scan, d - u))
    return float(total)


def sigma_of(scan, w):
    s = scan["chain"]["spread"]
    if s == "None" or s is None:
        return 0.0
    g = s["Gaussian"]
    return g["sigma_gev"] * (w / g["w0_gev"]) ** g["power"]


def outer_nodes(scan, v, n, lo, hi, unit):
    """Nodes for the integral over W' = M_1 + d between offsets lo, hi from M_1; panels no wider than unit."""
    m_ref = reference(scan)
    lo = max(lo, -m_ref * (1 - 1e-9), (scan["chain"]["w_min_gev"] or threshold(scan)) - m_ref)
    if hi <= lo:
        return np.array([]), np.array([])
    e = graded(lo, hi, features(scan))
    e = np.unique(np.concatenate([e, np.clip(v + unit * np.arange(-40, 41), lo, hi)]))
    return rule(e, n)


class Smeared:
    """sigma_rad tabulated once on nodes around v and folded with the spread."""

    def __init__(self, scan, v, n, reach=20.0):
        self.scan, self.v = scan, v
        sp = scan["chain"]["spread"]
        w = reference(scan) + v
        if isinstance(sp, dict) and "Table" in sp:
            rows = np.array(sp["Table"]["rows"], float)
            off, wt = rows[:, 0], rows[:, 1]
            area = np.sum((wt[1:] + wt[:-1]) / 2 * np.diff(off))
            d, ww = [], []
            for a, b in zip(off[:-1], off[1:]):
                di, wi = outer_nodes(scan, v, n, v + a, v + b, (b - a) / 2)
                d.append(di), ww.append(wi)
            self.d, wq = np.concatenate(d), np.concatenate(ww)
            self.weight = wq * np.interp(self.d - v, off, wt, left=0, right=0) / area
        else:
            s = sigma_of(scan, w)
            self.d, wq = outer_nodes(scan, v, n, v - reach * s, v + reach * s, s)
            self.weight = wq * np.exp(-0.5 * ((self.d - v) / s) ** 2) / (s * np.sqrt(2 * np.pi))

    def value(self, n):
        keep = self.weight != 0
        return float(sum(w * radiated_nb(self.scan, d, n) for d, w in zip(self.d[keep], self.weight[keep])))


def observed_nb(scan, v, n=10):
    """sigma_obs at nominal W = M_1 + v."""
    if scan["chain"]["spread"] in (None, "None"):
        return radiated_nb(scan, v, n)
    return Smeared(scan, v, n).value(n)


def with_error(f, scan, v, n=(10, 14)):
    """(value, relative difference of two rules)."""
    a, b = (f(scan, v, k) for k in n)
    return b, abs(a - b) / abs(b) if b else abs(a - b)


# ---- building blocks for scans -------------------------------------------------------------------------------------

def lepton(name="e", mass=M_E):
    return {"name": name, "mass_gev": mass, "spin_states": 2}


def beams(first, second=None):
    return {"first": first, "second": second or first, "arrangement": {"EqualBeams": {"crossing_rad": 0.0}}, "dial": "w"}


def resonance(m, g, strength, phase=0.0, form=None, entrance=None, exit=None, name="R"):
    return {"name": name, "mass_gev": m, "width_gev": g, "strength": strength, "phase_rad": phase,
            "form": form or {"kind": "constant_width"}, "entrance": entrance or {"kind": "constant"}, "exit": exit or {"kind": "constant"}}


def scan(beam, twice_j, resonances, w_min, spread, coherent=None, incoherent=None, final=0.0):
    return {"beams": beam,
            "hypothesis": {"kind": "partial_wave", "twice_j": twice_j, "resonances": resonances, "coherent": coherent,
                           "incoherent": incoherent, "final_threshold_gev": final, "continuum_factor": 1.0},
            "chain": {"w_min_gev": w_min, "spread": spread, "accuracy": 1e-9}}


def gaussian(sigma, w0=None, power=0.0):
    return {"Gaussian": {"sigma_gev": sigma, "w0_gev": w0 or 1.0, "power": power}}
