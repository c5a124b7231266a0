//! Times the line shape on the problem of the benchmark's peer: one narrow vector, 500 energies,
//! radiation and spread, and prints a few values. `cargo run --release --example bench_curve`.
#![allow(missing_docs, clippy::expect_used)]

#[path = "../tests/stand_in/mod.rs"]
mod stand_in;

use stand_in::{Line, electrons};
use std::time::Instant;
use widthwise_core::line_shape::Chain;
use widthwise_core::scan::{ChainSettings, Spread, Stage};

fn median(mut times: Vec<f64>) -> f64 {
    times.sort_by(f64::total_cmp);
    times[times.len() / 2]
}

fn main() {
    let line = Line {
        mass: 3.686,
        width: 0.26e-3,
        product: 2.2e-6 / 0.26e-3,
        ..Line::psi2s()
    };
    let settings = ChainSettings {
        // The peer's largest x is 0.2.
        w_min_gev: Some(3.686 * 0.8f64.sqrt()),
        spread: Spread::Gaussian {
            sigma_gev: 1.3e-3,
            w0_gev: 3.686,
            power: 0.0,
        },
        accuracy: 1e-6,
    };
    let chain = || Chain::new(&settings, &electrons()).expect("valid settings");
    for (name, n) in [
        ("12 energies", 12),
        ("500 energies", 500),
        ("10,000 energies", 10_000),
    ] {
        let w: Vec<f64> = (0..n)
            .map(|i| line.mass - 8e-3 + 20e-3 * f64::from(i) / f64::from(n - 1))
            .collect();
        let mut cold = Vec::new();
        let mut warm = Vec::new();
        let mut full = Vec::new();
        let mut accuracy = 0.0;
        let mut peak = 0.0f64;
        for round in 0..15 {
            let chain = chain();
            let start = Instant::now();
            let first = chain
                .cross_sections(&line, &w, None, Stage::Observed)
                .expect("valid");
            cold.push(1e3 * start.elapsed().as_secs_f64());
            let other = Line {
                width: line.width * (1.0 + 0.01 * f64::from(round)),
                mass: line.mass + 1e-5 * f64::from(round),
                ..line.clone()
            };
            let start = Instant::now();
            chain
                .cross_sections(&other, &w, None, Stage::Observed)
                .expect("valid");
            warm.push(1e3 * start.elapsed().as_secs_f64());
            let start = Instant::now();
            chain.curve(&other, &w).expect("valid");
            full.push(1e3 * start.elapsed().as_secs_f64());
            accuracy = first.accuracy;
            peak = first.values_nb.iter().fold(0.0f64, |a, v| a.max(*v));
        }
        println!(
            "{name}: new chain {:.3} ms, same chain other model {:.3} ms, whole curve with contributions {:.3} ms; accuracy {accuracy:.1e}, highest {peak:.6} nb",
            median(cold),
            median(warm),
            median(full)
        );
    }
}
