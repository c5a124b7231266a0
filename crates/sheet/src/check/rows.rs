//! Rows of data, each understood on its own.

use super::beam::{Frame, dial_dimension};
use super::log::Log;
use crate::doc::{LuminositySource, Row, Sheet, Stage};
use crate::limits;
use crate::quantity::Dimension::{CrossSection, Energy, Luminosity, Number, Time};
use crate::times;
use jiff::Timestamp;
use widthwise_core::fit::has_angles;
use widthwise_core::scan::{CountedBin, Measured, Point};

/// A row as the core understands it.
#[derive(Debug, Clone)]
pub struct RowReading {
    /// The row's id.
    pub id: String,
    /// Left out of the fit.
    pub left_out: bool,
    /// Running now.
    pub running: bool,
    /// The point; `None` if the row is not understood.
    pub point: Option<Point>,
}

/// Reads every row; refusals and warnings go to the log.
pub fn read(sheet: &Sheet, frame: Option<&Frame>, log: &mut Log) -> Vec<RowReading> {
    let mut out = Vec::with_capacity(sheet.data.rows.len());
    let mut starts = Vec::with_capacity(sheet.data.rows.len());
    unique_ids(sheet, log);
    if sheet.data.stage != Stage::Observed
        && sheet
            .data
            .rows
            .iter()
            .any(|r| r.counts.is_some() || !r.angle_bins.is_empty())
    {
        log.refuse(
            "data.stage",
            "",
            "observed, where rows have counts",
            "counts are as the detector saw them: radiation cannot have been removed",
        );
    }
    for (i, row) in sheet.data.rows.iter().enumerate() {
        let before = log.problems.len();
        let path = format!("data.rows[{i}]");
        let start = time(&path, "start", row.start.as_deref(), log);
        starts.push(start);
        let point = point(&path, row, start, sheet, frame, log);
        let point = point.filter(|_| log.problems.len() == before);
        out.push(RowReading {
            id: row.id.clone(),
            left_out: row.left_out,
            running: row.running,
            point,
        });
    }
    if let Some(first) = starts.iter().flatten().min().copied() {
        for (reading, start) in out.iter_mut().zip(&starts) {
            if let (Some(point), Some(start)) = (reading.point.as_mut(), start) {
                point.start_h = Some(times::hours_between(first, *start));
            }
        }
    }
    out
}

fn unique_ids(sheet: &Sheet, log: &mut Log) {
    let mut seen = std::collections::BTreeSet::new();
    for (i, row) in sheet.data.rows.iter().enumerate() {
        let path = format!("data.rows[{i}].id");
        if row.id.trim().is_empty() {
            log.refuse(
                &path,
                "",
                "a text that no other row has",
                "the row has no id",
            );
        } else if !seen.insert(row.id.as_str()) {
            log.refuse(
                &path,
                &row.id,
                "a text that no other row has",
                "two rows have this id",
            );
        }
    }
}

fn time(path: &str, field: &str, text: Option<&str>, log: &mut Log) -> Option<Timestamp> {
    match times::parse(&format!("{path}.{field}"), text?) {
        Ok(time) => Some(time),
        Err(refusal) => {
            log.problems.push(refusal);
            None
        }
    }
}

