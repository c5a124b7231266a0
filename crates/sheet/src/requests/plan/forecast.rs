//! Forecasts in the units of the sheet.

use crate::doc::Sheet;
use crate::requests::parameter;
use serde::{Deserialize, Serialize};
use widthwise_core::plan::report::{Forecast, ScanPlan};

/// What the plan promises for one quantity, in the unit its text has in the sheet.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
pub struct ForecastReading {
    /// Id of a parameter, or a goal in words.
    pub name: String,
    /// Unit of the numbers below.
    pub unit: String,
    /// Whether the plan is for it.
    pub goal: bool,
    /// The numbers.
    pub numbers: Forecast,
}

/// Parameters, then goals that are no parameters.
pub(super) fn readings(sheet: &Sheet, plan: &ScanPlan) -> Vec<ForecastReading> {
    let is_goal = |name: &str| plan.goals.iter().any(|g| g.name == name);
    let parameter = |name: &str| plan.parameters.iter().any(|p| p.name == name);
    let goals = plan.goals.iter().filter(|g| !parameter(&g.name));
    plan.parameters
        .iter()
        .chain(goals)
        .map(|f| {
            let (unit, per) = unit_of(sheet, &f.name);
            let scaled = |x: Option<f64>| x.map(|v| v / per);
            // The goal's own numbers know what was wanted.
            let f = plan.goals.iter().find(|g| g.name == f.name).unwrap_or(f);
            ForecastReading {
                name: f.name.clone(),
                unit,
                goal: is_goal(&f.name),
                numbers: Forecast {
                    name: f.name.clone(),
                    value: f.value / per,
                    wanted: scaled(f.wanted),
                    now: scaled(f.now),
                    planned: scaled(f.planned),
                    relaxed: scaled(f.relaxed),
                    uniform: scaled(f.uniform),
                    floor: scaled(f.floor),
                },
            }
        })
        .collect()
}

/// Unit of a parameter or of a goal in words, and the core's value of one of it.
pub(super) fn unit_of(sheet: &Sheet, name: &str) -> (String, f64) {
    let words: Vec<&str> = name.split_whitespace().collect();
    let one = |id: &str| -> (String, f64) {
        let Ok(p) = parameter::find(sheet, id) else {
            return (String::new(), 1.0);
        };
        match p.dimension.in_unit(1.0, &p.unit) {
            Some(n) if n > 0.0 => (p.unit.text.clone(), p.core_per_sheet / n),
            _ => (p.dimension.core_unit().to_string(), p.core_per_sheet),
        }
    };
    let Some(first) = words.first() else {
        return (String::new(), 1.0);
    };
    let (mut unit, mut per) = one(first);
    for pair in words.get(1..).unwrap_or_default().chunks_exact(2) {
        let (Some(sign), Some(id)) = (pair.first(), pair.get(1)) else {
            continue;
        };
        let (other, factor) = one(id);
        match *sign {
            "*" => {
                per *= factor;
                unit = [unit, other].join(" ").trim().to_string();
            }
            "/" => {
                per /= factor;
                unit = if unit == other {
                    String::new()
                } else if other.is_empty() {
                    unit
                } else {
                    format!("{unit}/{other}")
                };
            }
            _ => {}
        }
    }
    (unit, per)
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Saltmere: 24.6 eV over 0.62 MeV; degrees for the phase.
    #[test]
    fn units_follow_the_sheet() {
        let sheet = crate::demos::open("saltmere").unwrap();
        let (unit, per) = unit_of(&sheet, "r1.strength / r1.width");
        assert_eq!(unit, "eV/MeV");
        assert!((24.6e-9 / 0.62e-3 / per - 24.6 / 0.62).abs() < 1e-9);
        let (unit, per) = unit_of(&sheet, "coherent.phase");
        assert_eq!(unit, "deg");
        assert!((per - core::f64::consts::PI / 180.0).abs() < 1e-15);
        assert_eq!(unit_of(&sheet, "r1.mass").0, "MeV");
    }
}
