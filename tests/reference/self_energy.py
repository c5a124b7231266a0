"""Self-energies of a scalar mediator from dispersion integrals in mpmath: only the imaginary part (the tree width by
unitarity) goes in. Writes self_energy.json.

Method: Sigma~(s) = (s^n/pi) integral ds' Im Sigma(s')/(s'^n (s'-s)), n = 2 for fermions, 1 for scalars, in the variable y with
s' = s_th/(1-y^2). Above threshold the path of y is pulled below the pole at y = sqrt(1-s_th/s) (s -> s+i eps); with a path that
stays below the pole when s moves into the lower half-plane the same integral is the second sheet. Then the on-shell scheme
Sigma_OS = Sigma - Re Sigma(M^2) - (s-M^2) Re Sigma'(M^2).
"""
import json
import os
import mpmath as mp

mp.mp.dps = 25
HERE = os.path.dirname(os.path.abspath(__file__))


class Loop:
    """kind: fermion_scalar, fermion_pseudoscalar (coupling g, mass m1) or scalar (coupling h in GeV, masses m1, m2; identical: half)."""

    def __init__(self, kind, coupling, m1, m2=None, identical=False):
        self.kind, self.g, self.m1 = kind, mp.mpf(coupling), mp.mpf(m1)
        self.m2 = mp.mpf(m1 if m2 is None else m2)
        self.factor = mp.mpf(1) / 2 if identical else mp.mpf(1)
        self.sth = (self.m1 + self.m2) ** 2
        self.spt = (self.m1 - self.m2) ** 2
        self.at = {}
        self.n = 1 if kind == "scalar" else 2

    def integral(self, s, power, deep=False):
        """(1/pi) integral ds' Im Sigma(s')/(s'^n (s'-s)^power); the powers of 1-y^2 are cancelled by hand.
        Im Sigma: scalar -h^2 (2q/W)/(16 pi), fermions -g^2 s' beta^3/(8 pi) or beta, beta = y."""
        s = mp.mpc(s)
        if self.kind == "scalar":
            pre = -self.factor * self.g ** 2 / (16 * mp.pi) * 2 / mp.sqrt(self.sth)
            top = lambda y: y * y * mp.sqrt(self.sth - self.spt * (1 - y * y))
        else:
            pre = -self.factor * self.g ** 2 / (8 * mp.pi) * 2
            p = 4 if self.kind == "fermion_scalar" else 2
            top = lambda y: y ** p
        f = lambda y: top(y) * (1 - y * y) ** (power - 1) / (self.sth - s + s * y * y) ** power
        b = mp.sqrt(1 - self.sth / s) if s else mp.mpc(0, 10)           # Re b >= 0
        if not deep and (s.imag > 0 or s.real <= self.sth):
            near = [abs(b) * k for k in (0.25, 1, 4, 16)]
            path = [mp.mpf(0)] + [x for x in near if x < 0.9] + [mp.mpf(1)]
        else:
            low = mp.mpc(0, -1) * (0.3 - min(0, b.imag))                # below the pole
            path = [mp.mpf(0)]
            if b.imag == 0:
                path += [b.real * mp.mpc(1, -1) * k for k in (0.25, 1) if b.real < 0.3] + [0.5 + low, 1 + low]
                gap = 1 - b.real
                path += [mp.mpc(1, -gap * k) for k in (1e6, 1e4, 100, 16, 1) if gap * k < 0.3]
            else:
                path += [b.real / 2 + low, b.real + low, 1 + low]
            path += [mp.mpf(1)]
        return pre * mp.quad(f, path) / mp.pi

    def raw(self, s, deep=False):
        return mp.mpc(s) ** self.n * self.integral(s, 1, deep)

    def raw_derivative(self, s):
        s = mp.mpc(s)
        return self.n * s ** (self.n - 1) * self.integral(s, 1) + s ** self.n * self.integral(s, 2)

    def second_sheet(self, s):
        """Continuation from the upper side through the cut, Im s < 0."""
        return self.raw(s, deep=True)


def on_shell(loops, mass, s, second=False):
    m2 = mp.mpf(mass) ** 2
    total = mp.mpc(0)
    for l in loops:
        if mass not in l.at:
            l.at[mass] = (l.raw(m2).real, l.raw_derivative(m2).real)
        v = l.second_sheet(s) if second else l.raw(s)
        total += v - l.at[mass][0] - (s - m2) * l.at[mass][1]
    return total


def c(z):
    return [float(mp.re(z)), float(mp.im(z))]


