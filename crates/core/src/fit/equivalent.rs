//! Equivalent solutions: other parameters with the same curve.
//!
//! A coherent sum of n terms with constant widths and common vertices is h(s) N(s)/prod(s - p_j).
//! |N|^2 on the real axis does not change when any subset of its zeros is conjugated, and
//! expanding again gives other residues: up to 2^(n-1) parameter sets with one curve
//! (arXiv:1505.01509, arXiv:1108.2760). They stay equal after radiation and spread.

use crate::amplitude::hypothesis::{
    CoherentBackground, Form, Hypothesis, PartialWave, Strength, Vertex,
};
use crate::beam::Beams;
use crate::error::{Answer, Refusal};
use crate::math::{abs, arg, polar};
use crate::numerics::polynomial::{evaluate, from_roots, roots};
use crate::propagator::running::barrier_polynomial;
use crate::units::HBARC2_GEV2_NB;
use num_complex::Complex64;

/// A sum of simple poles over a constant: b + sum_r c_r/(s - p_r), in any one unit of s.
#[derive(Debug, Clone, PartialEq)]
pub struct PoleSum {
    /// b.
    pub constant: Complex64,
    /// (p_r, c_r).
    pub terms: Vec<(Complex64, Complex64)>,
}

/// Zeros of a numerator that are closer to the real axis than this (relative to the poles'
/// distance from it) give a solution that cannot be told from its partner.
const REAL: f64 = 1e-9;

impl PoleSum {
    /// Value at real s.
    #[must_use]
    pub fn at(&self, s: f64) -> Complex64 {
        self.terms
            .iter()
            .fold(self.constant, |sum, (p, c)| sum + c / (s - p))
    }

    /// Every sum with the same modulus on the real axis and the same poles; the given one first.
    ///
    /// # Errors
    /// More than 12 terms; two poles at one place.
    pub fn equivalents(&self) -> Answer<Vec<Self>> {
        let n = self.terms.len();
        if n > 12 {
            return Err(Refusal::new(
                "model.resonances",
                n,
                "at most 12 terms",
                "equivalent solutions are worked out for up to 12 coherent terms",
            ));
        }
        // Centred and scaled, so that narrow poles at large s keep their digits.
        let count = n.max(1) as f64;
        let centre = self.terms.iter().map(|t| t.0.re).sum::<f64>() / count;
        let scale = self
            .terms
            .iter()
            .map(|t| (t.0.re - centre).abs().max(t.0.im.abs()))
            .fold(0.0, f64::max)
            .max(1e-300);
        let poles: Vec<Complex64> = self.terms.iter().map(|t| (t.0 - centre) / scale).collect();
        let residues: Vec<Complex64> = self.terms.iter().map(|t| t.1 / scale).collect();
        for (i, a) in poles.iter().enumerate() {
            if poles[..i].iter().any(|b| abs(a - b) < 1e-9) {
                return Err(Refusal::new(
                    "model.resonances",
                    "",
                    "resonances with different poles",
                    "two resonances have the same pole: the sum cannot be taken apart",
                ));
            }
        }
        let others = |r: usize| -> Vec<Complex64> {
            poles
                .iter()
                .enumerate()
                .filter(|(j, _)| *j != r)
                .map(|(_, p)| *p)
                .collect()
        };
        let mut numerator = from_roots(self.constant, &poles);
        for (r, c) in residues.iter().enumerate() {
            for (slot, v) in numerator.iter_mut().zip(from_roots(*c, &others(r))) {
                *slot += v;
            }
        }
        let zeros = roots(&numerator);
        let lead = numerator
            .get(zeros.len())
            .copied()
            .unwrap_or(Complex64::new(0.0, 0.0));
        let turned: Vec<usize> = (0..zeros.len())
            .filter(|&k| zeros[k].im.abs() > REAL)
            .collect();
        let mut out = Vec::with_capacity(1 << turned.len());
        for subset in 0..(1usize << turned.len()) {
            if subset == 0 {
                out.push(self.clone());
                continue;
            }
            let mut changed = zeros.clone();
            for (bit, &k) in turned.iter().enumerate() {
                if subset >> bit & 1 == 1 {
                    changed[k] = changed[k].conj();
                }
            }
            let polynomial = from_roots(lead, &changed);
            out.push(Self {
                constant: self.constant,
                terms: self
                    .terms
                    .iter()
                    .enumerate()
                    .map(|(r, t)| {
                        let below = from_roots(Complex64::new(1.0, 0.0), &others(r));
                        let c = evaluate(&polynomial, poles[r]) / evaluate(&below, poles[r]);
                        (t.0, c * scale)
                    })
                    .collect(),
            });
        }
        Ok(out)
    }
}

