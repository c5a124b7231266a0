//! The statistic and its derivatives.

use super::super::settings::{Constraint, FitSettings};
use super::super::stand_in::{BreitWigner, counting_scan};
use super::*;
use crate::scan::{Measured, Scan};

const FREE: [&str; 4] = ["r1.mass", "r1.width", "r1.strength", "incoherent.0"];

fn everything(gaussian: bool) -> Scan {
    let w: Vec<f64> = (0..9).map(|i| 2.999 + 0.25e-3 * f64::from(i)).collect();
    let n = [40.0, 52.0, 90.0, 170.0, 310.0, 180.0, 77.0, 60.0, 44.0];
    let mut scan = counting_scan(&w, &n, 5.0);
    scan.detection.efficiency = 0.8;
    scan.common.energy_gev = 0.1e-3;
    scan.common.energy_slope = 1e-5;
    scan.common.scale = 0.02;
    scan.common.luminosity = 0.03;
    scan.common.group_energy_gev = 0.05e-3;
    scan.common.group_luminosity = 0.01;
    scan.common.efficiency_slope_per_gev = 20.0;
    scan.common.gaussian_factors = gaussian;
    for (i, p) in scan.points.iter_mut().enumerate() {
        p.group = Some(format!("fill {}", i / 3));
        p.w_error_gev = 0.02e-3;
        p.luminosity_error_nbinv = 0.05;
        if i == 3 {
            p.measured = Measured::Counts {
                n: 170.0,
                off: Some((31.0, 2.0)),
            };
        }
        if i > 6 {
            p.measured = Measured::CrossSection {
                sigma_nb: 12.0,
                error_nb: 1.0,
            };
        }
    }
    scan
}

fn likelihood(scan: &Scan, free_background: bool) -> Likelihood {
    let mut settings = FitSettings {
        free: FREE.map(String::from).to_vec(),
        constraints: vec![Constraint {
            parameter: "r1.width".into(),
            value: 0.7e-3,
            error: 0.1e-3,
        }],
        ..FitSettings::default()
    };
    if free_background {
        settings.free.push("background.cross_section".into());
        settings.free.push("background.rate".into());
    }
    let model = BreitWigner::new([3.0, 0.8e-3, 70.0, 9.0], &FREE);
    Likelihood::new(Problem::new(scan, &settings, Rc::new(model)).unwrap())
}

/// Gradient and observed curvature against differences of value and gradient, with every kind of
/// datum, nuisance and constraint at once.
#[test]
fn derivatives_are_those_of_the_value() {
    for (gaussian, background) in [(false, false), (true, true), (false, true)] {
        let mut likelihood = likelihood(&everything(gaussian), background);
        let mut x = likelihood.problem().start();
        for (i, v) in x.iter_mut().enumerate().skip(4) {
            *v = 0.3 * crate::math::sin(i as f64) + if background && i < 6 { 1.0 } else { 0.0 };
        }
        // Small steps: the stand-in is exact.
        for (f, s) in likelihood
            .first_steps
            .iter_mut()
            .zip(&mut likelihood.second_steps)
        {
            *f *= 0.01;
            *s *= 0.01;
        }
        let here = likelihood.full(&x, true).unwrap();
        for i in 0..x.len() {
            let h = 1e-3 * likelihood.problem().coordinates[i].scale.min(1.0);
            let (mut up, mut down) = (x.clone(), x.clone());
            up[i] += h;
            down[i] -= h;
            let (up, down) = (
                likelihood.full(&up, false).unwrap(),
                likelihood.full(&down, false).unwrap(),
            );
            let slope = (up.value - down.value) / (2.0 * h);
            let size = here.curvature[(i, i)].sqrt();
            assert!(
                (slope - here.gradient[i]).abs() < 1e-4 * (size + slope.abs()),
                "gradient {i}: {} against {slope}",
                here.gradient[i]
            );
            for k in 0..x.len() {
                let second = (up.gradient[k] - down.gradient[k]) / (2.0 * h);
                let size = (here.curvature[(i, i)] * here.curvature[(k, k)])
                    .abs()
                    .sqrt();
                assert!(
                    (second - here.curvature[(i, k)]).abs() < 2e-3 * size,
                    "curvature {i} {k}: {} against {second}, size {size}",
                    here.curvature[(i, k)]
                );
            }
        }
    }
}
