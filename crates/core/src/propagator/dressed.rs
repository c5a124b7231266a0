//! The dressed scalar or pseudoscalar: 1/(s - M^2 - Sigma_OS(s)) with any number of loops,
//! Sigma_OS = Sigma(s) - Re Sigma(M^2) - (s - M^2) Re Sigma'(M^2) (on-shell scheme).

use super::loops::PairLoop;
use crate::amplitude::hypothesis::Loop;
use crate::error::{Answer, Refusal};
use core::f64::consts::PI;
use num_complex::Complex64;

/// One loop with its coupling.
#[derive(Debug, Clone, PartialEq)]
pub struct PreparedLoop {
    pair: PairLoop,
    kind: Kind,
    /// g^2 N/(8 pi^2) (fermions) or h^2/(16 pi^2), halved for identical scalars.
    strength: f64,
    threshold_gev: f64,
    name: String,
}

#[derive(Debug, Clone, Copy, PartialEq)]
enum Kind {
    /// (4m^2 - s) J.
    FermionScalar,
    /// -s J.
    FermionPseudoscalar,
    /// -J (GeV^2 coupling).
    ScalarPair,
}

impl PreparedLoop {
    /// Prepares a loop of a mediator of mass M and the given parity.
    ///
    /// # Errors
    /// Masses or couplings that are not numbers, negative masses.
    pub fn new(of: &Loop, pseudoscalar: bool, mass_gev: f64, path: &str) -> Answer<Self> {
        let (coupling, m1, m2) = match of {
            Loop::Fermion { g, m_gev, .. } => (*g, *m_gev, *m_gev),
            Loop::Scalar {
                h_gev,
                m1_gev,
                m2_gev,
                ..
            } => (*h_gev, *m1_gev, *m2_gev),
        };
        if !(coupling.is_finite()) {
            return Err(Refusal::new(
                format!("{path}.coupling"),
                coupling,
                "a number",
                "a coupling has to be a number",
            ));
        }
        let pair = PairLoop::new(m1, m2, mass_gev, path)?;
        let (kind, strength, name) = match of {
            Loop::Fermion { name, colours, .. } => (
                if pseudoscalar {
                    Kind::FermionPseudoscalar
                } else {
                    Kind::FermionScalar
                },
                coupling * coupling * f64::from(*colours) / (8.0 * PI * PI),
                name,
            ),
            Loop::Scalar {
                name, identical, ..
            } => {
                let half = if *identical { 0.5 } else { 1.0 };
                (
                    Kind::ScalarPair,
                    half * coupling * coupling / (16.0 * PI * PI),
                    name,
                )
            }
        };
        let loop_of = Self {
            pair,
            kind,
            strength,
            threshold_gev: m1 + m2,
            name: name.clone(),
        };
        // Re Sigma' diverges at threshold as beta^(2l-1): finite for l = 1 only.
        let near = (mass_gev - loop_of.threshold_gev).abs() <= 1e-12 * mass_gev;
        if near && kind != Kind::FermionScalar && coupling != 0.0 {
            return Err(Refusal::new(
                path,
                format!("{mass_gev} GeV"),
                "a mass away from the loop's threshold",
                "the mass lies exactly at the threshold of an s-wave loop, where the slope of the self-energy is infinite and the on-shell scheme does not exist; move the mass or the threshold",
            ));
        }
        Ok(loop_of)
    }

    /// Threshold in W, GeV.
    #[must_use]
    pub fn threshold_gev(&self) -> f64 {
        self.threshold_gev
    }

    /// Name as declared.
    #[must_use]
    pub fn name(&self) -> &str {
        &self.name
    }

    fn times(&self, s: Complex64, j: Complex64) -> Complex64 {
        match self.kind {
            Kind::FermionScalar => {
                (Complex64::new(self.pair.threshold2_gev2(), 0.0) - s) * j * self.strength
            }
            Kind::FermionPseudoscalar => -s * j * self.strength,
            Kind::ScalarPair => -j * self.strength,
        }
    }

    /// Sigma(s) without subtraction; `first`: the first sheet (else the second).
    #[must_use]
    pub fn sigma(&self, s: Complex64, first: bool) -> Complex64 {
        self.times(
            s,
            if first {
                self.pair.j(s)
            } else {
                self.pair.j_second(s)
            },
        )
    }

