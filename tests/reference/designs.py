"""Optimal designs: 20 random problems solved with cvxpy (interior point), textbook designs, rounding. Writes designs.json.

Problem: rates m_j, gradients g_j = dm/dtheta, prior information I0, total time T; I = I0 + sum_j t_j g_j g_j^T / m_j,
sum t_j = T. c: least c^T I^-1 c. D: largest ln det I.
Sources: Kiefer & Wolfowitz 1960 (equivalence theorem; used here as a check of the solver's answer); Elfving 1952;
Pukelsheim & Rieder, Biometrika 79 (1992) (efficient rounding); Dette, Haines & Imhof, Ann. Stat. 27 (1999) 1272.
"""
import itertools
import json
import os
from fractions import Fraction
import cvxpy as cp
import numpy as np

HERE = os.path.dirname(os.path.abspath(__file__))


def random_problem(rng, i):
    """A Breit-Wigner-like rate on a flat background over 60-400 energies, parameters in natural steps; some with prior."""
    n, p = int(rng.integers(60, 401)), int(rng.integers(3, 6))
    x = np.linspace(-6, 6, n) + rng.uniform(-0.5, 0.5)
    gamma, a, bg, slope = rng.uniform(0.6, 3), rng.uniform(5, 50), rng.uniform(0.5, 20), rng.uniform(-0.02, 0.02)
    l = 1 / (1 + (2 * x / gamma) ** 2)
    m = a * l + bg * (1 + slope * x)
    dl = -8 * x / gamma ** 2 * l * l
    grads = [-a * dl, a * 8 * x ** 2 / gamma ** 3 * l * l, a * l, bg * np.ones(n), bg * x][:p]
    g = np.array(grads).T
    prior = np.diag(rng.uniform(0, 2, p) ** 2 * (rng.random(p) < 0.5)) if i % 2 else np.zeros((p, p))
    return x, m, g, prior, float(rng.uniform(10, 60))


def solve(g, m, prior, total, c):
    n, p = g.shape
    h = g / np.sqrt(m)[:, None]
    scale = np.sqrt(np.mean(h * h, axis=0))               # a better conditioned problem; undone below
    h, c_s, prior_s = h / scale, c / scale, prior / np.outer(scale, scale)
    w = cp.Variable(n, nonneg=True)
    info = prior_s / total + h.T @ cp.diag(w) @ h
    tight = {"solver": cp.CLARABEL, "tol_gap_abs": 1e-11, "tol_gap_rel": 1e-11, "tol_feas": 1e-11, "max_iter": 500}
    uniform = prior_s / total + h.T @ h / n
    unit = c_s / np.sqrt(c_s @ np.linalg.solve(uniform, c_s))      # criterion of order 1
    cp.Problem(cp.Minimize(cp.matrix_frac(unit, info)), [cp.sum(w) == 1]).solve(**tight)
    wc = np.maximum(w.value, 0)
    goal_d = cp.Problem(cp.Maximize(cp.log_det(info)), [cp.sum(w) == 1])
    goal_d.solve(**tight)
    wd = np.maximum(w.value, 0)
    exact = lambda w_: prior_s + total * (h * (w_ / w_.sum())[:, None]).T @ h
    phi_exact = float(c_s @ np.linalg.solve(exact(wc), c_s))
    logdet = float(np.linalg.slogdet(exact(wd))[1] + 2 * np.log(scale).sum())
    # equivalence theorem: how far from optimal can the solver's weights be
    y = np.linalg.solve(exact(wc), c_s)
    bound_c = phi_exact / (y @ prior_s @ y + total * np.max((h @ y) ** 2))
    inv = np.linalg.inv(exact(wd))
    bound_d = p / (np.trace(inv @ prior_s) + total * np.max(np.einsum("ij,jk,ik->i", h, inv, h)))
    return phi_exact, logdet, float(bound_c), float(bound_d), wc, wd