fn point(
    path: &str,
    row: &Row,
    start: Option<Timestamp>,
    sheet: &Sheet,
    frame: Option<&Frame>,
    log: &mut Log,
) -> Option<Point> {
    let at = |field: &str| format!("{path}.{field}");
    let measured = measured(path, row, sheet, log);
    let exit = channel(path, row, sheet, log);
    if let (Some(Measured::Bins { .. }), Some(frame)) = (&measured, frame) {
        let hypothesis = match exit.checked_sub(1) {
            None => Some(&frame.scan.hypothesis),
            Some(i) => frame.scan.exits.get(i).map(|e| &e.hypothesis),
        };
        if hypothesis.is_some_and(|h| !has_angles(h)) {
            log.refuse(
                &at("angle_bins"),
                "",
                "waves with helicity or LS couplings, diagrams, or J = 0",
                "this hypothesis says nothing about angles, so counts in angular bins cannot be compared with it",
            );
        }
    }
    let efficiency = log.with_error(
        (&at("efficiency"), row.efficiency.as_ref()),
        (&at("efficiency_error"), row.efficiency_error.as_ref()),
        Number,
    );
    let sigma_w_gev = log.optional(&at("sigma_w"), row.sigma_w.as_ref(), Energy);
    let live_fraction = live_fraction(path, row, sheet, log);
    let live_h = live_time(path, row, start, live_fraction, log);
    let luminosity = luminosity(path, row, sheet, log);
    let (w_gev, w_error_gev) = energy(path, row, sheet, frame, log)?;
    let frame = frame?;
    let rate = frame.scan.detection.luminosity_nbinv_per_h;
    let counted = matches!(
        measured,
        Some(Measured::Counts { .. } | Measured::Bins { .. })
    );
    let apart = matches!(measured, Some(Measured::BeamsApart { .. }));
    let rate_bg_per_h = frame.scan.detection_of(exit).rate_bg_per_h;
    let luminosity_nbinv = match (luminosity, live_h) {
        (Some((value, _)), _) => {
            if apart {
                log.refuse(
                    &at("luminosity"),
                    row.luminosity.as_deref().unwrap_or(""),
                    "no luminosity",
                    "with the beams apart there is no luminosity",
                );
            }
            value
        }
        _ if apart => 0.0,
        // The luminosity of the whole time; the live fraction is taken off later.
        (None, Some(live)) if rate > 0.0 => {
            if counted {
                log.warn(
                    "luminosity-from-rate",
                    "Rows without integrated luminosity take the beam's luminosity times their time.",
                );
            }
            rate * live / live_fraction
        }
        (None, _) if counted && !row.running => {
            log.refuse(
                &at("luminosity"),
                "",
                "an integrated luminosity, or start and stop beside the beam's luminosity",
                "counts say nothing without a luminosity",
            );
            return None;
        }
        (None, _) => 0.0,
    };
    let live_time_h = match live_h {
        Some(live) => live,
        None if rate > 0.0 && luminosity_nbinv > 0.0 => {
            if counted && rate_bg_per_h > 0.0 {
                log.warn(
                    "live-time-from-luminosity",
                    "Rows without times take their luminosity over the beam's as live time.",
                );
            }
            luminosity_nbinv / rate * live_fraction
        }
        None => {
            if counted && rate_bg_per_h > 0.0 {
                log.refuse(
                    &at("live_time"),
                    "",
                    "a live time, or start and stop",
                    "the background rate cannot be taken off without a live time",
                );
                return None;
            }
            if apart {
                log.refuse(
                    &at("live_time"),
                    "",
                    "a live time, or start and stop",
                    "counts with the beams apart need their live time",
                );
                return None;
            }
            0.0
        }
    };
    Some(Point {
        id: row.id.clone(),
        group: row.group.clone(),
        w_gev,
        w_error_gev,
        sigma_w_gev,
        luminosity_nbinv,
        luminosity_error_nbinv: luminosity.and_then(|(_, e)| e).unwrap_or(0.0),
        live_time_h,
        live_fraction,
        efficiency: efficiency.map(|(value, _)| value),
        efficiency_error: efficiency.and_then(|(_, e)| e).unwrap_or(0.0),
        channel: row.channel.clone(),
        measured: measured?,
        start_h: None,
    })
}

/// (true W, its error), GeV.
fn energy(
    path: &str,
    row: &Row,
    sheet: &Sheet,
    frame: Option<&Frame>,
    log: &mut Log,
) -> Option<(f64, f64)> {
    let w_path = format!("{path}.w");
    let setting_path = format!("{path}.setting");
    let setting = row.setting.as_ref().map(|text| {
        log.read(&setting_path, text, dial_dimension(sheet.beam.dial))
            .map(|r| (r.value, text))
    });
    let typed = log.with_error(
        (&w_path, row.w.as_ref()),
        (&format!("{path}.w_error"), row.w_error.as_ref()),
        Energy,
    );
    let from_setting = match (setting.flatten(), frame) {
        (Some((value, text)), Some(frame)) => match frame.w_of_setting(value) {
            Ok(w) => Some(w),
            Err(refusal) => {
                log.refuse(&setting_path, text, &refusal.allowed, refusal.message);
                None
            }
        },
        _ => None,
    };
    if let Some((w, error)) = typed {
        if let Some(frame) = frame
            && let Err(refusal) = frame.setting_of_w(w)
        {
            let text = row.w.as_deref().unwrap_or("");
            log.refuse(&w_path, text, &refusal.allowed, refusal.message);
        }
        if from_setting.is_some_and(|s| (s / w - 1.0).abs() > 1e-3) {
            log.warn(
                "setting-and-w-differ",
                format!("Row {}: W and the dialled setting differ by more than a part in a thousand; W counts.", row.id),
            );
        }
        return Some((w, error.unwrap_or(0.0)));
    }
    if row.setting.is_none() && row.w.is_none() {
        log.refuse(
            &w_path,
            "",
            "a setting or W",
            "the row does not say at which energy it was taken",
        );
    }
    let own = row
        .w_error
        .as_ref()
        .and_then(|text| limits::number(&format!("{path}.w_error"), text, Energy).ok())
        .map_or(0.0, |r| r.value);
    Some((from_setting?, own))
}

