//! What the user should know about a fit although it has an answer.

use super::covariance::Covariance;
use super::problem::{Coordinate, Kind, Problem};
use super::result::FitResult;
use super::settings::FitSettings;
use crate::error::Warning;
use crate::scan::{Measured, Scan, Spread, Stage};

/// Warnings that the data and settings alone call for.
#[must_use]
pub fn before(scan: &Scan, settings: &FitSettings, problem: &Problem) -> Vec<Warning> {
    let mut out = Vec::new();
    let parameters = problem.parameter_count();
    let information = problem.data.len() + problem.constraints.len();
    if information < parameters {
        out.push(Warning::new(
            "too-few-points",
            format!(
                "{information} measurements and constraints cannot determine {parameters} free parameters: fix some, or constrain them."
            ),
        ));
    }
    if problem
        .data
        .iter()
        .any(|d| matches!(d.kind, Kind::OnOff { .. }))
    {
        out.push(Warning::new(
            "own-background",
            "Points with off-region counts take their background from there, each its own; the background numbers of the detector are not used for them. Free the background to fit one for all.",
        ));
    }
    let counts: Vec<f64> = problem
        .data
        .iter()
        .filter_map(|d| match d.kind {
            Kind::Counts { n } | Kind::OnOff { n, .. } => Some(n),
            Kind::CrossSection { .. } => None,
        })
        .collect();
    if !counts.is_empty() && counts.len() == problem.data.len() && counts.iter().all(|n| *n == 0.0)
    {
        out.push(Warning::new(
            "all-counts-zero",
            "Nothing has been counted anywhere: only upper limits mean something.",
        ));
    }
    for (i, a) in scan.points.iter().enumerate() {
        if let Some(b) = scan.points.iter().take(i).find(|b| {
            b.w_gev == a.w_gev
                && b.measured == a.measured
                && b.luminosity_nbinv == a.luminosity_nbinv
                && b.channel == a.channel
                && a.measured != Measured::Nothing
        }) {
            out.push(Warning::new(
                "duplicated-point",
                format!(
                    "Points {} and {} agree in energy, luminosity and measurement: is one a copy?",
                    b.id, a.id
                ),
            ));
        }
    }
    for (i, a) in settings.constraints.iter().enumerate() {
        for b in settings.constraints.iter().take(i) {
            let tension = (a.value - b.value) / crate::math::hypot(a.error, b.error);
            if a.parameter == b.parameter && tension.abs() > 3.0 {
                out.push(Warning::new(
                    "contradictory-constraints",
                    format!(
                        "Two constraints on {} are {:.1} standard errors apart.",
                        a.parameter,
                        tension.abs()
                    ),
                ));
            }
        }
    }
    if scan.covariance_nb2.is_none() {
        let few: Vec<&str> = scan
            .points
            .iter()
            .filter(|p| match p.measured {
                Measured::CrossSection { sigma_nb, error_nb } => sigma_nb < 4.0 * error_nb,
                _ => false,
            })
            .map(|p| p.id.as_str())
            .collect();
        if !few.is_empty() {
            out.push(Warning::new(
                "few-events-as-gaussian",
                format!(
                    "Cross sections of fewer than about 16 events with sqrt(n) errors pull a fit down, and points without events are easily dropped: enter counts instead (points {}).",
                    few.join(", ")
                ),
            ));
        }
    }
    let groups = scan.points.iter().any(|p| p.group.is_some());
    if groups && scan.common.group_energy_gev == 0.0 && scan.common.energy_covariance_gev2.is_none()
    {
        out.push(Warning::new(
            "ignored-fills",
            "Points belong to fills, but no energy error common to a fill is given: if there is one, the errors below are too small.",
        ));
    }
    if scan.stage != Stage::Observed && scan.chain.w_min_gev.is_some() {
        out.push(Warning::new(
            "radiation-already-removed",
            "The data say that radiation has been removed: the chain does not apply it. Their efficiency and correction belong to the photon cut they were made with.",
        ));
    }
    for c in problem
        .coordinates
        .iter()
        .filter(|c| c.id.ends_with(".width"))
    {
        out.extend(width_below_spread(scan, c.start));
    }
    out
}

