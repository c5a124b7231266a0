"""Intervals, limits and significances of counting statistics by direct enumeration and quadrature. Writes intervals.json.

Sources: Garwood's central Poisson intervals (chi-square quantiles, scipy.stats); Feldman & Cousins, PRD 57 (1998) 3873;
CLs for a counting point; Cowan et al., arXiv:1007.1727 (median significance); Baker & Cousins, NIM 221 (1984) 437;
on/off: profile likelihood, Li & Ma, ApJ 272 (1983) 317 eq. 17; look-elsewhere: Gross & Vitells, arXiv:1005.1891 (upcrossings of a Gaussian field).
"""
import json
import os
import numpy as np
from scipy import optimize, stats

HERE = os.path.dirname(os.path.abspath(__file__))


def garwood(n, cl):
    a = (1 - cl) / 2
    return (stats.chi2.ppf(a, 2 * n) / 2 if n else 0.0), stats.chi2.ppf(1 - a, 2 * n + 2) / 2


def fc_accepts(s, b, n_obs, cl):
    """Is n_obs in the Feldman-Cousins belt of signal s?"""
    n = np.arange(0, int(s + b + 20 * np.sqrt(s + b + 1)) + 40 + n_obs)
    p = stats.poisson.pmf(n, s + b)
    best = np.maximum(0, n - b)
    with np.errstate(divide="ignore", invalid="ignore"):
        lr = stats.poisson.logpmf(n, s + b) - stats.poisson.logpmf(n, best + b)
    lr[np.isnan(lr)] = -np.inf
    order = np.argsort(-lr, kind="stable")
    taken = order[: np.searchsorted(np.cumsum(p[order]), cl - 1e-15) + 1]
    return n_obs in set(n[taken].tolist())


def feldman_cousins(n, b, cl=0.9, step=0.005):
    """First and last accepted s, by a grid, then bisection at both ends."""
    grid = np.arange(0, n + 10 * np.sqrt(n + 1) + 12, step * 4)
    ok = np.array([fc_accepts(s, b, n, cl) for s in grid])
    i, j = np.flatnonzero(ok)[[0, -1]]

    def refine(inside, outside):
        for _ in range(40):
            mid = (inside + outside) / 2
            inside, outside = (mid, outside) if fc_accepts(mid, b, n, cl) else (inside, mid)
        return inside
    lo = 0.0 if i == 0 else refine(grid[i], grid[i - 1])
    return lo, refine(grid[j], grid[j + 1])


def cls_limit(n, b, cl=0.95):
    f = lambda s: stats.poisson.cdf(n, s + b) / stats.poisson.cdf(n, b) - (1 - cl)
    return optimize.brentq(f, 0, n + 50 + 10 * np.sqrt(n + 1), xtol=1e-13)


def bayes_limit(n, b, cl=0.95):
    """Flat prior in s >= 0: integral of the posterior, by the incomplete gamma function (equals the CLs limit for one counting point)."""
    f = lambda s: (stats.gamma.cdf(s + b, n + 1) - stats.gamma.cdf(b, n + 1)) / stats.gamma.sf(b, n + 1) - cl
    return optimize.brentq(f, 0, n + 50 + 10 * np.sqrt(n + 1), xtol=1e-13)


def bc(mu, n):
    return 2 * (mu - n + (n * np.log(n / mu) if n else 0.0))


def on_off(n_on, n_off, tau, s):
    """Profile of b in n_on ~ Poisson(s+b), n_off ~ Poisson(tau b): minimised numerically on purpose; 2 NLL in the BC form, and b."""
    f = lambda lb: bc(s + np.exp(lb), n_on) + bc(tau * np.exp(lb), n_off)
    r = optimize.minimize_scalar(f, bounds=(np.log(1e-9), np.log(n_on + n_off + 10)), method="bounded", options={"xatol": 1e-12})
    return r.fun, float(np.exp(r.x))


def li_ma(n_on, n_off, alpha):
    return np.sqrt(2) * np.sqrt(n_on * np.log((1 + alpha) / alpha * n_on / (n_on + n_off)) + n_off * np.log((1 + alpha) * n_off / (n_on + n_off)))


def bc_mean(mu):
    n = np.arange(0, int(mu + 40 * np.sqrt(mu) + 60))
    return float(np.sum(stats.poisson.pmf(n, mu) * np.array([bc(mu, k) for k in n])))


