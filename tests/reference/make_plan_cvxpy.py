"""Writes plan_cvxpy.json: 20 random planning problems and their optima by cvxpy (general-purpose convex solver),
and plan_benchmark.json: the two benchmark problems (400 energies, 5 parameters) with cvxpy's criterion and time.

Run: python make_plan_cvxpy.py (packages: requirements.txt)
The curve of the random problems is a Breit-Wigner interfering with a flat amplitude over a flat incoherent
background, smeared by a Gaussian on a fine grid; derivatives by central differences. Only the arrays matter.
"""
import json
import time
from pathlib import Path

import cvxpy as cp
import numpy as np

HERE = Path(__file__).parent
RNG = np.random.default_rng(20261201)
N = 41


def rate(theta, x):
    m, gamma, strength, phase, background = theta
    grid = np.linspace(-9, 9, 1441)
    bw = np.sqrt(strength) * 0.5 * gamma / (m - grid - 0.5j * gamma)
    born = np.abs(bw + 0.3 * np.exp(1j * phase)) ** 2 + background
    kernel = np.exp(-0.5 * ((x[:, None] - grid[None]) / 0.6) ** 2)
    return 20.0 * (kernel @ born) / kernel.sum(1)


def arrays(theta, x, p):
    theta = np.array(theta, float)
    r = rate(theta, x)
    g = np.empty((len(x), p))
    for k in range(p):
        e = np.zeros(5)
        e[k] = 1e-4
        g[:, k] = (rate(theta + e, x) - rate(theta - e, x)) / 2e-4
    slope = (rate(theta, x + 1e-4) - rate(theta, x - 1e-4)) / 2e-4
    return tuple(np.array([float(f"{v:.10g}") for v in a.ravel()]).reshape(a.shape) for a in (r, g, slope))


def solve(case):
    x = np.array(case["energies"])
    t = cp.Variable(len(x), nonneg=True)
    infos, constraints = [], [cp.sum(t) == case["hours"]]
    for truth in case["truths"]:
        m, g, s = (np.array(truth[k]) for k in ("rate", "gradient", "slope"))
        h = g / np.sqrt(m)[:, None]
        e = ((s * case["s_energy"]) ** 2 + (m * case["d_luminosity"]) ** 2) / m
        if e.max() > 0:
            f = cp.Variable(len(x), nonneg=True)
            constraints.append(f <= cp.multiply(1 / e, 1 - cp.inv_pos(1 + cp.multiply(e, t))))
        else:
            f = t
        infos.append(h.T @ cp.diag(f) @ h + np.array(truth["prior"]))
    weights = np.array([truth["weight"] for truth in case["truths"]])
    weights = weights / weights.sum()
    p = infos[0].shape[0]
    kind = case["criterion"]
    if kind == "determinant":                              # mean of ln det I
        goal = cp.Maximize(sum(w * cp.log_det(i) for w, i in zip(weights, infos)))
    elif kind == "subset":                                 # ln det of the Schur complement of the first k
        k = case["columns"]
        s = cp.Variable((k, k), symmetric=True)
        i = infos[0]
        big = cp.bmat([[i[:k, :k] - s, i[:k, k:]], [i[k:, :k], i[k:, k:]]])
        constraints.append((big + big.T) / 2 >> 0)
        goal = cp.Maximize(cp.log_det(s))
    elif len(infos) == 1:                                  # trace of C^T I^-1 C
        c = np.array(case["columns"])
        goal = cp.Minimize(sum(cp.matrix_frac(col, infos[0]) for col in c))
    else:                                                  # mean of ln c^T I^-1 c
        c = np.array(case["columns"])[0]
        u = cp.Variable(len(infos), nonneg=True)
        for k, i in enumerate(infos):
            d = i - u[k] * np.outer(c, c)
            constraints.append((d + d.T) / 2 >> 0)
        goal = cp.Maximize(weights @ cp.log(u))
    problem = cp.Problem(goal, constraints)
    problem.solve(solver=cp.CLARABEL, tol_gap_abs=1e-10, tol_gap_rel=1e-10, tol_feas=1e-10)
    assert problem.status in ("optimal", "optimal_inaccurate"), problem.status
    value = float(problem.value)
    if kind == "variance":
        value = -value if len(infos) > 1 else float(np.log(value))
    return value, np.maximum(t.value, 0.0)


