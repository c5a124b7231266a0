//! One resonance of a sheet.

use super::log::Log;
use crate::doc;
use crate::quantity::Dimension::{Energy, EnergySquared, Number, Radius};
use widthwise_core::amplitude::default_vertices;
use widthwise_core::amplitude::hypothesis::{
    ChannelShape, FlatteChannel, Form, Loop, Resonance, Strength, TwoBody, Vertex, WidthChannel,
};

/// The resonance at `path`; `None` and refusals if it is not understood.
pub fn resonance(
    path: &str,
    resonance: &doc::Resonance,
    lepton_pair: bool,
    log: &mut Log,
) -> Option<Resonance> {
    let before = log.problems.len();
    let mass_gev = log.value(&format!("{path}.mass"), &resonance.mass, Energy);
    let width_gev = width(path, resonance.form, Some(&resonance.width), log);
    let strength = strength(&format!("{path}.strength"), &resonance.strength, log);
    let phase_rad = log
        .optional(
            &format!("{path}.phase"),
            resonance.phase.as_ref(),
            crate::quantity::Dimension::Angle,
        )
        .unwrap_or(0.0);
    let form = form(path, &FormFields::of_resonance(resonance), log);
    let defaults = default_vertices(&form, lepton_pair);
    let mut vertex_of = |side: &str, typed: Option<&doc::Vertex>, default: Option<Vertex>| {
        let path = format!("{path}.{side}");
        match (typed, default) {
            (Some(typed), _) => Some(vertex(&path, typed, &form, log)),
            (None, Some(default)) => Some(default),
            (None, None) => {
                log.refuse(
                    &path,
                    "",
                    "constant, one photon, massless, running, or a channel of the form",
                    "this form has no usual vertex here, so one has to be declared",
                );
                None
            }
        }
    };
    let entrance = vertex_of(
        "entrance",
        resonance.entrance.as_ref(),
        defaults.as_ref().map(|d| d.0.clone()),
    );
    let exit = vertex_of("exit", resonance.exit.as_ref(), defaults.map(|d| d.1));
    let (entrance, exit) = (entrance?, exit?);
    (log.problems.len() == before).then(|| Resonance {
        name: resonance.name.clone(),
        mass_gev,
        width_gev,
        strength,
        phase_rad,
        form,
        entrance,
        exit,
    })
}

fn strength(path: &str, strength: &doc::Strength, log: &mut Log) -> Strength {
    let mut value =
        |field: &str, text: &str, dimension| log.value(&format!("{path}.{field}"), text, dimension);
    match strength {
        doc::Strength::GammaInBf { value: text } => Strength::GammaInBf {
            gev: value("value", text, Energy),
        },
        doc::Strength::BinBf { value: text } => Strength::BinBf {
            product: value("value", text, Number),
        },
        doc::Strength::Branchings { b_in, b_f } => Strength::Branchings {
            b_in: value("b_in", b_in, Number),
            b_f: value("b_f", b_f, Number),
        },
        doc::Strength::PartialWidths { gamma_in, gamma_f } => Strength::PartialWidths {
            gamma_in_gev: value("gamma_in", gamma_in, Energy),
            gamma_f_gev: value("gamma_f", gamma_f, Energy),
        },
        doc::Strength::OneWidth { value: text } => Strength::OneWidth {
            gev: value("value", text, Energy),
        },
        doc::Strength::FromForm => Strength::FromForm,
    }
}

/// What a propagator is made of, in a resonance or a mediator.
pub struct FormFields<'a> {
    /// Form.
    pub form: doc::Form,
    /// Width channels.
    pub channels: &'a [doc::Channel],
    /// Flatte channels.
    pub flatte: &'a [doc::FlatteChannel],
    /// Daughters.
    pub daughter: Option<&'a String>,
    /// Loops.
    pub loops: &'a [doc::Loop],
    /// Couples with gamma5.
    pub pseudoscalar: bool,
}

impl<'a> FormFields<'a> {
    fn of_resonance(r: &'a doc::Resonance) -> Self {
        Self {
            form: r.form,
            channels: &r.channels,
            flatte: &r.flatte,
            daughter: r.daughter.as_ref(),
            loops: &r.loops,
            pseudoscalar: r.pseudoscalar,
        }
    }

    /// Of a mediator.
    pub fn of_mediator(m: &'a doc::Mediator) -> Self {
        Self {
            form: m.form,
            channels: &m.channels,
            flatte: &m.flatte,
            daughter: m.daughter.as_ref(),
            loops: &m.loops,
            pseudoscalar: m.pseudoscalar,
        }
    }
}

/// Forms whose width follows from their couplings.
pub fn width_follows(form: doc::Form) -> bool {
    matches!(
        form,
        doc::Form::Flatte | doc::Form::Dressed | doc::Form::Free
    )
}

/// The width that the core takes: 0 where couplings make it.
pub fn width(path: &str, form: doc::Form, text: Option<&String>, log: &mut Log) -> f64 {
    let text = text.map_or("", String::as_str);
    if !width_follows(form) {
        return log.value(&format!("{path}.width"), text, Energy);
    }
    if !text.trim().is_empty() {
        log.warn(
            "width-unused",
            "A width is written beside a form whose couplings make it: the written one does not count.",
        );
    }
    0.0
}