/// One of several parameter sets with the same curve.
#[derive(Debug, Clone, PartialEq)]
pub struct EquivalentSolution {
    /// The hypothesis.
    pub hypothesis: Hypothesis,
    /// Largest relative difference of |T|^2 from the given one within 30 widths of the poles: rounding,
    /// and what the one-photon continuum's beam mass leaves.
    pub difference: f64,
}

/// Whether a hypothesis has exactly equivalent solutions, and why not where it has none.
///
/// # Errors
/// The refusal says which form stands in the way.
pub fn has_exact_equivalents(wave: &PartialWave) -> Answer<()> {
    let refuse = |what: &str, message: &str| {
        Err(Refusal::new(
            "model",
            what,
            "constant widths with common vertices, and no background or a constant one with a free phase",
            message,
        ))
    };
    let Some(first) = wave.resonances.first() else {
        return refuse("no resonance", "there is no resonance, hence one solution");
    };
    for r in &wave.resonances {
        if r.form != Form::ConstantWidth {
            return refuse(
                &r.name,
                "equivalent solutions are exact for constant widths only: for other forms several starts look for near ones",
            );
        }
        if gamma_product_gev2(&r.strength, r.width_gev).is_none() {
            return refuse(
                &r.name,
                "a strength that comes from the form's own couplings cannot be turned",
            );
        }
        if r.entrance != first.entrance || r.exit != first.exit {
            return refuse(
                &r.name,
                "the resonances have different vertices: their solutions are nearly equivalent at best",
            );
        }
    }
    let constant = first.entrance == Vertex::Constant && first.exit == Vertex::Constant;
    match &wave.coherent {
        None => Ok(()),
        Some(CoherentBackground::Polynomial { coefficients, .. })
            if coefficients.iter().skip(1).all(|c| *c == 0.0) && constant =>
        {
            Ok(())
        }
        Some(CoherentBackground::OnePhoton { .. }) if constant => Ok(()),
        Some(_) => refuse(
            "coherent background",
            "this background does not share the resonances' form, or has no phase of its own: its solutions are nearly equivalent at best",
        ),
    }
}

/// All parameter sets with the curve of `hypothesis`, itself first. Where strengths are given as two
/// numbers, the exit one takes the change.
///
/// # Errors
/// Forms without exact equivalents (see [`has_exact_equivalents`]).
pub fn equivalent_solutions(
    hypothesis: &Hypothesis,
    beams: &Beams,
) -> Answer<Vec<EquivalentSolution>> {
    let Hypothesis::PartialWave(wave) = hypothesis else {
        return Err(Refusal::new(
            "model",
            "",
            "a sum of resonances",
            "only sums of constant-width resonances have exactly equivalent solutions",
        ));
    };
    has_exact_equivalents(wave)?;
    let sum = as_poles(wave, beams);
    let wanted = sum.equivalents()?;
    Ok(wanted
        .iter()
        .map(|other| EquivalentSolution {
            hypothesis: Hypothesis::PartialWave(with_poles(wave, &sum, other)),
            difference: difference(&sum, other),
        })
        .collect())
}

/// The wave as a sum of poles in s; common vertex factors are left out.
fn as_poles(wave: &PartialWave, beams: &Beams) -> PoleSum {
    let constant = match &wave.coherent {
        Some(CoherentBackground::Polynomial {
            coefficients,
            phase_rad,
            ..
        }) => polar(coefficients.first().copied().unwrap_or(0.0), *phase_rad),
        Some(CoherentBackground::OnePhoton {
            c_nb,
            w0_gev,
            phase_rad,
        }) => {
            // A = sqrt(c W0^2/W^2 k^2/(flux)) with k = W/2 up to the beams' mass.
            let spins = f64::from(beams.first.spin_states) * f64::from(beams.second.spin_states);
            let flux = (f64::from(wave.twice_j) + 1.0) / spins
                * 4.0
                * core::f64::consts::PI
                * HBARC2_GEV2_NB;
            let c = c_nb * wave.continuum_factor;
            polar((c * w0_gev * w0_gev / (4.0 * flux)).sqrt(), *phase_rad)
        }
        _ => Complex64::new(0.0, 0.0),
    };
    PoleSum {
        constant,
        terms: wave
            .resonances
            .iter()
            .map(|r| {
                let m = r.mass_gev;
                let product = gamma_product_gev2(&r.strength, r.width_gev)
                    .unwrap_or(0.0)
                    .max(0.0);
                // A common vertex factor may carry powers of M (M^2/s, s/M^2, q0): they belong to each residue.
                let own = vertex_scale(&r.entrance, m) * vertex_scale(&r.exit, m);
                (
                    Complex64::new(m * m, -m * r.width_gev),
                    -polar(m * product.sqrt() * own.sqrt(), r.phase_rad),
                )
            })
            .collect(),
    }
}

