//! Does the minimiser find the best minimum? Pseudo-experiments fitted from a start within 3 widths, against
//! a brute-force multi-start; and the coverage of the profile interval where every expectation is above 30.
//!
//! `cargo run --release -p widthwise-core --example bench_minimiser [trials]`
#![allow(
    clippy::unwrap_used,
    clippy::disallowed_methods,
    reason = "a benchmark stops where something is wrong"
)]

use std::time::Instant;
use widthwise_core::amplitude::hypothesis::*;
use widthwise_core::beam::{Arrangement, BeamParticle, Beams, SettingKind};
use widthwise_core::fit::{FitSettings, Fitter};
use widthwise_core::numerics::minimise::{Tolerance, minimise};
use widthwise_core::numerics::random::Stream;
use widthwise_core::scan::*;
use widthwise_core::trials::{Ensemble, TrialSettings};
use widthwise_core::units::M_ELECTRON_GEV;

const M: f64 = 3.0;
const GAMMA: f64 = 1.1e-3;
const FREE: [&str; 4] = ["r1.mass", "r1.width", "r1.strength", "incoherent.0"];
/// Starts of the brute force, beside the truth.
const STARTS: u32 = 12;
/// Flags that a user sees.
const FLAGS: [&str; 3] = ["not-converged", "parameter-at-limit", "poor-fit"];

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
                strength: Strength::GammaInBf { gev: 25e-9 },
                phase_rad: 0.0,
                form: Form::ConstantWidth,
                entrance: Vertex::Constant,
                exit: Vertex::Constant,
            }],
            coherent: None,
            incoherent: Some(IncoherentBackground::Polynomial {
                w0_gev: M,
                coefficients_nb: vec![6.0],
            }),
            final_threshold_gev: 0.0,
            continuum_factor: 1.0,
        }),
        chain: ChainSettings {
            w_min_gev: None,
            spread: Spread::None,
            accuracy: 1e-6,
        },
        detection: Detection {
            efficiency: 1.0,
            decay_fraction: 1.0,
            sigma_bg_nb: 0.0,
            rate_bg_per_h: 0.0,
            luminosity_nbinv_per_h: 3.0,
        },
        exits: Vec::new(),
        stage: Stage::Observed,
        points: (0..12)
            .map(|i| Point {
                id: format!("{}", i + 1),
                group: None,
                w_gev: M - 3e-3 + 0.6e-3 * f64::from(i),
                w_error_gev: 0.0,
                sigma_w_gev: None,
                luminosity_nbinv: 7.0,
                luminosity_error_nbinv: 0.0,
                live_time_h: 1.0,
                live_fraction: 1.0,
                efficiency: None,
                efficiency_error: 0.0,
                channel: None,
                measured: Measured::Counts { n: 1.0, off: None },
                start_h: None,
            })
            .collect(),
        common: CommonErrors::default(),
        covariance_nb2: None,
    }
}

fn main() {
    let trials: u64 = std::env::args()
        .nth(1)
        .and_then(|a| a.parse().ok())
        .unwrap_or(10_000);
    let settings = FitSettings {
        free: FREE.map(String::from).to_vec(),
        ..FitSettings::default()
    };
    let truth = scan();
    let mut ensemble = Ensemble::new(
        &truth,
        &settings,
        TrialSettings {
            seed: 2026,
            profiles: false,
        },
    )
    .unwrap();
    let (mut worse, mut flagged, mut largest, mut suspected) = (0u32, 0u32, 0.0f64, 0u32);
    let begun = Instant::now();
    for k in 0..trials {
        let (kinds, _) = ensemble.draw(k).unwrap();
        let mut stream = Stream::new(11, k);
        let mut near = || {
            let mut start = [M, GAMMA, 25e-9, 6.0];
            start[0] += 3.0 * GAMMA * (2.0 * stream.uniform() - 1.0);
            for v in start.iter_mut().skip(1) {
                *v *= (1.1 * (2.0 * stream.uniform() - 1.0)).exp();
            }
            start.to_vec()
        };
        let mut fitter = Fitter::new(&truth, &settings).unwrap();
        fitter.likelihood().replace_measured(&kinds);
        let start = near();
        let found = fitter.minimum_from(&start).unwrap();
        let result = fitter.report(&found).unwrap();
        let flag = FLAGS
            .iter()
            .any(|code| result.warnings.iter().any(|w| w.code == *code));
        let mut best = found.expansion.value;
        let mut places = vec![fitter.problem().start()];
        places.extend((0..STARTS).map(|_| near()));
        for place in &places {
            if let Ok(m) = minimise(fitter.likelihood(), place, Tolerance::default()) {
                best = best.min(m.expansion.value);
            }
        }
        let above = found.expansion.value - best;
        if flag {
            flagged += 1;
            suspected += u32::from(above > 0.01);
        } else {
            largest = largest.max(above);
            worse += u32::from(above > 0.01);
        }
    }
    println!(
        "minimiser, {trials} pseudo-experiments: {worse} unflagged above the best of {} starts by more than 0.01 (largest {largest:.1e}), {flagged} flagged ({suspected} rightly)",
        STARTS + 1
    );
    println!(
        "minimiser check: {:.3} ms",
        1e3 * begun.elapsed().as_secs_f64()
    );
    assert_eq!(worse, 0, "an unflagged fit missed the minimum");
}
