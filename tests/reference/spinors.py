"""Tree-level Yukawa amplitudes from explicit Dirac spinors and matrices, no trace and no closed form.

Vertices from the Lagrangians L = -g phi psibar psi (scalar: -i g) and L = -i g phi psibar gamma5 psi (pseudoscalar: g gamma5);
propagators i/(p^2 - M^2 + i M Gamma) (s channel only), i (pslash + m)/(p^2 - m^2). Dirac representation, helicity spinors
turned from the z axis by exp(-i theta sigma_y/2). Writes spinor_points.json.
"""
import json
import os
import numpy as np
from scipy.integrate import quad

HERE = os.path.dirname(os.path.abspath(__file__))
HC2_NB = 389379.3721718595     # CODATA 2022
I2, Z2 = np.eye(2), np.zeros((2, 2))
PAULI = [np.array([[0, 1], [1, 0]], complex), np.array([[0, -1j], [1j, 0]]), np.array([[1, 0], [0, -1]], complex)]
G0 = np.block([[I2, Z2], [Z2, -I2]]).astype(complex)
G = [G0] + [np.block([[Z2, p], [-p, Z2]]) for p in PAULI]
G5 = 1j * G[0] @ G[1] @ G[2] @ G[3]
ONE = np.eye(4)


def slash(p):
    return p[0] * G[0] - p[1] * G[1] - p[2] * G[2] - p[3] * G[3]


def turn(theta):
    c, s = np.cos(theta / 2), np.sin(theta / 2)
    return np.array([[c, -s], [s, c]], complex)


def spinor_u(e, p, m, lam, theta, back):
    """u of helicity lam = +-1/2; momentum along theta in the x-z plane, or opposite (back)."""
    chi = turn(theta) @ (np.array([1, 0]) if (lam > 0) != back else np.array([0, 1]))
    return np.concatenate([np.sqrt(e + m) * chi, 2 * lam * np.sqrt(max(e - m, 0)) * chi]).astype(complex)


def spinor_v(e, p, m, lam, theta, back):
    return 1j * G[2] @ spinor_u(e, p, m, lam, theta, back).conj()


def bar(x):
    return x.conj() @ G0


def vertex(kind, g):
    return -1j * g * ONE if kind == "scalar" else g * G5


HEL = (0.5, -0.5)


def kinematics(proc, w, m, mF, M):
    ma, mb, mc, md = {"f fbar -> F Fbar": (m, m, mF, mF), "f F -> f F": (m, mF, m, mF), "f fbar -> f fbar": (m, m, m, m),
                      "f f -> f f": (m, m, m, m), "f phi -> f phi": (m, M, m, M), "f fbar -> phi phi": (m, m, M, M)}[proc]
    lam = lambda a, b: (w * w - (a + b) ** 2) * (w * w - (a - b) ** 2)
    pi, pf = np.sqrt(lam(ma, mb)) / (2 * w), np.sqrt(lam(mc, md)) / (2 * w)
    e = [np.sqrt(pi * pi + ma * ma), np.sqrt(pi * pi + mb * mb), np.sqrt(pf * pf + mc * mc), np.sqrt(pf * pf + md * md)]
    return pi, pf, e


