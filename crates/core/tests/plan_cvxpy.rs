//! The convex problem against a general-purpose convex solver (tests/reference/make_plan_cvxpy.py),
//! and the certificate against every design at hand.

#![allow(clippy::unwrap_used)]

use nalgebra::DMatrix;
use proptest::prelude::*;
use serde::Deserialize;
use widthwise_core::math;
use widthwise_core::plan::criterion::Criterion;
use widthwise_core::plan::problem::{Problem, Rates, VisitErrors};
use widthwise_core::plan::relaxed::{evaluate, optimise};

#[derive(Deserialize)]
struct File {
    cases: Vec<Case>,
}

#[derive(Deserialize)]
struct Case {
    parameters: usize,
    hours: f64,
    s_energy: f64,
    d_luminosity: f64,
    truths: Vec<Truth>,
    criterion: String,
    columns: serde_json::Value,
    criterion_cvxpy: f64,
    hours_cvxpy: Vec<f64>,
}

#[derive(Deserialize)]
struct Truth {
    weight: f64,
    rate: Vec<f64>,
    gradient: Vec<Vec<f64>>,
    slope: Vec<f64>,
    prior: Vec<Vec<f64>>,
}

fn cases() -> Vec<Case> {
    let text = include_str!("../../../tests/reference/plan_cvxpy.json");
    let file: File = serde_json::from_str(text).unwrap();
    file.cases
}

fn build(case: &Case) -> (Problem, Criterion) {
    let p = case.parameters;
    let rates: Vec<Rates> = case
        .truths
        .iter()
        .map(|t| Rates {
            weight: t.weight,
            rate_per_h: t.rate.clone(),
            gradient_per_h: t.gradient.concat(),
            slope_per_h_gev: t.slope.clone(),
            rate_without_beam_per_h: 0.0,
            prior: DMatrix::from_row_slice(p, p, &t.prior.concat()),
        })
        .collect();
    let names: Vec<String> = (0..p).map(|i| format!("p{i}")).collect();
    let errors = VisitErrors {
        energy_gev: case.s_energy,
        luminosity: case.d_luminosity,
    };
    let problem = Problem::new(&names, &rates, errors, case.hours, 1.0).unwrap();
    let criterion = match case.criterion.as_str() {
        "determinant" => Criterion::Determinant,
        "subset" => Criterion::Subset((0..case.columns.as_u64().unwrap() as usize).collect()),
        _ => {
            let columns: Vec<Vec<f64>> = serde_json::from_value(case.columns.clone()).unwrap();
            Criterion::Variance(DMatrix::from_column_slice(
                p,
                columns.len(),
                &columns.concat(),
            ))
        }
    };
    (problem, criterion)
}

/// Sign that makes a criterion something to be small, and how many logarithms it sums.
fn orientation(criterion: &Criterion, parameters: usize) -> (f64, f64) {
    match criterion {
        Criterion::Determinant => (-1.0, parameters as f64),
        Criterion::Subset(list) => (-1.0, list.len() as f64),
        Criterion::Variance(_) => (1.0, 1.0),
    }
}

#[test]
fn criterion_equals_that_of_a_convex_solver() {
    let cases = cases();
    assert_eq!(cases.len(), 20);
    for (number, case) in cases.iter().enumerate() {
        let (problem, criterion) = build(case);
        let plan = optimise(&problem, &criterion, 0.999_99).unwrap();
        assert!(plan.efficiency >= 0.999_99, "{number}: {}", plan.efficiency);
        // The criteria are logarithms: 1e-4 relative on determinant^(1/p) or variance.
        let (sign, terms) = orientation(&criterion, case.parameters);
        let gap = sign * (plan.criterion - case.criterion_cvxpy) / terms;
        assert!(gap.abs() < 1e-4, "{number}: {gap:e}");
    }
}

#[test]
fn certificate_is_not_exceeded_by_the_solver_or_its_own_value() {
    for (number, case) in cases().iter().enumerate() {
        let (problem, criterion) = build(case);
        let rough = optimise(&problem, &criterion, 0.9).unwrap();
        // The certificate of any design, also the solver's own, must cover the best one known.
        let theirs = evaluate(&problem, &criterion, &case.hours_cvxpy).unwrap();
        let (sign, terms) = orientation(&criterion, case.parameters);
        let true_efficiency = math::exp(-sign * (rough.criterion - theirs.criterion) / terms);
        assert!(
            true_efficiency >= rough.efficiency - 1e-7,
            "{number}: {true_efficiency} < {}",
            rough.efficiency
        );
    }
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(200))]
    /// No design drawn at random beats the optimum by more than its certificate, and none
    /// contradicts its own.
    #[test]
    fn certificate_is_never_exceeded(
        number in 0_usize..20,
        weights in prop::collection::vec(0.0_f64..1.0, 41),
        sparse in prop::collection::vec(any::<bool>(), 41),
    ) {
        let case = &cases()[number];
        let (problem, criterion) = build(case);
        let mut hours: Vec<f64> = weights
            .iter()
            .zip(&sparse)
            .map(|(w, s)| if *s { *w } else { 0.0 })
            .collect();
        let sum: f64 = hours.iter().sum();
        prop_assume!(sum > 0.1);
        for t in &mut hours {
            *t *= case.hours / sum;
        }
        let best = optimise(&problem, &criterion, 0.999).unwrap();
        let (sign, terms) = orientation(&criterion, case.parameters);
        if let Some(random) = evaluate(&problem, &criterion, &hours) {
            let relative = math::exp(-sign * (random.criterion - best.criterion) / terms);
            prop_assert!(relative <= 1.0 / best.efficiency + 1e-9);
            prop_assert!(relative >= random.efficiency - 1e-9);
        }
    }
}
