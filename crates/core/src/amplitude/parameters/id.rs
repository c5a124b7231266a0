//! Ids of parameters: what they are in code and how they are written.

use crate::error::{Answer, Refusal};
use core::fmt;
use core::str::FromStr;

/// A parameter's id, e.g. `r1.mass`, `coherent.0`; cheap to copy and compare.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum ParameterId {
    /// Of the resonance with this index (shown counted from 1): `r1.mass`.
    Resonance(u16, ResonanceParameter),
    /// phi_bg, rad.
    CoherentPhase,
    /// Coefficient of the coherent background: of the polynomial, C, or c in nb.
    Coherent(u16),
    /// Coefficient of the incoherent background, nb.
    Incoherent(u16),
    /// Of a bare pole of the K-matrix: `k1.mass`.
    KPole(u16, KPoleParameter),
    /// c_11, c_12, c_22 of the K-matrix: `k.c11`, `k.c12`, `k.c22`.
    KConstant(u8),
    /// Of a mediator of the diagrams: `d1.g`.
    Mediator(u16, MediatorParameter),
    /// Phase of a wave against the first: `w2.phase`.
    WavePhase(u16),
}

/// Parameters of one resonance.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum ResonanceParameter {
    /// M, GeV.
    Mass,
    /// Gamma, GeV.
    Width,
    /// Gamma_in B_f (GeV), B_in B_f or the one partial width (GeV).
    Strength,
    /// B_in.
    BIn,
    /// B_f.
    BF,
    /// Gamma_in, GeV.
    GammaIn,
    /// Gamma_f, GeV.
    GammaF,
    /// phi, rad.
    Phase,
    /// Coupling n of the form (counted from 0, shown from 1): g^2 (GeV^2) of a Flatte channel,
    /// g or h (GeV) of a loop.
    Coupling(u8),
}

/// Parameters of one bare pole.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum KPoleParameter {
    /// M_p, GeV.
    Mass,
    /// g_p1, GeV.
    G1,
    /// g_p2, GeV.
    G2,
}

/// Parameters of one mediator.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum MediatorParameter {
    /// M, GeV.
    Mass,
    /// Gamma of the s-channel form, GeV.
    Width,
    /// g.
    G,
    /// g_F.
    GOther,
    /// Coupling n of the form's own channels or further loops.
    Coupling(u8),
}

const RESONANCE: [(ResonanceParameter, &str); 8] = [
    (ResonanceParameter::Mass, "mass"),
    (ResonanceParameter::Width, "width"),
    (ResonanceParameter::Strength, "strength"),
    (ResonanceParameter::BIn, "b_in"),
    (ResonanceParameter::BF, "b_f"),
    (ResonanceParameter::GammaIn, "gamma_in"),
    (ResonanceParameter::GammaF, "gamma_f"),
    (ResonanceParameter::Phase, "phase"),
];
const K_POLE: [(KPoleParameter, &str); 3] = [
    (KPoleParameter::Mass, "mass"),
    (KPoleParameter::G1, "g1"),
    (KPoleParameter::G2, "g2"),
];
const K_CONSTANT: [&str; 3] = ["c11", "c12", "c22"];
const MEDIATOR: [(MediatorParameter, &str); 4] = [
    (MediatorParameter::Mass, "mass"),
    (MediatorParameter::Width, "width"),
    (MediatorParameter::G, "g"),
    (MediatorParameter::GOther, "g_other"),
];

fn name<T: PartialEq>(table: &[(T, &'static str)], of: &T) -> &'static str {
    table
        .iter()
        .find(|(known, _)| known == of)
        .map_or("", |(_, name)| name)
}

fn find<T: Copy>(table: &[(T, &str)], name: &str) -> Option<T> {
    table
        .iter()
        .find(|(_, known)| *known == name)
        .map(|(of, _)| *of)
}

/// "g3" -> 2.
fn coupling(name: &str) -> Option<u8> {
    name.strip_prefix('g')?.parse::<u8>().ok()?.checked_sub(1)
}

/// "r3" -> 2 for the prefix 'r'.
fn index(room: &str, prefix: char) -> Option<u16> {
    room.strip_prefix(prefix)?
        .parse::<u16>()
        .ok()?
        .checked_sub(1)
}

impl fmt::Display for ParameterId {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Resonance(i, ResonanceParameter::Coupling(n)) => {
                write!(f, "r{}.g{}", i + 1, n + 1)
            }
            Self::Resonance(i, parameter) => {
                write!(f, "r{}.{}", i + 1, name(&RESONANCE, parameter))
            }
            Self::WavePhase(i) => write!(f, "w{}.phase", i + 1),
            Self::CoherentPhase => write!(f, "coherent.phase"),
            Self::Coherent(i) => write!(f, "coherent.{i}"),
            Self::Incoherent(i) => write!(f, "incoherent.{i}"),
            Self::KPole(i, parameter) => write!(f, "k{}.{}", i + 1, name(&K_POLE, parameter)),
            Self::KConstant(i) => write!(f, "k.{}", K_CONSTANT.get(usize::from(*i)).unwrap_or(&"")),
            Self::Mediator(i, MediatorParameter::Coupling(n)) => write!(f, "d{}.g{}", i + 1, n + 1),
            Self::Mediator(i, parameter) => write!(f, "d{}.{}", i + 1, name(&MEDIATOR, parameter)),
        }
    }
}

impl FromStr for ParameterId {
    type Err = Refusal;

    fn from_str(id: &str) -> Answer<Self> {
        let parse = || {
            let (room, rest) = id.split_once('.')?;
            if room == "coherent" && rest == "phase" {
                return Some(Self::CoherentPhase);
            }
            if room == "coherent" {
                return Some(Self::Coherent(rest.parse().ok()?));
            }
            if room == "incoherent" {
                return Some(Self::Incoherent(rest.parse().ok()?));
            }
            if room == "k" {
                let i = K_CONSTANT.iter().position(|known| *known == rest)?;
                return Some(Self::KConstant(u8::try_from(i).ok()?));
            }
            if let Some(i) = index(room, 'r') {
                let parameter = find(&RESONANCE, rest)
                    .or_else(|| coupling(rest).map(ResonanceParameter::Coupling))?;
                return Some(Self::Resonance(i, parameter));
            }
            if let (Some(i), "phase") = (index(room, 'w'), rest) {
                return Some(Self::WavePhase(i));
            }
            if let Some(i) = index(room, 'k') {
                return Some(Self::KPole(i, find(&K_POLE, rest)?));
            }
            let i = index(room, 'd')?;
            let parameter = find(&MEDIATOR, rest)
                .or_else(|| coupling(rest).map(MediatorParameter::Coupling))?;
            Some(Self::Mediator(i, parameter))
        };
        parse().ok_or_else(|| super::unknown(id))
    }
}
