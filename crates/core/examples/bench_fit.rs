//! Times the fit on the problem of `tests/bench/peers/fit_iminuit.py`: 12 points, Poisson counts,
//! radiation and spread on, free M, Gamma, strength and a flat background. Single thread.
//!
//! `cargo run --release -p widthwise-core --example bench_fit [trials]`
#![allow(
    clippy::unwrap_used,
    clippy::disallowed_methods,
    reason = "a benchmark stops where something is wrong"
)]

use std::time::Instant;
use widthwise_core::amplitude::hypothesis::*;
use widthwise_core::beam::{Arrangement, BeamParticle, Beams, SettingKind};
use widthwise_core::fit::{FitSettings, Fitter, PAIR_RISE_ONE};
use widthwise_core::scan::*;
use widthwise_core::trials::{Ensemble, TrialRow, TrialSettings, summarise};
use widthwise_core::units::M_ELECTRON_GEV;

const M: f64 = 3.686;
const GAMMA: f64 = 0.26e-3;
const OFFSETS_MEV: [f64; 12] = [
    -6.0, -3.0, -2.0, -1.2, -0.6, -0.2, 0.2, 0.6, 1.2, 2.0, 3.0, 8.0,
];

fn scan() -> Scan {
    let lepton = BeamParticle {
        name: "e-".into(),
        mass_gev: M_ELECTRON_GEV,
        spin_states: 2,
    };
    Scan {
        beams: Beams {
            first: lepton.clone(),
            second: lepton,
            arrangement: Arrangement::EqualBeams { crossing_rad: 0.0 },
            dial: SettingKind::W,
        },
        hypothesis: Hypothesis::PartialWave(PartialWave {
            twice_j: 2,
            resonances: vec![Resonance {
                name: "V".into(),
                mass_gev: M,
                width_gev: GAMMA,
                // The peer's G_f follows Gamma: Gamma_ee B_f with B_f = 1.
                strength: Strength::GammaInBf { gev: 2.2e-6 },
                phase_rad: 0.0,
                form: Form::ConstantWidth,
                entrance: Vertex::Constant,
                exit: Vertex::Constant,
            }],
            coherent: None,
            incoherent: None,
            final_threshold_gev: 0.0,
            continuum_factor: 1.0,
        }),
        chain: ChainSettings {
            // x_max = 0.2.
            w_min_gev: Some(M * 0.8f64.sqrt()),
            spread: Spread::Gaussian {
                sigma_gev: 1.3e-3,
                w0_gev: M,
                power: 0.0,
            },
            accuracy: 1e-6,
        },
        detection: Detection {
            efficiency: 1.0,
            decay_fraction: 1.0,
            sigma_bg_nb: 2.0,
            rate_bg_per_h: 0.0,
            luminosity_nbinv_per_h: 1.0,
        },
        stage: Stage::Observed,
        points: OFFSETS_MEV
            .iter()
            .enumerate()
            .map(|(i, offset)| Point {
                id: format!("{}", i + 1),
                group: None,
                w_gev: M + 1e-3 * offset,
                w_error_gev: 0.0,
                sigma_w_gev: None,
                luminosity_nbinv: 6.0,
                luminosity_error_nbinv: 0.0,
                live_time_h: 1.0,
                live_fraction: 1.0,
                efficiency: None,
                efficiency_error: 0.0,
                channel: None,
                measured: Measured::Counts { n: 0.0, off: None },
                start_h: None,
            })
            .collect(),
        common: CommonErrors::default(),
        covariance_nb2: None,
        exits: Vec::new(),
    }
}

fn main() {
    let trials: u64 = std::env::args()
        .nth(1)
        .and_then(|a| a.parse().ok())
        .unwrap_or(10_000);
    let settings = FitSettings {
        free: [
            "r1.mass",
            "r1.width",
            "r1.strength",
            "background.cross_section",
        ]
        .map(String::from)
        .to_vec(),
        ..FitSettings::default()
    };
    let mut scan = scan();
    let mut ensemble = Ensemble::new(
        &scan,
        &settings,
        TrialSettings {
            seed: 1,
            profiles: false,
        },
    )
    .unwrap();
    // One fit, everything from the sheet on, of drawn counts.
    let mut times = Vec::new();
    let mut last = None;
    for k in 0..15 {
        let (kinds, _) = ensemble.draw(k).unwrap();
        for (p, kind) in scan.points.iter_mut().zip(kinds) {
            if let widthwise_core::fit::Kind::Counts { n } = kind {
                p.measured = Measured::Counts { n, off: None };
            }
        }
        let start = Instant::now();
        let result = Fitter::new(&scan, &settings).unwrap().run().unwrap();
        times.push(start.elapsed().as_secs_f64());
        last = Some(result);
    }
    times.sort_by(f64::total_cmp);
    let result = last.unwrap();
    println!(
        "one fit: {:.3} ms, {} batches, {:?}",
        1e3 * times[times.len() / 2],
        result.batches,
        result.stop
    );
    for p in &result.parameters {
        println!(
            "  {} = {:.9e} +- {:.3e}",
            p.id,
            p.value,
            p.error.unwrap_or(0.0)
        );
    }
    let mut fitter = Fitter::new(&scan, &settings).unwrap();
    let minimum = fitter.minimum().unwrap();
    let covariance = fitter.covariance(&minimum).unwrap();
    let start = Instant::now();
    for id in &settings.free {
        for rise in [1.0, 4.0] {
            fitter.interval(id, rise, &minimum, &covariance).unwrap();
        }
    }
    println!(
        "intervals of 4 parameters at two levels: {:.1} ms",
        1e3 * start.elapsed().as_secs_f64()
    );
    let start = Instant::now();
    let contour = fitter
        .contour(
            "r1.mass",
            "r1.width",
            PAIR_RISE_ONE,
            48,
            &minimum,
            &covariance,
        )
        .unwrap();
    println!(
        "contour of {} places: {:.1} ms",
        contour.places.len(),
        1e3 * start.elapsed().as_secs_f64()
    );
    let start = Instant::now();
    let rows: Vec<TrialRow> = (0..trials).map(|k| ensemble.trial(k)).collect();
    let seconds = start.elapsed().as_secs_f64();
    println!(
        "{trials} trials: {seconds:.2} s, {:.3} ms a trial",
        1e3 * seconds / trials as f64
    );
    let summary = summarise(&rows, &ensemble.ids(), ensemble.truth());
    println!("converged: {} of {}", summary.converged, summary.trials);
    for p in &summary.parameters {
        println!(
            "  {}: pull {:.3} +- {:.3}, width {:.3} +- {:.3}, coverage {:.3}, at limit {}",
            p.id,
            p.pull_mean,
            p.pull_mean_error,
            p.pull_width,
            p.pull_width_error,
            p.curvature[0].fraction,
            p.at_limit
        );
    }
}
