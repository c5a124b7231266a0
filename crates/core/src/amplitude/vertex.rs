//! Vertices: M Gamma_a(s)/(M Gamma_a(M)) of entrance and exit, declared per channel.

use super::born::Energy;
use super::hypothesis::{ChannelShape, Form, Vertex};
use crate::error::Answer;
use crate::propagator::running::RunningPair;

/// A prepared vertex.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) enum PreparedVertex {
    Constant,
    OnePhoton { mass2: f64 },
    Massless { inverse_mass2: f64 },
    Running(RunningPair),
}

impl PreparedVertex {
    pub(crate) fn new(vertex: &Vertex, mass_gev: f64, path: &str) -> Answer<Self> {
        Ok(match vertex {
            Vertex::Constant => Self::Constant,
            Vertex::OnePhoton => Self::OnePhoton {
                mass2: mass_gev * mass_gev,
            },
            Vertex::Massless => Self::Massless {
                inverse_mass2: 1.0 / (mass_gev * mass_gev),
            },
            Vertex::Running(pair) => Self::Running(RunningPair::new(pair, mass_gev, path)?),
        })
    }

    /// M Gamma_a(s)/(M Gamma_a(M)).
    #[inline]
    pub(crate) fn ratio(&self, at: Energy) -> f64 {
        let w = at.w_gev();
        match self {
            Self::Constant => 1.0,
            Self::OnePhoton { mass2 } => mass2 / (w * w),
            Self::Massless { inverse_mass2 } => w * w * inverse_mass2,
            Self::Running(pair) => pair.ratio(at),
        }
    }

    pub(crate) fn kink_gev(&self) -> Option<f64> {
        match self {
            Self::Running(pair) => Some(pair.threshold_gev()),
            _ => None,
        }
    }
}

/// Vertices (entrance, exit) that a form has where none are declared: constant width and
/// massless channels repeat themselves; a running width in e+e- or mu+mu- takes one photon in
/// and its first two-body channel out. `None`: they have to be declared.
#[must_use]
pub fn default_vertices(form: &Form, lepton_pair: bool) -> Option<(Vertex, Vertex)> {
    match form {
        Form::ConstantWidth => Some((Vertex::Constant, Vertex::Constant)),
        Form::MasslessChannels => Some((Vertex::Massless, Vertex::Massless)),
        Form::RunningWidth { channels } if lepton_pair => {
            channels.iter().find_map(|channel| match &channel.shape {
                ChannelShape::TwoBody(pair) => Some((Vertex::OnePhoton, Vertex::Running(*pair))),
                _ => None,
            })
        }
        Form::RunningWidth { .. } => None,
    }
}
