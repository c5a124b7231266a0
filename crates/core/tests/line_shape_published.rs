//! The chain against published numbers.
#![allow(missing_docs, clippy::unwrap_used)]

mod stand_in;

use stand_in::{Line, electrons};
use widthwise_core::amplitude::born::{Born, Energy, Feature};
use widthwise_core::amplitude::hypothesis::Hypothesis;
use widthwise_core::beam::Beams;
use widthwise_core::line_shape::Chain;
use widthwise_core::numerics::faddeeva::voigt;
use widthwise_core::scan::{ChainSettings, Spread, Stage};

const NESTED: &str = include_str!("../../../tests/reference/lineshape_nested.json");
const TABLE: &str = include_str!("../../../tests/reference/data/cmd3_2016_kskl_phi_scan.csv");

fn gaussian(sigma_gev: f64) -> Spread {
    Spread::Gaussian {
        sigma_gev,
        w0_gev: 1.0,
        power: 0.0,
    }
}

/// Highest point of `curve` between two energies by golden section.
fn summit(mut low: f64, mut high: f64, curve: impl Fn(f64) -> f64) -> (f64, f64) {
    let ratio = 0.5 * (5.0f64.sqrt() - 1.0);
    while high - low > 1e-9 {
        let (a, b) = (high - ratio * (high - low), low + ratio * (high - low));
        if curve(a) < curve(b) {
            low = a;
        } else {
            high = b;
        }
    }
    let w = 0.5 * (low + high);
    (w, curve(w))
}

/// psi(2S), Wang, Yuan & Mo 2002: radiation takes the peak to 0.51 of Born and shifts it by 9 keV;
/// with sigma_W = 1.3 MeV it is 640 nb at +0.14 MeV. More digits by an own calculation that shares
/// no code with this: 0.5129, 9.56 keV, 638.66 nb, +0.1352 MeV.
#[test]
fn psi2s_chain() {
    let line = Line::psi2s();
    let settings = |spread| ChainSettings {
        w_min_gev: Some(0.5),
        spread,
        accuracy: 1e-6,
    };
    let born_peak = summit(line.mass - 1e-4, line.mass + 1e-4, |w| {
        line.sigma_nb(Energy::at(w))
    });
    let radiated = Chain::new(&settings(Spread::None), &electrons()).unwrap();
    let at = |chain: &Chain, w| {
        chain
            .cross_sections(&line, &[w], None, Stage::Observed)
            .unwrap()
            .values_nb[0]
    };
    let peak = summit(line.mass - 5e-5, line.mass + 1e-4, |w| at(&radiated, w));
    assert!(
        (peak.1 / born_peak.1 - 0.5129).abs() < 1e-4,
        "{}",
        peak.1 / born_peak.1
    );
    assert!((1e6 * (peak.0 - line.mass) - 9.56).abs() < 0.01);
    let observed = Chain::new(&settings(gaussian(1.3e-3)), &electrons()).unwrap();
    let peak = summit(line.mass, line.mass + 3e-4, |w| at(&observed, w));
    assert!((peak.1 - 638.66).abs() < 0.01, "{}", peak.1);
    assert!((1e3 * (peak.0 - line.mass) - 0.1352).abs() < 1e-4);
}

/// e+e- -> scalar of 125.7 GeV and 4.2 MeV (arXiv:1509.02406, abstract): 0.347 of the Born peak
/// after radiation, 0.170 with a spread of 4.2 MeV besides.
#[test]
fn scalar_of_125_gev() {
    let line = Line {
        mass: 125.7,
        width: 4.2e-3,
        product: 1e-9,
        spin: 0.25,
        ..Line::psi2s()
    };
    let born = line.sigma_nb(Energy {
        reference_gev: line.mass,
        offset_gev: 0.0,
    });
    for (spread, published) in [(Spread::None, 0.347), (gaussian(4.2e-3), 0.170)] {
        let settings = ChainSettings {
            w_min_gev: Some(10.0),
            spread,
            accuracy: 1e-6,
        };
        let chain = Chain::new(&settings, &electrons()).unwrap();
        let seen = chain
            .cross_sections(&line, &[line.mass], None, Stage::Observed)
            .unwrap()
            .values_nb[0];
        assert!((seen / born - published).abs() < 1e-3, "{}", seen / born);
    }
}

