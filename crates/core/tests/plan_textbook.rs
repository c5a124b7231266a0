//! Optimal designs known in closed form. Sources beside each.

#![allow(clippy::unwrap_used)]

use nalgebra::DMatrix;
use widthwise_core::math;
use widthwise_core::plan::criterion::Criterion;
use widthwise_core::plan::problem::{Problem, Rates, VisitErrors};
use widthwise_core::plan::relaxed::{Relaxed, optimise};

fn names(p: usize) -> Vec<String> {
    (0..p).map(|i| format!("p{i}")).collect()
}

/// Candidates `xs` with unit rate (homoscedastic regression) or a rate of their own.
fn problem(xs: &[f64], p: usize, hours: f64, row: impl Fn(f64) -> (f64, Vec<f64>)) -> Problem {
    let (mut rate, mut gradient) = (Vec::new(), Vec::new());
    for &x in xs {
        let (m, g) = row(x);
        rate.push(m);
        gradient.extend(g);
    }
    let rates = Rates {
        weight: 1.0,
        rate_per_h: rate,
        gradient_per_h: gradient,
        slope_per_h_gev: Vec::new(),
        rate_without_beam_per_h: 0.0,
        prior: DMatrix::zeros(p, p),
    };
    Problem::new(&names(p), &[rates], VisitErrors::default(), hours, 1.0).unwrap()
}

fn grid(from: f64, to: f64, n: usize) -> Vec<f64> {
    (0..n)
        .map(|i| from + (to - from) * i as f64 / (n - 1) as f64)
        .collect()
}

/// Support points (centre of mass of adjacent candidates) with their shares.
fn support(xs: &[f64], plan: &Relaxed) -> Vec<(f64, f64)> {
    let total: f64 = plan.hours.iter().sum();
    let mut out: Vec<(f64, f64)> = Vec::new();
    let mut open = false;
    for (x, t) in xs.iter().zip(&plan.hours) {
        let share = t / total;
        if share < 1e-5 {
            open = false;
            continue;
        }
        match out.last_mut() {
            Some(last) if open => {
                last.0 = (last.0 * last.1 + x * share) / (last.1 + share);
                last.1 += share;
            }
            _ => out.push((*x, share)),
        }
        open = true;
    }
    out
}

fn assert_support(found: &[(f64, f64)], wanted: &[(f64, f64)], at: f64, share: f64) {
    assert_eq!(found.len(), wanted.len(), "{found:?}");
    for (f, w) in found.iter().zip(wanted) {
        assert!(
            (f.0 - w.0).abs() < at && (f.1 - w.1).abs() < share,
            "{found:?}"
        );
    }
}

/// D-optimal designs of polynomial regression on [-1, 1]: zeros of (1-x^2) P_k'(x), equal
/// weights (Guest 1958; Hoel 1958; Fedorov, Theory of Optimal Experiments).
#[test]
fn d_optimal_polynomials() {
    let xs = grid(-1.0, 1.0, 4001);
    let third = 1.0 / 3.0;
    let cases: [(usize, Vec<(f64, f64)>); 3] = [
        (2, vec![(-1.0, third), (0.0, third), (1.0, third)]),
        (
            3,
            [-1.0, -0.447214, 0.447214, 1.0]
                .iter()
                .map(|&x| (x, 0.25))
                .collect(),
        ),
        (
            4,
            [-1.0, -0.654654, 0.0, 0.654654, 1.0]
                .iter()
                .map(|&x| (x, 0.2))
                .collect(),
        ),
    ];
    for (degree, wanted) in cases {
        let p = degree + 1;
        let problem = problem(&xs, p, 1.0, |x| {
            (1.0, (0..p).map(|k| math::powi(x, k as u32)).collect())
        });
        let plan = optimise(&problem, &Criterion::Determinant, 1.0 - 1e-7).unwrap();
        assert!(
            plan.efficiency >= 1.0 - 1e-7,
            "{} {}",
            plan.efficiency,
            plan.rounds
        );
        assert_support(&support(&xs, &plan), &wanted, 3e-4, 1e-4);
    }
}

