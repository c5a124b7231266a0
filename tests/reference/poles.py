"""Propagators and their poles with mpmath: Z (massless channels), rho (Gounaris-Sakurai), f0(980) (Flatte), running widths,
two-channel K-matrix with Chew-Mandelstam functions from their dispersion integral. Writes poles.json.

Sources: Gounaris & Sakurai, PRL 21 (1968) 244; Review of Particle Physics, "Resonances" (conventions, Chew-Mandelstam);
hep-ph/0001206 (Z shifts); hep-ex/0411001 (f0 parameters). Sheets by the signs of Im q of each channel.
"""
import json
import os
import mpmath as mp

mp.mp.dps = 30
HERE = os.path.dirname(os.path.abspath(__file__))
PI, K, K0 = mp.mpf("0.13957039"), mp.mpf("0.493677"), mp.mpf("0.497611")


def pair(z):
    return [float(mp.re(z)), float(mp.im(z))]


def q(s, m1, m2, sign=None):
    """Break-up momentum; sign = wanted sign of Im q (None: principal root, real above threshold)."""
    v = mp.sqrt((s - (m1 + m2) ** 2) * (s - (m1 - m2) ** 2) / (4 * s))
    if sign is not None and mp.im(v) * sign < 0:
        v = -v
    return v


def pole(inverse, guess, tol=1e-24):
    s = mp.findroot(inverse, (guess, guess * (1 + mp.mpf(1) / 500), guess * (1 - mp.mpc(0, 1) / 700)), solver="muller", tol=tol, maxsteps=200)
    root = mp.sqrt(s)
    root = -root if root.real < 0 else root
    res = 1 / mp.diff(inverse, s, h=mp.mpf(10) ** -12)
    return {"sqrt_s_r_gev": pair(root), "m_pole_gev": float(root.real), "gamma_pole_gev": float(-2 * root.imag),
            "m_bar_gev": float(mp.sqrt(s.real)), "gamma_bar_gev": float(-s.imag / mp.sqrt(s.real)), "residue": pair(res)}


def gounaris_sakurai(m, g, mpi):
    """D(s) on the sheet given by the sign of Im k; d from F(0) = 1."""
    k = lambda s, sg: q(s, mpi, mpi, sg)
    h = lambda s, sg: 2 / mp.pi * k(s, sg) / mp.sqrt(s) * mp.log((mp.sqrt(s) + 2 * k(s, sg)) / (2 * mpi))
    k0 = k(m * m, None)
    hm = h(m * m, None)
    dh = mp.diff(lambda s: h(s, None), m * m)
    f = lambda s, sg: g * m ** 2 / k0 ** 3 * (k(s, sg) ** 2 * (h(s, sg) - hm) + (m * m - s) * k0 ** 2 * dh)
    return lambda s, sg=None: m * m - s + f(s, sg) - mp.mpc(0, 1) * m * g * (k(s, sg) / k0) ** 3 * m / mp.sqrt(s)


def barrier(l, z):
    return [1, 1 + z, 9 + 3 * z + z ** 2, 225 + 45 * z + 6 * z ** 2 + z ** 3, 11025 + 1575 * z + 135 * z ** 2 + 10 * z ** 3 + z ** 4][l]


def running(m, g, channels, signs):
    """1/Delta = s - M^2 + i M Gamma(s); channels (fraction, m1, m2, l, R)."""
    def inv(s):
        total = 0
        for (fr, a, b, l, r), sg in zip(channels, signs):
            q0, qs = q(m * m, a, b), q(s, a, b, sg)
            total += fr * (qs / q0) ** (2 * l + 1) * m / mp.sqrt(s) * barrier(l, (q0 * r) ** 2) / barrier(l, (qs * r) ** 2)
        return s - m * m + mp.mpc(0, 1) * m * g * total
    return inv


def chew_mandelstam(s, a, b, second=False):
    """CM(s) = ((s-s_th)/pi) integral rho/((s'-s_th)(s'-s)), zero at threshold, Im CM = rho; in y, s' = s_th/(1-y^2)."""
    th, pt = (a + b) ** 2, (a - b) ** 2
    s = mp.mpc(s)
    f = lambda y: 2 / mp.sqrt(th) * mp.sqrt(th - pt * (1 - y * y)) / (th - s + s * y * y)   # powers of 1-y^2 cancelled by hand
    br = mp.sqrt(1 - th / s)
    if not second and (s.imag > 0 or s.real <= th):
        path = [0] + [k * abs(br) for k in (mp.mpf(1) / 4, 1, 4) if k * abs(br) < 0.9] + [1]
    else:
        low = mp.mpc(0, -1) * (mp.mpf(3) / 10 - min(0, br.imag))
        path = [0, br.real / 2 + low, br.real + low, 1 + low, 1]
    return (s - th) / mp.pi * mp.quad(f, path)


