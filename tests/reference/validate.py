"""The table of what was checked against what: `python validate.py BATCH [--check | --rerun]`.

Collects the comparisons of the core (cargo example `validate`) and of the batch program (check.py), adds what the crates' own
tests compare and the quantities for which no independent data were found, writes table.json and www/page/checked.json (shown in
the page) and prints them. `--rerun` first recomputes the reference tables from their scripts (many minutes). `--check` writes nothing:
it fails if the kept table is not what would be written, or if a public routine is in no row (covers.json), and it recomputes 20 points
of the accuracy map. Exit code 1 if a quantity lies outside its tolerance.
"""
import json
import os
import subprocess
import sys
from pathlib import Path
import check
import covers

HERE = Path(__file__).resolve().parent
ROOT = HERE.parents[1]
IN_PAGE = ROOT / "www" / "page" / "checked.json"
SCRIPTS = ["special_functions.py", "self_energy.py", "poles.py", "spinors.py", "intervals.py", "designs.py", "published.py", "lineshape_nested.py", "accuracy_map.py", "scenarios.py"]

# Compared by the crates' own tests, where the source stands too: quantity, source, unit, tolerance, reason.
IN_TESTS = [
    ("beam conversions: equal, unequal, crossing angle, fixed target", "worked by hand, crates/core/src/beam", "relative", 1e-12, "rounding"),
    ("break-up momenta, t and u", "closed forms and sum rules, crates/core/src/kinematics.rs", "relative", 1e-12, "rounding"),
    ("elementary functions", "crate libm on both sides, crates/core/src/math.rs", "bits", 0.0, "the same function"),
    ("w(z) and Voigt line", "special_functions.py: mpmath, scipy.special.wofz; DLMF 7.19", "relative", 1e-13, "the accuracy the routine states"),
    ("rotation functions and Clebsch-Gordan coefficients", "wigner_d.py: sympy, up to J = 4; Review of Particle Physics", "absolute", 1e-14, "rounding"),
    ("angular distributions and acceptance", "closed forms and sums over bins, crates/core/tests/waves.rs", "relative", 1e-13, "rounding"),
    ("selection rules of fermion pairs", "quark-model rules P = (-1)^(L+1), C = (-1)^(L+S), crates/core/src/amplitude/selection.rs", "exact", 0.0, "rules"),
    ("partial waves of the diagrams", "spinors.py: explicit Dirac spinors, crates/core/tests/diagrams", "absolute", 1e-10, "rounding and the quadrature over the angle"),
    ("peak cross section, Z to hadrons", "Review of Particle Physics: 12 pi B_ee B_had/M^2 = 41.51 nb, crates/core/tests/partial_wave.rs", "nb", 0.005, "four digits"),
    ("conventions of mass and width", "hep-ex/0509008; Z: 34.1, 0.93, 26 and 1.2 MeV, crates/core/src/propagator/conventions.rs", "MeV", 0.1, "published to two digits"),
    ("roots of polynomials", "polynomials made from their roots, crates/core/src/numerics/polynomial.rs", "relative", 1e-9, "conditioning"),
    ("probabilities: normal, chi2, Poisson, binomial", "intervals.py: scipy.stats, crates/core/tests/statistics_reference.rs", "relative", 1e-9, "two routines of 1e-10"),
    ("limits and significances of counting", "intervals.py: enumeration; Feldman & Cousins 1998, tables", "relative", 1e-9, "two routines of 1e-10"),
    ("asymptotic limits", "an invented scenario worked out in scenarios.py, crates/core/tests/fit_scenarios.rs", "as printed", 0.06, "printed to three digits"),
    ("random numbers: moments and distributions", "Pearson chi2 of draws against exact probabilities, crates/core/src/numerics/random.rs", "p-value at least", 1e-3, "chance"),
    ("expected errors of the invented scenarios", "scenarios.py: own chain, information matrix; crates/core/tests/plan_scan.rs, fit_scenarios.rs", "relative, beside half a unit of the last digit", 0.005, "printed digits"),
    ("time to a wanted error", "closed form n = 1/eps^2, crates/core/src/counts/times.rs", "relative", 1e-12, "rounding"),
    ("profile intervals and contours", "curvature errors where the likelihood is parabolic, crates/core/tests/fit_published.rs", "relative", 0.02, "the likelihood is nearly, not quite, a parabola"),
    ("other solutions of equal likelihood", "scenarios.py: algebra; crates/core/tests/fit_scenarios.rs", "as printed", 0.06, "printed to three or four digits"),
    ("influence of points", "the fit again with the point left out, crates/core/tests/fit_published.rs", "errors of the fit", 1e-3, "two minimisations"),
    ("two-hypothesis separation", "closed forms by hand, crates/core/src/plan/hypotheses.rs", "relative", 1e-4, "certificate of the design"),
    ("coverage and pulls of trials", "nominal coverage 0.683 of 4,000 trials, crates/core/src/trials", "absolute", 0.027, "3.5 binomial errors"),
    ("designs with visit errors, prior draws and several goals", "make_plan_cvxpy.py: cvxpy (Clarabel), 20 random sheets", "relative in the criterion", 1e-4, "accuracy of the interior-point solver"),
    ("textbook designs", "Elfving 1952; Dette, Haines & Imhof 1999; closed Breit-Wigner results", "relative", 1e-6, "closed forms"),
    ("particle masses, widths, spins", "data/pdg2026_readout.csv: Review of Particle Physics 2026", "as printed", 0.0, "copied numbers"),
    ("no number of its own", "constructors, names, reading and writing: the tests of the crates, sheets out and in", "exact", 0.0, "plumbing"),
]