def diagrams(proc, mediators, w, cos, m, mF):
    """{(diagram, mediator): {helicities: M}}; mediators: (kind, mass, width, g_f, g_F); phi of the last two reactions: mediators[0]."""
    M0 = mediators[0][1]
    pi, pf, e = kinematics(proc, w, m, mF, M0)
    th = np.arccos(cos)
    sin = np.sin(th)
    P = [np.array([e[0], 0, 0, pi]), np.array([e[1], 0, 0, -pi]), np.array([e[2], pf * sin, 0, pf * cos]), np.array([e[3], -pf * sin, 0, -pf * cos])]
    dot = lambda a: a[0] ** 2 - a[1] ** 2 - a[2] ** 2 - a[3] ** 2
    s, t, u = dot(P[0] + P[1]), dot(P[0] - P[2]), dot(P[0] - P[3])
    out = {}
    add = lambda d, k, h, val: out.setdefault((d, k), {}).__setitem__(h, val / 1j)
    U = lambda n, mass, lam: spinor_u(e[n], None, mass, lam, 0 if n < 2 else th, n in (1, 3))
    V = lambda n, mass, lam: spinor_v(e[n], None, mass, lam, 0 if n < 2 else th, n in (1, 3))
    for k, (kind, M, width, gf, gF) in enumerate(mediators):
        v, vF = vertex(kind, gf), vertex(kind, gF)
        ps, pt, pu = 1j / (s - M * M + 1j * M * width), 1j / (t - M * M), 1j / (u - M * M)
        for a in HEL:
            if proc == "f phi -> f phi":
                for c in HEL:
                    add("s", k, (a, 0, c, 0), bar(U(2, m, c)) @ v @ (1j * (slash(P[0] + P[1]) + m * ONE) / (s - m * m)) @ v @ U(0, m, a))
                    add("u", k, (a, 0, c, 0), bar(U(2, m, c)) @ v @ (1j * (slash(P[0] - P[3]) + m * ONE) / (u - m * m)) @ v @ U(0, m, a))
                continue
            for b in HEL:
                if proc == "f fbar -> phi phi":
                    vb = bar(V(1, m, b))
                    add("t", k, (a, b, 0, 0), vb @ v @ (1j * (slash(P[0] - P[2]) + m * ONE) / (t - m * m)) @ v @ U(0, m, a))
                    add("u", k, (a, b, 0, 0), vb @ v @ (1j * (slash(P[0] - P[3]) + m * ONE) / (u - m * m)) @ v @ U(0, m, a))
                    continue
                for c in HEL:
                    for d in HEL:
                        h = (a, b, c, d)
                        if proc == "f fbar -> F Fbar":
                            add("s", k, h, (bar(U(2, mF, c)) @ vF @ V(3, mF, d)) * ps * (bar(V(1, m, b)) @ v @ U(0, m, a)))
                        elif proc == "f F -> f F":
                            add("t", k, h, (bar(U(2, m, c)) @ v @ U(0, m, a)) * pt * (bar(U(3, mF, d)) @ vF @ U(1, mF, b)))
                        elif proc == "f fbar -> f fbar":
                            add("s", k, h, (bar(U(2, m, c)) @ v @ V(3, m, d)) * ps * (bar(V(1, m, b)) @ v @ U(0, m, a)))
                            add("t", k, h, -(bar(U(2, m, c)) @ v @ U(0, m, a)) * pt * (bar(V(1, m, b)) @ v @ V(3, m, d)))
                        elif proc == "f f -> f f":
                            add("t", k, h, (bar(U(2, m, c)) @ v @ U(0, m, a)) * pt * (bar(U(3, m, d)) @ v @ U(1, m, b)))
                            add("u", k, h, -(bar(U(3, m, d)) @ v @ U(0, m, a)) * pu * (bar(U(2, m, c)) @ v @ U(1, m, b)))
    return out, (s, t, u, pi, pf)


def spin_average(proc):
    return 0.5 if proc == "f phi -> f phi" else 0.25


def squared(proc, dias):
    """Averaged |M|^2 in total and by pair of diagrams."""
    keys = list(dias)
    hel = list(dias[keys[0]])
    total = sum(abs(sum(dias[k][h] for k in keys)) ** 2 for h in hel) * spin_average(proc)
    pairs = {}
    for i, a in enumerate(keys):
        for b in keys[i:]:
            x = sum((dias[a][h] * np.conj(dias[b][h])).real for h in hel) * spin_average(proc) * (1 if a == b else 2)
            pairs[f"{a[0]}{a[1]}*{b[0]}{b[1]}"] = x
    return total, pairs


def small_d(j, lam, mu, cos):
    """d^J_{lam mu} by Wigner's sum."""
    from math import factorial as f
    th = np.arccos(np.clip(cos, -1, 1))
    c, s = np.cos(th / 2), np.sin(th / 2)
    r = lambda x: int(round(x))
    pre = np.sqrt(float(f(r(j + lam)) * f(r(j - lam)) * f(r(j + mu)) * f(r(j - mu))))
    out = 0.0
    for k in range(max(0, r(mu - lam)), min(r(j + mu), r(j - lam)) + 1):
        den = f(r(j + mu) - k) * f(k) * f(r(lam - mu) + k) * f(r(j - lam) - k)
        out += (-1) ** (r(lam - mu) + k) / den * c ** r(2 * j + mu - lam - 2 * k) * s ** r(lam - mu + 2 * k)
    return pre * out


def partial_waves(proc, mediators, w, m, mF, j, n=400):
    """a^J_{lam mu} = sqrt(k_i k_f)/(16 pi W) integral dcos d^J M for every helicity, with 1/sqrt2 per identical pair."""
    x, wt = np.polynomial.legendre.leggauss(n)
    acc, scale = {}, None
    for c, q in zip(x, wt):
        dias, (s, t, u, pi, pf) = diagrams(proc, mediators, w, c, m, mF)
        scale = np.sqrt(pi * pf) / (16 * np.pi * w)
        for h in dias[next(iter(dias))]:
            lam, mu = h[0] - h[1], h[2] - h[3]
            if abs(lam) > j or abs(mu) > j:
                continue
            acc[h] = acc.get(h, 0) + q * small_d(j, lam, mu, c) * sum(d[h] for d in dias.values())
    ident = {"f f -> f f": 0.5, "f fbar -> phi phi": np.sqrt(0.5)}.get(proc, 1.0)
    return {h: a * scale * ident for h, a in acc.items()}


PROCESSES = ["f fbar -> F Fbar", "f F -> f F", "f fbar -> f fbar", "f f -> f f", "f phi -> f phi", "f fbar -> phi phi"]


