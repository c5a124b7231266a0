//! Times the planning benchmark natively: the two problems of 400 energies and 5 parameters,
//! the robust problem over 200 truths, and the growth with the number of energies.
//! Run: cargo run --release -p widthwise-core --example bench_plan

#![allow(clippy::unwrap_used, clippy::print_stdout)]

use nalgebra::DMatrix;
use std::time::Instant;
use widthwise_core::math;
use widthwise_core::plan::criterion::Criterion;
use widthwise_core::plan::problem::{Problem, Rates, VisitErrors};
use widthwise_core::plan::relaxed::optimise;

#[derive(serde::Deserialize)]
struct File {
    roots: Vec<Vec<f64>>,
}

/// The file's curve read at `n` energies, moved by `shift` steps of the file: unit rates, so
/// that gradients are g/sqrt(m).
fn rates(roots: &[Vec<f64>], n: usize, shift: f64, prior: f64) -> Rates {
    let last = (roots.len() - 1) as f64;
    let mut gradient = Vec::with_capacity(5 * n);
    for j in 0..n {
        let x = (last * j as f64 / (n - 1) as f64 - shift).clamp(0.0, last);
        let i = (x as usize).min(roots.len() - 2);
        let f = x - i as f64;
        let pairs = roots[i].iter().zip(&roots[i + 1]);
        gradient.extend(pairs.map(|(a, b)| a * (1.0 - f) + b * f));
    }
    let mut information = DMatrix::zeros(5, 5);
    information[(4, 4)] = prior;
    Rates {
        weight: 1.0,
        rate_per_h: vec![1.0; n],
        gradient_per_h: gradient,
        slope_per_h_gev: Vec::new(),
        rate_without_beam_per_h: 0.0,
        prior: information,
    }
}

fn time(label: &str, truths: &[Rates], criterion: &Criterion, repeat: usize) {
    let names: Vec<String> = ["M", "Gamma", "strength", "background", "sigma_W"]
        .map(String::from)
        .to_vec();
    let problem = Problem::new(&names, truths, VisitErrors::default(), 1.0, 1.0).unwrap();
    let mut times = Vec::new();
    let mut plan = optimise(&problem, criterion, 0.999).unwrap();
    for _ in 0..repeat {
        let start = Instant::now();
        plan = optimise(&problem, criterion, 0.999).unwrap();
        times.push(start.elapsed().as_secs_f64() * 1e3);
    }
    times.sort_by(f64::total_cmp);
    println!(
        "{label}: {:.3} ms, certificate {:.6}, criterion {:.6} (exp {:.6}), rounds {}",
        times[times.len() / 2],
        plan.efficiency,
        plan.criterion,
        math::exp(plan.criterion),
        plan.rounds
    );
}

fn main() {
    let path = concat!(
        env!("CARGO_MANIFEST_DIR"),
        "/../../tests/reference/plan_benchmark.json"
    );
    let file: File = serde_json::from_str(&std::fs::read_to_string(path).unwrap()).unwrap();
    let width = Criterion::parameter(1, 5);
    let prior = 1.0 / 16.0 / 40.0;
    time(
        "width, 400 energies",
        &[rates(&file.roots, 400, 0.0, prior)],
        &width,
        31,
    );
    time(
        "determinant, 400 energies",
        &[rates(&file.roots, 400, 0.0, 0.0)],
        &Criterion::Determinant,
        31,
    );
    let truths: Vec<Rates> = (0..200)
        .map(|k| rates(&file.roots, 400, 20.0 * math::sin(1.7 * k as f64), prior))
        .collect();
    time("width, 200 truths", &truths, &width, 5);
    time(
        "determinant, 200 truths",
        &truths,
        &Criterion::Determinant,
        5,
    );
    for n in [1000, 2500, 5000, 10_000] {
        time(
            &format!("width, {n} energies"),
            &[rates(&file.roots, n, 0.0, prior)],
            &width,
            9,
        );
        time(
            &format!("determinant, {n} energies"),
            &[rates(&file.roots, n, 0.0, 0.0)],
            &Criterion::Determinant,
            9,
        );
    }
}
