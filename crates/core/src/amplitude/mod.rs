//! Amplitudes: partial-wave resonances with backgrounds; tree-level diagrams.

mod background;
pub mod born;
pub mod diagrams;
pub mod hypothesis;
pub mod kmatrix_born;
pub mod parameters;
pub mod partial_wave;
mod vertex;

pub use vertex::default_vertices;

use crate::beam::Beams;
use crate::error::Answer;
use born::Born;
use hypothesis::Hypothesis;

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
            Self::Diagrams(model) => Box::new(diagrams::total::DiagramTotal::new(
                diagrams::PreparedDiagrams::new(model, beams)?,
            )),
        })
    }
}