def b0_table():
    """J(s) = B0(s;m,m)-B0(0) at m = 1 from its own dispersion relation (Im = pi beta, one subtraction)."""
    out = []
    l = Loop("scalar", 1, 1)
    for s in (-1e6, -50, -1, -1e-3, -1e-8, -1e-12, 1e-12, 1e-8, 1e-4, 0.1, 2, 3.9, 3.999999, 4, 4.000001, 4.1, 5, 10, 1e3, 1e8):
        out.append({"s": s, "j": c(-16 * mp.pi ** 2 * l.raw(mp.mpf(s)))})
    return out


def unequal_table():
    out = []
    for m1, m2 in ((1, 1), (0.3, 1.1), (0.13957039, 0.493677), (1e-3, 2.0)):
        l = Loop("scalar", 1, m1, m2)
        th = float(l.sth)
        for s in (-30.0, -1e-6, 1e-6, 0.3 * th, float(l.spt) or 0.2 * th, 0.99 * th, th, 1.01 * th, 3 * th, 1e4 * th):
            out.append({"m1_gev": m1, "m2_gev": m2, "s_gev2": s, "b0_minus_b0_at_0": c(-16 * mp.pi ** 2 * l.raw(mp.mpf(s)))})
    return out


def main():
    cases = []
    sets = [("one fermion, scalar", 3.0, [("fermion_scalar", 1.1, 0.9, None, False)]),
            ("one fermion, pseudoscalar", 3.0, [("fermion_pseudoscalar", 0.8, 0.9, None, False)]),
            ("two fermions, scalar", 2.98, [("fermion_scalar", 0.9, 0.938272, None, False), ("fermion_scalar", 0.5, 0.105658, None, False)]),
            ("stable scalar, fermion", 1.2, [("fermion_scalar", 1.0, 0.9, None, False)]),
            ("equal scalars, identical", 1.0, [("scalar", 1.5, 0.3, None, True)]),
            ("unequal scalars", 1.0, [("scalar", 1.5, 0.13957039, 0.493677, False)]),
            ("scalar below threshold of the loop", 0.5, [("scalar", 1.0, 0.3, 0.45, False)])]
    for name, mass, spec in sets:
        loops = [Loop(*x) for x in spec]
        m2 = mass * mass
        th = float(min(l.sth for l in loops))
        ss = [-100.0, -1.0, -1e-7, 1e-7, 0.4 * th, 0.999 * th, th, 1.001 * th, 0.9 * m2, m2 * (1 + 1e-6), 1.1 * m2, 4 * m2, 100 * m2]
        pts = [{"s_gev2": s, "sigma_os_gev2": c(on_shell(loops, mass, mp.mpf(s)))} for s in ss]
        at = on_shell(loops, mass, mp.mpf(m2))
        poles = []
        open_ = [l for l in loops if l.sth < m2]
        if len(open_) == len(loops):
            g = lambda s: s - m2 - on_shell(loops, mass, s, second=True)
            guess = mp.mpc(m2, at.imag)
            s_r = mp.findroot(g, (guess, guess * (1 + mp.mpf(1) / 100), guess * (1 - mp.mpc(0, 1) / 100)), solver="muller", tol=1e-20)
            root = mp.sqrt(s_r)
            res = 1 / mp.diff(g, s_r)
            poles = [{"s_r_gev2": c(s_r), "m_pole_gev": float(root.real), "gamma_pole_gev": float(-2 * root.imag), "residue": c(res)}]
        cases.append({"name": name, "mass_gev": mass, "loops": [{"kind": k, "coupling": g, "m1_gev": a, "m2_gev": a if b is None else b, "identical": i} for k, g, a, b, i in spec],
                      "width_tree_gev": float(-at.imag / mass), "points": pts, "poles_second_sheet": poles})
    j = b0_table()
    json.dump({"about": "J, B0(s)-B0(0) and on-shell self-energies from dispersion integrals (mpmath, 25 digits); energies in GeV, couplings as in L = -g phi psibar psi, "
                        "-i g phi psibar gamma5 psi, -h Phi chi1 chi2 (identical: -(h/2) Phi chi^2). On the real axis: s + i eps.",
               "script": "self_energy.py", "j_at_m_1": j, "b0_difference": unequal_table(), "dressed": cases}, open(os.path.join(HERE, "self_energy.json"), "w"), indent=1)
    print(len(j), "J values;", len(cases), "dressed mediators")


if __name__ == "__main__":
    main()
