//! From a scan's points to the numbers that are compared with the model.

use super::problem::{Datum, Kind};
use crate::counts::Exposure;
use crate::error::{Answer, Refusal};
use crate::scan::{CountedBin, Measured, Point, Scan};

/// (point, angular bin) of each place on the curve.
type Sites = Vec<(usize, Option<usize>)>;

/// The data of a scan, their places on the curve, and whether off regions count a background in common.
///
/// # Errors
/// Points that cannot be compared with a model; no data at all.
pub(super) fn data(scan: &Scan, free_background: &[bool]) -> Answer<(Vec<Datum>, Sites, bool)> {
    let mut out = Vec::new();
    let mut sites: Sites = scan
        .points
        .iter()
        .enumerate()
        .map(|(i, p)| {
            let binned = matches!(&p.measured, Measured::Bins { bins } if !bins.is_empty());
            (i, binned.then_some(0))
        })
        .collect();
    let mut common_off = false;
    for (i, point) in scan.points.iter().enumerate() {
        if !(point.w_gev > 0.0 && point.w_gev.is_finite()) {
            return Err(Refusal::new(
                field(point, "w"),
                point.w_gev,
                "an energy above 0",
                format!("point {} has no W", point.id),
            ));
        }
        let exit = scan.exit_of(point);
        let plain = Datum {
            point: i,
            site: i,
            kind: Kind::Counts { n: 0.0 },
            signal: 0.0,
            luminosity_nbinv: 0.0,
            live_time_h: 0.0,
            off_region: false,
            bin: None,
        };
        match &point.measured {
            Measured::Nothing => {}
            Measured::CrossSection { sigma_nb, error_nb } => {
                let own = scan.covariance_nb2.is_none();
                if !sigma_nb.is_finite() || (own && !(*error_nb > 0.0 && error_nb.is_finite())) {
                    return Err(Refusal::new(
                        field(point, "cross_section_error"),
                        format!("{sigma_nb} +- {error_nb}"),
                        "a cross section with an error above 0",
                        format!("point {} has no usable cross section and error", point.id),
                    ));
                }
                out.push(Datum {
                    kind: Kind::CrossSection {
                        sigma_nb: *sigma_nb,
                    },
                    signal: 1.0,
                    ..plain
                });
            }
            Measured::BeamsApart { n } => {
                counted(point, *n)?;
                if !usable(point.live_time_h) {
                    return Err(Refusal::new(
                        field(point, "live_time"),
                        point.live_time_h,
                        "a live time above 0",
                        format!(
                            "point {} has counts without beams but no live time",
                            point.id
                        ),
                    ));
                }
                out.push(Datum {
                    kind: Kind::Counts { n: *n },
                    live_time_h: point.live_time_h,
                    ..plain
                });
            }
            Measured::Bins { bins } => {
                for (b, bin) in bins.iter().enumerate() {
                    counted(point, bin.n)?;
                    let mut seen = point.clone();
                    seen.efficiency = bin.efficiency.or(point.efficiency);
                    let e = exposure(&seen, scan, exit)?;
                    let share = bin.region()?.fraction();
                    let mut site = i;
                    if b > 0 {
                        site = sites.len();
                        sites.push((i, Some(b)));
                    }
                    out.push(Datum {
                        site,
                        kind: Kind::Counts { n: bin.n },
                        signal: e.signal_nbinv,
                        luminosity_nbinv: share * e.luminosity_nbinv,
                        live_time_h: share * e.live_time_h,
                        bin: Some(in_words(bin)),
                        ..plain
                    });
                }
            }
            Measured::Counts { n, off } => {
                counted(point, *n)?;
                let e = exposure(point, scan, exit)?;
                let mut datum = Datum {
                    kind: Kind::Counts { n: *n },
                    signal: e.signal_nbinv,
                    luminosity_nbinv: e.luminosity_nbinv,
                    live_time_h: e.live_time_h,
                    ..plain
                };
                if let Some((n_off, tau)) = *off {
                    if !(n_off >= 0.0 && n_off.is_finite() && usable(tau)) {
                        return Err(Refusal::new(
                            field(point, "off_counts"),
                            format!("{n_off} with tau {tau}"),
                            "counts of 0 or more and a ratio tau above 0",
                            format!("the off region of point {} cannot be used", point.id),
                        ));
                    }
                    if free_background.get(exit).copied().unwrap_or(false) {
                        common_off = true;
                        out.push(datum.clone());
                        datum.kind = Kind::Counts { n: n_off };
                        datum.signal = 0.0;
                        datum.luminosity_nbinv *= tau;
                        datum.live_time_h *= tau;
                        datum.off_region = true;
                    } else {
                        datum.kind = Kind::OnOff { n: *n, n_off, tau };
                        datum.luminosity_nbinv = 0.0;
                        datum.live_time_h = 0.0;
                    }
                }
                out.push(datum);
            }
        }
    }
    if out.is_empty() {
        return Err(Refusal::new(
            "data.rows",
            "",
            "at least one row with counts or a cross section, in use",
            "there is nothing to fit: no row in use has counts or a cross section",
        ));
    }
    Ok((out, sites, common_off))
}

fn field(point: &Point, what: &str) -> String {
    format!("points[{}].{what}", point.id)
}

fn usable(v: f64) -> bool {
    v > 0.0 && v.is_finite()
}

fn counted(point: &Point, n: f64) -> Answer<()> {
    if n >= 0.0 && n.is_finite() {
        return Ok(());
    }
    Err(Refusal::new(
        field(point, "counts"),
        n,
        "counts of 0 or more",
        format!("point {} has no usable counts", point.id),
    ))
}

fn exposure(point: &Point, scan: &Scan, exit: usize) -> Answer<Exposure> {
    let e = Exposure::of(point, scan.detection_of(exit));
    if !usable(e.luminosity_nbinv) {
        return Err(Refusal::new(
            field(point, "luminosity"),
            e.luminosity_nbinv,
            "a luminosity above 0 (after dead time)",
            format!("point {} has counts but no luminosity", point.id),
        ));
    }
    if !usable(e.signal_nbinv) {
        return Err(Refusal::new(
            field(point, "efficiency"),
            e.signal_nbinv / e.luminosity_nbinv,
            "an efficiency above 0",
            format!(
                "with an efficiency of 0 point {} says nothing about the cross section: leave it out",
                point.id
            ),
        ));
    }
    Ok(e)
}

fn in_words(bin: &CountedBin) -> String {
    let what = if bin.absolute { "|cos|" } else { "cos" };
    format!("{what} {} to {}", bin.from, bin.to)
}