/// Warnings that the minimum calls for.
#[must_use]
pub fn after(
    problem: &Problem,
    covariance: &Covariance,
    result: &FitResult,
    lowest_expected: f64,
) -> Vec<Warning> {
    let mut out = Vec::new();
    if !result.stop.is_minimum() {
        out.push(Warning::new(
            "not-converged",
            format!(
                "The fit stopped before it reached a minimum (estimated distance {:.2e} in 2 NLL after {} steps): do not quote these numbers.",
                result.stop.distance, result.stop.iterations
            ),
        ));
    }
    for p in result.parameters.iter().filter(|p| p.at_limit) {
        out.push(Warning::new(
            "parameter-at-limit",
            format!(
                "The {} stands at its limit: it has no symmetric error, and the errors of the others hold it fixed there.",
                p.label
            ),
        ));
    }
    if result.p_value.is_some_and(|p| p < 1e-4) {
        out.push(Warning::new(
            "poor-fit",
            format!(
                "2 NLL is {:.1} for {} degrees of freedom: the hypothesis does not describe these points, or the fit has lost the peak.",
                result.statistic, result.degrees_of_freedom
            ),
        ));
    }
    let names = |which: &[usize]| -> Vec<String> {
        which
            .iter()
            .filter_map(|&i| problem.coordinates.get(i))
            .map(|c| c.label.clone())
            .collect()
    };
    if !covariance.undetermined.is_empty() {
        out.push(Warning::new(
            "undetermined",
            format!(
                "The data do not determine these on their own: {}. Fix or constrain one of them.",
                names(&covariance.undetermined).join(", ")
            ),
        ));
    } else if covariance.condition > 1e6 {
        out.push(Warning::new(
            "ill-conditioned",
            format!(
                "Some combination of the parameters is almost undetermined (condition number {:.0e}).",
                covariance.condition
            ),
        ));
    }
    if covariance.expected_used {
        out.push(Warning::new(
            "curvature-not-positive",
            "The statistic does not curve upwards in every direction here: errors are from the expected curvature; use the profile intervals.",
        ));
    }
    if lowest_expected < 20.0 {
        out.push(Warning::new(
            "low-counts",
            format!(
                "The smallest expected count is {lowest_expected:.1}: the chi-squared p-value is not exact there (use pseudo-experiments), and curvature errors may cover less than they claim."
            ),
        ));
    }
    let free = |end: &str| result.parameters.iter().any(|p| p.id.ends_with(end));
    for (fitted, info) in result
        .nuisances
        .iter()
        .zip(problem.coordinates.iter().skip(problem.parameter_count()))
    {
        let Coordinate::Nuisance(i) = info.coordinate else {
            continue;
        };
        let Some(nuisance) = problem.nuisances.get(i) else {
            continue;
        };
        if nuisance.common && fitted.error > 0.95 && fitted.pull.abs() < 0.05 {
            let with = match nuisance.kind {
                super::nuisance::NuisanceKind::Energy if free(".mass") => "free mass",
                super::nuisance::NuisanceKind::SignalScale
                | super::nuisance::NuisanceKind::Luminosity
                    if free(".strength") || free("b_in") || free("b_f") || free("gamma_in") =>
                {
                    "free strength"
                }
                _ => continue,
            };
            out.push(Warning::new(
                "common-error-degenerate",
                format!(
                    "The common {} is degenerate with the {with}: its pull of 0 +- 1 is right, and its error is inside that of the parameter.",
                    fitted.name
                ),
            ));
        }
        if fitted.pull.abs() > 3.0 {
            out.push(Warning::new(
                "large-pull",
                format!(
                    "The {} is pulled by {:.1} of its errors: the data contradict it.",
                    fitted.name, fitted.pull
                ),
            ));
        }
    }
    out
}

/// The warning that the width is the spread's: Gamma well below sigma_W.
fn width_below_spread(scan: &Scan, width_gev: f64) -> Option<Warning> {
    match scan.chain.spread {
        Spread::Gaussian { sigma_gev, .. }
            if scan.stage != Stage::Born && width_gev < 0.3 * sigma_gev =>
        {
            Some(Warning::new(
                "width-below-spread",
                "The width is well below the beam's spread: what looks like a width is the spread's, and its error hangs on how well the spread is known. The area, hence Gamma_in B_f, is the robust parameter.",
            ))
        }
        _ => None,
    }
}
