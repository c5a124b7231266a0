"""Writes the published data sets as scan sheets, from the tables in data/ (sources there).

    python tests/reference/published_sheets.py        # writes tests/reference/sheets/*.json
"""

import csv
import json
import pathlib

HERE = pathlib.Path(__file__).parent


def table(name):
    with open(HERE / "data" / name, newline="") as file:
        return list(csv.DictReader(line for line in file if not line.startswith("#")))


def sheet(title, note, beam, model, data, fit):
    return {
        "format": "widthwise scan sheet", "version": 1, "title": title, "invented": False, "note": note,
        "beam": beam, "model": model, "detection": {}, "data": data, "fit": fit, "plan": {},
    }


def write(name, content):
    folder = HERE / "sheets"
    folder.mkdir(exist_ok=True)
    (folder / name).write_text(json.dumps(content, indent=2, ensure_ascii=False) + "\n")


def electrons(dial="w"):
    return {
        "arrangement": "equal_beams", "first": {"name": "e-"}, "second": {"name": "e+"}, "dial": dial,
        "spread": {"kind": "none"}, "calibration": {},
    }


def two_body(m1, m2, l=1):
    return {"kind": "two_body", "m1": f"{m1} MeV", "m2": f"{m2} MeV", "l": l}


def cmd3():
    rows = [
        {
            "id": f"P{i + 1}", "w": f"{r['Ecm_MeV']} MeV", "w_error": f"{r['Ecm_err_MeV']} MeV",
            "cross_section": f"{r['sigma_Born_nb']} nb", "cross_section_error": f"{r['sigma_Born_err_nb']} nb",
        }
        for i, r in enumerate(table("cmd3_2016_kskl_phi_scan.csv"))
    ]
    channels = [
        {"name": "K+ K-", "fraction": "50.1 %", "shape": two_body(493.677, 493.677)},
        {"name": "K_S K_L", "fraction": "33.6 %", "shape": two_body(497.611, 497.611)},
        {"name": "rho pi", "fraction": "15.0 %", "shape": two_body(775.3, 138)},
        {"name": "eta gamma", "fraction": "1.3 %", "shape": two_body(547.86, 0)},
    ]
    resonance = {
        "name": "phi(1020)", "mass": "1019.46 MeV", "width": "4.25 MeV",
        "strength": {"kind": "gamma_in_bf", "value": "4.3e-4 MeV"}, "form": "running_width", "channels": channels,
        "entrance": {"kind": "one_photon"},
        "exit": {"kind": "running", "m1": "497.611 MeV", "m2": "497.611 MeV", "l": 1},
    }
    write("cmd3_phi.json", sheet(
        "e+e- -> K_S K_L near the phi, CMD-3",
        "E. A. Kozyrev et al. (CMD-3), Phys. Lett. B 760 (2016) 314, table 1 (HEPData 10.17182/hepdata.78538.v1/t1): Born cross sections, statistical errors.",
        electrons(),
        {"j": "1", "resonances": [resonance], "coherent": {"kind": "shared_vertices", "c": "0.5"},
         "final_state": "K_S K_L", "final_threshold": "995.222 MeV", "radiation": {"on": False}},
        {"stage": "born", "rows": rows},
        {"free": ["r1.mass", "r1.width", "r1.strength", "coherent.0"]},
    ))


def lep():
    rows = [
        {
            "id": f"E{i + 1}", "w": f"{r['Ecm_GeV']} GeV", "w_error": f"{r['Ecm_err_GeV']} GeV",
            "cross_section": f"{r['sigma0_had_nb']} nb", "cross_section_error": f"{r['sigma0_err_nb']} nb",
        }
        for i, r in enumerate(table("lep_avg_hadron_7points.csv"))
    ]
    resonance = {
        "name": "Z", "mass": "91.19 GeV", "width": "2.50 GeV", "strength": {"kind": "bin_bf", "value": "2.35 %"},
        "form": "massless_channels",
    }
    write("lep_hadrons.json", sheet(
        "Z -> hadrons, seven energies",
        "Average of ALEPH, DELPHI, L3, OPAL as used in open teaching material; radiation removed, energy error 1.7 MeV and scale error 0.07 % common.",
        electrons(),
        {"j": "1", "resonances": [resonance], "final_state": "hadrons", "radiation": {"on": False}},
        {"stage": "born", "common_energy_error": "1.7 MeV", "common_scale_error": "0.07 %", "rows": rows},
        {"free": ["r1.mass", "r1.width", "r1.strength"]},
    ))


if __name__ == "__main__":
    cmd3()
    lep()
