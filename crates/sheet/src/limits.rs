//! The one table of parameters: what each is called, what it measures, what it may be and why.
//! From it come the check, the message, the limits that the page shows and the generator of the
//! property tests.

use crate::quantity::{Dimension, Reading, format, read};
use widthwise_core::error::{Answer, Refusal};

/// What a parameter may be.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Limit {
    /// Path in the sheet, indices as `[]`.
    pub field: &'static str,
    /// What it is called.
    pub name: &'static str,
    /// What it measures. A path with several dimensions (by the dial, by the kind) has a row for each.
    pub dimension: Dimension,
    /// Least value, core units.
    pub least: f64,
    /// Whether the least value itself is allowed.
    pub least_allowed: bool,
    /// Largest value (allowed), core units.
    pub largest: f64,
    /// Whole numbers only.
    pub whole: bool,
    /// Why.
    pub why: &'static str,
}

use Dimension::{
    Angle, CrossSection, CrossSectionPerEnergy, CrossSectionSquared, Energy, EnergySquared,
    Luminosity, LuminosityRate, Momentum, Number, NumberPerEnergy, Radius, Rate, Time,
};

/// Above `least`, up to `largest`.
const fn above(
    field: &'static str,
    name: &'static str,
    dimension: Dimension,
    (least, largest): (f64, f64),
    why: &'static str,
) -> Limit {
    Limit {
        field,
        name,
        dimension,
        least,
        least_allowed: false,
        largest,
        whole: false,
        why,
    }
}

/// From `least` up to `largest`.
const fn from(
    field: &'static str,
    name: &'static str,
    dimension: Dimension,
    (least, largest): (f64, f64),
    why: &'static str,
) -> Limit {
    Limit {
        least_allowed: true,
        ..above(field, name, dimension, (least, largest), why)
    }
}

/// Whole numbers from 0.
const fn whole(field: &'static str, name: &'static str, largest: f64, why: &'static str) -> Limit {
    Limit {
        whole: true,
        ..from(field, name, Number, (0.0, largest), why)
    }
}

/// 100 TeV: no beam of today or of a plan goes beyond.
const TOP_GEV: f64 = 1e5;
const TURNS: f64 = 4.0 * core::f64::consts::PI;
const ABOVE_ZERO: &str = "it has to be above 0";
const AN_ERROR: &str = "an error is 0 or more";
const A_FRACTION: &str = "it is a fraction";
const A_PHASE: &str = "a phase repeats after 360 degrees";
const ANY_SIZE: &str = "either sign, within what double precision carries through the chain";