/// c-optimal extrapolation of a quadratic on [-1, 1] to x = 2: -1, 0, 1 with 1/7, 3/7, 3/7,
/// variance 49 (Hoel & Levine, Ann. Math. Stat. 35 (1964) 1553).
#[test]
fn c_optimal_extrapolation() {
    let xs = grid(-1.0, 1.0, 2001);
    let problem = problem(&xs, 3, 1.0, |x| (1.0, vec![1.0, x, x * x]));
    let goal = Criterion::Variance(DMatrix::from_column_slice(3, 1, &[1.0, 2.0, 4.0]));
    let plan = optimise(&problem, &goal, 1.0 - 1e-7).unwrap();
    assert_support(
        &support(&xs, &plan),
        &[(-1.0, 1.0 / 7.0), (0.0, 3.0 / 7.0), (1.0, 3.0 / 7.0)],
        1e-6,
        1e-6,
    );
    assert!((math::exp(plan.criterion) - 49.0).abs() < 1e-4);
}

/// Singular c-optimal design: estimating the response at an
/// interior point of a quadratic needs that point alone, variance 1 (Elfving 1952).
#[test]
fn c_optimal_may_be_singular() {
    let xs = grid(-1.0, 1.0, 201);
    let problem = problem(&xs, 3, 4.0, |x| (1.0, vec![1.0, x, x * x]));
    let goal = Criterion::Variance(DMatrix::from_column_slice(3, 1, &[1.0, 0.5, 0.25]));
    let plan = optimise(&problem, &goal, 1.0 - 1e-6).unwrap();
    assert!(plan.efficiency >= 1.0 - 1e-6);
    assert_support(&support(&xs, &plan), &[(0.5, 1.0)], 1e-9, 1e-6);
    assert!((math::exp(plan.criterion) - 0.25).abs() < 1e-6);
}

fn breit_wigner(x: f64, floor: f64) -> (f64, Vec<f64>) {
    // Parameters: position, full width, height A (all 1 but position 0); x in units of Gamma.
    let d = x * x + 0.25;
    let m = 0.25 / d;
    let by_position = 0.25 * 2.0 * x / (d * d);
    let by_width = 0.5 / d - 0.25 * 0.5 / (d * d);
    (m + floor, vec![by_position, by_width, m])
}

/// Pure Breit-Wigner with Poisson counts: E0 and E0 +- Gamma/2, a third each
/// (Dette, Haines & Imhof, Ann. Stat. 27 (1999) 1272).
#[test]
fn d_optimal_breit_wigner() {
    let xs = grid(-5.0, 5.0, 4001);
    let problem = problem(&xs, 3, 1.0, |x| breit_wigner(x, 0.0));
    let plan = optimise(&problem, &Criterion::Determinant, 1.0 - 1e-6).unwrap();
    let third = 1.0 / 3.0;
    assert!(plan.efficiency >= 1.0 - 1e-6);
    assert_support(
        &support(&xs, &plan),
        &[(-0.5, third), (0.0, third), (0.5, third)],
        1e-3,
        1e-3,
    );
}

/// Position alone: E0 +- Gamma/(2 sqrt 2), variance 27/64 Gamma^2/(A T) (closed form).
/// Width with unknown height and position: a third each at E0, E0 +- sqrt(3)/2 Gamma,
/// variance 4 Gamma^2/(A T) (closed form).
#[test]
fn c_optimal_breit_wigner() {
    let xs = grid(-5.0, 5.0, 8001);
    let hours = 7.0;
    let position = problem(&xs, 1, hours, |x| {
        let (m, g) = breit_wigner(x, 0.0);
        (m, vec![g[0]])
    });
    let plan = optimise(&position, &Criterion::parameter(0, 1), 1.0 - 1e-6).unwrap();
    for (x, _) in support(&xs, &plan) {
        assert!((x.abs() - 0.353553).abs() < 1.3e-3);
    }
    assert!((math::exp(plan.criterion) * hours / (27.0 / 64.0) - 1.0).abs() < 1e-5);

    let all = problem(&xs, 3, hours, |x| breit_wigner(x, 0.0));
    let plan = optimise(&all, &Criterion::parameter(1, 3), 1.0 - 1e-6).unwrap();
    let (third, at) = (1.0 / 3.0, 3.0_f64.sqrt() / 2.0);
    assert_support(
        &support(&xs, &plan),
        &[(-at, third), (0.0, third), (at, third)],
        1e-3,
        1e-3,
    );
    assert!((math::exp(plan.criterion) * hours / 4.0 - 1.0).abs() < 1e-5);
}

