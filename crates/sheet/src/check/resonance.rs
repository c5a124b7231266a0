//! One resonance of a sheet.

use super::log::Log;
use crate::doc;
use crate::quantity::Dimension::{Energy, Number, Radius};
use widthwise_core::amplitude::default_vertices;
use widthwise_core::amplitude::hypothesis::{
    ChannelShape, Form, Resonance, Strength, TwoBody, Vertex, WidthChannel,
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
    let width_gev = log.value(&format!("{path}.width"), &resonance.width, Energy);
    let strength = strength(&format!("{path}.strength"), &resonance.strength, log);
    let phase_rad = log
        .optional(
            &format!("{path}.phase"),
            resonance.phase.as_ref(),
            crate::quantity::Dimension::Angle,
        )
        .unwrap_or(0.0);
    let form = form(path, resonance, log);
    let defaults = default_vertices(&form, lepton_pair);
    let mut vertex_of = |side: &str, typed: Option<&doc::Vertex>, default: Option<Vertex>| {
        let path = format!("{path}.{side}");
        match (typed, default) {
            (Some(typed), _) => Some(vertex(&path, typed, log)),
            (None, Some(default)) => Some(default),
            (None, None) => {
                log.refuse(
                    &path,
                    "",
                    "constant, one photon, massless or running",
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
    }
}

fn form(path: &str, resonance: &doc::Resonance, log: &mut Log) -> Form {
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
    }
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

fn vertex(path: &str, vertex: &doc::Vertex, log: &mut Log) -> Vertex {
    match vertex {
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