/// Every number of the sheet.
#[rustfmt::skip]
pub const TABLE: &[Limit] = &[
    above("beam.first.mass", "mass of beam 1", Energy, (0.0, TOP_GEV), "a massless beam is the photon of the table"),
    above("beam.second.mass", "mass of beam 2", Energy, (0.0, TOP_GEV), "a massless beam is the photon of the table"),
    from("beam.crossing_angle", "crossing angle", Angle, (0.0, 1.57), "0 is head-on; beams that cross at a right angle or more do not collide here"),
    above("beam.second_setting", "energy of beam 2", Energy, (0.0, TOP_GEV), ABOVE_ZERO),
    above("beam.second_setting", "momentum of beam 2", Momentum, (0.0, TOP_GEV), ABOVE_ZERO),
    from("beam.spread.first", "spread", Energy, (0.0, 1e3), "a spread is 0 or more"),
    from("beam.spread.first", "momentum spread", Momentum, (0.0, 1e3), "a spread is 0 or more"),
    from("beam.spread.first", "relative spread", Number, (0.0, 0.1), "a Gaussian beam wider than 10 % has no meaning here"),
    from("beam.spread.second", "spread of beam 2", Energy, (0.0, 1e3), "a spread is 0 or more"),
    from("beam.spread.second", "momentum spread of beam 2", Momentum, (0.0, 1e3), "a spread is 0 or more"),
    from("beam.spread.second", "relative spread of beam 2", Number, (0.0, 0.1), "a Gaussian beam wider than 10 % has no meaning here"),
    from("beam.spread.known_to", "relative error of the spread", Number, (0.0, 1.0), AN_ERROR),
    from("beam.spread.table[].0", "offset", Energy, (-1e3, 1e3), "offsets from nominal W, strictly rising"),
    from("beam.spread.table[].1", "weight", Number, (0.0, 1e12), "a weight is 0 or more; the area is divided out"),
    above("beam.luminosity", "luminosity", LuminosityRate, (0.0, 1e12), ABOVE_ZERO),
    from("beam.calibration.offset", "offset of W", Energy, (-1e3, 1e3), ANY_SIZE),
    from("beam.calibration.slope", "slope of W", Number, (-0.1, 0.1), "a dial more than 10 % wrong is another dial"),
    above("model.resonances[].mass", "mass", Energy, (0.0, TOP_GEV), ABOVE_ZERO),
    above("model.resonances[].width", "width", Energy, (0.0, TOP_GEV), "a resonance has a width above 0; a state without one makes no peak"),
    from("model.resonances[].strength.value", "Gamma_in B_f", Energy, (0.0, TOP_GEV), "a partial width times a fraction is 0 or more"),
    from("model.resonances[].strength.value", "B_in B_f", Number, (0.0, 1.0), "a product of two fractions"),
    from("model.resonances[].strength.b_in", "B_in", Number, (0.0, 1.0), A_FRACTION),
    from("model.resonances[].strength.b_f", "B_f", Number, (0.0, 1.0), A_FRACTION),
    from("model.resonances[].strength.gamma_in", "Gamma_in", Energy, (0.0, TOP_GEV), "a partial width is 0 or more"),
    from("model.resonances[].strength.gamma_f", "Gamma_f", Energy, (0.0, TOP_GEV), "a partial width is 0 or more"),
    from("model.resonances[].phase", "phase", Angle, (-TURNS, TURNS), A_PHASE),
    from("model.resonances[].channels[].fraction", "fraction of the width", Number, (0.0, 1.0), "fractions of the width sum to 1"),
    from("model.resonances[].channels[].shape.m1", "mass of daughter 1", Energy, (0.0, TOP_GEV), "a mass is 0 or more"),
    from("model.resonances[].channels[].shape.m2", "mass of daughter 2", Energy, (0.0, TOP_GEV), "a mass is 0 or more"),
    from("model.resonances[].channels[].shape.radius", "barrier radius", Radius, (0.0, 1e4), "0 means no barrier"),
    above("model.resonances[].channels[].shape.rows[].0", "W", Energy, (0.0, TOP_GEV), "W strictly rising"),
    from("model.resonances[].channels[].shape.rows[].1", "ratio", Number, (0.0, 1e12), "a width is 0 or more"),
    from("model.resonances[].entrance.m1", "mass of daughter 1", Energy, (0.0, TOP_GEV), "a mass is 0 or more"),
    from("model.resonances[].entrance.m2", "mass of daughter 2", Energy, (0.0, TOP_GEV), "a mass is 0 or more"),
    from("model.resonances[].entrance.radius", "barrier radius", Radius, (0.0, 1e4), "0 means no barrier"),
    from("model.resonances[].exit.m1", "mass of daughter 1", Energy, (0.0, TOP_GEV), "a mass is 0 or more"),
    from("model.resonances[].exit.m2", "mass of daughter 2", Energy, (0.0, TOP_GEV), "a mass is 0 or more"),
    from("model.resonances[].exit.radius", "barrier radius", Radius, (0.0, 1e4), "0 means no barrier"),
    from("model.resonances[].flatte[].g_squared", "squared coupling", EnergySquared, (0.0, 1e10), "a squared coupling is 0 or more"),
    from("model.resonances[].flatte[].m1", "mass of daughter 1", Energy, (0.0, TOP_GEV), "a mass is 0 or more"),
    from("model.resonances[].flatte[].m2", "mass of daughter 2", Energy, (0.0, TOP_GEV), "a mass is 0 or more"),
    above("model.resonances[].daughter", "mass of each daughter", Energy, (0.0, TOP_GEV), "this form is for two equal massive daughters"),
    from("model.resonances[].loops[].g", "coupling g", Number, (-100.0, 100.0), "a larger Yukawa coupling is no perturbation"),
    from("model.resonances[].loops[].mass", "mass in the loop", Energy, (0.0, TOP_GEV), "a mass is 0 or more"),
    from("model.resonances[].loops[].h", "coupling h", Energy, (-TOP_GEV, TOP_GEV), ANY_SIZE),
    from("model.resonances[].loops[].m1", "mass 1 in the loop", Energy, (0.0, TOP_GEV), "a mass is 0 or more"),
    from("model.resonances[].loops[].m2", "mass 2 in the loop", Energy, (0.0, TOP_GEV), "a mass is 0 or more"),
    above("model.k_matrix.poles[].mass", "mass of the bare pole", Energy, (0.0, TOP_GEV), ABOVE_ZERO),
    from("model.k_matrix.poles[].g1", "coupling to channel 1", Energy, (-TOP_GEV, TOP_GEV), ANY_SIZE),
    from("model.k_matrix.poles[].g2", "coupling to channel 2", Energy, (-TOP_GEV, TOP_GEV), ANY_SIZE),
    from("model.k_matrix.channels[].m1", "mass 1 of the channel", Energy, (0.0, TOP_GEV), "a mass is 0 or more"),
    from("model.k_matrix.channels[].m2", "mass 2 of the channel", Energy, (0.0, TOP_GEV), "a mass is 0 or more"),
    from("model.k_matrix.c11", "c11", Number, (-1e12, 1e12), ANY_SIZE),
    from("model.k_matrix.c12", "c12", Number, (-1e12, 1e12), ANY_SIZE),
    from("model.k_matrix.c22", "c22", Number, (-1e12, 1e12), ANY_SIZE),
    from("model.diagrams.other_mass", "mass of F", Energy, (0.0, TOP_GEV), "a mass is 0 or more"),
    from("model.diagrams.mediators[].g", "coupling g", Number, (-100.0, 100.0), "a larger Yukawa coupling is no perturbation"),
    from("model.diagrams.mediators[].g_other", "coupling g_F", Number, (-100.0, 100.0), "a larger Yukawa coupling is no perturbation"),
    from("model.waves[].phase", "phase of the wave", Angle, (-TURNS, TURNS), A_PHASE),
    from("model.waves[].couplings[].magnitude", "size of a coupling", Number, (0.0, 1e12), "a modulus is 0 or more; only ratios count"),
    from("model.waves[].couplings[].phase", "phase of a coupling", Angle, (-TURNS, TURNS), A_PHASE),
    above("model.cos_cut", "cut on |cos theta|", Number, (0.0, 1.0), "a cosine above 0; 1 means all angles"),
    above("model.coherent.w0", "W0", Energy, (0.0, TOP_GEV), ABOVE_ZERO),
    from("model.coherent.coefficients[]", "coefficient", NumberPerEnergy(0), (-1e30, 1e30), ANY_SIZE),
    from("model.coherent.phase", "phase of the background", Angle, (-TURNS, TURNS), A_PHASE),
    from("model.coherent.c", "C", Number, (-1e12, 1e12), ANY_SIZE),
    from("model.coherent.c", "continuum cross section", CrossSection, (0.0, 1e12), "a cross section is 0 or more"),
    above("model.incoherent.w0", "W0", Energy, (0.0, TOP_GEV), ABOVE_ZERO),
    from("model.incoherent.c0", "continuum cross section", CrossSection, (0.0, 1e12), "a cross section is 0 or more"),
    from("model.incoherent.n", "power n", Number, (-20.0, 20.0), "a steeper power is no continuum"),
    from("model.incoherent.coefficients[]", "coefficient", CrossSectionPerEnergy(0), (-1e30, 1e30), ANY_SIZE),
    from("model.final_threshold", "threshold of the final state", Energy, (0.0, TOP_GEV), "a sum of masses is 0 or more"),
    above("model.radiation.w_min", "least W after radiation", Energy, (0.0, TOP_GEV), ABOVE_ZERO),
    from("model.continuum_factor", "factor on the continuum", Number, (0.0, 100.0), "vacuum polarisation is a number near 1"),
    from("model.accuracy", "relative accuracy", Number, (1e-9, 1e-3), "finer than 1e-9 is below what the radiator itself is good for; coarser than 1e-3 shows"),
    above("detection.efficiency", "efficiency", Number, (0.0, 1.0), "nothing is seen with an efficiency of 0"),
    above("detection.photon_cut", "cut on W that the efficiency belongs to", Energy, (0.0, TOP_GEV), ABOVE_ZERO),
    above("detection.decay_fraction", "decay fraction", Number, (0.0, 1.0), "nothing is seen with a fraction of 0"),
    from("detection.background_cross_section", "background cross section", CrossSection, (0.0, 1e12), "a cross section is 0 or more"),
    from("detection.background_rate", "background rate", Rate, (0.0, 1e12), "a rate is 0 or more"),
    above("detection.live_fraction", "live fraction", Number, (0.0, 1.0), "nothing is recorded with a live fraction of 0"),
    above("detection.tau", "tau", Number, (0.0, 1e6), "the off region has a size above 0"),
    above("data.photon_cut", "cut on W", Energy, (0.0, TOP_GEV), ABOVE_ZERO),
    from("data.common_energy_error", "energy error common to all rows", Energy, (0.0, 1e3), AN_ERROR),
    from("data.common_scale_error", "scale error common to all rows", Number, (0.0, 1.0), AN_ERROR),
    from("data.common_slope_error", "error of the energy scale", Number, (0.0, 0.1), AN_ERROR),
    from("data.group_scale_error", "scale error common to a fill", Number, (0.0, 1.0), AN_ERROR),
    from("data.common_luminosity_error", "luminosity error common to all rows", Number, (0.0, 1.0), AN_ERROR),
    from("data.group_luminosity_error", "luminosity error common to a fill", Number, (0.0, 1.0), AN_ERROR),
    from("data.efficiency_slope_error", "error of the efficiency's slope", NumberPerEnergy(0), (0.0, 1e9), AN_ERROR),
    from("data.point_spread_error", "error of each row's sigma_W", Number, (0.0, 1.0), AN_ERROR),
    from("data.group_energy_error", "energy error common to a fill", Energy, (0.0, 1e3), AN_ERROR),
    above("data.rows[].setting", "setting", Energy, (0.0, TOP_GEV), ABOVE_ZERO),
    above("data.rows[].setting", "setting", Momentum, (0.0, TOP_GEV), ABOVE_ZERO),
    above("data.rows[].w", "W", Energy, (0.0, TOP_GEV), ABOVE_ZERO),
    from("data.rows[].w_error", "error of W", Energy, (0.0, 1e3), AN_ERROR),
    above("data.rows[].sigma_w", "sigma_W", Energy, (0.0, 1e3), ABOVE_ZERO),
    above("data.rows[].luminosity", "luminosity", Luminosity, (0.0, 1e15), "counts without luminosity say nothing"),
    from("data.rows[].luminosity_error", "error of the luminosity", Luminosity, (0.0, 1e15), AN_ERROR),
    above("data.rows[].other_luminosity", "luminosity of the other source", Luminosity, (0.0, 1e15), "counts without luminosity say nothing"),
    above("data.rows[].live_fraction", "live fraction", Number, (0.0, 1.0), "nothing is recorded with a live fraction of 0"),
    above("data.rows[].live_time", "live time", Time, (0.0, 1e6), ABOVE_ZERO),
    whole("data.rows[].counts", "counts", 1e15, "events are counted, 0 included"),
    whole("data.rows[].off_counts", "counts off region", 1e15, "events are counted, 0 included"),
    above("data.rows[].tau", "tau", Number, (0.0, 1e6), "the off region has a size above 0"),
    above("data.rows[].efficiency", "efficiency", Number, (0.0, 1.0), "nothing is seen with an efficiency of 0"),
    from("data.rows[].efficiency_error", "error of the efficiency", Number, (0.0, 1.0), AN_ERROR),
    from("data.rows[].cross_section", "cross section", CrossSection, (-1e12, 1e12), "background taken off may leave less than 0"),
    above("data.rows[].cross_section_error", "error of the cross section", CrossSection, (0.0, 1e12), "a point without error cannot be weighed"),
    from("data.rows[].angle_bins[].from", "lower edge", Number, (-1.0, 1.0), "a cosine"),
    from("data.rows[].angle_bins[].to", "upper edge", Number, (-1.0, 1.0), "a cosine"),
    whole("data.rows[].angle_bins[].counts", "counts in the bin", 1e15, "events are counted, 0 included"),
    above("data.rows[].angle_bins[].efficiency", "efficiency in the bin", Number, (0.0, 1.0), "nothing is seen with an efficiency of 0"),
    from("data.covariance[][]", "covariance", CrossSectionSquared, (-1e24, 1e24), ANY_SIZE),
    from("data.energy_covariance[][]", "covariance of energies", EnergySquared, (-1e6, 1e6), ANY_SIZE),
    above("plan.from", "least W", Energy, (0.0, TOP_GEV), ABOVE_ZERO),
    above("plan.to", "largest W", Energy, (0.0, TOP_GEV), ABOVE_ZERO),
    above("plan.step", "step of W", Energy, (0.0, 1e3), ABOVE_ZERO),
    above("plan.hours", "hours", Time, (0.0, 1e5), ABOVE_ZERO),
    from("plan.hours_used", "hours used", Time, (0.0, 1e5), "a time is 0 or more"),
    above("plan.dwell_step", "unit of dwell time", Time, (0.0, 1e4), ABOVE_ZERO),
    from("plan.least_dwell", "least dwell", Time, (0.0, 1e4), "a time is 0 or more"),
    from("plan.settle", "settle time", Time, (0.0, 1e4), "a time is 0 or more"),
    from("plan.settle_up", "settle time per step upwards", Time, (0.0, 1e4), "a time is 0 or more"),
    from("plan.settle_down", "settle time per step downwards", Time, (0.0, 1e4), "a time is 0 or more"),
    from("plan.refill", "refill time", Time, (0.0, 1e4), "a time is 0 or more"),
    from("plan.calibration_time", "time of a calibration", Time, (0.0, 1e4), "a time is 0 or more"),
    from("plan.off_hours", "time off resonance", Time, (0.0, 1e4), "a time is 0 or more"),
    from("plan.blocked[][]", "blocked time", Time, (0.0, 1e4), "a time is 0 or more"),
    above("plan.fill", "beam of one fill", Time, (0.0, 1e5), ABOVE_ZERO),
    above("plan.lifetime", "lifetime of the luminosity", Time, (0.0, 1e5), ABOVE_ZERO),
    above("plan.calibration_every", "time between calibrations", Time, (0.0, 1e5), ABOVE_ZERO),
    above("plan.stands_at", "present W", Energy, (0.0, TOP_GEV), ABOVE_ZERO),
    above("plan.off_below", "W below which is off resonance", Energy, (0.0, TOP_GEV), ABOVE_ZERO),
    above("plan.off_above", "W above which is off resonance", Energy, (0.0, TOP_GEV), ABOVE_ZERO),
    above("plan.reference", "W of the reference point", Energy, (0.0, TOP_GEV), ABOVE_ZERO),
    above("plan.both_flanks_of", "W between the flanks", Energy, (0.0, TOP_GEV), ABOVE_ZERO),
    from("plan.visit_energy_error", "energy error of a visit", Energy, (0.0, 1e3), AN_ERROR),
    from("plan.visit_luminosity_error", "luminosity error of a visit", Number, (0.0, 1.0), AN_ERROR),
    from("plan.others_share", "share for the other parameters", Number, (0.0, 0.99), A_FRACTION),
    above("plan.goals[].weight", "weight of a goal", Number, (0.0, 1e6), ABOVE_ZERO),
    above("plan.goals[].wanted", "wanted error", Energy, (0.0, TOP_GEV), ABOVE_ZERO),
    above("plan.goals[].wanted", "wanted relative error", Number, (0.0, 1e3), ABOVE_ZERO),
    above("plan.goals[].wanted", "wanted error", Angle, (0.0, TURNS), ABOVE_ZERO),
    above("plan.goals[].wanted", "wanted error", CrossSection, (0.0, 1e12), ABOVE_ZERO),
    above("plan.luminosity_at[][]", "W of a luminosity", Energy, (0.0, TOP_GEV), ABOVE_ZERO),
    above("plan.luminosity_at[][]", "luminosity", LuminosityRate, (0.0, 1e12), ABOVE_ZERO),
    above("plan.comb.reach", "reach of the comb", Energy, (0.0, TOP_GEV), ABOVE_ZERO),
    above("plan.comb.spacing", "spacing of the comb", Number, (0.0, 1e3), ABOVE_ZERO),
    above("plan.comb.dwell", "live time of a point", Time, (0.0, 1e5), ABOVE_ZERO),
    above("plan.comb.significance", "significance", Number, (0.0, 8.0), "beyond eight deviations the pseudo-experiments say nothing"),
    whole("plan.least_distinct", "number of distinct energies", 1e3, "it counts energies"),
    whole("plan.truths", "number of truths", 1e3, "it counts truths"),
];

