//! Every number of a hypothesis that a fit may vary, by id.

use super::hypothesis::{
    CoherentBackground, Hypothesis, IncoherentBackground, PartialWave, Resonance, Strength,
};
use crate::error::{Answer, Refusal};
use core::fmt;
use core::str::FromStr;

/// A parameter's id, e.g. `r1.mass`, `coherent.0`; cheap to copy and compare.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum ParameterId {
    /// Of the resonance with this index (shown counted from 1).
    Resonance(u16, ResonanceParameter),
    /// phi_bg, rad.
    CoherentPhase,
    /// Coefficient of the coherent background: of the polynomial, C, or c in nb.
    Coherent(u16),
    /// Coefficient of the incoherent background, nb.
    Incoherent(u16),
}

/// Parameters of one resonance.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum ResonanceParameter {
    /// M, GeV.
    Mass,
    /// Gamma, GeV.
    Width,
    /// Gamma_in B_f (GeV) or B_in B_f.
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
}

const RESONANCE_NAMES: [(ResonanceParameter, &str); 8] = [
    (ResonanceParameter::Mass, "mass"),
    (ResonanceParameter::Width, "width"),
    (ResonanceParameter::Strength, "strength"),
    (ResonanceParameter::BIn, "b_in"),
    (ResonanceParameter::BF, "b_f"),
    (ResonanceParameter::GammaIn, "gamma_in"),
    (ResonanceParameter::GammaF, "gamma_f"),
    (ResonanceParameter::Phase, "phase"),
];

impl fmt::Display for ParameterId {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Resonance(index, parameter) => {
                let name = RESONANCE_NAMES
                    .iter()
                    .find(|(known, _)| known == parameter)
                    .map_or("", |(_, name)| name);
                write!(f, "r{}.{name}", index + 1)
            }
            Self::CoherentPhase => write!(f, "coherent.phase"),
            Self::Coherent(i) => write!(f, "coherent.{i}"),
            Self::Incoherent(i) => write!(f, "incoherent.{i}"),
        }
    }
}

impl FromStr for ParameterId {
    type Err = Refusal;

    fn from_str(id: &str) -> Answer<Self> {
        let parse = || {
            let (room, name) = id.split_once('.')?;
            match room {
                "coherent" if name == "phase" => Some(Self::CoherentPhase),
                "coherent" => Some(Self::Coherent(name.parse().ok()?)),
                "incoherent" => Some(Self::Incoherent(name.parse().ok()?)),
                _ => {
                    let index: u16 = room.strip_prefix('r')?.parse().ok()?;
                    let (parameter, _) =
                        RESONANCE_NAMES.iter().find(|(_, known)| *known == name)?;
                    Some(Self::Resonance(index.checked_sub(1)?, *parameter))
                }
            }
        };
        parse().ok_or_else(|| unknown(id))
    }
}

fn unknown(id: impl fmt::Display) -> Refusal {
    Refusal::new(
        id.to_string(),
        id.to_string(),
        "a parameter of this hypothesis",
        format!("this hypothesis has no parameter {id}"),
    )
}

/// What is known of one parameter.
#[derive(Debug, Clone, PartialEq)]
pub struct ParameterSpec {
    /// Id.
    pub id: ParameterId,
    /// In words: "mass of V".
    pub label: String,
    /// Unit of value, limits and scale: "GeV", "rad", "nb", or "" for a pure number.
    pub unit: &'static str,
    /// Present value.
    pub value: f64,
    /// Least value that makes sense.
    pub lower: Option<f64>,
    /// Largest value that makes sense.
    pub upper: Option<f64>,
    /// A change that visibly changes the curve: first step of a search.
    pub scale: f64,
}

impl Hypothesis {
    /// Every parameter, in a fixed order.
    #[must_use]
    pub fn parameters(&self) -> Vec<ParameterSpec> {
        match self {
            Self::PartialWave(wave) => wave_parameters(wave),
        }
    }

    /// Value of a parameter.
    ///
    /// # Errors
    /// The hypothesis has no such parameter.
    pub fn get(&self, id: &str) -> Answer<f64> {
        self.value(id.parse()?)
    }

