//! Further exit channels: each read as if it were the sheet's own model.

use super::{detection, log::Log, model};
use crate::doc::{Detection, ExitChannel, Model, Sheet, Strength};
use widthwise_core::beam::Beams;
use widthwise_core::scan::{ChainSettings, Exit};

/// Most further channels.
pub const MOST_CHANNELS: usize = 12;

/// The sheet with a channel in the place of its own model and detection, without rows; `None` if
/// there is no such channel.
#[must_use]
pub fn sheet_of(sheet: &Sheet, index: usize) -> Option<Sheet> {
    let channel = sheet.channels.get(index)?;
    Some(Sheet {
        format: sheet.format.clone(),
        version: sheet.version,
        title: String::new(),
        invented: sheet.invented,
        note: String::new(),
        beam: sheet.beam.clone(),
        model: channel
            .model
            .clone()
            .unwrap_or_else(|| same_resonances(&sheet.model, channel)),
        detection: detection_of(&sheet.detection, &channel.detection),
        data: crate::doc::Data {
            stage: sheet.data.stage,
            ..crate::doc::Data::default()
        },
        fit: crate::doc::Fit::default(),
        plan: crate::doc::Plan::default(),
        channels: Vec::new(),
    })
}

/// The sheet's resonances with the channel's strengths, phases, vertices and backgrounds.
fn same_resonances(own: &Model, channel: &ExitChannel) -> Model {
    let mut out = own.clone();
    for (i, r) in out.resonances.iter_mut().enumerate() {
        let text = channel.strengths.get(i).cloned().unwrap_or_default();
        if let Strength::GammaInBf { value } | Strength::BinBf { value } = &mut r.strength {
            *value = text;
        } else if let Strength::Branchings { b_f, .. } = &mut r.strength {
            *b_f = text;
        } else if let Strength::PartialWidths { gamma_f, .. } = &mut r.strength {
            *gamma_f = text;
        }
        if let Some(phase) = i.checked_sub(1).and_then(|k| channel.phases.get(k)) {
            r.phase = Some(phase.clone());
        }
        if channel.exit.is_some() {
            r.exit.clone_from(&channel.exit);
        }
    }
    out.coherent.clone_from(&channel.coherent);
    out.incoherent.clone_from(&channel.incoherent);
    out.final_threshold.clone_from(&channel.final_threshold);
    if channel.w_min.is_some() {
        out.radiation.w_min.clone_from(&channel.w_min);
    }
    out
}

fn detection_of(own: &Detection, channel: &Detection) -> Detection {
    let mut out = channel.clone();
    let inherit = |slot: &mut Option<String>, from: &Option<String>| {
        if slot.is_none() {
            slot.clone_from(from);
        }
    };
    inherit(&mut out.efficiency, &own.efficiency);
    inherit(&mut out.decay_fraction, &own.decay_fraction);
    inherit(&mut out.live_fraction, &own.live_fraction);
    inherit(&mut out.tau, &own.tau);
    out
}

/// Where a field of [`sheet_of`] stands in the sheet; `None`: it is the sheet's own.
#[must_use]
pub fn path_of(sheet: &Sheet, index: usize, field: &str) -> Option<String> {
    let channel = sheet.channels.get(index)?;
    let here = format!("channels[{index}]");
    if field.starts_with("detection.") {
        return Some(format!("{here}.{field}"));
    }
    let rest = field.strip_prefix("model.")?;
    if channel.model.is_some() {
        return Some(format!("{here}.{field}"));
    }
    if let Some(resonance) = rest.strip_prefix("resonances[") {
        let (number, name) = resonance.split_once("].")?;
        let n: usize = number.parse().ok()?;
        return match name.split('.').next()? {
            "strength" if !name.ends_with("b_in") && !name.ends_with("gamma_in") => {
                Some(format!("{here}.strengths[{n}]"))
            }
            "phase" if channel.phases.len() >= n => {
                Some(format!("{here}.phases[{}]", n.checked_sub(1)?))
            }
            "exit" if channel.exit.is_some() => Some(format!("{here}.{name}")),
            _ => None,
        };
    }
    if rest == "radiation.w_min" {
        return channel.w_min.is_some().then(|| format!("{here}.w_min"));
    }
    let own = ["coherent", "incoherent", "final_threshold"];
    own.iter()
        .any(|name| rest.starts_with(name))
        .then(|| format!("{here}.{rest}"))
}

/// All channels; refusals go to the log with the channel's paths.
pub fn channels(
    sheet: &Sheet,
    beams: Option<&Beams>,
    chain: Option<&ChainSettings>,
    log: &mut Log,
) -> Vec<Exit> {
    if sheet.channels.len() > MOST_CHANNELS {
        log.refuse(
            "channels",
            &sheet.channels.len().to_string(),
            &format!("up to {MOST_CHANNELS} further channels"),
            "so many channels are not fitted together",
        );
        return Vec::new();
    }
    let mut out = Vec::with_capacity(sheet.channels.len());
    for (i, channel) in sheet.channels.iter().enumerate() {
        let path = format!("channels[{i}].name");
        let twice = sheet
            .channels
            .iter()
            .take(i)
            .any(|c| c.name == channel.name);
        if channel.name.trim().is_empty() || twice || channel.name == sheet.model.final_state {
            log.refuse(
                &path,
                &channel.name,
                "a name that no other channel has",
                "rows name their channel: each needs a name of its own",
            );
        }
        if channel.model.is_none() && channel.strengths.len() != sheet.model.resonances.len() {
            log.refuse(
                &format!("channels[{i}].strengths"),
                &channel.strengths.len().to_string(),
                "one exit strength for each resonance",
                format!(
                    "the channel {} needs an exit strength for each resonance",
                    channel.name
                ),
            );
            continue;
        }
        let Some(seen) = sheet_of(sheet, i) else {
            continue;
        };
        let mut own = Log::default();
        let hypothesis = model::hypothesis(&seen.model, beams, &mut own);
        let detection = detection::detection(&seen, &mut own);
        let spread = chain.map(|c| c.spread.clone());
        let settings = model::chain(&seen, beams, spread, None, &mut own);
        let found = own.problems.len();
        for mut problem in own.problems {
            // What is the sheet's own has been told already.
            if let Some(field) = path_of(sheet, i, &problem.field) {
                problem.field = field;
                log.problems.push(problem);
            }
        }
        if found > 0 {
            continue;
        }
        if let (Some(hypothesis), Some(settings)) = (hypothesis, settings) {
            out.push(Exit {
                name: channel.name.clone(),
                hypothesis,
                same_resonances: channel.model.is_none(),
                detection,
                w_min_gev: settings.w_min_gev,
            });
        }
    }
    out
}