/// The propagator at `path`.
pub fn form(path: &str, resonance: &FormFields, log: &mut Log) -> Form {
    let running = resonance.form == doc::Form::RunningWidth;
    if running && resonance.channels.is_empty() {
        log.refuse(
            &format!("{path}.channels"),
            "none",
            "one channel or more, fractions that sum to 1",
            "a running width is the sum of its declared channels, and there is none",
        );
    }
    if !running && !resonance.channels.is_empty() {
        log.warn(
            "channels-unused",
            "Width channels are declared but the form is not a running width: they do not count.",
        );
    }
    match resonance.form {
        doc::Form::ConstantWidth => Form::ConstantWidth,
        doc::Form::MasslessChannels => Form::MasslessChannels,
        doc::Form::RunningWidth => Form::RunningWidth {
            channels: resonance
                .channels
                .iter()
                .enumerate()
                .map(|(i, c)| channel(&format!("{path}.channels[{i}]"), c, log))
                .collect(),
        },
        doc::Form::Flatte => flatte(path, resonance.flatte, log),
        doc::Form::GounarisSakurai => Form::GounarisSakurai {
            m_gev: log.value(
                &format!("{path}.daughter"),
                resonance.daughter.map_or("", String::as_str),
                Energy,
            ),
        },
        doc::Form::Dressed => Form::Dressed {
            pseudoscalar: resonance.pseudoscalar,
            loops: loops(path, resonance.loops, log),
        },
        doc::Form::Free => Form::Free,
    }
}

fn flatte(path: &str, channels: &[doc::FlatteChannel], log: &mut Log) -> Form {
    if channels.len() != 2 {
        log.refuse(
            &format!("{path}.flatte"),
            &format!("{} channels", channels.len()),
            "two channels",
            "this form has exactly two channels; a running width takes any number",
        );
    }
    let mut channel = |i: usize| {
        let path = format!("{path}.flatte[{i}]");
        let empty = doc::FlatteChannel {
            name: String::new(),
            g_squared: "0 GeV^2".into(),
            m1: "0 GeV".into(),
            m2: "0 GeV".into(),
        };
        let of = channels.get(i).unwrap_or(&empty);
        FlatteChannel {
            name: of.name.clone(),
            g2_gev2: log.value(&format!("{path}.g_squared"), &of.g_squared, EnergySquared),
            m1_gev: log.value(&format!("{path}.m1"), &of.m1, Energy),
            m2_gev: log.value(&format!("{path}.m2"), &of.m2, Energy),
        }
    };
    Form::Flatte {
        channels: [channel(0), channel(1)],
    }
}

/// Loops of a dressed mediator.
pub fn loops(path: &str, loops: &[doc::Loop], log: &mut Log) -> Vec<Loop> {
    let of = |(i, of): (usize, &doc::Loop)| {
        let mut value = |field: &str, text: &str, dimension| {
            log.value(&format!("{path}.loops[{i}].{field}"), text, dimension)
        };
        match of {
            doc::Loop::Fermion {
                name,
                g,
                mass,
                colours,
            } => Loop::Fermion {
                name: name.clone(),
                g: value("g", g, Number),
                m_gev: value("mass", mass, Energy),
                colours: {
                    if *colours == Some(0) {
                        log.refuse(
                            &format!("{path}.loops[{i}].colours"),
                            "0",
                            "1 or more",
                            "a colour factor is 1 where there is none",
                        );
                    }
                    colours.unwrap_or(1)
                },
            },
            doc::Loop::Scalar {
                name,
                h,
                m1,
                m2,
                identical,
            } => Loop::Scalar {
                name: name.clone(),
                h_gev: value("h", h, Energy),
                m1_gev: value("m1", m1, Energy),
                m2_gev: value("m2", m2, Energy),
                identical: *identical,
            },
        }
    };
    loops.iter().enumerate().map(of).collect()
}

fn channel(path: &str, channel: &doc::Channel, log: &mut Log) -> WidthChannel {
    let fraction = log.value(&format!("{path}.fraction"), &channel.fraction, Number);
    let path = format!("{path}.shape");
    let shape = match &channel.shape {
        doc::Shape::Constant => ChannelShape::Constant,
        doc::Shape::Massless => ChannelShape::Massless,
        doc::Shape::TwoBody { m1, m2, l, radius } => {
            ChannelShape::TwoBody(two_body(&path, (m1, m2), *l, radius.as_ref(), log))
        }
        doc::Shape::Tabulated { rows } => ChannelShape::Tabulated {
            rows: rows
                .iter()
                .enumerate()
                .map(|(i, (w, ratio))| {
                    (
                        log.value(&format!("{path}.rows[{i}].0"), w, Energy),
                        log.value(&format!("{path}.rows[{i}].1"), ratio, Number),
                    )
                })
                .collect(),
        },
    };
    WidthChannel {
        name: channel.name.clone(),
        fraction,
        shape,
    }
}

fn vertex(path: &str, vertex: &doc::Vertex, form: &Form, log: &mut Log) -> Vertex {
    match vertex {
        doc::Vertex::Own { channel } => {
            let Some(index) = channel.checked_sub(1) else {
                log.refuse(path, "0", "1, 2, ...", "channels are counted from 1");
                return Vertex::Constant;
            };
            if matches!(form, Form::Flatte { .. }) {
                Vertex::Flatte { channel: index }
            } else {
                Vertex::Dressed { index }
            }
        }
        doc::Vertex::Constant => Vertex::Constant,
        doc::Vertex::OnePhoton => Vertex::OnePhoton,
        doc::Vertex::Massless => Vertex::Massless,
        doc::Vertex::Running { m1, m2, l, radius } => {
            Vertex::Running(two_body(path, (m1, m2), *l, radius.as_ref(), log))
        }
    }
}

fn two_body(
    path: &str,
    (m1, m2): (&str, &str),
    l: u8,
    radius: Option<&String>,
    log: &mut Log,
) -> TwoBody {
    TwoBody {
        m1_gev: log.value(&format!("{path}.m1"), m1, Energy),
        m2_gev: log.value(&format!("{path}.m2"), m2, Energy),
        l,
        radius_per_gev: log
            .optional(&format!("{path}.radius"), radius, Radius)
            .unwrap_or(0.0),
    }
}
