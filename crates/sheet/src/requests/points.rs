//! Every row as the chain understands it.

use super::cursor::{self, WANTED, dial};
use super::ready::Ready;
use super::{Body, PointReading, Reply, first_problem};
use crate::check::{self, RowReading};
use crate::doc::Sheet;
use widthwise_core::counts::{Exposure, HoursTo, SignalRates, compare, hours_to_relative_error};
use widthwise_core::error::{Answer, Refusal};
use widthwise_core::scan::{Measured, Point, Stage};

/// Most rows for which expectations are computed in one request.
pub const MOST_ROWS: usize = 20_000;

/// Per row: W, dial, expected, seen, pull, p-value, times. Rows that are not understood keep
/// their place, without numbers.
pub fn answer(sheet: &Sheet) -> Answer<Reply> {
    let understood = check::understand(sheet);
    let Some(frame) = understood.frame.clone() else {
        return Err(first_problem(understood.problems));
    };
    let n = understood.rows.len();
    if n > MOST_ROWS {
        return Err(Refusal::new(
            "data.rows",
            n,
            format!("up to {MOST_ROWS} rows"),
            format!(
                "expectations for {n} rows are not computed in one go; leave rows out or join them"
            ),
        ));
    }
    let ready = Ready::of(frame, understood.warnings)?;
    let (w, spreads): (Vec<f64>, Vec<Option<f64>>) = understood
        .rows
        .iter()
        .filter_map(|row| row.point.as_ref())
        .map(|p| (p.w_gev, p.sigma_w_gev))
        .unzip();
    let stage = ready.frame.scan.stage;
    let mut sigmas = ready.sigma_and_slope(&w, &spreads, stage)?.into_iter();
    // Beam time is spent on observed events, whatever the data have been corrected for.
    let mut observed = if stage == Stage::Observed {
        None
    } else {
        Some(
            ready
                .sigma_and_slope(&w, &spreads, Stage::Observed)?
                .into_iter(),
        )
    };
    let points = understood
        .rows
        .iter()
        .map(|row| {
            let compared = row.point.as_ref().and_then(|_| sigmas.next());
            let now = match observed.as_mut() {
                Some(list) => row.point.as_ref().and_then(|_| list.next()),
                None => compared,
            };
            reading(sheet, &ready, row, compared, now)
        })
        .collect();
    Ok(Reply {
        body: Body::Points {
            points,
            warnings: ready.warnings,
        },
        columns: Vec::new(),
    })
}

fn reading(
    sheet: &Sheet,
    ready: &Ready,
    row: &RowReading,
    compared: Option<(f64, f64)>,
    observed: Option<(f64, f64)>,
) -> PointReading {
    let mut out = PointReading {
        id: row.id.clone(),
        left_out: row.left_out,
        running: row.running,
        ..PointReading::default()
    };
    let (Some(point), Some((sigma_nb, _))) = (&row.point, compared) else {
        return out;
    };
    let detection = &ready.frame.scan.detection;
    let exposure = Exposure::of(point, detection);
    out.w_gev = Some(point.w_gev);
    out.w_error_gev = point.w_error_gev;
    out.dial = dial(sheet, ready, point.w_gev).unwrap_or_default();
    out.luminosity_nbinv = (exposure.luminosity_nbinv > 0.0).then_some(exposure.luminosity_nbinv);
    out.live_time_h = (point.live_time_h > 0.0).then_some(point.live_time_h);
    if let Some((value, error)) = cross_section(point, ready, exposure) {
        out.sigma_nb = Some(value);
        out.sigma_error_nb = error;
    }
    // Points with an off region are compared with the background that it tells.
    match compare(point, detection, sigma_nb) {
        Some(seen) => {
            out.expected = Some(seen.expected);
            out.seen = Some(seen.seen);
            out.pull = Some(seen.pull);
            out.p_value = Some(seen.p_value);
        }
        None if exposure.signal_nbinv > 0.0 => {
            out.expected = Some(exposure.expected(sigma_nb, detection));
        }
        None => {}
    }
    let rate = detection.luminosity_nbinv_per_h;
    if let Some((sigma, slope)) = observed
        && rate > 0.0
    {
        let mut here = detection.clone();
        here.efficiency = point.efficiency.unwrap_or(detection.efficiency);
        let hour = Exposure::per_hour(&here);
        let (signal, background) = (hour.signal(sigma), hour.background(&here));
        out.rate_per_h = Some(signal + background);
        let rates = SignalRates {
            signal_per_h: signal,
            background_per_h: background,
            background_relative_error: 0.0,
            tau: off(point)
                .map(|(_, tau)| tau)
                .or_else(|| cursor::tau(sheet)),
            scale_relative_error: ready.frame.scan.common.scale,
            energy_relative_error: if sigma > 0.0 {
                (slope * point.w_error_gev / sigma).abs()
            } else {
                0.0
            },
        };
        match hours_to_relative_error(&rates, WANTED) {
            HoursTo::Hours { hours, floor } => {
                out.hours_to_tenth = Some(hours);
                out.floor = Some(floor.total);
            }
            HoursTo::Never { floor } => {
                out.never = true;
                out.floor = Some(floor.total);
            }
            HoursTo::NoSignal => out.never = true,
        }
    }
    out
}

fn off(point: &Point) -> Option<(f64, f64)> {
    match point.measured {
        Measured::Counts { off, .. } => off,
        _ => None,
    }
}

/// (value, error) on the scale of the curve, nb: (n - background)/(L eps B).
fn cross_section(point: &Point, ready: &Ready, exposure: Exposure) -> Option<(f64, f64)> {
    match point.measured {
        Measured::Nothing => None,
        Measured::CrossSection { sigma_nb, error_nb } => Some((sigma_nb, error_nb)),
        Measured::Counts { n, off } => {
            let per = exposure.signal_nbinv;
            let (background, variance) = match off {
                Some((n_off, tau)) => (n_off / tau, n_off / (tau * tau)),
                None => (exposure.background(&ready.frame.scan.detection), 0.0),
            };
            // A count of 0 is no measurement without error: its Poisson interval reaches to about 1.
            (per > 0.0).then(|| ((n - background) / per, (n.max(1.0) + variance).sqrt() / per))
        }
    }
}
