//! The amplitude behind the curve: propagators and their poles, the complex plane, angles,
//! diagrams, partial waves; the same state in other words.

mod angles;
mod line;
mod plane;
mod waves;
mod words;

pub use angles::{image, slice};
pub use line::line;
pub use plane::plane;
pub use waves::partial_waves;
pub use words::reword;

use crate::check::{self, Frame};
use crate::doc::Sheet;
use crate::requests::{Column, first_problem};
use serde::{Deserialize, Serialize};
use widthwise_core::amplitude::diagrams::PreparedDiagrams;
use widthwise_core::amplitude::hypothesis::{Hypothesis, PartialWave, Resonance};
use widthwise_core::error::{Answer, Refusal, Warning};
use widthwise_core::propagator::Propagator;
use widthwise_core::propagator::kmatrix::PreparedKMatrix;
use widthwise_core::propagator::poles::{Continued, Pole, PoleSearch};

/// One pole for the eye.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct PoleReading {
    /// M_p of sqrt(s_R) = M_p - i Gamma_p/2, GeV.
    pub mass_gev: f64,
    /// Gamma_p, GeV.
    pub width_gev: f64,
    /// Mb of s_R = Mb^2 - i Mb Gb, GeV; absent if Re s_R <= 0.
    pub mass_bar_gev: Option<f64>,
    /// Gb, GeV.
    pub width_bar_gev: Option<f64>,
    /// Residue of Delta: real and imaginary part; absent where two poles coincide.
    pub residue: Option<(f64, f64)>,
    /// Sign of Im q per threshold: true +.
    pub sheet: Vec<bool>,
}

/// Mass and width in one convention, for the eye.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct Words {
    /// Convention.
    pub convention: String,
    /// Mass, with unit.
    pub mass: String,
    /// Width, with unit.
    pub width: String,
    /// Whether it is the same curve.
    pub note: String,
}

/// Unitarity of a sum of resonances in the beams' own channel, beside the K-matrix.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct Elastic {
    /// Where the sum is largest, GeV.
    pub w_gev: f64,
    /// |T|^2 of the sum there; above 1 it breaks unitarity.
    pub sum: f64,
    /// Largest |T|^2 of the K-matrix with the same masses and widths.
    pub k_matrix: f64,
    /// One plain sentence.
    pub note: String,
}

/// A grid of energies for a line.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct Grid {
    /// From.
    pub from: f64,
    /// To.
    pub to: f64,
    /// Number of places, 2 to 20,000 (an image: 2 to 1000 on each side).
    pub places: u32,
}

impl Grid {
    /// The places, evenly spaced.
    ///
    /// # Errors
    /// A range that is none, or too many places.
    fn values(&self, name: &str, most: u32) -> Answer<Vec<f64>> {
        if !(self.from.is_finite() && self.to.is_finite() && self.from < self.to) {
            return Err(Refusal::new(
                name,
                format!("{} to {}", self.from, self.to),
                "from below to",
                "this is no range",
            ));
        }
        if !(2..=most).contains(&self.places) {
            return Err(Refusal::new(
                name,
                self.places,
                format!("2 to {most}"),
                "so many places are not computed",
            ));
        }
        let step = (self.to - self.from) / f64::from(self.places - 1);
        Ok((0..self.places)
            .map(|i| {
                if i + 1 == self.places {
                    self.to
                } else {
                    self.from + step * f64::from(i)
                }
            })
            .collect())
    }
}

/// What has a propagator or a denominator of its own.
enum Subject {
    Propagator(Box<Propagator>),
    Matrix(Box<PreparedKMatrix>, (usize, usize)),
}

impl Subject {
    fn continued(&self) -> &dyn Continued {
        match self {
            Self::Propagator(of) => of.as_ref(),
            Self::Matrix(of, _) => of.as_ref(),
        }
    }

    fn poles(&self) -> PoleSearch {
        match self {
            Self::Propagator(of) => of.poles(),
            Self::Matrix(of, _) => joined(of.poles(), of.channels().to_vec()),
        }
    }