/// With a known flat background: against brute force over symmetric three-point designs and
/// their weights, which shares no code with the optimiser.
#[test]
fn c_optimal_width_over_a_flat_background() {
    let floor = 0.1;
    let xs = grid(-5.0, 5.0, 2001);
    let all = problem(&xs, 3, 1.0, |x| breit_wigner(x, floor));
    let plan = optimise(&all, &Criterion::parameter(1, 3), 1.0 - 1e-6).unwrap();
    // Symmetric about 0: position decouples; at weights a (each flank) and 1-2a (centre) the
    // variance of the width is [I^-1]_11 of the remaining two by two.
    let mut best = f64::INFINITY;
    for i in 1..1000 {
        let x = 0.005 * i as f64;
        let (m1, g1) = breit_wigner(x, floor);
        let (m0, g0) = breit_wigner(0.0, floor);
        for k in 1..500 {
            let a = 0.001 * k as f64;
            let sum = |u: usize, v: usize| {
                2.0 * a * g1[u] * g1[v] / m1 + (1.0 - 2.0 * a) * g0[u] * g0[v] / m0
            };
            let det = sum(1, 1) * sum(2, 2) - sum(1, 2) * sum(1, 2);
            best = best.min(sum(2, 2) / det);
        }
    }
    let found = math::exp(plan.criterion);
    assert!(
        found <= best * (1.0 + 1e-9) && found > best * (1.0 - 1e-3),
        "{found} {best}"
    );
}

/// D_s for one parameter is the c-criterion of that parameter.
#[test]
fn subset_of_one_is_least_variance() {
    let xs = grid(-5.0, 5.0, 501);
    let all = problem(&xs, 3, 2.0, |x| breit_wigner(x, 0.2));
    let c = optimise(&all, &Criterion::parameter(1, 3), 1.0 - 1e-6).unwrap();
    let s = optimise(&all, &Criterion::Subset(vec![1]), 1.0 - 1e-6).unwrap();
    assert!(
        (c.criterion + s.criterion).abs() < 1e-5,
        "{} {}",
        c.criterion,
        s.criterion
    );
    let whole = optimise(&all, &Criterion::Subset(vec![2, 0, 1]), 1.0 - 1e-6).unwrap();
    let d = optimise(&all, &Criterion::Determinant, 1.0 - 1e-6).unwrap();
    assert!((whole.criterion - d.criterion).abs() < 1e-5);
}

/// A goal that the window cannot determine names the parameters and what would help.
#[test]
fn undetermined_goals_are_refused() {
    let one_point = problem(&[0.4], 3, 1.0, |x| breit_wigner(x, 0.1));
    let refusal = optimise(&one_point, &Criterion::Determinant, 0.999).unwrap_err();
    assert_eq!(refusal.field, "plan.goal");
    assert!(
        refusal.message.contains("wider window"),
        "{}",
        refusal.message
    );
    // Height and background proportional: only their sum is determined.
    let twins = problem(&grid(-1.0, 1.0, 50), 2, 1.0, |_| (2.0, vec![1.0, 1.0]));
    assert!(optimise(&twins, &Criterion::parameter(0, 2), 0.999).is_err());
    let sum = Criterion::Variance(DMatrix::from_column_slice(2, 1, &[1.0, 1.0]));
    let plan = optimise(&twins, &sum, 0.999).unwrap();
    assert!((math::exp(plan.criterion) - 2.0).abs() < 2e-3);
}