fn measured(path: &str, row: &Row, sheet: &Sheet, log: &mut Log) -> Option<Measured> {
    let at = |field: &str| format!("{path}.{field}");
    if row.counts.is_some() && row.cross_section.is_some() {
        log.refuse(
            &at("cross_section"),
            row.cross_section.as_deref().unwrap_or(""),
            "counts, or a cross section",
            "the row has both counts and a cross section; which of them is the measurement?",
        );
        return None;
    }
    let bins = angle_bins(path, row, log);
    let tau = log
        .optional(&at("tau"), row.tau.as_ref(), Number)
        .or_else(|| {
            let text = sheet.detection.tau.as_ref()?;
            limits::number("detection.tau", text, Number)
                .ok()
                .map(|r| r.value)
        });
    let off = log.optional(&at("off_counts"), row.off_counts.as_ref(), Number);
    let off = match (off, tau) {
        (Some(n), Some(tau)) => Some((n, tau)),
        (Some(_), None) => {
            log.refuse(
                &at("tau"),
                "",
                "the ratio of off to on region",
                "counts off region need the ratio tau of the two regions",
            );
            None
        }
        (None, _) => None,
    };
    if let Some(bins) = bins {
        return binned(path, row, bins, off.is_some(), log);
    }
    if row.beams_apart && (row.counts.is_none() || off.is_some()) {
        log.refuse(
            &at("counts"),
            row.counts.as_deref().unwrap_or(""),
            "counts, and nothing else",
            "a row with the beams apart counts background: it has no cross section and no off region",
        );
        return None;
    }
    if let Some(text) = row.counts.as_ref() {
        let reading = log.read(&at("counts"), text, Number)?;
        if reading.error.is_some() {
            log.refuse(
                &at("counts"),
                text,
                "a whole number without error",
                "counts carry their own (Poisson) error",
            );
        }
        return Some(if row.beams_apart {
            Measured::BeamsApart { n: reading.value }
        } else {
            Measured::Counts {
                n: reading.value,
                off,
            }
        });
    }
    let error_path = at("cross_section_error");
    let (sigma_nb, error) = match row.cross_section.as_ref() {
        None => return Some(Measured::Nothing),
        Some(text) => log.with_error(
            (&at("cross_section"), Some(text)),
            (&error_path, row.cross_section_error.as_ref()),
            CrossSection,
        )?,
    };
    match error {
        Some(error_nb) if error_nb > 0.0 => Some(Measured::CrossSection { sigma_nb, error_nb }),
        None if !sheet.data.covariance.is_empty() => Some(Measured::CrossSection {
            sigma_nb,
            error_nb: 0.0,
        }),
        _ => {
            log.refuse(
                &error_path,
                row.cross_section_error.as_deref().unwrap_or(""),
                "an error above 0, or a covariance of all rows",
                "a cross section without error cannot be weighed",
            );
            None
        }
    }
}

/// The exit of a row: 0 the sheet's own.
fn channel(path: &str, row: &Row, sheet: &Sheet, log: &mut Log) -> usize {
    let Some(name) = row.channel.as_deref().filter(|n| !n.trim().is_empty()) else {
        return 0;
    };
    if let Some(i) = sheet.channels.iter().position(|c| c.name == name) {
        return i + 1;
    }
    if name == sheet.model.final_state {
        return 0;
    }
    if !sheet.channels.is_empty() {
        let names: Vec<&str> = sheet.channels.iter().map(|c| c.name.as_str()).collect();
        log.refuse(
            &format!("{path}.channel"),
            name,
            &format!("nothing, or one of: {}", names.join(", ")),
            "the sheet has no such exit channel",
        );
        return 0;
    }
    let first = sheet.data.rows.iter().find_map(|r| r.channel.as_deref());
    if first.is_some_and(|first| first != name) {
        log.warn(
            "one-channel",
            "Rows name several exit channels, but the sheet has one: all are compared with the one cross section.",
        );
    }
    0
}

