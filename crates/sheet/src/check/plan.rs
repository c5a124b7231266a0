//! What the plan may do, in units of the core.

use super::log::Log;
use crate::doc::Sheet;
use crate::quantity::Dimension::{self, Angle, CrossSection, Energy, LuminosityRate, Number, Time};
use jiff::Timestamp;

/// The plan's section; what is absent is `None` or has its neutral value.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct PlanReading {
    /// Window of W and step, GeV.
    pub from_gev: Option<f64>,
    /// Largest W, GeV.
    pub to_gev: Option<f64>,
    /// Step of W, GeV.
    pub step_gev: Option<f64>,
    /// Hours on the clock, h.
    pub hours: Option<f64>,
    /// When they begin.
    pub starts: Option<Timestamp>,
    /// Used, h; `None`: as the rows say.
    pub hours_used: Option<f64>,
    /// Unit of dwell, h.
    pub dwell_step_h: Option<f64>,
    /// Least dwell, h.
    pub least_dwell_h: Option<f64>,
    /// Settle time: fixed, per step up, per step down, h.
    pub settle_h: (f64, f64, f64),
    /// Energies within a fill only rise (true) or fall.
    pub one_way: Option<bool>,
    /// Present W, GeV.
    pub stands_at_gev: Option<f64>,
    /// Fill, refill and lifetime, h.
    pub fill_h: Option<f64>,
    /// Refill, h.
    pub refill_h: f64,
    /// Lifetime, h.
    pub lifetime_h: Option<f64>,
    /// (W in GeV, luminosity in 1/nb per h).
    pub luminosity_at: Vec<(f64, f64)>,
    /// The comb.
    pub comb: Option<CombReading>,
    /// (every, lasting), h.
    pub calibration_h: Option<(f64, f64)>,
    /// (from, to), h after the hours began.
    pub blocked_h: Vec<(f64, f64)>,
    /// Distinct energies asked for.
    pub least_distinct: usize,
    /// (below GeV, above GeV, hours).
    pub off_resonance: Option<(f64, f64, f64)>,
    /// Reference W, GeV.
    pub reference_gev: Option<f64>,
    /// W between the flanks, GeV.
    pub both_flanks_of_gev: Option<f64>,
    /// Energy error of a visit, GeV.
    pub visit_energy_gev: f64,
    /// Relative luminosity error of a visit.
    pub visit_luminosity: f64,
    /// Share for the other parameters.
    pub others_share: f64,
    /// Truths; `None`: as many as usual.
    pub truths: Option<u32>,
    /// Goals.
    pub goals: Vec<GoalReading>,
}

/// One goal.
#[derive(Debug, Clone, PartialEq)]
pub struct GoalReading {
    /// The quantity as typed.
    pub quantity: String,
    /// Error wanted.
    pub wanted: Option<Wanted>,
    /// Weight beside other goals.
    pub weight: f64,
}

/// A comb; what is absent has its usual value or is `None`.
#[derive(Debug, Clone, PartialEq)]
pub struct CombReading {
    /// Reach to either side, GeV.
    pub reach_gev: Option<f64>,
    /// Spacing in observed FWHM.
    pub spacing: f64,
    /// Live time of each point, h.
    pub dwell_h: Option<f64>,
    /// Global significance that counts as found.
    pub significance: f64,
}

/// Error wanted of a goal.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Wanted {
    /// In the core's unit of what was typed.
    Absolute(f64, Dimension),
    /// Relative to the value.
    Relative(f64),
}