def textbook():
    out = []
    x = np.linspace(-1, 1, 2001)
    for deg, support in ((2, [-1, 0, 1]), (3, [-1, -0.447214, 0.447214, 1]), (4, [-1, -0.654654, 0, 0.654654, 1])):
        g = np.vander(x, deg + 1, increasing=True)
        ld = np.linalg.slogdet(sum(np.outer(v, v) for v in np.vander(np.array(support, float), deg + 1, increasing=True)) / len(support))[1]
        _, best, _, bound, _, w = solve(g, np.ones_like(x), np.zeros((deg + 1,) * 2), 1.0, np.eye(deg + 1)[0])
        assert best <= ld + 1e-6 and ld - best < 1e-4
        out.append({"name": f"D-optimal polynomial of degree {deg} on [-1, 1]", "source": "textbook (Legendre support)", "support": support, "weights": [1 / len(support)] * len(support), "log_det": float(ld)})
    g = np.vander(x, 3, increasing=True)
    c = np.array([1.0, 2.0, 4.0])
    phi, _, _, _, w, _ = solve(g, np.ones_like(x), np.zeros((3, 3)), 1.0, c)
    w0 = np.array([1, 3, 3]) / 7
    i0 = sum(a * np.outer(v, v) for a, v in zip(w0, np.vander(np.array([-1.0, 0, 1]), 3, increasing=True)))
    exact = float(c @ np.linalg.solve(i0, c))
    assert abs(phi / exact - 1) < 1e-5
    out.append({"name": "c-optimal extrapolation of a quadratic to x = 2", "source": "textbook (Elfving)", "support": [-1, 0, 1], "weights": w0.tolist(), "variance": exact})
    # Breit-Wigner, Poisson: rate A L(x), x in units of Gamma/2 from E0
    x = np.linspace(-4, 4, 3201)
    l = 1 / (1 + x * x)
    g3 = np.stack([2 * x * l * l * 2, 2 * x * x * l * l, l], axis=1)         # d/dE0, d/dGamma (Gamma = 1), d/dlnA; A = 1
    _, best, _, _, _, w = solve(g3, l, np.zeros((3, 3)), 1.0, np.eye(3)[0])
    three = np.array([np.argmin(abs(x - s)) for s in (-1, 0, 1)])
    ld = np.linalg.slogdet(sum(np.outer(g3[i], g3[i]) / l[i] for i in three) / 3)[1]
    assert abs(ld - best) < 1e-4
    out.append({"name": "pure Breit-Wigner, Poisson, D-optimal for E0, Gamma, ln A", "source": "Dette, Haines & Imhof 1999", "offsets_in_gamma": [-0.5, 0, 0.5], "weights": [1 / 3] * 3, "log_det_at_A_1_Gamma_1": float(ld)})
    phi, *_ = solve(g3[:, :1], l, np.zeros((1, 1)), 1.0, np.eye(1)[0])
    assert abs(phi / (27 / 64) - 1) < 1e-4
    out.append({"name": "pure Breit-Wigner, position alone", "source": "own, closed", "offsets_in_gamma": [-1 / (2 * 2 ** 0.5), 1 / (2 * 2 ** 0.5)], "variance": 27 / 64})
    phi, _, _, _, w, _ = solve(g3, l, np.zeros((3, 3)), 1.0, np.eye(3)[1])
    assert abs(phi / 4 - 1) < 1e-4, phi
    out.append({"name": "pure Breit-Wigner, width with unknown height and position", "source": "own, closed", "offsets_in_gamma": [-(3 ** 0.5) / 2, 0, 3 ** 0.5 / 2], "weights": [1 / 3] * 3, "variance": 4.0})
    return out


def round_design(weights, n):
    """Efficient rounding: start at ceil((n - k/2) w), then move singly. Exact fractions."""
    w = [Fraction(x).limit_denominator(10 ** 9) for x in weights]
    k = len(w)
    r = [-((-(n - Fraction(k, 2)) * x) // 1) for x in w]
    r = [int(x) for x in r]
    while sum(r) != n:
        if sum(r) < n:
            i = min(range(k), key=lambda i: r[i] / w[i])
            r[i] += 1
        else:
            i = max(range(k), key=lambda i: (r[i] - 1) / w[i])
            r[i] -= 1
    return r


def best_rounding(weights, n):
    """All allocations that maximise the least n_i/(N w_i) (what efficient rounding maximises), by enumeration."""
    w = [Fraction(x).limit_denominator(10 ** 9) for x in weights]
    top, arg = None, []
    for r in itertools.product(range(n + 1), repeat=len(w)):
        if sum(r) == n:
            e = min(a / (n * b) for a, b in zip(r, w))
            if top is None or e > top:
                top, arg = e, [list(r)]
            elif e == top:
                arg.append(list(r))
    return float(top), arg


def main():
    rng = np.random.default_rng(42)
    problems = []
    for i in range(20):
        x, m, g, prior, total = random_problem(rng, i)
        m, g, prior = (np.array([float(f"{v:.9g}") for v in a.ravel()]).reshape(a.shape) for a in (m, g, prior))
        k = int(rng.integers(0, 2))
        c = np.eye(g.shape[1])[k]
        phi, logdet, bc, bd, wc, wd = solve(g, m, prior, total, c)
        assert bc > 0.9999 and bd > 0.9999 - 1e-4
        problems.append({"rates_per_h": m.tolist(), "gradients": g.tolist(), "prior": prior.tolist(), "hours": total, "c": c.tolist(), "phi": phi, "phi_guarantee": bc,
                         "log_det": logdet, "log_det_guarantee": bd})
        print(i, g.shape, f"phi {phi:.6g} (guarantee {bc:.6f}), ln det {logdet:.6f} ({bd:.6f})")
    rounding = []
    for w, n in (((0.5, 0.3, 0.2), 7), ((1 / 3, 1 / 3, 1 / 3), 10), ((0.6, 0.25, 0.15), 9), ((0.05, 0.45, 0.5), 12), ((0.37, 0.33, 0.21, 0.09), 11)):
        r = round_design(w, n)
        top, arg = best_rounding(w, n)
        assert r in arg
        rounding.append({"weights": list(w), "n": n, "rounded": r, "least_share_ratio": top, "all_equally_good": arg})
    assert rounding[0]["rounded"] == [3, 2, 2]
    json.dump({"about": __doc__.split("\n")[0], "script": "designs.py", "problems": problems, "textbook": textbook(), "rounding": rounding},
              open(os.path.join(HERE, "designs.json"), "w"), separators=(",", ":"))


if __name__ == "__main__":
    main()
