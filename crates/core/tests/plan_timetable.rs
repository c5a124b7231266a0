//! Timetables: the machine's rules kept, small problems against exhaustive enumeration,
//! errors of fills against an explicit matrix.

#![allow(clippy::unwrap_used)]

use nalgebra::{DMatrix, DVector};
use widthwise_core::math;
use widthwise_core::plan::clock::{Fills, Machine, Settle};
use widthwise_core::plan::criterion::Criterion;
use widthwise_core::plan::problem::{Rates, VisitErrors};
use widthwise_core::plan::scan_rates::brightness;
use widthwise_core::plan::task::{Planner, Task};
use widthwise_core::plan::timetable::{Demands, Row, in_order};

const WIDTH_GEV: f64 = 0.6e-3;

/// A Breit-Wigner over a flat background; parameters: mass, width, height. Counts per hour.
fn rates(w_gev: &[f64], mass_gev: f64, background: f64, weight: f64) -> Rates {
    let (mut rate, mut gradient, mut slope) = (Vec::new(), Vec::new(), Vec::new());
    let height = 150.0;
    for &w in w_gev {
        let x = w - mass_gev;
        let d = x * x + 0.25 * WIDTH_GEV * WIDTH_GEV;
        let shape = 0.25 * WIDTH_GEV * WIDTH_GEV / d;
        let by_mass = height * shape * 2.0 * x / d;
        let by_width = height * (0.5 * WIDTH_GEV / d - shape * 0.5 * WIDTH_GEV / d);
        rate.push(height * shape + background);
        gradient.extend([by_mass, by_width, shape]);
        slope.push(-by_mass);
    }
    Rates {
        weight,
        rate_per_h: rate,
        gradient_per_h: gradient,
        slope_per_h_gev: slope,
        rate_without_beam_per_h: 0.5 * background,
        prior: DMatrix::zeros(3, 3),
    }
}

fn machine(hours: f64) -> Machine {
    Machine {
        hours,
        fills: None,
        elapsed_h: 0.0,
        blocked_h: Vec::new(),
        calibration_h: None,
        dwell_step_h: 0.5,
        least_dwell_h: 1.0,
        settle: Settle::default(),
        one_way: None,
        current_w_gev: None,
    }
}

fn task(points: usize, machine: Machine) -> Task {
    let w_gev: Vec<f64> = (0..points)
        .map(|i| 3.0 + 2.4e-3 * (i as f64 / (points - 1) as f64 - 0.5))
        .collect();
    Task {
        names: ["mass", "width", "height"].map(String::from).to_vec(),
        truths: vec![rates(&w_gev, 3.0, 4.0, 1.0)],
        w_gev,
        criterion: Criterion::parameter(1, 3),
        machine,
        demands: Demands::default(),
        errors: VisitErrors::default(),
        fill_energy_gev: 0.0,
        wanted: 0.999,
        effort: 4000,
    }
}

fn check_rules(task: &Task, rows: &[Row]) {
    let windows = task.machine.windows();
    let mut last_end = 0.0;
    for row in rows {
        let window = windows[row.fill];
        assert!(
            row.start_h >= window.start_h - 1e-9 && row.start_h + row.live_h <= window.end_h + 1e-6
        );
        assert!(row.start_h + 1e-9 >= last_end + row.settle_h);
        assert!(row.live_h + 1e-9 >= task.machine.least_dwell_h);
        let units = row.live_h / task.machine.dwell_step_h;
        assert!((units - units.round()).abs() < 1e-9);
        last_end = row.start_h + row.live_h;
    }
}

#[test]
fn a_plain_machine_reaches_the_relaxed_optimum() {
    let task = task(121, machine(40.0));
    let planner = Planner::new(task.clone()).unwrap();
    let plan = planner.plan().unwrap();
    check_rules(&task, &plan.rows);
    assert!(
        plan.efficiency > 0.995 && plan.efficiency <= 1.0,
        "{}",
        plan.efficiency
    );
    assert!(plan.uniform_efficiency < plan.efficiency);
    assert!(plan.relaxed.efficiency >= 0.999);
    // The forecast is the criterion: variance of the width.
    let variance = planner.variances(&plan.rows, 0)[1].unwrap();
    assert!((variance / math::exp(plan.criterion) - 1.0).abs() < 1e-9);
}

