//! Every number of a hypothesis that a fit may vary, by id.

use super::hypothesis::{
    CoherentBackground, Diagrams, Form, Hypothesis, IncoherentBackground, KMatrix, Loop,
    MediatorPropagator, PartialWave, Reaction, Resonance, Strength, Waves,
};
use crate::error::{Answer, Refusal};
use core::fmt;

mod id;

pub use id::{KPoleParameter, MediatorParameter, ParameterId, ResonanceParameter};

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
            Self::KMatrix(model) => kmatrix_parameters(model),
            Self::Diagrams(model) => diagram_parameters(model),
            Self::Waves(model) => waves_parameters(model),
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
            Self::KMatrix(model) => kmatrix_slot(model, id),
            Self::Diagrams(model) => diagram_slot(model, id),
            Self::Waves(model) => waves_slot(model, id),
        }
    }
}

fn wave_slot(wave: &mut PartialWave, id: ParameterId) -> Option<&mut f64> {
    match id {
        ParameterId::Resonance(0, ResonanceParameter::Phase) => None,
        ParameterId::Resonance(index, parameter) => {
            resonance_slot(wave.resonances.get_mut(usize::from(index))?, parameter)
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
        ParameterId::Incoherent(i) => incoherent_slot(&mut wave.incoherent, i),
        _ => None,
    }
}

fn incoherent_slot(background: &mut Option<IncoherentBackground>, i: u16) -> Option<&mut f64> {
    match (background.as_mut()?, i) {
        (IncoherentBackground::Power { c0_nb, .. }, 0) => Some(c0_nb),
        (IncoherentBackground::Power { n, .. }, 1) => Some(n),
        (
            IncoherentBackground::Polynomial {
                coefficients_nb, ..
            },
            i,
        ) => coefficients_nb.get_mut(usize::from(i)),
        _ => None,
    }
}

/// Coupling n of a form: channels of Flatte, loops of a dressed mediator.
fn form_slot(form: &mut Form, n: u8) -> Option<&mut f64> {
    match form {
        Form::Flatte { channels } => channels
            .get_mut(usize::from(n))
            .map(|channel| &mut channel.g2_gev2),
        Form::Dressed { loops, .. } => loop_slot(loops, n),
        _ => None,
    }
}

fn loop_slot(loops: &mut [Loop], n: u8) -> Option<&mut f64> {
    loops.get_mut(usize::from(n)).map(|of| match of {
        Loop::Fermion { g, .. } => g,
        Loop::Scalar { h_gev, .. } => h_gev,
    })
}

/// What [`form_slot`] offers: (n, label, unit, value).
fn form_couplings(form: &Form) -> Vec<(u8, String, &'static str, f64)> {
    match form {
        Form::Flatte { channels } => (0u8..)
            .zip(channels)
            .map(|(n, channel)| {
                let label = format!("squared coupling to {}", channel.name);
                (n, label, "GeV^2", channel.g2_gev2)
            })
            .collect(),
        Form::Dressed { loops, .. } => loop_couplings(loops),
        _ => Vec::new(),
    }
}

fn loop_couplings(loops: &[Loop]) -> Vec<(u8, String, &'static str, f64)> {
    (0u8..)
        .zip(loops)
        .map(|(n, of)| match of {
            Loop::Fermion { name, g, .. } => (n, format!("coupling to {name}"), "", *g),
            Loop::Scalar { name, h_gev, .. } => (n, format!("coupling to {name}"), "GeV", *h_gev),
        })
        .collect()
}

fn kmatrix_slot(model: &mut KMatrix, id: ParameterId) -> Option<&mut f64> {
    match id {
        ParameterId::KPole(i, parameter) => {
            let pole = model.poles.get_mut(usize::from(i))?;
            Some(match parameter {
                KPoleParameter::Mass => &mut pole.mass_gev,
                KPoleParameter::G1 => &mut pole.g1_gev,
                KPoleParameter::G2 => &mut pole.g2_gev,
            })
        }
        ParameterId::KConstant(i) => model.constant.get_mut(usize::from(i)),
        ParameterId::Incoherent(i) => incoherent_slot(&mut model.incoherent, i),
        _ => None,
    }
}

fn diagram_slot(model: &mut Diagrams, id: ParameterId) -> Option<&mut f64> {
    use MediatorParameter as P;
    let (i, parameter) = match id {
        ParameterId::Mediator(i, parameter) => (i, parameter),
        ParameterId::Incoherent(i) => return incoherent_slot(&mut model.incoherent, i),
        _ => return None,
    };
    let reaction = model.reaction;
    let mediator = model.mediators.get_mut(usize::from(i))?;
    match parameter {
        // The mass of an external scalar is known from its beam or final state.
        P::Mass if reaction == Reaction::Compton => None,
        P::Mass => Some(&mut mediator.mass_gev),
        P::G => Some(&mut mediator.g),
        P::GOther if reaction.has_other_fermion() => Some(&mut mediator.g_other),
        P::GOther => None,
        P::Width | P::Coupling(_) if reaction.exchanges_fermion() => None,
        P::Width => match &mut mediator.propagator {
            MediatorPropagator::Form { form, width_gev } if !width_follows(form) => Some(width_gev),
            _ => None,
        },
        P::Coupling(n) => match &mut mediator.propagator {
            MediatorPropagator::Form { form, .. } => form_slot(form, n),
            MediatorPropagator::Dressed { others } => loop_slot(others, n),
        },
    }
}

/// Resonances are numbered through all waves; the coherent background is the first wave's.
fn waves_slot(model: &mut Waves, id: ParameterId) -> Option<&mut f64> {
    match id {
        ParameterId::Resonance(index, parameter) => {
            let mut left = usize::from(index);
            for wave in &mut model.waves {
                let count = wave.wave.resonances.len();
                if left < count {
                    let local = ParameterId::Resonance(u16::try_from(left).ok()?, parameter);
                    return wave_slot(&mut wave.wave, local);
                }
                left -= count;
            }
            None
        }
        ParameterId::WavePhase(0) => None,
        ParameterId::WavePhase(i) => model
            .waves
            .get_mut(usize::from(i))
            .map(|wave| &mut wave.phase_rad),
        ParameterId::Incoherent(i) => incoherent_slot(&mut model.incoherent, i),
        ParameterId::Coherent(_) | ParameterId::CoherentPhase => {
            wave_slot(&mut model.waves.first_mut()?.wave, id)
        }
        _ => None,
    }
}

fn waves_parameters(model: &Waves) -> Vec<ParameterSpec> {
    let mut all = Vec::new();
    let mut before = 0u16;
    for (i, wave) in (0u16..).zip(&model.waves) {
        for mut one in wave_parameters(&wave.wave) {
            match &mut one.id {
                ParameterId::Resonance(index, _) => *index += before,
                _ if i > 0 => continue,
                _ => {}
            }
            all.push(one);
        }
        if i > 0 {
            let label = format!("phase of wave {}", i + 1);
            all.push(spec(
                ParameterId::WavePhase(i),
                label,
                "rad",
                wave.phase_rad,
                FREE,
            ));
        }
        before += u16::try_from(wave.wave.resonances.len()).unwrap_or(0);
    }
    incoherent_parameters(model.incoherent.as_ref(), &mut all);
    all
}

fn kmatrix_parameters(model: &KMatrix) -> Vec<ParameterSpec> {
    let mut all = Vec::new();
    for (i, pole) in (0u16..).zip(&model.poles) {
        let number = i + 1;
        for (parameter, what, value, limits) in [
            (KPoleParameter::Mass, "mass", pole.mass_gev, POSITIVE),
            (KPoleParameter::G1, "coupling 1", pole.g1_gev, FREE),
            (KPoleParameter::G2, "coupling 2", pole.g2_gev, FREE),
        ] {
            let label = format!("{what} of bare pole {number}");
            let mut one = spec(
                ParameterId::KPole(i, parameter),
                label,
                "GeV",
                value,
                limits,
            );
            if parameter == KPoleParameter::Mass {
                one.scale = 0.01 * value;
            }
            all.push(one);
        }
    }
    for (i, value) in (0u8..).zip(model.constant) {
        let id = ParameterId::KConstant(i);
        all.push(spec(id, format!("constant {id} of K"), "", value, FREE));
    }
    incoherent_parameters(model.incoherent.as_ref(), &mut all);
    all
}

fn diagram_parameters(model: &Diagrams) -> Vec<ParameterSpec> {
    use MediatorParameter as P;
    let mut all = Vec::new();
    for (i, mediator) in (0u16..).zip(&model.mediators) {
        let id = |parameter| ParameterId::Mediator(i, parameter);
        let label = |what: &str| format!("{what} of {}", mediator.name);
        let (form, width) = match &mediator.propagator {
            MediatorPropagator::Form { form, width_gev } => (Some(form), *width_gev),
            MediatorPropagator::Dressed { .. } => (None, 0.0),
        };
        if model.reaction != Reaction::Compton {
            let mut mass = spec(
                id(P::Mass),
                label("mass"),
                "GeV",
                mediator.mass_gev,
                POSITIVE,
            );
            mass.scale = if width > 0.0 {
                0.2 * width
            } else {
                0.01 * mediator.mass_gev
            };
            all.push(mass);
        }
        all.push(spec(id(P::G), label("coupling g"), "", mediator.g, FREE));
        if model.reaction.has_other_fermion() {
            all.push(spec(
                id(P::GOther),
                label("coupling g_F"),
                "",
                mediator.g_other,
                FREE,
            ));
        }
        if model.reaction.exchanges_fermion() {
            continue;
        }
        if form.is_some_and(|form| !width_follows(form)) {
            all.push(spec(id(P::Width), label("width"), "GeV", width, POSITIVE));
        }
        let couplings = match &mediator.propagator {
            MediatorPropagator::Form { form, .. } => form_couplings(form),
            MediatorPropagator::Dressed { others } => loop_couplings(others),
        };
        for (n, what, unit, value) in couplings {
            all.push(spec(
                id(P::Coupling(n)),
                label(&what),
                unit,
                value,
                POSITIVE,
            ));
        }
    }
    incoherent_parameters(model.incoherent.as_ref(), &mut all);
    all
}

fn resonance_slot(resonance: &mut Resonance, parameter: ResonanceParameter) -> Option<&mut f64> {
    use ResonanceParameter as P;
    match (parameter, &mut resonance.strength) {
        (P::Width, _) if width_follows(&resonance.form) => None,
        (P::Coupling(n), _) => form_slot(&mut resonance.form, n),
        (P::Strength, Strength::OneWidth { gev }) => Some(gev),
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

/// Forms whose width is not a parameter of its own.
fn width_follows(form: &Form) -> bool {
    matches!(
        form,
        Form::Flatte { .. } | Form::Dressed { .. } | Form::Free
    )
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
    incoherent_parameters(wave.incoherent.as_ref(), &mut all);
    all
}

fn incoherent_parameters(background: Option<&IncoherentBackground>, all: &mut Vec<ParameterSpec>) {
    match background {
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
    if !width_follows(&resonance.form) {
        push(P::Width, "width", "GeV", resonance.width_gev, POSITIVE);
    }
    for (n, what, unit, value) in form_couplings(&resonance.form) {
        push(P::Coupling(n), &what, unit, value, POSITIVE);
    }
    match resonance.strength {
        Strength::OneWidth { gev } => push(P::Strength, "partial width", "GeV", gev, POSITIVE),
        Strength::FromForm => {}
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
            spec.scale = if resonance.width_gev > 0.0 {
                0.2 * resonance.width_gev
            } else {
                0.01 * resonance.mass_gev
            };
        }
    }
}
