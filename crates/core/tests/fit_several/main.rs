//! Fits beyond one channel and one hypothesis: channels, bins, thermometer; judging a fit.
#![allow(
    clippy::unwrap_used,
    clippy::panic,
    reason = "test helpers stop where a value is missing"
)]
#![allow(missing_docs)]

mod channels;
mod grid;
mod judgement;

use widthwise_core::amplitude::hypothesis::*;
use widthwise_core::beam::{Arrangement, BeamParticle, Beams, SettingKind};
use widthwise_core::fit::{FitResult, FitSettings, Fitter};
use widthwise_core::scan::*;
use widthwise_core::units::M_ELECTRON_GEV;

pub fn beams() -> Beams {
    let particle = BeamParticle {
        name: "e-".into(),
        mass_gev: M_ELECTRON_GEV,
        spin_states: 2,
    };
    Beams {
        first: particle.clone(),
        second: particle,
        arrangement: Arrangement::EqualBeams { crossing_rad: 0.0 },
        dial: SettingKind::W,
    }
}

pub fn wave(mass_gev: f64, width_gev: f64, gamma_bf_gev: f64, twice_j: u8) -> PartialWave {
    PartialWave {
        twice_j,
        resonances: vec![Resonance {
            name: "V".into(),
            mass_gev,
            width_gev,
            strength: Strength::GammaInBf { gev: gamma_bf_gev },
            phase_rad: 0.0,
            form: Form::ConstantWidth,
            entrance: Vertex::Constant,
            exit: Vertex::Constant,
        }],
        coherent: None,
        incoherent: None,
        final_threshold_gev: 0.5,
        continuum_factor: 1.0,
    }
}

pub const OFFSETS_MEV: [f64; 7] = [-6.0, -1.5, -0.6, 0.0, 0.7, 1.6, 6.0];

pub fn point(id: &str, w_gev: f64, channel: Option<&str>) -> Point {
    Point {
        id: id.into(),
        group: None,
        w_gev,
        w_error_gev: 0.0,
        sigma_w_gev: None,
        luminosity_nbinv: 100.0,
        luminosity_error_nbinv: 0.0,
        live_time_h: 3.0,
        live_fraction: 1.0,
        efficiency: None,
        efficiency_error: 0.0,
        channel: channel.map(Into::into),
        measured: Measured::Counts { n: 0.0, off: None },
        start_h: None,
    }
}

pub fn scan(hypothesis: Hypothesis, m_gev: f64) -> Scan {
    Scan {
        beams: beams(),
        hypothesis,
        chain: ChainSettings {
            w_min_gev: None,
            spread: Spread::Gaussian {
                sigma_gev: 0.5e-3,
                w0_gev: m_gev,
                power: 2.0,
            },
            accuracy: 1e-7,
        },
        detection: Detection {
            efficiency: 0.4,
            decay_fraction: 1.0,
            sigma_bg_nb: 0.0,
            rate_bg_per_h: 2.0,
            luminosity_nbinv_per_h: 30.0,
        },
        exits: Vec::new(),
        stage: Stage::Observed,
        points: OFFSETS_MEV
            .iter()
            .enumerate()
            .map(|(i, o)| point(&format!("{}", i + 1), m_gev + 1e-3 * o, None))
            .collect(),
        common: CommonErrors::default(),
        covariance_nb2: None,
    }
}

/// Every count as the present parameters let expect it.
pub fn as_expected(scan: &mut Scan) {
    let mut fitter = Fitter::new(scan, &FitSettings::default()).unwrap();
    let start = fitter.problem().start();
    let mu = fitter.likelihood().predict(&start).unwrap().mu;
    let mut next = mu.into_iter();
    for p in &mut scan.points {
        match &mut p.measured {
            Measured::Counts { n, .. } | Measured::BeamsApart { n } => *n = next.next().unwrap(),
            Measured::Bins { bins } => bins.iter_mut().for_each(|b| b.n = next.next().unwrap()),
            _ => {}
        }
    }
}

pub fn settings(free: &[&str]) -> FitSettings {
    FitSettings {
        free: free.iter().map(|f| (*f).to_string()).collect(),
        ..FitSettings::default()
    }
}

pub fn error(result: &FitResult, id: &str) -> f64 {
    result.parameter(id).unwrap().error.unwrap()
}