/// Exhaustive over all ways to give 14 half-hour units, at least 2 each, to 6 energies.
#[test]
fn small_problems_are_exact() {
    for criterion in [Criterion::parameter(1, 3), Criterion::Determinant] {
        let mut small = task(6, machine(7.0));
        small.criterion = criterion.clone();
        let planner = Planner::new(small.clone()).unwrap();
        let plan = planner.plan().unwrap();
        assert!(plan.exact);
        let r = &small.truths[0];
        let mut best = f64::INFINITY;
        for code in 0..15_usize.pow(5) {
            let mut units = [0_usize; 6];
            let mut rest = code;
            for u in units.iter_mut().take(5) {
                *u = rest % 15;
                rest /= 15;
            }
            let used: usize = units.iter().sum();
            if used > 14 {
                continue;
            }
            units[5] = 14 - used;
            if units.contains(&1) {
                continue;
            }
            let mut info = DMatrix::<f64>::zeros(3, 3);
            for (j, &u) in units.iter().enumerate() {
                let g = DVector::from_column_slice(&r.gradient_per_h[3 * j..3 * j + 3]);
                info += &g * g.transpose() * (0.5 * u as f64 / r.rate_per_h[j]);
            }
            // Units of keV, so that the inverse is harmless.
            let s = DMatrix::from_diagonal(&DVector::from_column_slice(&[1e-6, 1e-6, 1.0]));
            let info = &s * info * &s;
            if let Some(inverse) = info.clone().try_inverse()
                && info.determinant() > 1e-9
            {
                let value = match criterion {
                    Criterion::Determinant => -math::ln(info.determinant()) - math::ln(1e24),
                    _ => math::ln(inverse[(1, 1)]) + math::ln(1e-12),
                };
                best = best.min(value);
            }
        }
        let found = if criterion == Criterion::Determinant {
            -plan.criterion
        } else {
            plan.criterion
        };
        assert!((found - best).abs() < 1e-9, "{found} {best}");
    }
}

/// The error common to a fill against the whole matrix with one nuisance per fill.
#[test]
fn fill_errors_equal_the_explicit_matrix() {
    let mut m = machine(30.0);
    m.fills = Some(Fills {
        length_h: 6.0,
        refill_h: 1.5,
        lifetime_h: Some(9.0),
    });
    m.settle = Settle {
        fixed_h: 0.2,
        up_h_per_gev: 100.0,
        down_h_per_gev: 200.0,
    };
    let mut t = task(61, m);
    t.criterion = Criterion::Determinant;
    t.fill_energy_gev = 30e-6;
    t.errors = VisitErrors {
        energy_gev: 10e-6,
        luminosity: 0.01,
    };
    let planner = Planner::new(t.clone()).unwrap();
    let plan = planner.plan().unwrap();
    check_rules(&t, &plan.rows);
    let fills = t.machine.windows().len();
    assert_eq!(fills, 4);
    let r = &t.truths[0];
    let size = 3 + fills;
    let mut info = DMatrix::<f64>::zeros(size, size);
    for row in &plan.rows {
        let j = row.candidate;
        let (u, hours) = (row.bright_h, row.live_h);
        let dark = r.rate_without_beam_per_h;
        let beam = r.rate_per_h[j] - dark;
        let mut g = DVector::<f64>::zeros(size);
        for k in 0..3 {
            g[k] = u * r.gradient_per_h[3 * j + k];
        }
        g[3 + row.fill] = u * r.slope_per_h_gev[j];
        let slope = u * r.slope_per_h_gev[j] * 10e-6;
        let lumi = u * beam * 0.01;
        let variance = u * beam + hours * dark + slope * slope + lumi * lumi;
        info += &g * g.transpose() / variance;
    }
    for f in 0..fills {
        info[(3 + f, 3 + f)] += 1.0 / (30e-6 * 30e-6);
    }
    let scale = DMatrix::from_diagonal(&DVector::from_fn(
        size,
        |i, _| if i == 2 { 1.0 } else { 1e-6 },
    ));
    let covariance = (&scale * info * &scale).try_inverse().unwrap();
    let expected = covariance[(0, 0)] * 1e-12;
    let found = planner.variances(&plan.rows, 0)[0].unwrap();
    assert!((found / expected - 1.0).abs() < 1e-6, "{found} {expected}");
    // No number of visits buys the fills' error down: 30 keV / sqrt(4).
    assert!(found.sqrt() > 15e-6);
    assert!(
        plan.efficiency > 0.7 && plan.efficiency <= 1.0,
        "{}",
        plan.efficiency
    );
}

