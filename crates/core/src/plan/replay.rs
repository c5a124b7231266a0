//! The hours replayed as pseudo-experiments: drawn from a truth, fitted, steered.
//!
//! A timetable that is kept is a scan like any other ([`crate::trials`]). Where every point decides
//! the next one, the errors of the fit at the end may not be what they claim: data are then drawn
//! visit by visit, fitted and planned again in between, as on the shift.

use super::clock::Machine;
use super::for_scan::{PlanSettings, ScanPlanner};
use super::scan_rates::{set_value, value_of};
use super::timetable::Row;
use crate::counts::{Exposure, rate_and_gradient};
use crate::error::{Answer, Refusal};
use crate::fit::{FitResult, SPREAD, fit};
use crate::numerics::random::Stream;
use crate::scan::{Measured, Point, Scan};
use crate::trials::TrialRow;

/// The scan with the rows of a timetable as points to be filled by trials.
#[must_use]
pub fn with_timetable(scan: &Scan, settings: &PlanSettings, rows: &[Row]) -> Scan {
    let mut other = scan.clone();
    other
        .points
        .retain(|p| !matches!(p.measured, Measured::Nothing));
    other.points.extend(settings.points(scan, rows));
    other
}

/// The scan everyone makes: the same live time at every allowed energy, each fill over all of them.
/// At most 61 energies, evenly chosen: more make the fit slower and nothing better.
#[must_use]
pub fn uniform_rows(settings: &PlanSettings) -> Vec<Row> {
    super::rival::even(settings, 61)
}

/// Replays with re-planning.
pub struct Replay<'a> {
    /// What holds; its points are those taken before.
    pub truth: &'a Scan,
    /// What is planned for.
    pub settings: &'a PlanSettings,
    /// Seed.
    pub seed: u64,
}

/// Most visits of one replay.
const MOST_VISITS: usize = 200;

impl Replay<'_> {
    /// Replay `k`: the first visit of a plan is made, the fit renewed, the rest planned again, until
    /// the hours are used up. Plans are made for the best guess of the moment.
    #[must_use]
    pub fn run(&self, k: u64) -> TrialRow {
        self.shift(k).unwrap_or_else(|_| TrialRow {
            k,
            converged: false,
            values: Vec::new(),
            errors: Vec::new(),
            statistic: f64::MAX,
            rise_at_truth: Vec::new(),
        })
    }

    fn shift(&self, k: u64) -> Answer<TrialRow> {
        let mut nature = Nature::new(self.truth, Stream::new(self.seed, k))?;
        let mut settings = self.settings.clone();
        settings.truths = 1;
        settings.effort = settings.effort.min(200);
        let mut known = self.truth.clone();
        known
            .points
            .retain(|p| !matches!(p.measured, Measured::Nothing));
        for c in &mut settings.fit.constraints {
            let truth = value_of(self.truth, &c.parameter)?;
            c.value = truth + c.error * nature.stream.normal();
            // What is believed before anything is measured.
            set_value(&mut known, &c.parameter, c.value)?;
        }
        for point in &mut known.points {
            nature.measure(point)?;
        }
        let schedule = Machine {
            hours: settings.machine.hours + settings.machine.elapsed_h,
            elapsed_h: 0.0,
            ..settings.machine.clone()
        };
        let all = schedule.windows();
        let mut clock = settings.machine.elapsed_h;
        for _ in 0..MOST_VISITS {
            let now = believed(&known, &settings);
            settings.machine.elapsed_h = clock;
            settings.machine.hours = schedule.hours - clock;
            if settings.machine.hours <= 0.0 || settings.machine.check().is_err() {
                break;
            }
            // An undetermined goal, or hours too few for another visit, end the shift.
            let Ok(plan) = ScanPlanner::new(&now, &settings, &mut |_, _| {})
                .and_then(|planner| planner.planner.plan())
            else {
                break;
            };
            let Some(row) = plan.rows.first() else {
                break;
            };
            let start = clock + row.start_h;
            let fill = all.iter().filter(|w| w.start_h <= start + 1e-9).count();
            let visit = Row {
                fill: fill.saturating_sub(1),
                ..*row
            };
            for mut point in settings.points(self.truth, &[visit]) {
                point.id = format!("visit {}", known.points.len() + 1);
                nature.measure(&mut point)?;
                settings.machine.current_w_gev = Some(point.w_gev);
                known.points.push(point);
            }
            clock = start + row.live_h;
        }
        let end = fit(&known, &settings.fit)?;
        Ok(row_of(k, &end))
    }
}