impl Limit {
    /// Whether a value (core units) is allowed.
    #[must_use]
    pub fn allows(&self, value: f64) -> bool {
        let low = if self.least_allowed {
            value >= self.least
        } else {
            value > self.least
        };
        low && value <= self.largest && (!self.whole || value.fract() == 0.0)
    }

    /// What is allowed, as a clause: "a width above 0 GeV, at most 100 TeV".
    #[must_use]
    pub fn allowed(&self) -> String {
        let number = |v: f64| format::for_the_eye(v, None, self.dimension, None, 3);
        let low = if self.least_allowed { "from" } else { "above" };
        let whole = if self.whole { "a whole number " } else { "" };
        format!(
            "{}: {whole}{low} {} up to {}",
            self.name,
            number(self.least),
            number(self.largest)
        )
    }
}

/// The path with its indices taken out: `data.rows[3].w` is `data.rows[].w`.
#[must_use]
pub fn pattern(path: &str) -> String {
    let mut out = String::with_capacity(path.len());
    let mut inside = false;
    for c in path.chars() {
        match c {
            '[' => inside = true,
            ']' => inside = false,
            _ if inside => continue,
            _ => {}
        }
        out.push(c);
    }
    out
}

/// Places that share one row of the table: a mediator's propagator is a resonance's, and the
/// couplings of a wave are alike on both sides and in both kinds.
fn one_name(pattern: String) -> String {
    if let Some(rest) = pattern.strip_prefix("model.diagrams.mediators[].")
        && !matches!(rest, "g" | "g_other")
    {
        return format!("model.resonances[].{rest}");
    }
    for side in [
        "entrance.amplitudes",
        "entrance.terms",
        "exit.amplitudes",
        "exit.terms",
    ] {
        if let Some(rest) = pattern.strip_prefix(&format!("model.waves[].{side}[].")) {
            return format!("model.waves[].couplings[].{rest}");
        }
    }
    pattern
}