#[test]
fn demands_are_met_and_cost_something() {
    let mut m = machine(34.0);
    m.fills = Some(Fills {
        length_h: 7.0,
        refill_h: 1.0,
        lifetime_h: None,
    });
    m.settle = Settle {
        fixed_h: 0.25,
        up_h_per_gev: 0.0,
        down_h_per_gev: 0.0,
    };
    m.one_way = Some(true);
    let mut t = task(61, m);
    t.demands = Demands {
        least_distinct: 6,
        off_resonance: Some((3.0 - 1.1e-3, 3.0 + 1.1e-3, 3.0)),
        reference: Some(30),
        both_flanks_of_gev: Some(3.0),
    };
    let planner = Planner::new(t.clone()).unwrap();
    let plan = planner.plan().unwrap();
    check_rules(&t, &plan.rows);
    // The last fill is a stub of 2 h that cannot hold what every fill must: it may stay empty.
    for fill in 0..t.machine.windows().len() {
        let here: Vec<&Row> = plan.rows.iter().filter(|r| r.fill == fill).collect();
        if fill == 4 && here.is_empty() {
            continue;
        }
        assert!(here.iter().any(|r| r.candidate == 30));
        assert!(here.iter().any(|r| t.w_gev[r.candidate] < 3.0));
        assert!(here.iter().any(|r| t.w_gev[r.candidate] > 3.0));
        assert!(here.windows(2).all(|w| w[0].candidate < w[1].candidate));
    }
    let mut distinct: Vec<usize> = plan.rows.iter().map(|r| r.candidate).collect();
    distinct.sort_unstable();
    distinct.dedup();
    assert!(distinct.len() >= 6);
    let off: f64 = plan
        .rows
        .iter()
        .filter(|r| (t.w_gev[r.candidate] - 3.0).abs() >= 1.1e-3)
        .map(|r| r.live_h)
        .sum();
    assert!(off >= 3.0 - 1e-9);
    let costs = planner.costs(&plan).unwrap();
    assert!(costs.len() >= 8, "{costs:?}");
    assert!(costs.iter().all(|c| c.loss >= 0.0 && c.loss < 1.0));
    assert!(
        costs
            .iter()
            .find(|c| c.what.contains("settling"))
            .unwrap()
            .loss
            > 0.0
    );
}

#[test]
fn a_wide_prior_spreads_the_plan_and_costs() {
    let mut t = task(121, machine(60.0));
    let w = t.w_gev.clone();
    t.truths = (-6..=6)
        .map(|k| {
            let z = 0.5 * f64::from(k);
            rates(&w, 3.0 + z * 0.2e-3, 4.0, math::exp(-0.5 * z * z))
        })
        .collect();
    let robust = Planner::new(t.clone()).unwrap();
    let plan = robust.plan().unwrap();
    let lost = robust.cost_of_not_knowing(&plan).unwrap();
    assert!(lost > 0.02 && lost < 0.9, "{lost}");
    // If the mass is off by a prior standard deviation, the robust plan loses less than the sharp one.
    t.truths = vec![rates(&w, 3.0, 4.0, 1.0)];
    let sharp = Planner::new(t).unwrap();
    let sharp_plan = sharp.plan().unwrap();
    let off = rates(&w, 3.0 + 0.4e-3, 4.0, 1.0);
    let kept = robust.efficiency_if(&plan.rows, &off).unwrap();
    let risked = sharp.efficiency_if(&sharp_plan.rows, &off).unwrap();
    assert!(kept > risked, "{kept} {risked}");
}

