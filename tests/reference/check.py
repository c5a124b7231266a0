"""Independent values against the built batch program: `python check.py BATCH`.

Prints for each quantity the largest deviation and its tolerance, and as last line `N passed, N failed`; exit code 1 on failure.
Tolerances of fits (the project's own rule): values to 1 % of their error, errors to 2 %.
"""
import json
import subprocess
import sys
import tempfile
from pathlib import Path
import numpy as np
import sheets

HERE = Path(__file__).resolve().parent


def load(name):
    return json.loads((HERE / name).read_text())


class Row:
    def __init__(self, quantity, source, unit, tolerance, reason):
        self.quantity, self.source, self.unit, self.tolerance, self.reason = quantity, source, unit, tolerance, reason
        self.values, self.largest, self.at = 0, 0.0, ""
        self.deviations = []

    def take(self, deviation, at):
        d = abs(float(deviation))
        d = float("inf") if np.isnan(d) else d
        self.values += 1
        self.deviations.append(d)
        if d >= self.largest:
            self.largest, self.at = d, at

    @property
    def holds(self):
        return self.values > 0 and self.largest <= self.tolerance

    def json(self):
        place = lambda share: sorted(self.deviations)[min(len(self.deviations) * share // 100, len(self.deviations) - 1)] if self.deviations else 0.0
        return {"p75": place(75), "p99": place(99), "quantity": self.quantity, "items": "widthwise-batch", "source": self.source, "unit": self.unit, "tolerance": self.tolerance, "reason": self.reason,
                "values": self.values, "largest": self.largest, "at": self.at}


class Batch:
    def __init__(self, program):
        self.program = str(Path(program).resolve())

    def ask(self, command, sheet, *options):
        with tempfile.TemporaryDirectory() as folder:
            path = Path(folder) / "sheet.json"
            path.write_text(json.dumps(sheet))
            done = subprocess.run([self.program, command, str(path), *options], capture_output=True, text=True)
        if done.returncode or not done.stdout.strip():
            raise RuntimeError(f"{command}: exit code {done.returncode}, {done.stderr.strip()[:400]}")
        return json.loads(done.stdout)

    def observed(self, scan, w_gev, stage="observed", accuracy="1e-6"):
        """Observed cross sections: the counts expected at 1/nb and full efficiency."""
        rows = [{"id": f"p{i}", "w": sheets.gev(w), "luminosity": "1 nb^-1", "live_time": "1 h", "counts": "0"} for i, w in enumerate(w_gev)]
        points = self.ask("points", sheets.sheet(scan, rows, stage, accuracy))["points"]
        return [p["expected"] for p in points]


def line_shape(batch):
    row = Row("observed cross section through sheet and batch program", "lineshape_nested.py", "relative", 1e-6, "the accuracy requested, and the default of every sheet")
    for case in load("lineshape_nested.json")["cases"]:
        if "growing" in case["name"]:
            continue        # the sheet ties the growth of the spread to an energy of its own
        points = [p for p in case["points"] if p["observed_nb"] > 0]
        ours = batch.observed(case["scan"], [p["w_gev"] for p in points])
        for a, p in zip(ours, points):
            row.take(a / p["observed_nb"] - 1, f"{case['name']}, W = {p['w_gev']} GeV")
    return [row]


def psi(batch):
    """Published: Wang, Yuan & Mo 2002: peak 640 nb at +0.14 MeV after spread."""
    case = [c for c in load("lineshape_nested.json")["cases"] if c["name"] == "psi(2S)"][0]
    x = np.arange(0.05, 0.25, 0.01)
    y = np.array(batch.observed(case["scan"], 3.68596 + 1e-3 * x))
    p = np.polyfit(x - 0.135, y, 4)
    top = -p[3] / (2 * p[2])
    height = Row("psi(2S) observed peak, published", "Wang, Yuan & Mo 2002: 640 nb", "nb", 5.0, "published to two digits")
    height.take(np.polyval(p, top) - 640, "peak")
    place = Row("psi(2S) observed peak position, published", "Wang, Yuan & Mo 2002: +0.14 MeV", "MeV", 0.005, "published to two digits")
    place.take(top + 0.135 - 0.14, "peak")
    return [height, place]


def cmd3_factors(batch):
    import published as pub
    s = pub.phi_model(1.0194556, 4.2432e-3, 4.2863e-7, 0.941)
    s["beams"] = pub.c.beams(pub.c.lepton())
    s["chain"]["w_min_gev"] = 0.995222
    near = Row("radiation factors of the CMD-3 phi scan below 1030 MeV, published", "CMD-3, PLB 760 (2016) 314, table 1", "absolute, ours - table", 0.01, "the table is cut to two decimals")
    far = Row("radiation factors of the CMD-3 phi scan from 1033 to 1041 MeV, published", "CMD-3, PLB 760 (2016) 314, table 1", "relative", 0.015, "two decimals; their radiator and shape above the peak")
    own = Row("radiation factors of the CMD-3 phi scan", "published.py", "relative", 1e-7, "W typed to 1 keV, accuracy 1e-9")
    w = [r["w_mev"] * 1e-3 for r in load("published.json")["cmd3_radiation_factors"]]
    rad = batch.observed({**s, "chain": {**s["chain"], "spread": "None"}}, w)
    born = batch.observed({**s, "chain": {**s["chain"], "w_min_gev": None, "spread": "None"}}, w)
    for r, a, b in zip(load("published.json")["cmd3_radiation_factors"], rad, born):
        at = f"{r['w_mev']} MeV"
        own.take(a / b / r["ours"] - 1, at)
        if r["w_mev"] < 1030:
            near.take(a / b - r["table"] if a / b >= r["table"] else float("inf"), at)
        elif r["w_mev"] < 1041:
            far.take(a / b / r["table"] - 1, at)
    return [near, far, own]


def fit_rows(name, source):
    return (Row(f"{name}: fitted values", source, "errors of the fit", 0.01, "1 % of the error"), Row(f"{name}: errors", source, "relative", 0.02, "2 % of the error"),
            Row(f"{name}: 2 NLL at the minimum", source, "2 NLL", 0.01, "a tenth of what moves a value by 10 % of its error"))


def take_fit(rows, fit, names, reference, label):
    """names: id -> (key, factor from the sheet's unit to the reference's, offset)."""
    got = {p["id"]: p for p in fit["parameters"]}
    for ident, (key, factor, offset) in names.items():
        v, e = reference["values"][key], reference["errors"][key]
        rows[0].take((got[ident]["value"] * factor + offset - v) / e, f"{label}, {ident}")
        rows[1].take(got[ident]["error"] * factor / e - 1, f"{label}, {ident}")


def cmd3_fit(batch):
    import published as pub
    data = [{"id": f"p{i}", "w": f"{r['Ecm_MeV']!r} MeV", "w_error": f"{r['Ecm_err_MeV']!r} MeV", "cross_section": f"{r['sigma_Born_nb']!r} nb", "cross_section_error": f"{r['sigma_Born_err_nb']!r} nb"}
            for i, r in enumerate(pub.rows("cmd3_2016_kskl_phi_scan.csv"))]
    rows = fit_rows("CMD-3 phi scan, 25 Born cross sections", "published.py: iminuit, NumPy")
    for name, c in (("with C", 0.9), ("without C", None)):
        s = pub.phi_model(1.01945, 4.24e-3, 4.28e-7, c)
        s["beams"] = pub.c.beams(pub.c.lepton())
        doc = sheets.sheet(s, data, "born", "1e-6", ["r1.mass", "r1.width", "r1.strength"] + (["coherent.0"] if c else []))
        doc["model"]["resonances"][0].update({"mass": "1019.45 MeV", "width": "4.24 MeV", "strength": {"kind": "gamma_in_bf", "value": "4.28e-4 MeV"}})
        fit = batch.ask("fit", doc)
        ref = load("published.json")["cmd3_fit"][name]
        names = {"r1.mass": ("m_mev", 1, 0), "r1.width": ("gamma_mev", 1, 0), "r1.strength": ("strength", 1e4, 0)}
        take_fit(rows, fit, {**names, **({"coherent.0": ("cc", 1, 0)} if c else {})}, ref, name)
        rows[2].take(fit["statistic"] - ref["chi2"], name)
    return list(rows)


def lep_fit(batch):
    import published as pub
    data = [{"id": f"p{i}", "w": f"{r['Ecm_GeV']!r} GeV", "w_error": f"{r['Ecm_err_GeV']!r} GeV", "cross_section": f"{r['sigma0_had_nb']!r} nb", "cross_section_error": f"{r['sigma0_err_nb']!r} nb"}
            for i, r in enumerate(pub.rows("lep_avg_hadron_7points.csv"))]
    rows = fit_rows("LEP hadronic cross section, seven points", "published.py: iminuit, NumPy")
    c = pub.c
    s = c.scan(c.beams(c.lepton()), 2, [c.resonance(91.19, 2.5, {"kind": "bin_bf", "product": 0.0235}, form={"kind": "massless_channels"}, entrance={"kind": "massless"}, exit={"kind": "massless"})], None, "None")
    for name, common in (("points alone", {}), ("with common errors", {"common_energy_error": "1.7 MeV", "common_scale_error": "0.07 %"})):
        fit = batch.ask("fit", sheets.sheet(s, data, "born", "1e-6", ["r1.mass", "r1.width", "r1.strength"], data=common))
        ref = load("published.json")["lep_fit"][name]
        got = {p["id"]: p for p in fit["parameters"]}
        m, b = got["r1.mass"], got["r1.strength"]
        # sigma0 = 12 pi b/M^2: its error needs the correlation of b with M
        a, k, rho = b["error"] / b["value"], 2 * m["error"] / m["value"], fit["correlation"][2][0]
        b["error"] = b["value"] * np.sqrt(a * a + k * k - 2 * rho * a * k)
        m = m["value"]
        take_fit(rows, fit, {"r1.mass": ("m", 1, 0), "r1.width": ("g", 1, 0), "r1.strength": ("s0", 12 * np.pi * c.HBARC2_GEV2_NB / m ** 2, 0)}, ref, name)
        rows[2].take(fit["statistic"] - ref["chi2"], name)
    return list(rows)


def scenario_a(batch):
    import scenarios as sc
    ref = load("scenarios.json")["A"]
    rows = fit_rows("invented scenario A, counts simulated here", "scenarios.py: own chain, iminuit")
    expected = Row("invented scenario A, expected counts", "scenarios.py", "relative", 1e-6, "accuracy 1e-6 of the sheet")
    truth = sc.scan_a(sc.A_TRUE)
    truth["chain"]["spread"] = sc.c.gaussian(0.71e-3)
    free = ["r1.mass", "r1.width", "r1.strength", "coherent.phase", "background.rate"]
    names = {"r1.mass": ("mass_kev", 1e3, -2874.2e3), "r1.width": ("width_kev", 1e3, 0), "r1.strength": ("strength_ev", 1, 0), "coherent.phase": ("phase_deg", 1, 0), "background.rate": ("background_per_h", 1, 0)}

    def document(counts, spread, energy):
        data = [{"id": f"p{i}", "w": sheets.gev(sc.A_M + o), "luminosity": f"{float(sc.A_LUM * h)!r} nb^-1", "live_time": f"{float(h)!r} h", "counts": str(int(n)), "group": f"fill {i // 3 + 1}",
                 **({"w_error": "20 keV"} if energy != "none" else {})} for i, (o, h, n) in enumerate(zip(sc.A_OFF, sc.A_H, counts))]
        doc = sheets.sheet(truth, data, "observed", "1e-6", free + (["spread"] if spread else []), [{"parameter": "spread", "value": "0.7100(213) MeV"}] if spread else [],
                           {"efficiency": "0.42", "background_rate": "1.5 events/h"}, {"group_energy_error": "60 keV"} if energy == "fills" else {})
        doc["beam"]["spread"]["first"] = "0.71 MeV"
        doc["model"]["resonances"][0].update({"mass": "2874.20 MeV", "width": "0.62 MeV", "strength": {"kind": "gamma_in_bf", "value": "24.6 eV"}})
        doc["model"]["coherent"]["phase"] = "-130 deg"
        return doc
    for i, p in enumerate(batch.ask("points", document(sc.A_N, False, "none"))["points"]):
        expected.take(p["expected"] / ref["expected"][i] - 1, p["id"])
    for r in ref["fits"]:
        label = f"n = {int(r['data'][0])}..., spread {'free' if r['spread_free'] else 'fixed'}, energy errors: {r['energy_errors']}"
        fit = batch.ask("fit", document(r["data"], r["spread_free"], r["energy_errors"]))
        take_fit(rows, fit, names, r, label)
        rows[2].take(fit["statistic"] - r["two_nll"], label)
    return [expected, *rows]


def shards(batch):
    import shards_dask
    row = Row("trials in shards under a dask.distributed local cluster, merged", "one run of the same trials", "rows that differ", 0.0, "the same bits, by construction")
    import scenarios as sc
    truth = sc.scan_a(sc.A_TRUE)
    data = [{"id": f"p{i}", "w": sheets.gev(sc.A_M + o), "luminosity": f"{float(sc.A_LUM * h)!r} nb^-1", "live_time": f"{float(h)!r} h", "counts": str(int(n))} for i, (o, h, n) in enumerate(zip(sc.A_OFF, sc.A_H, sc.A_N))]
    doc = sheets.sheet(truth, data, "observed", "1e-6", ["r1.mass", "r1.width", "r1.strength"], detection={"efficiency": "0.42", "background_rate": "1.5 events/h"})
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "sheet.json"
        path.write_text(json.dumps(doc))
        for k, (a, b) in enumerate(shards_dask.pairs(batch.program, str(path))):
            row.take(0.0 if a == b else 1.0, f"trial {k}")
    return [row]


CHECKS = [line_shape, psi, cmd3_factors, cmd3_fit, lep_fit, scenario_a, shards]


def rows(program):
    batch, out = Batch(program), []
    for check in CHECKS:
        try:
            out += check(batch)
        except Exception as problem:      # a program that cannot answer is a failed check, not the end of the others
            broken = Row(check.__name__, "", "", 0.0, f"not computed: {problem}")
            broken.at, broken.largest = f"{type(problem).__name__}: {problem}", float("inf")
            out.append(broken)
    return out


def main():
    if len(sys.argv) != 2:
        print("usage: check.py BATCH_PROGRAM")
        return 2
    found = rows(sys.argv[1])
    for r in found:
        print(f"{'ok    ' if r.holds else 'FAILED'} {r.quantity}: largest {r.largest:.2e} of {r.tolerance:g} ({r.unit}; {r.values} values), at {r.at}")
    failed = sum(not r.holds for r in found)
    print(f"{len(found) - failed} passed, {failed} failed")
    return int(failed > 0)


if __name__ == "__main__":
    sys.exit(main())
