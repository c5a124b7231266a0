//! Small problems exactly: every timetable of one stretch of beam is judged.

use super::timetable::{Judge, Stretch, Visit};

/// The best timetable by enumeration; `None` if there are several windows or more than `limit` timetables.
///
/// Complete for one stretch: every set of energies, each run through in both directions (or the
/// allowed one), and every way to share all the dwell steps that fit.
pub(crate) fn enumerate(judge: &Judge<'_>, limit: u64) -> Option<(Vec<Stretch>, f64)> {
    let [window] = judge.windows else {
        return None;
    };
    let n = judge.w_gev.len();
    if n > 20 {
        return None;
    }
    let least = judge.machine.least_units();
    let directions: &[bool] = match judge.machine.one_way {
        Some(rising) => {
            if rising {
                &[false]
            } else {
                &[true]
            }
        }
        None => &[false, true],
    };
    let capacity =
        (((window.end_h - window.start_h) / judge.machine.dwell_step_h) + 1e-9).floor() as u32;
    let most = (capacity / least) as usize;
    let mut total = 0_u64;
    let mut sets = Vec::new();
    for bits in 1_u32..(1_u32 << n) {
        let members: Vec<usize> = (0..n).filter(|&j| bits >> j & 1 == 1).collect();
        if members.len() > most {
            continue;
        }
        for &falling in directions {
            let Some(units) = units_that_fit(judge, &members, falling, least, capacity) else {
                continue;
            };
            let spare = u64::from(units - least * members.len() as u32);
            total = total.saturating_add(binomial(
                spare + members.len() as u64 - 1,
                members.len() as u64 - 1,
            ));
            if total > limit {
                return None;
            }
            sets.push((members.clone(), falling, units));
        }
    }
    let mut best: Option<(Vec<Stretch>, f64)> = None;
    for (members, falling, units) in sets {
        let mut counts = vec![least; members.len()];
        share_out(
            &mut counts,
            0,
            units - least * members.len() as u32,
            &mut |counts| {
                let draft = vec![Stretch {
                    visits: members
                        .iter()
                        .zip(counts)
                        .map(|(&candidate, &units)| Visit { candidate, units })
                        .collect(),
                    falling,
                }];
                if judge.shortfall(&draft) > 0.0 {
                    return;
                }
                if let Some(rows) = judge.rows(&draft) {
                    let value = judge.value(&rows);
                    if value.is_finite() && best.as_ref().is_none_or(|b| value < b.1) {
                        best = Some((draft, value));
                    }
                }
            },
        );
    }
    best
}

fn units_that_fit(
    judge: &Judge<'_>,
    members: &[usize],
    falling: bool,
    least: u32,
    capacity: u32,
) -> Option<u32> {
    // Settling does not depend on the dwells, so the time that is left follows from one laying-out.
    let draft = vec![Stretch {
        visits: members
            .iter()
            .map(|&candidate| Visit {
                candidate,
                units: least,
            })
            .collect(),
        falling,
    }];
    let rows = judge.rows(&draft)?;
    let settle: f64 = rows.iter().map(|r| r.settle_h).sum();
    let window = judge.windows.first()?;
    let left = window.end_h - window.start_h - settle;
    let units = ((left / judge.machine.dwell_step_h) + 1e-9).floor() as u32;
    (units >= least * members.len() as u32).then_some(units.min(capacity))
}

fn share_out(counts: &mut Vec<u32>, at: usize, spare: u32, judge: &mut dyn FnMut(&[u32])) {
    if at + 1 == counts.len() {
        counts[at] += spare;
        judge(counts);
        counts[at] -= spare;
        return;
    }
    for give in 0..=spare {
        counts[at] += give;
        share_out(counts, at + 1, spare - give, judge);
        counts[at] -= give;
    }
}

fn binomial(n: u64, k: u64) -> u64 {
    let mut out = 1_u64;
    for i in 0..k.min(n - k.min(n)) {
        out = out.saturating_mul(n - i) / (i + 1);
    }
    out
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::plan::clock::{Machine, Settle};
    use crate::plan::criterion::{Criterion, Scaled};
    use crate::plan::problem::{Problem, Rates, VisitErrors};
    use crate::plan::relaxed::optimise;
    use crate::plan::search::search;
    use crate::plan::timetable::Demands;
    use nalgebra::DMatrix;
    use proptest::prelude::*;

    proptest! {
        #![proptest_config(ProptestConfig::with_cases(60))]
        /// The search never beats the enumeration and stays within 10 % of it, also where
        /// settling eats a quarter of a handful of dwell steps (such problems are enumerated anyway).
        #[test]
        fn search_against_enumeration(
            n in 5_usize..9,
            centre in -1.0_f64..1.0,
            width in 0.5_f64..3.0,
            background in 0.01_f64..1.0,
            hours in 4_u32..9,
            settle in 0.0_f64..0.3,
            by_size in 0.0_f64..0.1,
            determinant in any::<bool>(),
            one_way in prop::option::of(any::<bool>()),
        ) {
            // A Breit-Wigner of unit height over a flat background: position and width.
            let w_gev: Vec<f64> = (0..n).map(|j| 4.0 * (j as f64 / (n - 1) as f64 - 0.5)).collect();
            let (mut rate, mut gradient) = (Vec::new(), Vec::new());
            for w in &w_gev {
                let x = w - centre;
                let d = x * x + 0.25 * width * width;
                let shape = 0.25 * width * width / d;
                rate.push(20.0 * (shape + background));
                gradient.extend([40.0 * shape * x / d, 10.0 * width / d * (1.0 - shape)]);
            }
            let rates = Rates {
                weight: 1.0,
                rate_per_h: rate,
                gradient_per_h: gradient,
                slope_per_h_gev: Vec::new(),
                rate_without_beam_per_h: 0.0,
                prior: DMatrix::zeros(2, 2),
            };
            let machine = Machine {
                hours: f64::from(hours),
                fills: None,
                elapsed_h: 0.0,
                blocked_h: Vec::new(),
                calibration_h: None,
                dwell_step_h: 0.5,
                least_dwell_h: 1.0,
                settle: Settle { fixed_h: settle, up_h_per_gev: by_size, down_h_per_gev: 2.0 * by_size },
                one_way,
                current_w_gev: Some(0.0),
            };
            let names = ["a".to_string(), "b".to_string()];
            let criterion = if determinant { Criterion::Determinant } else { Criterion::parameter(0, 2) };
            let problem = Problem::new(&names, &[rates], VisitErrors::default(), f64::from(hours), 1.0).unwrap();
            let scaled = Scaled::new(&criterion, &problem).unwrap();
            let windows = machine.windows();
            let judge = Judge {
                problem: &problem,
                criterion: &scaled,
                w_gev: &w_gev,
                machine: &machine,
                windows: &windows,
                demands: &Demands::default(),
                fill_energy_gev: 0.0,
                draws: vec![0],
            };
            let (_, best) = enumerate(&judge, 1_000_000).unwrap();
            let relaxed = optimise(&problem, &criterion, 0.999).unwrap();
            let found = search(&judge, &relaxed.hours, &[], 4000).unwrap().value;
            prop_assert!(found >= best - 1e-9);
            prop_assert!(found <= best + 0.10, "{} {}", found, best);
        }
    }
}