#[test]
fn stay_move_and_replan() {
    let mut t = task(121, machine(20.0));
    // What 10 h at the centre have told already: little about the width.
    let r = &t.truths[0];
    let g = DVector::from_column_slice(&r.gradient_per_h[180..183]);
    t.truths[0].prior = &g * g.transpose() * (10.0 / r.rate_per_h[60]);
    let planner = Planner::new(t.clone()).unwrap();
    let (stay, moved) = planner.stay_or_move(60, 2.0, 0.3).unwrap();
    assert!(stay > 0.0 && moved == 0.0, "{stay} {moved}");
    let plan = planner.plan().unwrap();
    assert_eq!(planner.loss_by_keeping(&plan.rows, &plan), 0.0);
    let mut worse = plan.rows.clone();
    for row in &mut worse {
        row.candidate = (row.candidate + 9).min(120);
    }
    assert!(planner.loss_by_keeping(&worse, &plan) > 0.01);
    let best = planner.best_against_hours(&[5.0, 20.0, 80.0]).unwrap();
    let widths: Vec<f64> = best.iter().map(|v| v[1].unwrap()).collect();
    assert!(widths[0] > widths[1] && widths[1] > widths[2]);
}

#[test]
fn refusals_are_plain_sentences() {
    let short = Planner::new(task(61, machine(0.5))).err().unwrap();
    assert!(short.message.contains("least dwell"), "{}", short.message);
    // One visit cannot determine three parameters.
    let one = Planner::new(task(61, machine(1.0)))
        .unwrap()
        .plan()
        .unwrap_err();
    assert!(one.message.contains("More hours"), "{}", one.message);
    let mut empty = task(61, machine(20.0));
    empty.w_gev.clear();
    let empty = Planner::new(empty).err().unwrap();
    assert_eq!(empty.field, "plan.from");
    let mut bad = task(61, machine(20.0));
    bad.truths[0].prior[(0, 0)] = -1.0;
    assert_eq!(Planner::new(bad).err().unwrap().field, "fit.constraints");
    let mut crowded = task(61, machine(5.0));
    crowded.demands.least_distinct = 9;
    assert_eq!(
        Planner::new(crowded).unwrap().plan().unwrap_err().field,
        "plan.demands"
    );
}

/// Visits laid one after the other: inside the fills, settled, each as long as asked where the hours hold it.
#[test]
fn visits_in_order_keep_to_the_clock() {
    let mut m = machine(20.0);
    m.fills = Some(Fills {
        length_h: 6.0,
        refill_h: 1.0,
        lifetime_h: Some(5.0),
    });
    m.settle.fixed_h = 0.25;
    let w_gev = [1.0, 2.0, 3.0];
    let rows = in_order(&m, &w_gev, &[(0, 4.0), (2, 4.0), (1, 3.0)]);
    let spent = |c: usize| -> f64 {
        let here = rows.iter().filter(|r| r.candidate == c);
        here.map(|r| r.live_h).sum()
    };
    for (c, hours) in [(0, 4.0), (2, 4.0), (1, 3.0)] {
        assert!((spent(c) - hours).abs() < 1e-9, "{rows:?}");
    }
    for (row, window) in rows.iter().map(|r| (r, m.windows()[r.fill])) {
        assert!(row.start_h >= window.start_h && row.start_h + row.live_h <= window.end_h + 1e-9);
        assert!(row.bright_h < row.live_h);
    }
    // By hand: 0-4 h, a change, 4.25-6 h; the other 2.25 h after the refill at 7 h (settled by then).
    assert!((rows[1].start_h - 4.25).abs() < 1e-9 && (rows[1].live_h - 1.75).abs() < 1e-9);
    assert!((rows[2].start_h - 7.0).abs() < 1e-9 && (rows[2].live_h - 2.25).abs() < 1e-9);
    // What the hours do not hold falls away.
    let short = in_order(&machine(3.0), &w_gev, &[(0, 2.0), (1, 4.0)]);
    let end = short.last().map(|r| r.start_h + r.live_h);
    assert!(end.unwrap() <= 3.0 + 1e-9, "{short:?}");
}

#[test]
fn luminosity_against_energy_is_a_broken_line() {
    let table = [(1.0, 0.5), (2.0, 1.5), (4.0, 1.0)];
    for (w, ratio) in [
        (0.0, 0.5),
        (1.0, 0.5),
        (1.5, 1.0),
        (2.0, 1.5),
        (3.0, 1.25),
        (9.0, 1.0),
    ] {
        assert!((brightness(&table, w) - ratio).abs() < 1e-15, "{w}");
    }
    assert_eq!(brightness(&[], 1.0), 1.0);
}
