//! Amplitudes: partial-wave resonances with backgrounds; tree-level diagrams.

mod background;
pub mod born;
pub mod diagrams;
pub mod elastic;
pub mod hypothesis;
pub mod kmatrix_born;
pub mod parameters;
pub mod partial_wave;
pub mod peak;
pub mod selection;
mod vertex;
pub mod waves;
pub mod wigner;

pub use vertex::default_vertices;

use crate::beam::Beams;
use crate::error::{Answer, Refusal};
use born::Born;
use hypothesis::Hypothesis;
pub use waves::Region;

impl Hypothesis {
    /// Checks the hypothesis against the beams and makes it ready for evaluation.
    ///
    /// # Errors
    /// The first thing that is wrong, named by its path in the sheet.
    pub fn prepare(&self, beams: &Beams) -> Answer<Box<dyn Born + Send + Sync>> {
        Ok(match self {
            Self::PartialWave(wave) => {
                Box::new(partial_wave::PreparedPartialWave::new(wave, beams)?)
            }
            Self::KMatrix(model) => Box::new(kmatrix_born::KMatrixBorn::new(model, beams)?),
            Self::Diagrams(model) => {
                let region = cut_region(model.cos_cut)?;
                let diagrams = diagrams::PreparedDiagrams::new(model, beams)?;
                Box::new(diagrams::total::DiagramTotal::new(diagrams, region))
            }
            Self::Waves(model) => {
                let region = cut_region(model.cos_cut)?;
                Box::new(waves::PreparedWaves::new(model, beams, &region)?)
            }
        })
    }

    /// The same, seen in one angular region only: the Born cross section of an angular bin.
    /// A cut of the model itself is not applied on top.
    ///
    /// # Errors
    /// As [`Hypothesis::prepare`]; a model without angles (a single partial wave without
    /// helicities is isotropic for J = 0 only).
    pub fn prepare_in(
        &self,
        beams: &Beams,
        region: &Region,
    ) -> Answer<Box<dyn Born + Send + Sync>> {
        match self {
            Self::Diagrams(model) => {
                let diagrams = diagrams::PreparedDiagrams::new(model, beams)?;
                Ok(Box::new(diagrams::total::DiagramTotal::new(
                    diagrams,
                    region.clone(),
                )))
            }
            Self::Waves(model) => Ok(Box::new(waves::PreparedWaves::new(model, beams, region)?)),
            Self::PartialWave(_) | Self::KMatrix(_) => Err(Refusal::new(
                "model",
                "no angles",
                "waves with helicity or LS couplings, or diagrams",
                "this hypothesis says nothing about angles: give the helicity or LS couplings of entrance and exit",
            )),
        }
    }
}

fn cut_region(cos_cut: Option<f64>) -> Answer<Region> {
    let cut = cos_cut.unwrap_or(1.0);
    if cut > 0.0 && cut <= 1.0 {
        return Region::cos(-cut, cut);
    }
    Err(Refusal::new(
        "model.cos_cut",
        cut,
        "above 0 and at most 1",
        "the cut on |cos theta| lies between 0 and 1",
    ))
}
