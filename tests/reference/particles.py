"""Writes the particle table of the scan sheet from the PDG 2026 data.

Source: Review of Particle Physics, edition 2026 (data CC BY 4.0), as packaged in `particle` 1.1.0 (BSD-3).
Masses and widths are copied, never computed. Run from the top of the repository:

    python tests/reference/particles.py > crates/sheet/src/particles/table.rs
"""

from decimal import Decimal

from particle import Particle

# (name in a sheet, Monte Carlo number of the PDG); antiparticles by sign.
WANTED = [
    ("e-", 11), ("e+", -11), ("mu-", 13), ("mu+", -13), ("tau-", 15), ("tau+", -15),
    ("photon", 22), ("p", 2212), ("pbar", -2212), ("n", 2112), ("nbar", -2112),
    ("pi+", 211), ("pi-", -211), ("pi0", 111), ("K+", 321), ("K-", -321), ("K0", 311), ("K_S", 310), ("K_L", 130),
    ("eta", 221), ("eta'(958)", 331), ("rho(770)0", 113), ("omega(782)", 223), ("phi(1020)", 333),
    ("f_0(980)", 9010221), ("f_2(1270)", 225), ("K*(892)0", 313), ("K*(892)+", 323),
    ("Lambda", 3122), ("Lambdabar", -3122), ("Sigma+", 3222), ("Sigma0", 3212), ("Sigma-", 3112),
    ("Xi-", 3312), ("Xi0", 3322), ("Omega-", 3334), ("Delta(1232)++", 2224),
    ("D0", 421), ("D0bar", -421), ("D+", 411), ("D-", -411), ("D*(2010)+", 413), ("D*(2007)0", 423),
    ("D_s+", 431), ("D_s-", -431), ("D_s*+", 433), ("Lambda_c+", 4122),
    ("eta_c(1S)", 441), ("J/psi(1S)", 443), ("chi_c0(1P)", 10441), ("chi_c1(1P)", 20443), ("chi_c2(1P)", 445),
    ("psi(2S)", 100443), ("psi(3770)", 30443),
    ("B0", 511), ("B0bar", -511), ("B+", 521), ("B-", -521), ("B_s0", 531), ("B*", 513),
    ("Upsilon(1S)", 553), ("Upsilon(2S)", 100553), ("Upsilon(3S)", 200553), ("Upsilon(4S)", 300553),
    ("W+", 24), ("Z", 23), ("H", 25), ("t", 6),
]


def literal(mev):
    """A mass or width in GeV as a Rust literal with the digits of the table."""
    gev = Decimal(repr(mev)).scaleb(-3).normalize()
    text = f"{gev:e}" if gev != 0 and gev.adjusted() < -3 else f"{gev:f}"
    if "." not in text and "e" not in text:
        text += ".0"
    whole, _, rest = text.partition(".")
    digits, e, exponent = rest.partition("e")
    groups = [digits[i:i + 3] for i in range(0, len(digits), 3)] if len(digits) > 4 else [digits]
    return whole + ("." + "_".join(groups) if rest else "") + (e + exponent)


def main():
    print("//! Written by `tests/reference/particles.py`; do not edit.")
    print("//!")
    print("//! Source: Review of Particle Physics, edition 2026 (Particle Data Group), licensed CC BY 4.0;")
    print("//! masses, widths and spins copied unchanged (MeV to GeV).")
    print()
    print("use super::Particle;")
    print()
    print("/// Name, PDG number, mass, width (0: stable or negligible), twice the spin.")
    print("pub(super) const TABLE: &[Particle] = &[")
    for name, number in WANTED:
        p = Particle.from_pdgid(number)
        twice_spin = int(2 * p.J) if p.J is not None else None
        assert p.mass is not None and twice_spin is not None, name
        # A width below a nanoelectronvolt per MeV of mass never shows in a scan; the photon's and proton's are limits.
        width = p.width or 0.0
        print("    Particle {")
        print(f'        name: "{name}",')
        print(f"        pdg_number: {number},")
        print(f"        mass_gev: {literal(p.mass)},")
        print(f"        width_gev: {literal(width)},")
        print(f"        twice_spin: {twice_spin},")
        print("    },")
    print("];")


if __name__ == "__main__":
    main()