def random_case(number):
    p = int(RNG.integers(3, 6))
    kinds = ["determinant", "variance", "subset", "weighted"]
    kind = kinds[number % 4]
    truths_wanted = 4 if number in (16, 17) else 1
    x = np.round(np.linspace(-RNG.uniform(2, 6), RNG.uniform(2, 6), N), 6)
    theta = [RNG.uniform(-0.5, 0.5), RNG.uniform(0.5, 2), RNG.uniform(0.5, 3), RNG.uniform(-3, 3), RNG.uniform(0.05, 1)]
    truths = []
    for _ in range(truths_wanted):
        moved = list(theta)
        if truths_wanted > 1:
            moved[0] += RNG.normal(0, 0.4)
        r, g, s = arrays(moved, x, p)
        prior = np.zeros((p, p))
        if number >= 4:
            prior[1, 1] = float(np.round(RNG.uniform(1, 300), 3))
        if number % 3 == 1:
            prior[p - 1, p - 1] += float(np.round(RNG.uniform(0, 30), 3))
        truths.append(dict(weight=float(np.round(RNG.uniform(0.5, 1), 3)), rate=r.tolist(), gradient=g.tolist(), slope=s.tolist(), prior=prior.tolist()))
    case = dict(energies=x.tolist(), parameters=p, hours=float(np.round(RNG.uniform(5, 80), 2)), s_energy=0.0, d_luminosity=0.0, truths=truths)
    if number in (9, 10, 11, 12, 13, 14):
        case["s_energy"], case["d_luminosity"] = 0.03, 0.02
    if kind == "variance":
        c = np.zeros((1, p))
        c[0, number // 4 % p] = 1
        case["criterion"], case["columns"] = "variance", c.tolist()
    elif kind == "weighted":
        case["criterion"], case["columns"] = "variance", np.round(RNG.normal(size=(2, p)), 3).tolist()
    elif kind == "subset":
        case["criterion"], case["columns"] = "subset", 2
    else:
        case["criterion"], case["columns"] = "determinant", 0
    case["criterion_cvxpy"], hours = solve(case)
    case["hours_cvxpy"] = [float(f"{v:.7g}") for v in hours]
    return case


def benchmark(path):
    """The benchmark problems: arrays made by the peer script, handed over as a file of 400 x 5 numbers (g/sqrt m)."""
    g = np.array(json.loads(path.read_text())["roots"])
    w = cp.Variable(len(g), nonneg=True)
    info = g.T @ cp.diag(w) @ g
    prior = np.diag([0, 0, 0, 0, 1 / 4.0**2])
    out = {}
    for name, goal in (("variance", cp.Minimize(cp.matrix_frac(np.eye(5)[1], info + prior / 40))), ("determinant", cp.Maximize(cp.log_det(info)))):
        problem = cp.Problem(goal, [cp.sum(w) == 1])
        times = []
        for _ in range(7):
            problem = cp.Problem(goal, [cp.sum(w) == 1])
            start = time.perf_counter()
            problem.solve(solver=cp.CLARABEL)
            times.append(time.perf_counter() - start)
        out[name] = dict(criterion=float(problem.value), milliseconds_median=1e3 * float(np.median(times)), solver_milliseconds=1e3 * problem.solver_stats.solve_time)
    return out


if __name__ == "__main__":
    cases = [random_case(i) for i in range(20)]
    text = ",\n".join(json.dumps(c, separators=(",", ":")) for c in cases)
    (HERE / "plan_cvxpy.json").write_text('{"source":"make_plan_cvxpy.py, cvxpy with Clarabel","cases":[\n' + text + "\n]}\n")
    bench = HERE / "plan_benchmark.json"
    if bench.exists():
        print(json.dumps(benchmark(bench), indent=1))
