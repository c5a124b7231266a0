//! The elastic amplitude of the beams' channel, twice: as the sum of resonances and as the
//! K-matrix with the same masses and partial widths. A sum of Breit-Wigners breaks unitarity
//! where resonances overlap; the K-matrix cannot.

use super::born::Energy;
use super::hypothesis::{Form, KChannel, KMatrix, KPole, PartialWave, Strength};
use crate::beam::Beams;
use crate::error::{Answer, Refusal};
use crate::kinematics::break_up_momentum_gev;
use crate::math;
use crate::propagator::Propagator;
use crate::propagator::kmatrix::PreparedKMatrix;
use num_complex::Complex64;

/// Both amplitudes, prepared.
#[derive(Debug, Clone)]
pub struct Elastic {
    /// (propagator, M Gamma_in e^{i phi}).
    terms: Vec<(Propagator, Complex64)>,
    matrix: PreparedKMatrix,
    /// Gamma_in was taken as if the seen channel were the entrance: only products are known.
    pub taken_elastic: bool,
}

impl Elastic {
    /// Of a sum of constant-width resonances. Channel 1 of the K-matrix is the beams', channel 2
    /// all the rest of each width (massless, rho = 1); g_1^2 rho_1(M) = M Gamma_in.
    ///
    /// # Errors
    /// Other forms than the constant width, a partial width above the total one, and what the
    /// K-matrix refuses (coincident masses).
    pub fn new(wave: &PartialWave, beams: &Beams) -> Answer<Self> {
        let (m1_gev, m2_gev) = (beams.first.mass_gev, beams.second.mass_gev);
        let (mut terms, mut poles) = (Vec::new(), Vec::new());
        let mut taken_elastic = false;
        for (i, r) in wave.resonances.iter().enumerate() {
            let path = format!("model.resonances[{i}]");
            if r.form != Form::ConstantWidth {
                return Err(Refusal::new(
                    format!("{path}.form"),
                    "another form",
                    "constant width",
                    "the K-matrix beside a sum of resonances is built from constant widths",
                ));
            }
            let (mass, width) = (r.mass_gev, r.width_gev);
            let entrance = match r.strength {
                Strength::Branchings { b_in, .. } => b_in * width,
                Strength::PartialWidths { gamma_in_gev, .. } => gamma_in_gev,
                Strength::BinBf { product } => {
                    taken_elastic = true;
                    product.sqrt() * width
                }
                Strength::GammaInBf { gev } => {
                    taken_elastic = true;
                    (gev * width).sqrt()
                }
                Strength::OneWidth { .. } | Strength::FromForm => f64::NAN,
            };
            if !(entrance >= 0.0 && entrance <= width) {
                return Err(Refusal::new(
                    format!("{path}.strength"),
                    entrance,
                    "an entrance width of 0 up to the total width",
                    "the entrance's partial width is larger than the total width",
                ));
            }
            let rho = 2.0 * break_up_momentum_gev(mass, m1_gev, m2_gev) / mass;
            poles.push(KPole {
                mass_gev: mass,
                g1_gev: (mass * entrance / rho).sqrt(),
                g2_gev: (mass * (width - entrance)).sqrt(),
            });
            terms.push((
                Propagator::new(&r.form, mass, width, &path)?,
                math::polar(mass * entrance, r.phase_rad),
            ));
        }
        let channel = |name: &str, m1_gev, m2_gev| KChannel {
            name: name.into(),
            m1_gev,
            m2_gev,
        };
        let matrix = PreparedKMatrix::new(
            &KMatrix {
                twice_j: wave.twice_j,
                poles,
                constant: [0.0; 3],
                channels: [
                    channel("entrance", m1_gev, m2_gev),
                    channel("rest", 0.0, 0.0),
                ],
                chew_mandelstam: false,
                entrance: 0,
                exit: 0,
                incoherent: None,
            },
            "model",
        )?;
        Ok(Self {
            terms,
            matrix,
            taken_elastic,
        })
    }

    /// |T|^2 of the sum and of the K-matrix; unitarity allows at most 1.
    #[must_use]
    pub fn at(&self, at: Energy) -> (f64, f64) {
        let sum: Complex64 = self
            .terms
            .iter()
            .map(|(propagator, strength)| -strength / propagator.inverse_gev2(at))
            .sum();
        let matrix = self.matrix.at(at.w_gev()).physical(0, 0);
        (sum.norm_sqr(), matrix.norm_sqr())
    }
}

#[cfg(test)]
mod tests {
    use super::super::hypothesis::{Resonance, Vertex};
    use super::*;
    use crate::beam::{Arrangement, BeamParticle, SettingKind};

    fn beams() -> Beams {
        let particle = |name: &str| BeamParticle {
            name: name.into(),
            mass_gev: 0.000_511,
            spin_states: 2,
        };
        Beams {
            first: particle("a"),
            second: particle("b"),
            arrangement: Arrangement::EqualBeams { crossing_rad: 0.0 },
            dial: SettingKind::W,
        }
    }

    fn wave(masses: &[f64], b_in: f64) -> PartialWave {
        PartialWave {
            twice_j: 2,
            resonances: masses
                .iter()
                .map(|mass_gev| Resonance {
                    name: "R".into(),
                    mass_gev: *mass_gev,
                    width_gev: 0.1,
                    strength: Strength::Branchings { b_in, b_f: 0.1 },
                    phase_rad: 0.0,
                    form: Form::ConstantWidth,
                    entrance: Vertex::Constant,
                    exit: Vertex::Constant,
                })
                .collect(),
            coherent: None,
            incoherent: None,
            final_threshold_gev: 0.0,
            continuum_factor: 1.0,
        }
    }

    #[test]
    fn one_resonance_is_its_own_k_matrix() {
        // rho = 1 up to 4 m^2/s = 2.6e-7/s.
        let one = Elastic::new(&wave(&[3.0], 0.4), &beams()).unwrap();
        for i in 0..40 {
            let (sum, matrix) = one.at(Energy::at(2.8 + 0.01 * f64::from(i)));
            assert!((sum / matrix - 1.0).abs() < 1e-6, "{sum} {matrix}");
        }
        assert!((one.at(Energy::at(3.0)).0 - 0.16).abs() < 1e-12);
    }

    #[test]
    fn two_that_overlap_break_unitarity_and_the_matrix_does_not() {
        let two = Elastic::new(&wave(&[3.0, 3.02], 0.9), &beams()).unwrap();
        let mut largest = (0.0f64, 0.0f64);
        for i in 0..400 {
            let (sum, matrix) = two.at(Energy::at(2.8 + 0.001 * f64::from(i)));
            largest = (largest.0.max(sum), largest.1.max(matrix));
        }
        assert!(largest.0 > 2.0, "{largest:?}");
        assert!(largest.1 <= 1.0 + 1e-12 && largest.1 > 0.5, "{largest:?}");
        assert!(Elastic::new(&wave(&[3.0, 3.0], 0.9), &beams()).is_err());
    }
}