    /// -Im Sigma(s) on the real axis: M Gamma of this channel, GeV^2; 0 below threshold.
    #[must_use]
    pub fn m_gamma_gev2(&self, s_gev2: f64) -> f64 {
        if s_gev2 <= self.pair.threshold2_gev2() {
            return 0.0;
        }
        let s = Complex64::new(s_gev2, 0.0);
        let im_j = PI * self.pair.rho(s).re;
        -self.times(s, Complex64::new(im_j, 0.0)).re
    }

    fn derivative(&self, s: Complex64) -> Complex64 {
        let slope = self.times(s, self.pair.derivative(s));
        match self.kind {
            Kind::ScalarPair => slope,
            Kind::FermionScalar | Kind::FermionPseudoscalar => {
                slope - self.pair.j(s) * self.strength
            }
        }
    }
}

/// All loops of a mediator with the on-shell subtraction.
#[derive(Debug, Clone, PartialEq)]
pub struct SelfEnergy {
    loops: Vec<PreparedLoop>,
    mass2: f64,
    at_mass: f64,
    slope: f64,
}

impl SelfEnergy {
    /// Prepares the loops and their subtraction at M.
    ///
    /// # Errors
    /// As [`PreparedLoop::new`].
    pub fn new(loops: &[Loop], pseudoscalar: bool, mass_gev: f64, path: &str) -> Answer<Self> {
        let loops = loops
            .iter()
            .enumerate()
            .map(|(i, of)| {
                PreparedLoop::new(of, pseudoscalar, mass_gev, &format!("{path}.loops[{i}]"))
            })
            .collect::<Answer<Vec<_>>>()?;
        let mass2 = mass_gev * mass_gev;
        let s = Complex64::new(mass2, 0.0);
        let (mut at_mass, mut slope) = (0.0, 0.0);
        for of in &loops {
            at_mass += of.sigma(s, true).re;
            let at_threshold = (mass_gev - of.threshold_gev).abs() <= 1e-12 * mass_gev;
            slope += if of.strength == 0.0 {
                0.0
            } else if at_threshold {
                // (4m^2 - s) J' -> 0 there.
                -of.pair.j(s).re * of.strength
            } else {
                of.derivative(s).re
            };
        }
        Ok(Self {
            loops,
            mass2,
            at_mass,
            slope,
        })
    }

    /// The loops.
    #[must_use]
    pub fn loops(&self) -> &[PreparedLoop] {
        &self.loops
    }

    /// Sigma_OS(s) on a sheet: `first[i]` true = first sheet of loop i (all first if shorter).
    #[must_use]
    pub fn on_sheet(&self, s: Complex64, first: &[bool]) -> Complex64 {
        let mut total = Complex64::new(0.0, 0.0);
        for (i, of) in self.loops.iter().enumerate() {
            total += of.sigma(s, first.get(i).copied().unwrap_or(true));
        }
        total - self.at_mass - (s - self.mass2) * self.slope
    }

    /// Tree width at M, GeV: sum of -Im Sigma_c(M^2)/M.
    #[must_use]
    pub fn width_gev(&self) -> f64 {
        let sum: f64 = self
            .loops
            .iter()
            .map(|of| of.m_gamma_gev2(self.mass2))
            .sum();
        sum / self.mass2.sqrt()
    }

    /// t < 0 at which 1/Delta crosses zero: the space-like ghost of strong coupling, beyond
    /// which the model has no meaning. Searched down to -`limit_gev2`.
    #[must_use]
    pub fn ghost_gev2(&self, limit_gev2: f64) -> Option<f64> {
        let inverse = |t: f64| t - self.mass2 - self.on_sheet(Complex64::new(t, 0.0), &[]).re;
        let mut inner = 0.0;
        let mut outer = -1e-3 * self.mass2;
        while outer >= -limit_gev2 {
            if inverse(outer) > 0.0 {
                for _ in 0..100 {
                    let middle = 0.5 * (inner + outer);
                    if inverse(middle) > 0.0 {
                        outer = middle;
                    } else {
                        inner = middle;
                    }
                }
                return Some(outer);
            }
            inner = outer;
            outer *= 1.25;
        }
        None
    }
}