/// What a vertex's factor M Gamma_c(s) carries of M besides M Gamma_c and a common function of s.
fn vertex_scale(vertex: &Vertex, m: f64) -> f64 {
    match vertex {
        Vertex::Constant => 1.0,
        Vertex::OnePhoton => m * m,
        Vertex::Massless => 1.0 / (m * m),
        Vertex::Running(two) => {
            // (q/q0)^(2l+1) (M/W) p(z0)/p(z): the part at M.
            let q = crate::kinematics::break_up_momentum_gev(m, two.m1_gev, two.m2_gev);
            let z = (q * two.radius_per_gev) * (q * two.radius_per_gev);
            let p = barrier_polynomial(two.l, z);
            m * p / crate::math::powi(q, 2 * u32::from(two.l) + 1)
        }
        Vertex::Flatte { .. } | Vertex::Dressed { .. } => 1.0,
    }
}

/// Gamma_in Gamma_f, GeV^2; `None` where a vertex brings its own strength.
#[must_use]
pub fn gamma_product_gev2(strength: &Strength, width_gev: f64) -> Option<f64> {
    match *strength {
        Strength::GammaInBf { gev } => Some(gev * width_gev),
        Strength::BinBf { product } => Some(product * width_gev * width_gev),
        Strength::Branchings { b_in, b_f } => Some(b_in * b_f * width_gev * width_gev),
        Strength::PartialWidths {
            gamma_in_gev,
            gamma_f_gev,
        } => Some(gamma_in_gev * gamma_f_gev),
        Strength::OneWidth { .. } | Strength::FromForm => None,
    }
}

fn with_poles(wave: &PartialWave, from: &PoleSum, to: &PoleSum) -> PartialWave {
    let mut out = wave.clone();
    // The first resonance has phase 0: turn everything by its new phase.
    let turn = to.terms.first().map_or(0.0, |t| arg(-t.1));
    let wrapped = |phase: f64| arg(polar(1.0, phase));
    for (r, (old, new)) in out
        .resonances
        .iter_mut()
        .zip(from.terms.iter().zip(&to.terms))
    {
        let factor = new.1.norm_sqr() / old.1.norm_sqr();
        match &mut r.strength {
            Strength::GammaInBf { gev } => *gev *= factor,
            Strength::BinBf { product } => *product *= factor,
            Strength::Branchings { b_f, .. } => *b_f *= factor,
            Strength::PartialWidths { gamma_f_gev, .. } => *gamma_f_gev *= factor,
            // Refused above: these strengths belong to other forms.
            Strength::OneWidth { .. } | Strength::FromForm => {}
        }
        r.phase_rad = wrapped(arg(-new.1) - turn);
    }
    if let Some(first) = out.resonances.first_mut() {
        first.phase_rad = 0.0;
    }
    if let Some(
        CoherentBackground::Polynomial { phase_rad, .. }
        | CoherentBackground::OnePhoton { phase_rad, .. },
    ) = &mut out.coherent
    {
        *phase_rad = wrapped(*phase_rad - turn);
    }
    out
}

fn difference(a: &PoleSum, b: &PoleSum) -> f64 {
    let mut worst: f64 = 0.0;
    for (p, _) in &a.terms {
        for i in -60..=60 {
            let s = p.re + 0.5 * f64::from(i) * p.im.abs();
            let (x, y) = (a.at(s).norm_sqr(), b.at(s).norm_sqr());
            if x > 0.0 {
                worst = worst.max((y / x - 1.0).abs());
            }
        }
    }
    worst
}