NOT_CHECKED = [
    ("tabulated beam spread", "compared with own quadrature only"),
    ("radiation with muon beams", "compared with own quadrature only; no published factor for a narrow scalar at a muon collider with this radiator"),
    ("poles of the two-channel K-matrix", "compared with mpmath only; published parametrisations use other phase-space functions"),
    ("f0(980) pole in the Flatte form", "own number; dispersive analyses (996(7) - i 25 MeV) are another parametrisation"),
    ("Feldman-Cousins intervals with background", "plain construction by enumeration; the published table lengthens some intervals"),
    ("timetables with settle times, fills and hysteresis", "small problems enumerated by own code"),
    ("look-elsewhere correction", "pseudo-experiments of the program itself"),
    ("robust designs over a prior", "compared with cvxpy on few nodes only"),
    (covers.NOT_ASSIGNED, "routines that nobody has put into a row of this table yet"),
]


def core_rows():
    cargo = os.environ.get("CARGO", "cargo")
    # As the native tests build it, so that nothing is built twice.
    build = [cargo, "build", "--quiet", "--workspace", "--profile", "test", "--example", "validate"]
    subprocess.run(build, cwd=ROOT, check=True)
    target = Path(os.environ.get("CARGO_TARGET_DIR", ROOT / "target"))
    done = subprocess.run([target / "debug" / "examples" / "validate"], cwd=ROOT, capture_output=True, text=True)
    lines = [x for x in done.stdout.splitlines() if x.startswith("{")]
    if not lines:
        raise RuntimeError(done.stderr[-2000:])
    return [json.loads(x) for x in lines]


def short(x):
    """Two digits, so that the table does not change with the last bits of a reference."""
    return None if x in (None, float("inf")) else float(f"{x:.1e}")


def rows_now(batch):
    found = core_rows() + [r.json() for r in check.rows(batch)]
    ok = lambda r: r["values"] > 0 and r["largest"] is not None and r["largest"] <= r["tolerance"]
    rows = [{**r, **{k: short(r[k]) for k in ("largest", "p75", "p99")}, "state": "checked" if ok(r) else "outside tolerance"} for r in found]
    rows += [{"quantity": q, "source": s, "unit": u, "tolerance": t, "reason": why, "state": "checked in the tests"} for q, s, u, t, why in IN_TESTS]
    return rows + [{"quantity": q, "source": why, "state": "not checked, no data found"} for q, why in NOT_CHECKED if q != covers.NOT_ASSIGNED or covers.unassigned()]


