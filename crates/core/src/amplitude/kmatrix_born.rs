//! The two-channel K-matrix as a Born cross section:
//! sigma = (2J+1)/(n_a n_b) (4 pi/k^2) |sqrt(rho_a) T_af sqrt(rho_f)|^2.

use super::background::Incoherent;
use super::born::{Born, Energy, Feature};
use super::hypothesis::KMatrix;
use super::partial_wave::{check_spin, flux_nb_gev2};
use crate::beam::Beams;
use crate::error::{Answer, Refusal};
use crate::kinematics::momentum_squared_gev2;
use crate::propagator::kmatrix::PreparedKMatrix;

/// A prepared K-matrix with its beams.
#[derive(Debug, Clone, PartialEq)]
pub struct KMatrixBorn {
    matrix: PreparedKMatrix,
    entrance: usize,
    exit: usize,
    m1_gev: f64,
    m2_gev: f64,
    threshold_gev: f64,
    flux_nb_gev2: f64,
    features: Vec<Feature>,
    incoherent: Incoherent,
}

impl KMatrixBorn {
    /// Checks the hypothesis and works out what does not depend on W.
    ///
    /// # Errors
    /// As [`PreparedKMatrix::new`]; a channel that is not 0 or 1; a spin that the beams cannot have.
    pub fn new(model: &KMatrix, beams: &Beams) -> Answer<Self> {
        use super::born::Checked;
        beams.check("beam")?;
        check_spin(model.twice_j, beams, "model.j")?;
        for (field, channel) in [("entrance", model.entrance), ("exit", model.exit)] {
            if channel > 1 {
                return Err(Refusal::new(
                    format!("model.k_matrix.{field}"),
                    channel,
                    "channel 0 or 1",
                    "the K-matrix has two channels",
                ));
            }
        }
        let matrix = PreparedKMatrix::new(model, "model.k_matrix")?;
        let (entrance, exit) = (usize::from(model.entrance), usize::from(model.exit));
        let (m1_gev, m2_gev) = (beams.first.mass_gev, beams.second.mass_gev);
        let [one, two] = matrix.channels();
        let of = |i: usize| {
            if i == 0 {
                one.threshold_gev
            } else {
                two.threshold_gev
            }
        };
        let threshold_gev = (m1_gev + m2_gev).max(of(entrance)).max(of(exit));
        let mut features: Vec<Feature> = [one, two]
            .iter()
            .map(|branch| Feature::Kink {
                w_gev: branch.threshold_gev,
            })
            .collect();
        features.push(Feature::Kink {
            w_gev: threshold_gev,
        });
        for search in matrix.poles() {
            for pole in search.poles {
                if pole.width_gev > 0.0 && pole.mass_gev > 0.0 {
                    features.push(Feature::Peak {
                        w_gev: pole.mass_gev,
                        width_gev: pole.width_gev,
                    });
                }
            }
        }
        Ok(Self {
            matrix,
            entrance,
            exit,
            m1_gev,
            m2_gev,
            threshold_gev,
            flux_nb_gev2: flux_nb_gev2(model.twice_j, beams),
            features,
            incoherent: Incoherent::new(model.incoherent.as_ref(), "model")?,
        })
    }

    /// The matrix.
    #[must_use]
    pub fn matrix(&self) -> &PreparedKMatrix {
        &self.matrix
    }

    fn coherent_nb(&self, at: Energy) -> f64 {
        let w = at.w_gev();
        let above = at.above_gev(self.m1_gev + self.m2_gev);
        let k2 = momentum_squared_gev2(w, above, self.m1_gev, self.m2_gev);
        let t = self.matrix.at(w).physical(self.entrance, self.exit);
        self.flux_nb_gev2 / k2 * t.norm_sqr()
    }
}

impl Born for KMatrixBorn {
    fn threshold_gev(&self) -> f64 {
        self.threshold_gev
    }
    fn features(&self) -> Vec<Feature> {
        self.features.clone()
    }
    fn contribution_names(&self) -> Vec<String> {
        let mut names = vec!["K-matrix".to_string()];
        if self.incoherent != Incoherent::None {
            names.push("incoherent background".into());
        }
        names
    }
    fn contributions_nb(&self, at: Energy, out: &mut [f64]) {
        out.fill(0.0);
        if at.above_gev(self.threshold_gev) <= 0.0 {
            return;
        }
        for (slot, value) in out
            .iter_mut()
            .zip([self.coherent_nb(at), self.incoherent.sigma_nb(at)])
        {
            *slot = value;
        }
    }
    fn sigma_nb(&self, at: Energy) -> f64 {
        if at.above_gev(self.threshold_gev) <= 0.0 {
            return 0.0;
        }
        self.coherent_nb(at) + self.incoherent.sigma_nb(at)
    }
}