/// What would separate exactly equivalent solutions, since no energy and no luminosity does.
#[must_use]
pub fn what_separates() -> &'static str {
    "These solutions have one curve: no energy and no luminosity separates them. Angular bins, a branching fraction measured elsewhere, the unitarity bound, or a channel of known phase would."
}

#[cfg(test)]
mod tests {
    use super::*;

    /// arXiv:1108.2760 (sign corrected): e = g + z f with half widths, M_g = 3.0, G_g = 0.4, M_f = 2.1, G_f = 0.1,
    /// z = 1 - i: |g + z f|^2 = |g + z' f|^2/d with d = 0.529412, z' = -0.647059 + 1.588235 i.
    #[test]
    fn published_two_resonances() {
        let pole = |m: f64, half: f64| Complex64::new(m, -half);
        let sum = PoleSum {
            constant: Complex64::new(0.0, 0.0),
            terms: vec![
                (pole(3.0, 0.4), Complex64::new(0.4, 0.0)),
                (
                    pole(2.1, 0.1),
                    Complex64::new(0.1, 0.0) * Complex64::new(1.0, -1.0),
                ),
            ],
        };
        let all = sum.equivalents().unwrap();
        assert_eq!(all.len(), 2);
        let other = &all[1];
        // Divide by the coefficient of g: z' = (c_f/0.1)/(c_g/0.4), d = |c_g/0.4|^-2.
        let g = other.terms[0].1 / 0.4;
        let z = other.terms[1].1 / 0.1 / g;
        let d = 1.0 / g.norm_sqr();
        let found = (d, z.re, z.im);
        let close = |a: f64, b: f64| (a - b).abs() < 6e-7;
        assert!(
            close(d, 0.529_412) && close(z.re, -0.647_059) && close(z.im, 1.588_235),
            "{found:?}"
        );
    }

    /// omega pi0 (arXiv:0911.4791): 1 - Z M Gamma/D with D = M^2 - s - i M Gamma: Z = 0.106 - 0.103 i and 0.106 - 1.897 i.
    #[test]
    fn published_resonance_over_constant() {
        let (m, gamma) = (1.0195, 4.26e-3);
        let z = Complex64::new(0.106, -0.103);
        let sum = PoleSum {
            constant: Complex64::new(1.0, 0.0),
            // -Z M Gamma/(M^2 - s - i M Gamma) = Z M Gamma/(s - (M^2 - i M Gamma)).
            terms: vec![(Complex64::new(m * m, -m * gamma), z * m * gamma)],
        };
        let all = sum.equivalents().unwrap();
        assert_eq!(all.len(), 2);
        let other = all[1].terms[0].1 / (m * gamma);
        assert!(
            (other.re - 0.106).abs() < 6e-4 && (other.im + 1.897).abs() < 6e-4,
            "{other}"
        );
    }

    /// Three resonances: four solutions with one modulus; conjugating back returns the first.
    #[test]
    fn three_resonances_have_four() {
        let sum = PoleSum {
            constant: Complex64::new(0.0, 0.0),
            terms: [
                (10.0, 0.3, 1.0, 0.0),
                (10.9, 0.5, 0.7, 2.0),
                (12.0, 0.2, 0.4, -1.0),
            ]
            .map(|(m, w, r, phase)| (Complex64::new(m, -w), polar(r, phase)))
            .to_vec(),
        };
        let all = sum.equivalents().unwrap();
        assert_eq!(all.len(), 4);
        for (i, a) in all.iter().enumerate() {
            assert!(difference(&sum, a) < 1e-10);
            for b in &all[..i] {
                let apart: f64 = a
                    .terms
                    .iter()
                    .zip(&b.terms)
                    .map(|(x, y)| abs(x.1 - y.1))
                    .sum();
                assert!(apart > 1e-3, "two of the solutions are the same");
            }
            // Every solution has the same four.
            let again = a.equivalents().unwrap();
            assert!(again.iter().any(|c| {
                // Up to the phase that is common to all terms.
                let turn = c.terms[0].1 / sum.terms[0].1;
                c.terms
                    .iter()
                    .zip(&sum.terms)
                    .all(|(x, y)| abs(x.1 - y.1 * turn) < 1e-9)
                    && (abs(turn) - 1.0).abs() < 1e-9
            }));
        }
    }
}