/// The limit of a path, of this dimension.
#[must_use]
pub fn find(path: &str, dimension: Dimension) -> Option<&'static Limit> {
    let pattern = pattern(path);
    let kind = |d: Dimension| match d {
        NumberPerEnergy(_) => NumberPerEnergy(0),
        CrossSectionPerEnergy(_) => CrossSectionPerEnergy(0),
        other => other,
    };
    let pattern = one_name(pattern);
    TABLE
        .iter()
        .find(|l| l.field == pattern && l.dimension == kind(dimension))
}

/// Reads the text of a field and holds it against its limit.
///
/// # Errors
/// The refusal of the text, or of a value out of range, naming the path.
pub fn number(path: &str, text: &str, dimension: Dimension) -> Answer<Reading> {
    let limit = find(path, dimension)
        .ok_or_else(|| Refusal::new(path, text, "", "this sheet has no such number"))?;
    let reading = read(text, dimension).map_err(|mut problem| {
        problem.allowed = format!("{} ({})", limit.allowed(), dimension.units());
        problem.at(path, text)
    })?;
    if limit.allows(reading.value) {
        return Ok(reading);
    }
    Err(Refusal::new(
        path,
        text,
        limit.allowed(),
        format!(
            "the {} cannot be {}: {}",
            limit.name,
            text.trim(),
            limit.why
        ),
    ))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_row_is_sound_and_found() {
        for (i, limit) in TABLE.iter().enumerate() {
            assert!(limit.least < limit.largest, "{}", limit.field);
            assert!(limit.allows(limit.largest) && !limit.allows(f64::NAN));
            assert_eq!(
                limit.allows(limit.least),
                limit.least_allowed,
                "{}",
                limit.field
            );
            let path = limit.field.replace("[]", "[7]");
            assert_eq!(find(&path, limit.dimension), Some(limit));
            assert!(
                TABLE
                    .iter()
                    .skip(i + 1)
                    .all(|l| (l.field, l.dimension) != (limit.field, limit.dimension)),
                "{} twice",
                limit.field
            );
        }
    }

    #[test]
    fn the_message_names_field_value_and_what_is_allowed() {
        let refused = number("model.resonances[0].width", "-0.62 MeV", Energy).unwrap_err();
        assert_eq!(refused.field, "model.resonances[0].width");
        assert_eq!(refused.value, "-0.62 MeV");
        assert_eq!(refused.allowed, "width: above 0 GeV up to 100 TeV");
        assert!(refused.message.contains("above 0"), "{}", refused.message);
        let refused = number("data.rows[3].counts", "98.5", Number).unwrap_err();
        assert!(
            refused.allowed.contains("whole number"),
            "{}",
            refused.allowed
        );
        let refused = number("data.rows[3].counts", "", Number).unwrap_err();
        assert!(refused.message.contains("missing"), "{}", refused.message);
    }
}