fn row_of(k: u64, found: &FitResult) -> TrialRow {
    TrialRow {
        k,
        converged: found.stop.is_minimum()
            && found
                .parameters
                .iter()
                .all(|p| p.error.is_some() || p.at_limit),
        values: found.parameters.iter().map(|p| p.value).collect(),
        errors: found.parameters.iter().map(|p| p.error).collect(),
        statistic: found.statistic,
        rise_at_truth: Vec::new(),
    }
}

/// The scan at its present fit; as it is where there is none.
fn believed(known: &Scan, settings: &PlanSettings) -> Scan {
    let mut moved = known.clone();
    if known.points.is_empty() {
        return moved;
    }
    let found = fit(known, &settings.fit).and_then(|found| {
        for p in &found.parameters {
            set_value(&mut moved, &p.id, p.value)?;
        }
        Ok(found.stop.is_minimum())
    });
    if matches!(found, Ok(true)) {
        moved
    } else {
        known.clone()
    }
}

/// What holds in one replay: the truth with its common errors drawn.
struct Nature {
    scan: Scan,
    stream: Stream,
    energy: f64,
    slope: f64,
    scale: f64,
    luminosity: f64,
    /// (group, energy, scale, luminosity), drawn when a group is first seen.
    groups: Vec<(String, f64, f64, f64)>,
}

impl Nature {
    fn new(truth: &Scan, mut stream: Stream) -> Answer<Self> {
        let mut scan = truth.clone();
        let (energy, slope) = (stream.normal(), stream.normal());
        let (scale, luminosity) = (stream.normal(), stream.normal());
        let spread = stream.normal();
        if truth.common.spread > 0.0 {
            let sigma = value_of(truth, SPREAD)?;
            set_value(
                &mut scan,
                SPREAD,
                sigma * (1.0 + truth.common.spread * spread),
            )?;
        }
        Ok(Self {
            scan,
            stream,
            energy,
            slope,
            scale,
            luminosity,
            groups: Vec::new(),
        })
    }

    /// Draws what a point measures.
    fn measure(&mut self, point: &mut Point) -> Answer<()> {
        let common = &self.scan.common;
        let factor = |delta: f64, eta: f64| {
            if common.gaussian_factors {
                1.0 + delta * eta
            } else {
                crate::math::exp(delta * eta)
            }
        };
        let own = self.stream.normal();
        let group = point.group.clone().unwrap_or_default();
        let (_, fill_energy, fill_scale, fill_luminosity) =
            match self.groups.iter().find(|g| g.0 == group) {
                Some(g) => g.clone(),
                None => {
                    let drawn = (
                        group.clone(),
                        self.stream.normal(),
                        self.stream.normal(),
                        self.stream.normal(),
                    );
                    self.groups.push(drawn.clone());
                    drawn
                }
            };
        let grouped = f64::from(u8::from(point.group.is_some()));
        let w = point.w_gev * (1.0 + common.energy_slope * self.slope)
            + common.energy_gev * self.energy
            + grouped * common.group_energy_gev * fill_energy
            + point.w_error_gev * own;
        let lumi_own = if point.luminosity_nbinv > 0.0 {
            1.0 + point.luminosity_error_nbinv / point.luminosity_nbinv * self.stream.normal()
        } else {
            1.0
        };
        let lumi = factor(common.luminosity, self.luminosity)
            * factor(grouped * common.group_luminosity, fill_luminosity)
            * lumi_own;
        let scale =
            factor(common.scale, self.scale) * factor(grouped * common.group_scale, fill_scale);
        let detection = &self.scan.detection;
        let hour = Exposure::per_hour(detection);
        let e = Exposure::of(point, detection);
        let rates = rate_and_gradient(&self.scan, &[], &[w])?;
        let signal =
            rates.signal_per_h.first().copied().unwrap_or(0.0) * e.signal_nbinv / hour.signal_nbinv;
        let background = lumi * e.luminosity_nbinv * detection.sigma_bg_nb
            + e.live_time_h * detection.rate_bg_per_h;
        let signal = signal * scale * lumi;
        point.measured = match point.measured {
            Measured::Counts {
                off: Some((n_off, tau)),
                ..
            } => {
                let b = n_off / tau;
                let n = self.stream.poisson(signal + b);
                Measured::Counts {
                    n,
                    off: Some((self.stream.poisson(tau * b), tau)),
                }
            }
            Measured::Counts { off: None, .. } => Measured::Counts {
                n: self.stream.poisson(signal + background),
                off: None,
            },
            _ => {
                return Err(Refusal::new(
                    "data.rows",
                    &point.id,
                    "counts",
                    "A shift can be replayed where the points so far are counts, not cross sections.",
                ));
            }
        };
        Ok(())
    }
}