def main():
    rng = np.random.default_rng(20261201)
    points, cuts, waves = [], [], []
    for proc in PROCESSES:
        for kinds in (["scalar"], ["pseudoscalar"], ["scalar", "pseudoscalar"], ["scalar", "scalar"]):
            if len(kinds) == 2 and "phi" in proc:
                continue
            for i in range(12):
                m, mF = 10 ** rng.uniform(-2, 0.3), 10 ** rng.uniform(-2, 0.3)
                meds = []
                for kind in kinds:
                    M = rng.uniform(0.05, 1.95) * m if "phi ->" in proc else 10 ** rng.uniform(-1, 0.8)
                    meds.append((kind, M, 0.0 if "phi" in proc else rng.uniform(0.001, 0.2) * M, rng.uniform(0.2, 2), rng.uniform(0.2, 2)))
                low = {"f fbar -> F Fbar": 2 * max(m, mF), "f F -> f F": m + mF, "f phi -> f phi": m + meds[0][1],
                       "f fbar -> phi phi": 2 * max(m, meds[0][1])}.get(proc, 2 * m)
                w, cos = low * (1 + 10 ** rng.uniform(-3, 1)), rng.uniform(-1, 1)
                dias, (s, t, u, pi, pf) = diagrams(proc, meds, w, cos, m, mF)
                total, pairs = squared(proc, dias)
                med = [{"kind": a, "mass_gev": b, "width_gev": c, "g_f": d, "g_F": e} for a, b, c, d, e in meds]
                points.append({"process": proc, "mediators": med, "m_f_gev": m, "m_F_gev": mF, "w_gev": w, "cos_theta": cos, "m2_avg": total,
                               "by_diagram": pairs, "dsigma_dcos_nb": total * pf / (32 * np.pi * s * pi) * HC2_NB})
                if i < 2:
                    edge = 0.9
                    f = lambda c: squared(proc, diagrams(proc, meds, w, c, m, mF)[0])[0] * pf / (32 * np.pi * s * pi) * HC2_NB
                    val = quad(f, -edge, edge, epsrel=1e-11, epsabs=0, limit=400)[0] * (0.5 if proc in ("f f -> f f", "f fbar -> phi phi") else 1)
                    cuts.append({"process": proc, "mediators": med, "m_f_gev": m, "m_F_gev": mF, "w_gev": w, "abs_cos_below": edge, "sigma_nb": val})
    for proc in PROCESSES:
        for kind in ("scalar", "pseudoscalar"):
            m, mF, M = 0.5, 0.8, 0.7
            med, w = [(kind, M, 0.0 if "phi" in proc else 0.05, 1.2, 0.9)], 2.6
            for j in ([0.5, 1.5, 2.5] if proc == "f phi -> f phi" else [0, 1, 2, 3, 4]):
                a = partial_waves(proc, med, w, m, mF, j)
                fro = sum(abs(x) ** 2 for x in a.values())
                rows = sorted({h[:2] for h in a}, reverse=True)
                cols = sorted({h[2:] for h in a}, reverse=True)
                mat = np.array([[a.get(r + c, 0) for c in cols] for r in rows])
                waves.append({"process": proc, "kind": kind, "m_f_gev": m, "m_F_gev": mF, "mass_gev": M, "width_gev": med[0][2], "g_f": 1.2, "g_F": 0.9, "w_gev": w,
                              "twice_j": int(2 * j), "sum_abs2": float(fro), "singular_values": np.linalg.svd(mat, compute_uv=False).tolist(),
                              "abs_by_helicity": {"".join("0" if not x else "+" if x > 0 else "-" for x in h): float(abs(v)) for h, v in a.items()}})
    json.dump({"about": "Averaged |M|^2, differential and cut cross sections, partial waves from explicit Dirac spinors. Energies in GeV. "
                        "by_diagram: squares and twice the real interference, '<channel><mediator index>'. a^J: moduli only (phases are a convention); "
                        "1/sqrt2 per identical pair is in; sigma_nb has the 1/2 of identical final particles, dsigma_dcos_nb has not.",
               "script": "spinors.py", "points": points, "cut_totals": cuts, "partial_waves": waves}, open(os.path.join(HERE, "spinor_points.json"), "w"), indent=1)
    print(len(points), "points,", len(cuts), "totals,", len(waves), "partial waves")


def check_external():
    """The points of data/yukawa_points.json, made by someone else."""
    d = json.load(open(os.path.join(HERE, "data", "yukawa_points.json")))
    worst = 0.0
    for p in d["points"]:
        med = [(p["coupling"], p["M_phi"], p.get("Gamma_phi") or 0.0, p["g_f"], p.get("g_F") or 0.0)]
        dias, _ = diagrams(p["process"], med, np.sqrt(p["s"]), p["cos_theta"], p["m_f"], p.get("m_F") or 0.0)
        ours, ref = squared(p["process"], dias)[0], p["M2_avg"]
        worst = max(worst, abs(ours - ref) / (abs(ref) or 1.0))    # a few points sit at threshold, where |M|^2 = 0
    print("data/yukawa_points.json:", len(d["points"]), "points, largest relative deviation of |M|^2", f"{worst:.1e}")
    return worst


if __name__ == "__main__":
    check_external()
    main()