    /// Sets a parameter. Ranges are checked when the hypothesis is prepared.
    ///
    /// # Errors
    /// The hypothesis has no such parameter, or the value is not a number.
    pub fn set(&mut self, id: &str, value: f64) -> Answer<()> {
        self.set_value(id.parse()?, value)
    }

    /// [`Hypothesis::get`] by parsed id.
    ///
    /// # Errors
    /// The hypothesis has no such parameter.
    pub fn value(&self, id: ParameterId) -> Answer<f64> {
        // One table of places serves reading and writing; a copy keeps it so.
        self.clone()
            .slot(id)
            .map(|slot| *slot)
            .ok_or_else(|| unknown(id))
    }

    /// [`Hypothesis::set`] by parsed id.
    ///
    /// # Errors
    /// The hypothesis has no such parameter, or the value is not a number.
    pub fn set_value(&mut self, id: ParameterId, value: f64) -> Answer<()> {
        if !value.is_finite() {
            return Err(Refusal::new(
                id.to_string(),
                value,
                "a number",
                "a parameter has to be a number",
            ));
        }
        *self.slot(id).ok_or_else(|| unknown(id))? = value;
        Ok(())
    }

    fn slot(&mut self, id: ParameterId) -> Option<&mut f64> {
        match self {
            Self::PartialWave(wave) => wave_slot(wave, id),
        }
    }
}

fn wave_slot(wave: &mut PartialWave, id: ParameterId) -> Option<&mut f64> {
    match id {
        ParameterId::Resonance(index, parameter) => {
            let resonance = wave.resonances.get_mut(usize::from(index))?;
            if index == 0 && parameter == ResonanceParameter::Phase {
                return None;
            }
            resonance_slot(resonance, parameter)
        }
        ParameterId::CoherentPhase => match wave.coherent.as_mut()? {
            CoherentBackground::Polynomial { phase_rad, .. }
            | CoherentBackground::OnePhoton { phase_rad, .. } => Some(phase_rad),
            CoherentBackground::SharedVertices { .. } => None,
        },
        ParameterId::Coherent(i) => match (wave.coherent.as_mut()?, i) {
            (CoherentBackground::Polynomial { coefficients, .. }, i) => {
                coefficients.get_mut(usize::from(i))
            }
            (CoherentBackground::SharedVertices { c }, 0) => Some(c),
            (CoherentBackground::OnePhoton { c_nb, .. }, 0) => Some(c_nb),
            _ => None,
        },
        ParameterId::Incoherent(i) => match (wave.incoherent.as_mut()?, i) {
            (IncoherentBackground::Power { c0_nb, .. }, 0) => Some(c0_nb),
            (IncoherentBackground::Power { n, .. }, 1) => Some(n),
            (
                IncoherentBackground::Polynomial {
                    coefficients_nb, ..
                },
                i,
            ) => coefficients_nb.get_mut(usize::from(i)),
            _ => None,
        },
    }
}

fn resonance_slot(resonance: &mut Resonance, parameter: ResonanceParameter) -> Option<&mut f64> {
    use ResonanceParameter as P;
    match (parameter, &mut resonance.strength) {
        (P::Mass, _) => Some(&mut resonance.mass_gev),
        (P::Width, _) => Some(&mut resonance.width_gev),
        (P::Phase, _) => Some(&mut resonance.phase_rad),
        (P::Strength, Strength::GammaInBf { gev }) => Some(gev),
        (P::Strength, Strength::BinBf { product }) => Some(product),
        (P::BIn, Strength::Branchings { b_in, .. }) => Some(b_in),
        (P::BF, Strength::Branchings { b_f, .. }) => Some(b_f),
        (P::GammaIn, Strength::PartialWidths { gamma_in_gev, .. }) => Some(gamma_in_gev),
        (P::GammaF, Strength::PartialWidths { gamma_f_gev, .. }) => Some(gamma_f_gev),
        _ => None,
    }
}

