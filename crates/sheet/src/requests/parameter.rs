//! Parameters of a fit by id: where their text stands in the sheet, what they measure.

use crate::check;
use crate::doc::{Coherent, Form, Incoherent, Loop, ModelKind, Sheet, SpreadKind, Strength};
use crate::quantity::unit::{Unit, read_unit};
use crate::quantity::{Dimension, read};
use widthwise_core::error::{Answer, Refusal};
use widthwise_core::scan::Spread;

/// A parameter of the sheet.
#[derive(Debug, Clone, PartialEq)]
pub struct Parameter {
    /// Path of its text.
    pub field: String,
    /// What the text measures.
    pub dimension: Dimension,
    /// The unit it is typed in.
    pub unit: Unit,
    /// The core's value over the sheet's (both in core units): not 1 where the core fits sigma_W
    /// and the sheet says a spread of each beam.
    pub core_per_sheet: f64,
}

/// The parameter with this id.
///
/// # Errors
/// The sheet has no such parameter.
pub fn find(sheet: &Sheet, id: &str) -> Answer<Parameter> {
    if let Some((index, rest)) = of_channel(id)
        && let Some(seen) = check::channel_sheet(sheet, index)
    {
        let mut found = find(&seen, rest)?;
        if let Some(field) = check::channel_path(sheet, index, &found.field) {
            found.field = field;
            return Ok(found);
        }
    }
    let (field, dimension, text) = place(sheet, id).ok_or_else(|| {
        Refusal::new(
            "fit.free",
            id,
            "a parameter of this sheet, such as r1.mass, r1.width, r1.strength, spread, background.rate",
            format!("this sheet has no parameter {id}"),
        )
    })?;
    let core = || read_unit(dimension.core_unit()).unwrap_or_default();
    let reading = text.and_then(|text| read(text, dimension).ok());
    let unit = reading.as_ref().map_or_else(core, |r| r.unit.clone());
    let core_per_sheet = match (id, &reading) {
        ("spread", Some(reading)) if reading.value > 0.0 => sigma_w(sheet) / reading.value,
        _ => 1.0,
    };
    Ok(Parameter {
        field,
        dimension,
        unit,
        core_per_sheet: if core_per_sheet > 0.0 {
            core_per_sheet
        } else {
            1.0
        },
    })
}

/// Channel and id within it of "c2.r1.strength".
fn of_channel(id: &str) -> Option<(usize, &str)> {
    let (number, rest) = id.strip_prefix('c')?.split_once('.')?;
    Some((number.parse::<usize>().ok()?.checked_sub(1)?, rest))
}

fn sigma_w(sheet: &Sheet) -> f64 {
    match check::frame(sheet).map(|(frame, _)| frame.scan.chain.spread) {
        Ok(Spread::Gaussian { sigma_gev, .. }) => sigma_gev,
        _ => 0.0,
    }
}

type Place<'a> = (String, Dimension, Option<&'a String>);

fn place<'a>(sheet: &'a Sheet, id: &str) -> Option<Place<'a>> {
    let (owner, name) = id.split_once('.').unwrap_or((id, ""));
    let numbered = |prefix: char| {
        let number = owner.strip_prefix(prefix)?.parse::<usize>().ok()?;
        number.checked_sub(1)
    };
    let kind = sheet.model.hypothesis;
    if matches!(kind, ModelKind::PartialWave | ModelKind::Waves)
        && let Some(i) = numbered('r')
    {
        return resonance(sheet, i, name);
    }
    match (kind, owner) {
        (ModelKind::KMatrix, "k") => return k_constant(sheet, name),
        (ModelKind::KMatrix, _) if owner.starts_with('k') => {
            return k_pole(sheet, numbered('k')?, name);
        }
        (ModelKind::Diagrams, _) if owner.starts_with('d') => {
            return mediator(sheet, numbered('d')?, name);
        }
        (ModelKind::Waves, _) if owner.starts_with('w') && name == "phase" => {
            let i = numbered('w')?;
            let text = sheet.model.waves.get(i)?.phase.as_ref();
            return Some((format!("model.waves[{i}].phase"), Dimension::Angle, text));
        }
        _ => {}
    }
    match (owner, name) {
        ("spread", "") => {
            let dimension = match sheet.beam.spread.kind {
                SpreadKind::W => Dimension::Energy,
                SpreadKind::Relative => Dimension::Number,
                SpreadKind::Each => check::dial_dimension(sheet.beam.dial),
                SpreadKind::None | SpreadKind::Table => return None,
            };
            Some((
                "beam.spread.first".into(),
                dimension,
                sheet.beam.spread.first.as_ref(),
            ))
        }
        ("background", "cross_section") => Some((
            "detection.background_cross_section".into(),
            Dimension::CrossSection,
            sheet.detection.background_cross_section.as_ref(),
        )),
        ("background", "rate") => Some((
            "detection.background_rate".into(),
            Dimension::Rate,
            sheet.detection.background_rate.as_ref(),
        )),
        ("coherent", name) => coherent(sheet.model.coherent.as_ref()?, name),
        ("incoherent", name) => incoherent(sheet.model.incoherent.as_ref()?, name),
        _ => None,
    }
}