/// A Lorentzian in W (a nonrelativistic Breit-Wigner) under a Gaussian is the Voigt profile
/// (DLMF 7.19; w(z) is itself checked against mpmath).
#[test]
fn nonrelativistic_line_is_a_voigt_profile() {
    struct Lorentzian {
        half_width: f64,
    }
    impl Born for Lorentzian {
        fn threshold_gev(&self) -> f64 {
            0.0
        }
        fn features(&self) -> Vec<Feature> {
            vec![Feature::Peak {
                w_gev: 10.0,
                width_gev: 2.0 * self.half_width,
            }]
        }
        fn contribution_names(&self) -> Vec<String> {
            vec!["line".into()]
        }
        fn contributions_nb(&self, at: Energy, out: &mut [f64]) {
            out[0] = self.sigma_nb(at);
        }
        fn sigma_nb(&self, at: Energy) -> f64 {
            let d = at.above_gev(10.0);
            self.half_width / std::f64::consts::PI / (d * d + self.half_width * self.half_width)
        }
    }
    for ratio in [1e-4, 1e-2, 1.0, 1e2, 1e4] {
        let sigma = if ratio > 1.0 { 1e-3 / ratio } else { 1e-3 };
        let line = Lorentzian {
            half_width: 0.5 * ratio * sigma,
        };
        let settings = ChainSettings {
            w_min_gev: None,
            spread: gaussian(sigma),
            accuracy: 1e-6,
        };
        let chain = Chain::new(&settings, &electrons()).unwrap();
        let unit = sigma.max(line.half_width);
        let w: Vec<f64> = (-16..=16)
            .map(|i| 10.0 + 0.5 * f64::from(i) * unit)
            .collect();
        let seen = chain
            .cross_sections(&line, &w, None, Stage::Observed)
            .unwrap();
        // Eight sigma from a line far narrower than sigma only its weak tails are left (1e-7 of the
        // top at 1e-4 sigma): there the chain claims less than was asked for, and warns.
        let most = if ratio < 0.1 { 1e-5 } else { 1e-6 };
        assert!(seen.accuracy < most, "{ratio}: {:e}", seen.accuracy);
        assert_eq!(seen.warnings.is_empty(), seen.accuracy <= 1e-6, "{ratio}");
        for (w, value) in w.iter().zip(&seen.values_nb) {
            let exact = voigt(w - 10.0, sigma, line.half_width);
            let off = (value / exact - 1.0).abs();
            assert!(
                off <= seen.accuracy,
                "{ratio} at {w}: {off:e} {:e}",
                seen.accuracy
            );
        }
    }
}

/// Factors of the CMD-3 phi scan (PLB 760 (2016) 314, table 1; the file beside): cut, not rounded,
/// to two decimals, so 0 <= ours - table < 0.01 up to 1030 MeV; 1.5 % at 1034 and 1040, 3 % above.
/// The model is the refit's: one photon in, K_S K_L out, four running width channels.
#[test]
fn radiation_factors_of_the_phi_scan() {
    let nested: serde_json::Value = serde_json::from_str(NESTED).unwrap();
    let scan = nested["cases"]
        .as_array()
        .unwrap()
        .iter()
        .map(|case| &case["scan"])
        .find(|scan| scan["hypothesis"]["resonances"][0]["mass_gev"] == 1.0194556)
        .unwrap();
    let beams: Beams = serde_json::from_value(scan["beams"].clone()).unwrap();
    let hypothesis: Hypothesis = serde_json::from_value(scan["hypothesis"].clone()).unwrap();
    let born = hypothesis.prepare(&beams).unwrap();
    let settings = ChainSettings {
        w_min_gev: Some(0.995222),
        spread: Spread::None,
        accuracy: 1e-6,
    };
    let chain = Chain::new(&settings, &beams).unwrap();
    let mut rows = 0;
    for line in TABLE.lines().filter(|line| line.starts_with("10")) {
        let cells: Vec<f64> = line.split(',').map(|c| c.parse().unwrap()).collect();
        let w = 1e-3 * cells[0];
        let curve = chain.curve(born.as_ref(), &[w]).unwrap();
        let (ours, table) = (curve.radiated_nb[0] / curve.born_nb[0], cells[5]);
        let fine = match cells[0] {
            e if e < 1030.0 => (0.0..0.01).contains(&(ours - table)),
            e if e < 1041.0 => (ours / table - 1.0).abs() < 0.015,
            _ => (ours / table - 1.0).abs() < 0.03,
        };
        assert!(fine, "{w} GeV: {ours} against {table}");
        rows += 1;
    }
    assert_eq!(rows, 25);
}