def k_matrix(par, s, second=(False, False), chew=True):
    """T = (1 - K R)^-1 K."""
    kk = mp.matrix(2, 2)
    for i in range(2):
        for j in range(2):
            kk[i, j] = par["c"][i][j] + sum(p["g"][i] * p["g"][j] / (p["m"] ** 2 - s) for p in par["poles"])
    r = []
    for ch, sec in zip(par["channels"], second):
        if chew:
            r.append(chew_mandelstam(s, ch[0], ch[1], sec))
        else:
            qq = q(mp.mpc(s), *ch)
            rho = 2 * qq / mp.sqrt(s)
            r.append(mp.mpc(0, 1) * rho if mp.im(rho) == 0 else -abs(rho))
    big = mp.matrix([[r[0], 0], [0, r[1]]])
    m = mp.eye(2) - kk * big
    return m ** -1 * kk, mp.det(m)


def main():
    out = {}
    mz, gz = mp.mpf("91.1875"), mp.mpf("2.4952")
    out["Z, massless channels"] = {"source": "closed form; shifts 34.1 and 0.93 MeV (Review of Particle Physics: 34 MeV), sqrt(s_R) 26 and 1.2 MeV (hep-ph/0001206)",
                                   "mass_gev": float(mz), "width_gev": float(gz), "poles": [dict(pole(lambda s: s - mz ** 2 + mp.mpc(0, 1) * s * gz / mz, mz ** 2 - mp.mpc(0, 1) * mz * gz), sheet=[])]}
    m, g = mp.mpf("0.77526"), mp.mpf("0.1491")
    d = gounaris_sakurai(m, g, PI)
    out["rho, Gounaris-Sakurai"] = {"source": "Gounaris & Sakurai; Review of Particle Physics pole (761-765) - i (71-74) MeV", "mass_gev": 0.77526, "width_gev": 0.1491, "pion_mass_gev": 0.13957039,
                                    "d_at_0": pair(d(mp.mpf("1e-20"), 1)),
                                    "poles": [dict(pole(lambda s: -d(s, -1), mp.mpc("0.5745", "-0.109")), sheet=[-1])],
                                    "delta": [{"w_gev": w, "delta": pair(-1 / d(mp.mpf(w) ** 2, 1 if w < 0.279 else None))} for w in (0.2, 0.2791, 0.3, 0.5, 0.7, 0.77526, 0.9, 1.2, 2.0)]}
    f = lambda s, s1, s2: s - mp.mpf("0.965") ** 2 + mp.mpc(0, 1) * (mp.mpf("0.165") * 2 * q(s, PI, PI, s1) + mp.mpf("4.21") * mp.mpf("0.165") * 2 * q(s, K, K, s2)) / mp.sqrt(s)
    out["f0(980), Flatte"] = {"source": "own numbers from parameters of hep-ex/0411001", "mass_gev": 0.965, "g1_squared_gev2": 0.165, "g2_squared_gev2": 0.69465, "m1_gev": [0.13957039] * 2, "m2_gev": [0.493677] * 2,
                              "poles": [dict(pole(lambda s: f(s, -1, 1), mp.mpc("0.997", "-0.034")), sheet=[-1, 1]), dict(pole(lambda s: f(s, -1, -1), mp.mpc("0.55", "-0.71")), sheet=[-1, -1])],
                              "delta": [{"w_gev": w, "delta": pair(1 / f(mp.mpf(w) ** 2, None, 1 if w < 0.98735 else None))} for w in (0.3, 0.6, 0.9, 0.965, 0.98, 0.987, 0.99, 1.0, 1.1, 1.5)]}
    runs = [("phi, four P waves", "1.0194556", "0.0042432", [("0.501", K, K, 1, 0), ("0.336", K0, K0, 1, 0), ("0.150", "0.7753", "0.138", 1, 0), ("0.013", "0.54786", 0, 1, 0)]),
            ("P wave with barrier R = 5/GeV", "0.77526", "0.1491", [(1, PI, PI, 1, 5)]), ("D wave with barrier R = 3/GeV", "1.2754", "0.1866", [("0.85", PI, PI, 2, 3), ("0.15", K, K, 2, 3)]),
            ("F wave, unequal masses", "1.78", "0.16", [(1, PI, K, 3, 2)]), ("G wave", "2.0", "0.25", [(1, PI, PI, 4, 4)]), ("S wave", "1.5", "0.2", [(1, PI, K, 0, 0)])]
    out["running widths"] = []
    for name, m, g, ch in runs:
        ch = [tuple(mp.mpf(x) if i != 3 else x for i, x in enumerate(c)) for c in ch]
        m, g = mp.mpf(m), mp.mpf(g)
        inv = running(m, g, ch, [-1] * len(ch))
        real = running(m, g, ch, [None] * len(ch))
        def on_axis(w):
            live = [c for c in ch if c[1] + c[2] < w]
            return 1 / running(m, g, live, [None] * len(live))(mp.mpf(w) ** 2) if live else 1 / (mp.mpf(w) ** 2 - m * m)
        ws = [float(m) * x for x in (0.6, 0.95, 0.999, 1.0, 1.001, 1.05, 1.5)]
        out["running widths"].append({"name": name, "mass_gev": float(m), "width_gev": float(g),
                                      "channels": [{"fraction": float(a), "m1_gev": float(b), "m2_gev": float(c), "l": l, "radius_per_gev": float(r)} for a, b, c, l, r in ch],
                                      "poles": [dict(pole(inv, m * m - mp.mpc(0, 1) * m * g), sheet=[-1] * len(ch))], "delta": [{"w_gev": w, "delta": pair(on_axis(w))} for w in ws]})
    out["Chew-Mandelstam"] = [{"m1_gev": float(a), "m2_gev": float(b), "s_gev2": s, "cm": pair(chew_mandelstam(mp.mpf(s), a, b))}
                              for a, b in ((PI, PI), (K, K), (PI, K), (mp.mpf("0.3"), mp.mpf("1.1"))) for s in (-4.0, -0.01, 0.02, 0.3, 0.7, 1.5, 4.0, 50.0)]
    out["K-matrix"] = []
    for name, par in (("two poles", {"poles": [{"m": mp.mpf("0.9"), "g": [mp.mpf("0.5"), mp.mpf("0.3")]}, {"m": mp.mpf("1.4"), "g": [mp.mpf("0.4"), mp.mpf("-0.6")]}],
                                     "c": [[mp.mpf("0.1"), mp.mpf("-0.05")], [mp.mpf("-0.05"), mp.mpf("0.2")]], "channels": [(PI, PI), (K, K)]}),
                      ("one pole, unequal masses", {"poles": [{"m": mp.mpf("1.3"), "g": [mp.mpf("0.3"), mp.mpf("0.5")]}], "c": [[0, 0], [0, 0]], "channels": [(PI, K), (K, K0)]})):
        pts = []
        for w in (0.4, 0.64, 0.8, 0.95, 1.0, 1.2, 1.5, 2.0):
            if w <= float(sum(par["channels"][0])):
                continue
            row = {"w_gev": w}
            for chew in (True, False):
                t, _ = k_matrix(par, mp.mpf(w) ** 2, chew=chew)
                row["t_chew_mandelstam" if chew else "t_i_rho"] = [[pair(t[i, j]) for j in range(2)] for i in range(2)]
            pts.append(row)
        poles = []
        for p in par["poles"]:
            open_ = [p["m"] > sum(ch) for ch in par["channels"]]
            g0 = sum(gg ** 2 for gg in p["g"])
            try:
                mp.mp.dps = 20
                s = mp.findroot(lambda s: k_matrix(par, s, open_)[1] * (p["m"] ** 2 - s), (p["m"] ** 2 * mp.mpc("0.97", "-0.15"), p["m"] ** 2 * mp.mpc("0.98", "-0.16"), p["m"] ** 2 * mp.mpc("0.96", "-0.17")), solver="muller", tol=1e-16, maxsteps=100)
                root = mp.sqrt(s)
                poles.append({"sqrt_s_r_gev": pair(root), "sheet": [-1 if o else 1 for o in open_]})
            except (ValueError, ZeroDivisionError):
                pass
            finally:
                mp.mp.dps = 30
        out["K-matrix"].append({"name": name, "poles_of_k": [{"mass_gev": float(p["m"]), "g_gev": [float(x) for x in p["g"]]} for p in par["poles"]], "c": [[float(x) for x in r] for r in par["c"]],
                                "channels_gev": [[float(x) for x in ch] for ch in par["channels"]], "points": pts, "poles": poles})
    json.dump({"about": "Propagators and poles, mpmath, 30 digits; energies in GeV; complex numbers as [re, im]; sheet = signs of Im q by channel.", "script": "poles.py", **out}, open(os.path.join(HERE, "poles.json"), "w"), indent=1)
    for k, v in out.items():
        for e in (v if isinstance(v, list) else [v]):
            for p in e.get("poles", []):
                print(k, e.get("name", ""), p["sheet"], [1e3 * x for x in p["sqrt_s_r_gev"]])


if __name__ == "__main__":
    main()
