//! No peak seen: limits and significances over a window of masses.

use super::{Body, Column, Reply, first_problem};
use crate::check;
use crate::doc::Sheet;
use serde::{Deserialize, Serialize};
use widthwise_core::error::{Answer, Refusal};
use widthwise_core::fit::limits::{GlobalSignificance, WindowSettings, mass_window};

/// Most masses of a window.
pub const MOST_MASSES: u32 = 2_000;
/// Most background-only pseudo-experiments.
pub const MOST_TRIALS: u32 = 20_000;

/// A window of masses that is searched.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[serde(deny_unknown_fields)]
pub struct MassWindow {
    /// Least mass, GeV.
    pub from_gev: f64,
    /// Largest mass, GeV.
    pub to_gev: f64,
    /// Number of masses, 2 to 2,000.
    pub masses: u32,
    /// Background-only pseudo-experiments for the look-elsewhere effect; 0: none.
    pub trials: u32,
    /// Their seed.
    #[cfg_attr(feature = "typescript", ts(type = "number"))]
    pub seed: u64,
}

/// CLs limits at 95 % with expected bands and local significances over the window; the strongest
/// excess corrected for having looked everywhere.
pub fn answer(sheet: &Sheet, window: &MassWindow) -> Answer<Reply> {
    let refuse = |field: &str, value: String, allowed: &str| {
        Err(Refusal::new(
            format!("window.{field}"),
            value,
            allowed,
            "This window cannot be searched.",
        ))
    };
    if !(window.from_gev > 0.0 && window.to_gev > window.from_gev && window.to_gev.is_finite()) {
        return refuse(
            "to_gev",
            format!("{} to {} GeV", window.from_gev, window.to_gev),
            "two masses above 0, the second larger",
        );
    }
    if !(2..=MOST_MASSES).contains(&window.masses) {
        return refuse("masses", window.masses.to_string(), "2 to 2,000 masses");
    }
    if window.trials > MOST_TRIALS {
        return refuse(
            "trials",
            window.trials.to_string(),
            "at most 20,000 pseudo-experiments",
        );
    }
    let scan = check::understand(sheet).scan().map_err(first_problem)?;
    let step = (window.to_gev - window.from_gev) / f64::from(window.masses - 1);
    let settings = WindowSettings {
        masses_gev: (0..window.masses)
            .map(|i| window.from_gev + step * f64::from(i))
            .collect(),
        level: 0.95,
        trials: u64::from(window.trials),
        seed: window.seed,
    };
    let (places, strongest): (_, Option<GlobalSignificance>) = mass_window(&scan, &settings)?;
    let column = |name: &str, unit: &str, values: Vec<f64>| Column {
        name: name.into(),
        unit: unit.into(),
        values,
    };
    // Where no point sees a signal there is no limit: a gap.
    let band = |k: usize| -> Vec<f64> {
        places
            .iter()
            .map(|p| {
                p.limit
                    .as_ref()
                    .and_then(|l| l.expected.get(k).copied())
                    .unwrap_or(f64::NAN)
            })
            .collect()
    };
    let observed = places
        .iter()
        .map(|p| p.limit.as_ref().map_or(f64::NAN, |l| l.observed))
        .collect();
    Ok(Reply {
        columns: vec![
            column("mass", "GeV", settings.masses_gev.clone()),
            column("limit 95 % CLs", "", observed),
            column("expected -2 sigma", "", band(0)),
            column("expected -1 sigma", "", band(1)),
            column("expected", "", band(2)),
            column("expected +1 sigma", "", band(3)),
            column("expected +2 sigma", "", band(4)),
            column(
                "local significance",
                "",
                places.iter().map(|p| p.local_significance).collect(),
            ),
        ],
        body: Body::Window { strongest },
    })
}