/// Reads the section.
pub fn read(sheet: &Sheet, log: &mut Log) -> PlanReading {
    let p = &sheet.plan;
    let mut get = |field: &str, text: &Option<String>, dimension: Dimension| {
        log.optional(&format!("plan.{field}"), text.as_ref(), dimension)
    };
    let calibration = (
        get("calibration_every", &p.calibration_every, Time),
        get("calibration_time", &p.calibration_time, Time),
    );
    let off = (
        get("off_below", &p.off_below, Energy),
        get("off_above", &p.off_above, Energy),
        get("off_hours", &p.off_hours, Time),
    );
    let mut reading = PlanReading {
        from_gev: get("from", &p.from, Energy),
        to_gev: get("to", &p.to, Energy),
        step_gev: get("step", &p.step, Energy),
        hours: get("hours", &p.hours, Time),
        hours_used: get("hours_used", &p.hours_used, Time),
        starts: None,
        luminosity_at: Vec::new(),
        comb: p.comb.as_ref().map(|c| CombReading {
            reach_gev: get("comb.reach", &c.reach, Energy),
            spacing: get("comb.spacing", &c.spacing, Number).unwrap_or(0.6),
            dwell_h: get("comb.dwell", &c.dwell, Time),
            significance: get("comb.significance", &c.significance, Number).unwrap_or(5.0),
        }),
        dwell_step_h: get("dwell_step", &p.dwell_step, Time),
        least_dwell_h: get("least_dwell", &p.least_dwell, Time),
        settle_h: (
            get("settle", &p.settle, Time).unwrap_or(0.0),
            get("settle_up", &p.settle_up, Time).unwrap_or(0.0),
            get("settle_down", &p.settle_down, Time).unwrap_or(0.0),
        ),
        one_way: None,
        stands_at_gev: get("stands_at", &p.stands_at, Energy),
        fill_h: get("fill", &p.fill, Time),
        refill_h: get("refill", &p.refill, Time).unwrap_or(0.0),
        lifetime_h: get("lifetime", &p.lifetime, Time),
        calibration_h: calibration.0.zip(calibration.1),
        blocked_h: Vec::new(),
        least_distinct: get("least_distinct", &p.least_distinct, Number).unwrap_or(0.0) as usize,
        off_resonance: off
            .2
            .map(|hours| (off.0.unwrap_or(0.0), off.1.unwrap_or(f64::INFINITY), hours)),
        reference_gev: get("reference", &p.reference, Energy),
        both_flanks_of_gev: get("both_flanks_of", &p.both_flanks_of, Energy),
        visit_energy_gev: get("visit_energy_error", &p.visit_energy_error, Energy).unwrap_or(0.0),
        visit_luminosity: get("visit_luminosity_error", &p.visit_luminosity_error, Number)
            .unwrap_or(0.0),
        others_share: get("others_share", &p.others_share, Number).unwrap_or(0.0),
        truths: get("truths", &p.truths, Number).map(|t| t as u32),
        goals: Vec::new(),
    };
    for (i, (from, to)) in p.blocked.iter().enumerate() {
        let path = format!("plan.blocked[{i}]");
        reading.blocked_h.push((
            log.value(&format!("{path}[0]"), from, Time),
            log.value(&format!("{path}[1]"), to, Time),
        ));
    }
    for (i, (w, luminosity)) in p.luminosity_at.iter().enumerate() {
        let path = format!("plan.luminosity_at[{i}]");
        let row = (
            log.value(&format!("{path}[0]"), w, Energy),
            log.value(&format!("{path}[1]"), luminosity, LuminosityRate),
        );
        if reading.luminosity_at.last().is_some_and(|l| l.0 >= row.0) {
            log.refuse(
                &format!("{path}[0]"),
                w,
                "a larger W than in the row before",
                "the energies of the luminosity have to rise",
            );
        }
        reading.luminosity_at.push(row);
    }
    if let Some(text) = &p.starts {
        match crate::times::parse("plan.starts", text) {
            Ok(at) => reading.starts = Some(at),
            Err(refusal) => log.problems.push(refusal),
        }
    }
    reading.one_way = match p.one_way.as_deref() {
        None => None,
        Some("up") => Some(true),
        Some("down") => Some(false),
        Some(other) => {
            log.refuse(
                "plan.one_way",
                other,
                "\"up\" or \"down\"",
                "energies within a fill go one way, up or down, or any way",
            );
            None
        }
    };
    if let (Some(from), Some(to)) = (reading.from_gev, reading.to_gev)
        && to < from
    {
        log.refuse(
            "plan.to",
            p.to.as_deref().unwrap_or(""),
            "a W at or above the least one",
            "the window is empty: its largest W lies below its least",
        );
    }
    if let Some(goal) = &p.goal {
        reading.goals.push(GoalReading {
            quantity: goal.clone(),
            wanted: None,
            weight: 1.0,
        });
    }
    for (i, goal) in p.goals.iter().enumerate() {
        let path = format!("plan.goals[{i}]");
        let weight = log
            .optional(&format!("{path}.weight"), goal.weight.as_ref(), Number)
            .unwrap_or(1.0);
        let wanted = goal.wanted.as_ref().map(|text| {
            let field = format!("{path}.wanted");
            // What has no unit is relative.
            let units = [Number, Energy, Angle, CrossSection];
            let unit = units
                .into_iter()
                .find(|d| crate::quantity::read(text, *d).is_ok());
            match unit.unwrap_or(Energy) {
                Number => Wanted::Relative(log.value(&field, text, Number)),
                other => Wanted::Absolute(log.value(&field, text, other), other),
            }
        });
        reading.goals.push(GoalReading {
            quantity: goal.quantity.clone(),
            wanted,
            weight,
        });
    }
    reading
}
