//! The comb for a peak of unknown mass.

use super::{Body, Made, Reply, prepare, to_dial};
use crate::check;
use crate::doc::Sheet;
use crate::requests::first_problem;
use serde::{Deserialize, Serialize};
use widthwise_core::error::{Answer, Refusal};
use widthwise_core::plan::find::{CombPlan, CombSettings, comb_for_scan};

/// Most pseudo-experiments of one request.
const MOST_TRIALS: u32 = 100_000;

/// What the page shows of a comb.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct CombReading {
    /// The comb.
    pub comb: CombPlan,
    /// The number to dial for each row, with unit.
    pub dial: Vec<String>,
    /// Global significance that counts as found.
    pub significance: f64,
    /// The points so far have found it: time to measure it.
    pub hand_over: bool,
    /// The comb's hour 0, h after the hours began.
    pub begins_h: f64,
}

/// Lays the comb of the sheet and finds its chance; the same seed gives the same answer.
pub fn answer(
    sheet: &Sheet,
    trials: u32,
    seed: u64,
    progress: &mut dyn FnMut(u32, u32),
) -> Answer<Reply> {
    if !(1..=MOST_TRIALS).contains(&trials) {
        return Err(Refusal::new(
            "trials",
            trials,
            format!("1 to {MOST_TRIALS}"),
            "so many pseudo-experiments are not made in one request",
        ));
    }
    // The comb stands around the sheet's mass: a fit of points without a peak says nothing of it.
    let Made {
        settings,
        frame,
        begins_h,
        sheets,
        ..
    } = prepare(sheet)?;
    let scan = sheets;
    let reading = check::plan(sheet).map_err(first_problem)?;
    let comb = reading
        .comb
        .ok_or_else(|| Refusal::new("plan.comb", "", "a comb", "the sheet asks for no comb"))?;
    let mass = scan.hypothesis.get("r1.mass")?;
    let constraint = settings
        .fit
        .constraints
        .iter()
        .find(|c| c.parameter == "r1.mass");
    let (centre, error) = constraint.map_or((mass, None), |c| (c.value, Some(c.error)));
    let reach_gev = match (comb.reach_gev, error) {
        (Some(reach), _) => reach,
        (None, Some(error)) => 2.0 * error,
        (None, None) => {
            return Err(Refusal::new(
                "plan.comb.reach",
                "",
                "a reach such as 12 MeV, or a constraint on the mass",
                "nothing says how far from the sheet's mass the peak may be: give the comb a reach, or the mass a constraint",
            ));
        }
    };
    let wanted = CombSettings {
        mass_gev: (centre, error),
        reach_gev,
        spacing: comb.spacing,
        dwell_h: comb.dwell_h,
        significance: comb.significance,
        trials,
        seed,
    };
    let found = comb_for_scan(&scan, &settings, &wanted, progress)?;
    let dial = found
        .rows
        .iter()
        .map(|row| to_dial(sheet, &frame, row.w_gev))
        .collect::<Answer<Vec<_>>>()?;
    let hand_over = found.found.is_some_and(|f| f.1 >= comb.significance);
    Ok(Body::Comb {
        reading: Box::new(CombReading {
            comb: found,
            dial,
            significance: comb.significance,
            hand_over,
            begins_h,
        }),
    }
    .into())
}