fn wave_parameters(wave: &PartialWave) -> Vec<ParameterSpec> {
    let mut all = Vec::new();
    for (index, resonance) in (0u16..).zip(&wave.resonances) {
        resonance_parameters(index, resonance, &mut all);
    }
    match &wave.coherent {
        None => {}
        Some(CoherentBackground::Polynomial {
            coefficients,
            phase_rad,
            ..
        }) => {
            for (i, c) in (0u16..).zip(coefficients) {
                all.push(spec(
                    ParameterId::Coherent(i),
                    format!("coherent background, coefficient {i}"),
                    "",
                    *c,
                    FREE,
                ));
            }
            all.push(spec(
                ParameterId::CoherentPhase,
                "phase of the coherent background".into(),
                "rad",
                *phase_rad,
                FREE,
            ));
        }
        Some(CoherentBackground::SharedVertices { c }) => {
            all.push(spec(
                ParameterId::Coherent(0),
                "coherent background C".into(),
                "",
                *c,
                FREE,
            ));
        }
        Some(CoherentBackground::OnePhoton {
            c_nb, phase_rad, ..
        }) => {
            all.push(spec(
                ParameterId::Coherent(0),
                "one-photon continuum".into(),
                "nb",
                *c_nb,
                POSITIVE,
            ));
            all.push(spec(
                ParameterId::CoherentPhase,
                "phase of the continuum".into(),
                "rad",
                *phase_rad,
                FREE,
            ));
        }
    }
    match &wave.incoherent {
        None => {}
        Some(IncoherentBackground::Power { c0_nb, n, .. }) => {
            all.push(spec(
                ParameterId::Incoherent(0),
                "incoherent background".into(),
                "nb",
                *c0_nb,
                POSITIVE,
            ));
            all.push(spec(
                ParameterId::Incoherent(1),
                "power of the incoherent background".into(),
                "",
                *n,
                FREE,
            ));
        }
        Some(IncoherentBackground::Polynomial {
            coefficients_nb, ..
        }) => {
            for (i, c) in (0u16..).zip(coefficients_nb) {
                all.push(spec(
                    ParameterId::Incoherent(i),
                    format!("incoherent background, coefficient {i}"),
                    "nb",
                    *c,
                    FREE,
                ));
            }
        }
    }
    all
}

type Limits = (Option<f64>, Option<f64>);
const FREE: Limits = (None, None);
const POSITIVE: Limits = (Some(0.0), None);
const FRACTION: Limits = (Some(0.0), Some(1.0));

fn spec(
    id: ParameterId,
    label: String,
    unit: &'static str,
    value: f64,
    limits: Limits,
) -> ParameterSpec {
    let scale = match unit {
        "rad" => 0.2,
        _ if value == 0.0 => 0.1,
        _ => 0.1 * value.abs(),
    };
    ParameterSpec {
        id,
        label,
        unit,
        value,
        lower: limits.0,
        upper: limits.1,
        scale,
    }
}

fn resonance_parameters(index: u16, resonance: &Resonance, all: &mut Vec<ParameterSpec>) {
    use ResonanceParameter as P;
    let name = &resonance.name;
    let mut push = |parameter, what: &str, unit, value, limits| {
        all.push(spec(
            ParameterId::Resonance(index, parameter),
            format!("{what} of {name}"),
            unit,
            value,
            limits,
        ));
    };
    push(P::Mass, "mass", "GeV", resonance.mass_gev, POSITIVE);
    push(P::Width, "width", "GeV", resonance.width_gev, POSITIVE);
    match resonance.strength {
        Strength::GammaInBf { gev } => push(
            P::Strength,
            "entrance width times exit fraction",
            "GeV",
            gev,
            POSITIVE,
        ),
        Strength::BinBf { product } => push(
            P::Strength,
            "product of branching fractions",
            "",
            product,
            FRACTION,
        ),
        Strength::Branchings { b_in, b_f } => {
            push(P::BIn, "entrance branching fraction", "", b_in, FRACTION);
            push(P::BF, "exit branching fraction", "", b_f, FRACTION);
        }
        Strength::PartialWidths {
            gamma_in_gev,
            gamma_f_gev,
        } => {
            push(P::GammaIn, "entrance width", "GeV", gamma_in_gev, POSITIVE);
            push(P::GammaF, "exit width", "GeV", gamma_f_gev, POSITIVE);
        }
    }
    if index > 0 {
        push(P::Phase, "phase", "rad", resonance.phase_rad, FREE);
    }
    // A mass moves by a part of its width, not of itself.
    for spec in all.iter_mut() {
        if spec.id == ParameterId::Resonance(index, P::Mass) {
            spec.scale = 0.2 * resonance.width_gev;
        }
    }
}