fn resonance<'a>(sheet: &'a Sheet, index: usize, name: &str) -> Option<Place<'a>> {
    let r = sheet.model.resonances.get(index)?;
    let path = format!("model.resonances[{index}]");
    let energy =
        |field: &str, text| Some((format!("{path}.{field}"), Dimension::Energy, Some(text)));
    let number =
        |field: &str, text| Some((format!("{path}.{field}"), Dimension::Number, Some(text)));
    match (name, &r.strength) {
        ("mass", _) => energy("mass", &r.mass),
        ("width", _) => energy("width", &r.width),
        ("strength", Strength::OneWidth { value }) => energy("strength.value", value),
        ("phase", _) => Some((format!("{path}.phase"), Dimension::Angle, r.phase.as_ref())),
        ("strength", Strength::GammaInBf { value }) => energy("strength.value", value),
        ("strength", Strength::BinBf { value }) => number("strength.value", value),
        ("b_in", Strength::Branchings { b_in, .. }) => number("strength.b_in", b_in),
        ("b_f", Strength::Branchings { b_f, .. }) => number("strength.b_f", b_f),
        ("gamma_in", Strength::PartialWidths { gamma_in, .. }) => {
            energy("strength.gamma_in", gamma_in)
        }
        ("gamma_f", Strength::PartialWidths { gamma_f, .. }) => energy("strength.gamma_f", gamma_f),
        _ => own_coupling(&path, r.form, (&r.flatte, &r.loops), name),
    }
}

/// Coupling "g1", "g2", ... of a form: a Flatte channel's or a loop's.
fn own_coupling<'a>(
    path: &str,
    form: Form,
    (flatte, loops): (&'a [crate::doc::FlatteChannel], &'a [Loop]),
    name: &str,
) -> Option<Place<'a>> {
    let n = name
        .strip_prefix('g')?
        .parse::<usize>()
        .ok()?
        .checked_sub(1)?;
    match form {
        Form::Flatte => Some((
            format!("{path}.flatte[{n}].g_squared"),
            Dimension::EnergySquared,
            Some(&flatte.get(n)?.g_squared),
        )),
        Form::Dressed => Some(match loops.get(n)? {
            Loop::Fermion { g, .. } => (format!("{path}.loops[{n}].g"), Dimension::Number, Some(g)),
            Loop::Scalar { h, .. } => (format!("{path}.loops[{n}].h"), Dimension::Energy, Some(h)),
        }),
        _ => None,
    }
}

fn k_constant<'a>(sheet: &'a Sheet, name: &str) -> Option<Place<'a>> {
    let model = sheet.model.k_matrix.as_ref()?;
    let text = match name {
        "c11" => &model.c11,
        "c12" => &model.c12,
        "c22" => &model.c22,
        _ => return None,
    };
    let field = format!("model.k_matrix.{name}");
    Some((field, Dimension::Number, text.as_ref()))
}

fn k_pole<'a>(sheet: &'a Sheet, i: usize, name: &str) -> Option<Place<'a>> {
    let pole = sheet.model.k_matrix.as_ref()?.poles.get(i)?;
    let text = match name {
        "mass" => &pole.mass,
        "g1" => &pole.g1,
        "g2" => &pole.g2,
        _ => return None,
    };
    let field = format!("model.k_matrix.poles[{i}].{name}");
    Some((field, Dimension::Energy, Some(text)))
}

fn mediator<'a>(sheet: &'a Sheet, i: usize, name: &str) -> Option<Place<'a>> {
    let of = sheet.model.diagrams.as_ref()?.mediators.get(i)?;
    let path = format!("model.diagrams.mediators[{i}]");
    let (dimension, text) = match name {
        "mass" => (Dimension::Energy, Some(&of.mass)),
        "width" => (Dimension::Energy, of.width.as_ref()),
        "g" => (Dimension::Number, Some(&of.g)),
        "g_other" => (Dimension::Number, of.g_other.as_ref()),
        _ => return own_coupling(&path, of.form, (&of.flatte, &of.loops), name),
    };
    Some((format!("{path}.{name}"), dimension, text))
}

fn coherent<'a>(background: &'a Coherent, name: &str) -> Option<Place<'a>> {
    let phase_path = || "model.coherent.phase".to_string();
    match (background, name) {
        (Coherent::Polynomial { phase, .. } | Coherent::OnePhoton { phase, .. }, "phase") => {
            Some((phase_path(), Dimension::Angle, Some(phase)))
        }
        (Coherent::OnePhoton { c, .. }, "0") => {
            Some(("model.coherent.c".into(), Dimension::CrossSection, Some(c)))
        }
        (Coherent::SharedVertices { c }, "0") => {
            Some(("model.coherent.c".into(), Dimension::Number, Some(c)))
        }
        (Coherent::Polynomial { coefficients, .. }, index) => {
            let i: u8 = index.parse().ok()?;
            let text = coefficients.get(usize::from(i))?;
            Some((
                format!("model.coherent.coefficients[{i}]"),
                Dimension::NumberPerEnergy(i),
                Some(text),
            ))
        }
        _ => None,
    }
}

fn incoherent<'a>(background: &'a Incoherent, name: &str) -> Option<Place<'a>> {
    match (background, name) {
        (Incoherent::Power { c0, .. }, "0") => Some((
            "model.incoherent.c0".into(),
            Dimension::CrossSection,
            Some(c0),
        )),
        (Incoherent::Power { n, .. }, "1") => {
            Some(("model.incoherent.n".into(), Dimension::Number, Some(n)))
        }
        (Incoherent::Polynomial { coefficients, .. }, index) => {
            let i: u8 = index.parse().ok()?;
            let text = coefficients.get(usize::from(i))?;
            Some((
                format!("model.incoherent.coefficients[{i}]"),
                Dimension::CrossSectionPerEnergy(i),
                Some(text),
            ))
        }
        _ => None,
    }
}