/// The angular bins of a row, if it has any.
fn angle_bins(path: &str, row: &Row, log: &mut Log) -> Option<Vec<CountedBin>> {
    if row.angle_bins.is_empty() {
        return None;
    }
    let mut bins = Vec::with_capacity(row.angle_bins.len());
    for (i, bin) in row.angle_bins.iter().enumerate() {
        let at = format!("{path}.angle_bins[{i}]");
        bins.push(CountedBin {
            from: log.value(&format!("{at}.from"), &bin.from, Number),
            to: log.value(&format!("{at}.to"), &bin.to, Number),
            absolute: true,
            n: log.value(&format!("{at}.counts"), &bin.counts, Number),
            efficiency: log.optional(&format!("{at}.efficiency"), bin.efficiency.as_ref(), Number),
        });
    }
    // One edge below 0 makes all of them edges in cos theta.
    if bins.iter().any(|b| b.from < 0.0) {
        for b in &mut bins {
            b.absolute = false;
        }
    }
    for (i, (bin, typed)) in bins.iter().zip(&row.angle_bins).enumerate() {
        let at = format!("{path}.angle_bins[{i}].to");
        if bin.from >= bin.to {
            log.refuse(
                &at,
                &typed.to,
                "above the lower edge",
                "the bin has no width",
            );
        }
        let others = bins.iter().take(i);
        if others
            .into_iter()
            .any(|o| bin.from < o.to && o.from < bin.to)
        {
            log.refuse(
                &at,
                &typed.to,
                "bins that do not overlap",
                "two angular bins overlap: an event would count twice",
            );
        }
    }
    Some(bins)
}

/// Counts in bins beside what else the row says.
fn binned(
    path: &str,
    row: &Row,
    bins: Vec<CountedBin>,
    off: bool,
    log: &mut Log,
) -> Option<Measured> {
    if off || row.beams_apart || row.cross_section.is_some() {
        log.refuse(
            &format!("{path}.angle_bins"),
            "",
            "counts in bins, and nothing else",
            "a row with angular bins has no off region, no cross section, and its beams meet",
        );
        return None;
    }
    if let Some(text) = row.counts.as_ref() {
        let total = log.read(&format!("{path}.counts"), text, Number)?.value;
        let sum: f64 = bins.iter().map(|b| b.n).sum();
        if total != sum {
            log.refuse(
                &format!("{path}.counts"),
                text,
                &format!("{sum}, as in the bins, or nothing"),
                "the row's counts are not the sum of its angular bins; events outside the bins are not fitted",
            );
            return None;
        }
    }
    Some(Measured::Bins { bins })
}

fn live_fraction(path: &str, row: &Row, sheet: &Sheet, log: &mut Log) -> f64 {
    let own = log.optional(
        &format!("{path}.live_fraction"),
        row.live_fraction.as_ref(),
        Number,
    );
    own.or_else(|| {
        let text = sheet.detection.live_fraction.as_ref()?;
        limits::number("detection.live_fraction", text, Number)
            .ok()
            .map(|r| r.value)
    })
    .unwrap_or(1.0)
}

/// Live time in hours: as typed, or stop - start times the live fraction.
fn live_time(
    path: &str,
    row: &Row,
    start: Option<Timestamp>,
    live_fraction: f64,
    log: &mut Log,
) -> Option<f64> {
    let typed = log.optional(&format!("{path}.live_time"), row.live_time.as_ref(), Time);
    let stop = time(path, "stop", row.stop.as_deref(), log);
    if let (Some(start), Some(stop)) = (start, stop)
        && stop <= start
    {
        log.refuse(
            &format!("{path}.stop"),
            row.stop.as_deref().unwrap_or(""),
            "a time after the start",
            "the row stops before it starts",
        );
        return None;
    }
    typed.or_else(|| Some(times::hours_between(start?, stop?) * live_fraction))
}

/// (luminosity, error) in 1/nb, from the source that counts.
fn luminosity(path: &str, row: &Row, sheet: &Sheet, log: &mut Log) -> Option<(f64, Option<f64>)> {
    let other_path = format!("{path}.other_luminosity");
    let own = log.with_error(
        (&format!("{path}.luminosity"), row.luminosity.as_ref()),
        (
            &format!("{path}.luminosity_error"),
            row.luminosity_error.as_ref(),
        ),
        Luminosity,
    );
    let other = row
        .other_luminosity
        .as_ref()
        .and_then(|text| log.read(&other_path, text, Luminosity))
        .map(|r| (r.value, r.error));
    let source = row.luminosity_source.unwrap_or(LuminositySource::Final);
    let wanted = sheet.data.luminosity_source.unwrap_or(source);
    let (chosen, source) = if wanted != source && other.is_some() {
        (other, wanted)
    } else {
        (own, source)
    };
    if chosen.is_some() && source == LuminositySource::Online && !row.left_out {
        log.warn(
            "luminosity-online",
            "Some rows use the online luminosity: it will change.",
        );
    }
    chosen
}