    /// Signs of Im q on the sheet next to the real axis at an energy.
    fn sheet_at(&self, w_gev: f64) -> Vec<bool> {
        let branches = self.continued().branches();
        branches.iter().map(|b| b.threshold_gev >= w_gev).collect()
    }
}

/// The searches from every bare pole as one, each pole once.
fn joined(
    searches: Vec<PoleSearch>,
    branches: Vec<widthwise_core::propagator::Branch>,
) -> PoleSearch {
    let mut poles: Vec<Pole> = Vec::new();
    for pole in searches.into_iter().flat_map(|search| search.poles) {
        let same = |other: &Pole| {
            other.sheet == pole.sheet
                && (other.s_gev2 - pole.s_gev2).norm_sqr() < 1e-14 * pole.s_gev2.norm_sqr()
        };
        if !poles.iter().any(same) {
            poles.push(pole);
        }
    }
    let message = match poles.len() {
        0 => "No pole was found near the bare poles.".to_string(),
        1 => "One pole.".to_string(),
        n => format!("{n} poles on the sheets next to the real axis."),
    };
    PoleSearch {
        poles,
        branches,
        message,
    }
}

/// What the requests of this room share.
struct Subjects {
    frame: Frame,
    warnings: Vec<Warning>,
    names: Vec<String>,
    of: Vec<Subject>,
}

impl Subjects {
    fn new(sheet: &Sheet) -> Answer<Self> {
        let (frame, warnings) = check::frame(sheet).map_err(first_problem)?;
        let (mut names, mut of) = (Vec::new(), Vec::new());
        let mut push = |name: &str, subject: Subject| {
            names.push(name.to_string());
            of.push(subject);
        };
        match &frame.scan.hypothesis {
            Hypothesis::KMatrix(model) => {
                let matrix = PreparedKMatrix::new(model, "model.k_matrix")?;
                let sides = (usize::from(model.entrance), usize::from(model.exit));
                push("K-matrix", Subject::Matrix(Box::new(matrix), sides));
            }
            Hypothesis::Diagrams(model) => {
                let diagrams = PreparedDiagrams::new(model, &frame.scan.beams)?;
                for (mediator, propagator) in
                    model.mediators.iter().zip(diagrams.mediator_propagators())
                {
                    let propagator = Box::new(propagator.clone());
                    push(&mediator.name, Subject::Propagator(propagator));
                }
            }
            hypothesis => {
                for (i, r) in resonances(hypothesis).enumerate() {
                    let path = format!("model.resonances[{i}]");
                    let propagator = Propagator::new(&r.form, r.mass_gev, r.width_gev, &path)?;
                    push(&r.name, Subject::Propagator(Box::new(propagator)));
                }
            }
        }
        Ok(Self {
            frame,
            warnings,
            names,
            of,
        })
    }

    fn get(&self, index: u16) -> Answer<&Subject> {
        self.of.get(usize::from(index)).ok_or_else(|| {
            Refusal::new(
                "of",
                index,
                format!("0 to {}", self.of.len().saturating_sub(1)),
                "this hypothesis has no such propagator",
            )
        })
    }
}

fn resonances(hypothesis: &Hypothesis) -> Box<dyn Iterator<Item = &Resonance> + '_> {
    match hypothesis {
        Hypothesis::PartialWave(wave) => Box::new(wave.resonances.iter()),
        Hypothesis::Waves(waves) => {
            Box::new(waves.waves.iter().flat_map(|wave| &wave.wave.resonances))
        }
        _ => Box::new(core::iter::empty()),
    }
}

/// The coherent sum that resonance `index` belongs to.
fn wave_of(hypothesis: &Hypothesis, index: u16) -> Option<&PartialWave> {
    match hypothesis {
        Hypothesis::PartialWave(wave) => Some(wave),
        Hypothesis::Waves(waves) => {
            let mut left = usize::from(index);
            waves.waves.iter().map(|wave| &wave.wave).find(|wave| {
                let here = left < wave.resonances.len();
                left = left.saturating_sub(wave.resonances.len());
                here
            })
        }
        _ => None,
    }
}

fn column(name: impl Into<String>, unit: &str, values: Vec<f64>) -> Column {
    Column {
        name: name.into(),
        unit: unit.to_string(),
        values,
    }
}
