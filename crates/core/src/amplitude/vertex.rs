//! Vertices: M Gamma_a(s)/(M Gamma_a(M)) of entrance and exit, declared per channel.

use super::born::Energy;
use super::hypothesis::{ChannelShape, Form, TwoBody, Vertex};
use crate::error::{Answer, Refusal};
use crate::propagator::Propagator;
use crate::propagator::running::RunningPair;

/// A prepared vertex.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) enum PreparedVertex {
    Constant,
    OnePhoton {
        mass2: f64,
    },
    Massless {
        inverse_mass2: f64,
    },
    Running(RunningPair),
    /// M Gamma_c of the form's own channel, GeV^2.
    Own {
        channel: usize,
    },
}

impl PreparedVertex {
    pub(crate) fn new(vertex: &Vertex, propagator: &Propagator, path: &str) -> Answer<Self> {
        let mass_gev = propagator.mass_gev();
        Ok(match vertex {
            Vertex::Flatte { channel: index } | Vertex::Dressed { index } => {
                let channel = usize::from(*index);
                if channel >= propagator.own_channels() {
                    return Err(Refusal::new(
                        path,
                        index,
                        "a channel or loop that the form declares",
                        "this vertex belongs to a channel that the resonance's form does not have",
                    ));
                }
                Self::Own { channel }
            }
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

    /// M Gamma_a(s)/(M Gamma_a(M)); of a channel of the form M Gamma_a(s) itself, GeV^2.
    #[inline]
    pub(crate) fn ratio(&self, at: Energy, propagator: &Propagator) -> f64 {
        let w = at.w_gev();
        match self {
            Self::Constant => 1.0,
            Self::OnePhoton { mass2 } => mass2 / (w * w),
            Self::Massless { inverse_mass2 } => w * w * inverse_mass2,
            Self::Running(pair) => pair.ratio(at),
            Self::Own { channel } => propagator.own_channel_gev2(*channel, at),
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
        Form::GounarisSakurai { m_gev } if lepton_pair => {
            let pair = TwoBody {
                m1_gev: *m_gev,
                m2_gev: *m_gev,
                l: 1,
                radius_per_gev: 0.0,
            };
            Some((Vertex::OnePhoton, Vertex::Running(pair)))
        }
        Form::RunningWidth { .. }
        | Form::GounarisSakurai { .. }
        | Form::Flatte { .. }
        | Form::Dressed { .. }
        | Form::Free => None,
    }
}
