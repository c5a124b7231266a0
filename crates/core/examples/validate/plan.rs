//! Optimal designs against a general-purpose convex solver; rounding against enumeration.

use crate::{Row, list, number, table};
use nalgebra::DMatrix;
use widthwise_core::math;
use widthwise_core::plan::criterion::Criterion;
use widthwise_core::plan::problem::{Problem, Rates, VisitErrors};
use widthwise_core::plan::relaxed::optimise;
use widthwise_core::plan::rounding::efficient;

pub fn rows() -> Vec<Row> {
    let source = "tests/reference/designs.py: cvxpy (Clarabel), equivalence theorem asserted";
    let why = "twice the certificate asked for";
    let mut variance = Row::new(
        "least variance of a parameter (c-optimal)",
        "plan::relaxed::optimise",
        source,
        "relative",
        1e-4,
        why,
    );
    let mut determinant = Row::new(
        "largest determinant (D-optimal), per parameter",
        "plan::relaxed::optimise",
        source,
        "relative",
        1e-4,
        why,
    );
    let file = table!("designs.json");
    for (i, case) in list(&file["problems"]).iter().enumerate() {
        let gradients = list(&case["gradients"]);
        let p = list(&gradients[0]).len();
        let flat = |rows: &Vec<serde_json::Value>| -> Vec<f64> {
            rows.iter()
                .flat_map(|r| list(r).iter().map(number))
                .collect()
        };
        let rates = Rates {
            weight: 1.0,
            rate_per_h: list(&case["rates_per_h"]).iter().map(number).collect(),
            gradient_per_h: flat(gradients),
            slope_per_h_gev: vec![0.0; gradients.len()],
            rate_without_beam_per_h: 0.0,
            prior: DMatrix::from_row_slice(p, p, &flat(list(&case["prior"]))),
        };
        let names: Vec<String> = (0..p).map(|k| format!("p{k}")).collect();
        let errors = VisitErrors {
            energy_gev: 0.0,
            luminosity: 0.0,
        };
        let problem = Problem::new(&names, &[rates], errors, number(&case["hours"]), 1.0).unwrap();
        let wanted = list(&case["c"])
            .iter()
            .position(|c| number(c) == 1.0)
            .unwrap();
        let plan = optimise(&problem, &Criterion::parameter(wanted, p), 0.999_95).unwrap();
        variance.relative(
            math::exp(plan.criterion),
            number(&case["phi"]),
            format!("problem {i}"),
        );
        let plan = optimise(&problem, &Criterion::Determinant, 0.999_95).unwrap();
        let gap = (plan.criterion - number(&case["log_det"])) / p as f64;
        determinant.take(gap, format!("problem {i}"));
    }
    let mut rounding = Row::new(
        "efficient rounding of shares",
        "plan::rounding::efficient",
        "Pukelsheim & Rieder 1992; tests/reference/designs.py: all allocations enumerated",
        "allocations that are not among the best",
        0.0,
        "whole numbers",
    );
    for case in list(&file["rounding"]) {
        let shares: Vec<f64> = list(&case["weights"]).iter().map(number).collect();
        let ours = efficient(&shares, number(&case["n"]) as u32);
        let best = list(&case["all_equally_good"]).iter().any(|a| {
            let theirs: Vec<u32> = list(a).iter().map(|x| number(x) as u32).collect();
            theirs == ours
        });
        rounding.take(f64::from(u8::from(!best)), format!("{shares:?}"));
    }
    vec![variance, determinant, rounding]
}
