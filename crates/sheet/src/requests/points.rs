//! Every row as the chain understands it.

use super::cursor::{self, WANTED, dial};
use super::ready::Ready;
use super::{Body, PointReading, Reply, first_problem};
use crate::check::{self, RowReading};
use crate::doc::Sheet;
use widthwise_core::counts::{Exposure, HoursTo, SignalRates, compare, hours_to_relative_error};
use widthwise_core::error::{Answer, Refusal};
use widthwise_core::fit::{CurveModel, Probe, ScanCurve, Site};
use widthwise_core::scan::{Detection, Measured, Point, Scan, Stage};

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
    let stage = ready.frame.scan.stage;
    let points: Vec<Point> = understood
        .rows
        .iter()
        .filter_map(|row| row.point.clone())
        .collect();
    let mut sigmas = curves(&ready.frame.scan, &points, stage)?.into_iter();
    // Beam time is spent on observed events, whatever the data have been corrected for.
    let mut observed = if stage == Stage::Observed {
        None
    } else {
        Some(curves(&ready.frame.scan, &points, Stage::Observed)?.into_iter())
    };
    let points = understood
        .rows
        .iter()
        .map(|row| {
            let compared = row.point.as_ref().and_then(|_| sigmas.next());
            let now = match observed.as_mut() {
                Some(list) => row.point.as_ref().and_then(|_| list.next()),
                None => compared.clone(),
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

/// The curve at one point: (sigma, its slope) in each angular bin, or over all angles.
type AtPoint = Vec<(f64, f64)>;

/// The curve of each point's channel in each of its angular bins, at a stage.
fn curves(frame: &Scan, points: &[Point], stage: Stage) -> Answer<Vec<AtPoint>> {
    let scan = Scan {
        points: points.to_vec(),
        stage,
        ..frame.clone()
    };
    let curve = ScanCurve::new(&scan, &[])?;
    let mut sites = Vec::with_capacity(points.len());
    for (point, p) in points.iter().enumerate() {
        let bins = match &p.measured {
            Measured::Bins { bins } => bins.len(),
            _ => 0,
        };
        for bin in 0..bins.max(1) {
            sites.push(Site {
                point,
                bin: (bins > 0).then_some(bin),
                w_gev: p.w_gev,
                spread_factor: 1.0,
            });
        }
    }
    let here = Probe {
        values: Vec::new(),
        w_shift_gev: 0.0,
        spread_factor: 1.0,
    };
    let found = curve.evaluate(&sites, &[here], true)?;
    let mut out: Vec<AtPoint> = vec![Vec::new(); points.len()];
    for curve in found {
        let values = curve.sigma_nb.iter().zip(&curve.slope_nb_per_gev);
        for (site, (sigma, slope)) in sites.iter().zip(values) {
            if let Some(at) = out.get_mut(site.point) {
                at.push((*sigma, *slope));
            }
        }
    }
    Ok(out)
}

fn reading(
    sheet: &Sheet,
    ready: &Ready,
    row: &RowReading,
    compared: Option<AtPoint>,
    observed: Option<AtPoint>,
) -> PointReading {
    let mut out = PointReading {
        id: row.id.clone(),
        left_out: row.left_out,
        running: row.running,
        ..PointReading::default()
    };
    let (Some(point), Some(compared)) = (&row.point, compared) else {
        return out;
    };
    let sigmas: Vec<f64> = compared.iter().map(|(sigma, _)| *sigma).collect();
    let sigma_nb: f64 = sigmas.iter().sum();
    let scan = &ready.frame.scan;
    let detection = scan.detection_of(scan.exit_of(point));
    let exposure = Exposure::of(point, detection);
    out.w_gev = Some(point.w_gev);
    out.w_error_gev = point.w_error_gev;
    out.dial = dial(sheet, ready, point.w_gev).unwrap_or_default();
    out.luminosity_nbinv = (exposure.luminosity_nbinv > 0.0).then_some(exposure.luminosity_nbinv);
    out.live_time_h = (point.live_time_h > 0.0).then_some(point.live_time_h);
    if let Some((value, error)) = cross_section(point, detection, exposure) {
        out.sigma_nb = Some(value);
        out.sigma_error_nb = error;
    }
    // Points with an off region are compared with the background that it tells.
    match compare(point, detection, &sigmas) {
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
    if let Some(observed) = observed
        && rate > 0.0
    {
        let sigma: f64 = observed.iter().map(|(sigma, _)| *sigma).sum();
        let slope: f64 = observed.iter().map(|(_, slope)| *slope).sum();
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
fn cross_section(point: &Point, detection: &Detection, exposure: Exposure) -> Option<(f64, f64)> {
    match point.measured {
        // Bins and background runs are no point of the total's curve.
        Measured::Nothing | Measured::Bins { .. } | Measured::BeamsApart { .. } => None,
        Measured::CrossSection { sigma_nb, error_nb } => Some((sigma_nb, error_nb)),
        Measured::Counts { n, off } => {
            let per = exposure.signal_nbinv;
            let (background, variance) = match off {
                Some((n_off, tau)) => (n_off / tau, n_off / (tau * tau)),
                None => (exposure.background(detection), 0.0),
            };
            // A count of 0 is no measurement without error: its Poisson interval reaches to about 1.
            (per > 0.0).then(|| ((n - background) / per, (n.max(1.0) + variance).sqrt() / per))
        }
    }
}
