//! Partial waves of the tree-level reactions and where they leave |Re a| <= 1/2.

use super::{Grid, column};
use crate::check;
use crate::doc::Sheet;
use crate::requests::{Body, Reply, WaveReading, first_problem};
use widthwise_core::amplitude::Region;
use widthwise_core::amplitude::born::{Born, Energy};
use widthwise_core::amplitude::diagrams::PreparedDiagrams;
use widthwise_core::amplitude::diagrams::total::DiagramTotal;
use widthwise_core::amplitude::diagrams::waves::Wave;
use widthwise_core::amplitude::hypothesis::Hypothesis;
use widthwise_core::error::{Answer, Refusal};

/// Largest J of the report.
pub const MOST_J: u8 = 4;

/// Every wave up to J = 4 at `w_gev`, and which leave |Re a| <= 1/2 over the grid (GeV), where first.
pub fn partial_waves(sheet: &Sheet, w_gev: f64, grid: &Grid) -> Answer<Reply> {
    let (frame, warnings) = check::frame(sheet).map_err(first_problem)?;
    let Hypothesis::Diagrams(model) = &frame.scan.hypothesis else {
        return Err(Refusal::new(
            "model.hypothesis",
            "no diagrams",
            "tree-level diagrams",
            "partial waves of helicity amplitudes are those of tree-level diagrams",
        ));
    };
    let diagrams = PreparedDiagrams::new(model, &frame.scan.beams)?;
    let total = DiagramTotal::new(diagrams, Region::all());
    let range = grid.values("grid", 400)?;
    let (first, last) = (
        range.first().copied().unwrap_or(w_gev),
        range.last().copied().unwrap_or(w_gev),
    );
    let last = last.min(total.upper_limit_gev());
    let from = first.max(total.threshold_gev() * (1.0 + 1e-9));
    let waves = total.waves(Energy::at(w_gev), 2 * MOST_J);
    let breaches = if from < last {
        total.unitarity_breaches(from, last, grid.places, 2 * MOST_J)
    } else {
        Vec::new()
    };
    let lowest = breaches
        .iter()
        .map(|breach| breach.w_gev)
        .fold(f64::INFINITY, f64::min);
    let note = if breaches.is_empty() {
        format!(
            "Tree level keeps |Re a| up to 1/2 in every wave up to J = {MOST_J} between {from:.6} and {last:.6} GeV."
        )
    } else {
        format!(
            "Tree level breaks unitarity from W = {lowest:.6} GeV on: {} of the waves up to J = {MOST_J} have |Re a| above 1/2 somewhere in the range. Beyond, the couplings are too strong for tree level to mean anything.",
            breaches.len()
        )
    };
    let of = |wave: &Wave, w_gev: Option<f64>| WaveReading {
        j: if wave.twice_j.is_multiple_of(2) {
            (wave.twice_j / 2).to_string()
        } else {
            format!("{}/2", wave.twice_j)
        },
        initial: wave.initial.to_string(),
        outgoing: wave.outgoing.to_string(),
        re: wave.amplitude.re,
        im: wave.amplitude.im,
        w_gev,
    };
    Ok(Reply {
        columns: vec![
            column("Re a", "", waves.iter().map(|w| w.amplitude.re).collect()),
            column("Im a", "", waves.iter().map(|w| w.amplitude.im).collect()),
        ],
        body: Body::PartialWaves {
            waves: waves.iter().map(|wave| of(wave, None)).collect(),
            breaches: breaches
                .iter()
                .map(|breach| of(&breach.wave, Some(breach.w_gev)))
                .collect(),
            note,
            warnings,
        },
    })
}