def profile_bands():
    return {"one_parameter": [float(stats.chi2.ppf(stats.chi2.cdf(k * k, 1), 1)) for k in (1, 2)], "pair": [float(stats.chi2.ppf(stats.chi2.cdf(k * k, 1), 2)) for k in (1, 2)]}


def main():
    out = {"poisson_central": [{"n": n, "cl": cl, "low": garwood(n, cl)[0], "high": garwood(n, cl)[1]} for n in (0, 1, 2, 3, 5, 10, 30, 100, 1000) for cl in (0.6826894921370859, 0.9)],
           "feldman_cousins_90": [dict(zip(("n", "b", "low", "high"), (n, b, *feldman_cousins(n, b)))) for n, b in ((0, 0), (1, 0), (2, 0), (3, 0), (5, 0), (10, 0), (0, 3), (3, 1), (4, 2.5), (8, 5), (2, 2.27))],
           "cls_95": [{"n": n, "b": b, "s": cls_limit(n, b), "s_bayes_flat": bayes_limit(n, b)} for n in (0, 1, 2, 5, 12, 40) for b in (0.0, 0.5, 2.27, 7.0)],
           "median_significance": [{"s": s, "b": b, "z": float(np.sqrt(2 * ((s + b) * np.log1p(s / b) - s)))} for s, b in ((10, 10), (1, 0.1), (5, 100), (0.01, 50), (30, 2))],
           "baker_cousins": [{"mu": m, "n": n, "value": bc(m, n)} for m, n in ((1, 0), (10, 7), (0.1, 1), (50, 60), (1e-3, 0), (1e5, 1e5 + 300))],
           "baker_cousins_mean": [{"mu": m, "mean": bc_mean(m)} for m in (0.1, 1.0, 5.0, 20.0)],
           "on_off": [], "profile_rise": profile_bands(),
           "local_p": [{"z": z, "p": float(stats.norm.sf(z))} for z in (1, 2, 3, 5, 7)],
           "global_p_one_sided": [{"z": z, "upcrossings_at_0": n0, "p_global": float(stats.norm.sf(z) + n0 * np.exp(-z * z / 2))} for z, n0 in ((3, 4.3), (5, 12.0), (2, 1.0))]}
    for n_on, n_off, tau in ((14, 22, 2.0), (3, 30, 5.0), (564, 98, 2.0), (0, 4, 2.0), (8, 0, 3.0)):
        f0, b0 = on_off(n_on, n_off, tau, 0.0)
        row = {"n_on": n_on, "n_off": n_off, "tau": tau, "two_nll_at_0": f0, "b_at_0": b0, "scan": [dict(zip(("s", "two_nll", "b"), (s, *on_off(n_on, n_off, tau, s)))) for s in (1.0, 5.0, 40.0)]}
        if n_on > n_off / tau and n_off:
            row["li_ma"] = float(li_ma(n_on, n_off, 1 / tau))
            assert abs(row["li_ma"] - np.sqrt(f0)) < 1e-6
        out["on_off"].append(row)
    # published values
    fc = {(r["n"], r["b"]): r for r in out["feldman_cousins_90"]}
    assert abs(fc[0, 0]["high"] - 2.44) < 0.01 and abs(fc[1, 0]["low"] - 0.11) < 0.01 and abs(fc[1, 0]["high"] - 4.36) < 0.01
    assert abs(fc[5, 0]["low"] - 1.84) < 0.01 and abs(fc[5, 0]["high"] - 9.99) < 0.01
    assert all(abs(r["s"] - 2.996) < 5e-4 for r in out["cls_95"] if r["n"] == 0)
    assert abs(out["median_significance"][0]["z"] - 2.7795) < 5e-5
    json.dump({"about": __doc__.split("\n")[0], "script": "intervals.py", **out}, open(os.path.join(HERE, "intervals.json"), "w"), indent=1)
    print("intervals: published values of Feldman & Cousins, CLs, median significance reproduced; BC mean", out["baker_cousins_mean"])
    print([(r["n"], r["b"], round(r["low"], 4), round(r["high"], 4)) for r in out["feldman_cousins_90"]])


if __name__ == "__main__":
    main()
