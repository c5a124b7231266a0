"""Scan sheets for the batch program, made from the inputs of the independent scripts."""


def gev(x):
    return f"{float(x)!r} GeV"


def quantity(x, unit):
    return f"{float(x)!r} {unit}"


def two_body(k):
    out = {"m1": gev(k["m1_gev"]), "m2": gev(k["m2_gev"]), "l": k["l"]}
    if k["radius_per_gev"]:
        out["radius"] = quantity(k["radius_per_gev"], "GeV^-1")
    return out


def shape(k):
    if k["kind"] in ("running", "two_body"):
        return {"kind": k["kind"], **two_body(k)}
    return {"kind": k["kind"]}


def strength(s):
    k = s["kind"]
    if k == "gamma_in_bf":
        return {"kind": k, "value": gev(s["gev"])}
    if k == "bin_bf":
        return {"kind": k, "value": repr(s["product"])}
    if k == "branchings":
        return {"kind": k, "b_in": repr(s["b_in"]), "b_f": repr(s["b_f"])}
    return {"kind": k, "gamma_in": gev(s["gamma_in_gev"]), "gamma_f": gev(s["gamma_f_gev"])}


def resonance(r):
    out = {"name": r["name"], "mass": gev(r["mass_gev"]), "width": gev(r["width_gev"]), "strength": strength(r["strength"]), "form": r["form"]["kind"],
           "entrance": shape(r["entrance"]), "exit": shape(r["exit"])}
    if r["phase_rad"]:
        out["phase"] = quantity(r["phase_rad"], "rad")
    if r["form"].get("channels"):
        out["channels"] = [{"name": c.get("name", f"channel {i}"), "fraction": repr(c["fraction"]), "shape": shape(c["shape"])} for i, c in enumerate(r["form"]["channels"])]
    return out


def coherent(b):
    if b["kind"] == "polynomial":
        return {"kind": "polynomial", "w0": gev(b["w0_gev"]), "coefficients": [repr(x) for x in b["coefficients"]], "phase": quantity(b["phase_rad"], "rad")}
    if b["kind"] == "shared_vertices":
        return {"kind": "shared_vertices", "c": repr(b["c"])}
    return {"kind": "one_photon", "c": quantity(b["c_nb"], "nb"), "w0": gev(b["w0_gev"]), "phase": quantity(b["phase_rad"], "rad")}


def incoherent(b):
    if b["kind"] == "power":
        return {"kind": "power", "c0": quantity(b["c0_nb"], "nb"), "w0": gev(b["w0_gev"]), "n": repr(b["n"])}
    return {"kind": "polynomial", "w0": gev(b["w0_gev"]), "coefficients": [quantity(x, "nb") for x in b["coefficients_nb"]]}


def spread(s):
    if s in (None, "None"):
        return {"kind": "none"}
    if "Table" in s:
        return {"kind": "table", "table": [[gev(a), repr(b)] for a, b in s["Table"]["rows"]]}
    g = s["Gaussian"]
    out = {"kind": "w", "first": gev(g["sigma_gev"])}
    if g["power"]:
        raise ValueError("a spread that grows with W is tied to the sheet's own reference energy")
    return out


def particle(p, second):
    names = {"e": ("e-", "e+"), "mu": ("mu-", "mu+"), "p": ("p", "pbar")}
    return {"name": names[p["name"]][second], "mass": gev(p["mass_gev"]), "spin": "1/2"}


def sheet(scan, rows, stage="observed", accuracy="1e-9", free=(), constraints=(), detection=None, data=None):
    """The sheet of a scan in the layout of chain.py."""
    h, b, w_min = scan["hypothesis"], scan["beams"], scan["chain"]["w_min_gev"]
    j = h["twice_j"]
    model = {"j": str(j // 2) if j % 2 == 0 else f"{j}/2", "resonances": [resonance(r) for r in h["resonances"]],
             "radiation": {"on": True, "w_min": gev(w_min)} if w_min else {"on": False}, "accuracy": accuracy}
    if h.get("coherent"):
        model["coherent"] = coherent(h["coherent"])
    if h.get("incoherent"):
        model["incoherent"] = incoherent(h["incoherent"])
    if h["final_threshold_gev"]:
        model["final_threshold"] = gev(h["final_threshold_gev"])
    return {"format": "widthwise scan sheet", "version": 1, "title": "independent check",
            "beam": {"arrangement": "equal_beams", "first": particle(b["first"], 0), "second": particle(b["second"], 1), "dial": "w", "spread": spread(scan["chain"]["spread"])},
            "model": model, "detection": {"efficiency": "1", "background_rate": "0 events/h", **(detection or {})}, "data": {"stage": stage, "rows": rows, **(data or {})},
            "fit": {"free": list(free), "constraints": list(constraints)}}