def in_page(rows):
    """Few words a row: quantity, source, tolerance with unit, largest deviation (empty where the tests compare, null where nothing was found)."""
    def one(r):
        if "tolerance" not in r:
            return [r["quantity"], r["source"]]
        largest = f"{r['largest']:g}" if r.get("largest") is not None else ""
        return [r["quantity"], r["source"].replace("tests/reference/", ""), f"{r['tolerance']:g} {r['unit']}", largest]
    return json.dumps([one(r) for r in rows if r["quantity"] != "no number of its own"], ensure_ascii=False, separators=(",", ":")).replace("],[", "],\n[") + "\n"


def stale(rows):
    """What differs between the kept table and the one that would be written; deviations may differ by a factor of three."""
    kept = json.loads((HERE / "table.json").read_text())["rows"]
    what = lambda r: {k: v for k, v in r.items() if k not in ("largest", "p75", "p99", "at", "values")}
    if [what(r) for r in kept] != [what(r) for r in rows]:
        return ["table.json has other rows than would be written now; run: cargo xtask validate"]
    far = [r["quantity"] for k, r in zip(kept, rows) if r.get("largest") and k.get("largest") and not 1 / 3 <= r["largest"] / k["largest"] <= 3 and r["largest"] > 1e-2 * r["tolerance"]]
    return [f"the largest deviation of '{q}' is another than in table.json; run: cargo xtask validate" for q in far]


def main():
    words = [w for w in sys.argv[1:] if not w.startswith("-")]
    if len(words) != 1:
        print("usage: validate.py BATCH_PROGRAM [--check | --rerun]")
        return 2
    if "--rerun" in sys.argv:
        for script in SCRIPTS:
            print(f"recomputing {script}", flush=True)
            subprocess.run([sys.executable, script], cwd=HERE, check=True, stdout=subprocess.DEVNULL)
    if "--check" not in sys.argv:
        covers.adopt()
    rows = rows_now(words[0])
    wrong = []
    if "--check" in sys.argv:
        wrong = stale(rows)
        map_again = subprocess.run([sys.executable, "accuracy_map.py", "--check", "1"], cwd=HERE, capture_output=True, text=True)
        print(map_again.stdout.splitlines()[0] if map_again.stdout else map_again.stderr)
        wrong += ["the accuracy map is not what its script gives"] if map_again.returncode else []
    else:
        (HERE / "table.json").write_text(json.dumps({"about": "What this was checked against. Regenerated by `cargo xtask validate`.", "rows": rows}, indent=1) + "\n")
        IN_PAGE.write_text(in_page(rows))
    wrong += covers.problems({r["quantity"] for r in rows})
    if "--check" in sys.argv and IN_PAGE.read_text().count("\n") != in_page(rows).count("\n"):
        wrong.append("www/page/checked.json has other rows; run: cargo xtask validate")
    for r in rows:
        if "largest" in r:
            print(f"{r['state']:26s} {r['quantity']}: largest {r['largest']} (75 %: {r['p75']}, 99 %: {r['p99']}) of {r['tolerance']:g} ({r['unit']}; {r['reason']}), {r['values']} values; {r['source']}")
        else:
            print(f"{r['state']:26s} {r['quantity']}: {r['source']}")
    for w in wrong:
        print(f"FAILED {w}")
    failed = sum(r["state"] == "outside tolerance" for r in rows) + len(wrong)
    print(f"{sum(r['state'] == 'checked' for r in rows)} passed, {failed} failed")
    return int(failed > 0)


if __name__ == "__main__":
    sys.exit(main())
