//! Profile intervals of 20 random sheets against a brute-force grid.

use super::*;
use widthwise_core::amplitude::born::Energy;
use widthwise_core::fit::RISE_ONE;
use widthwise_core::numerics::probability::poisson_deviance;
use widthwise_core::numerics::random::Stream;

/// 2 NLL at a mass, least over the strength on a grid: the curve is linear in the strength, so the
/// mass needs one evaluation and every strength costs a sum.
fn profiled(scan: &Scan, mass_gev: f64, strength_gev: f64) -> f64 {
    let mut here = scan.hypothesis.clone();
    here.set("r1.mass", mass_gev).unwrap();
    let born = here.prepare(&scan.beams).unwrap();
    let unit = here.get("r1.strength").unwrap();
    let rows: Vec<(f64, f64, f64)> = scan
        .points
        .iter()
        .map(|p| {
            let Measured::Counts { n, .. } = p.measured else {
                panic!("counts");
            };
            let exposure = p.luminosity_nbinv * scan.detection.efficiency;
            let s = exposure * born.sigma_nb(Energy::at(p.w_gev)) / unit;
            (n, s, p.live_time_h * scan.detection.rate_bg_per_h)
        })
        .collect();
    let at = |strength: f64| -> f64 {
        rows.iter()
            .map(|(n, s, b)| poisson_deviance(*n, strength * s + b))
            .sum()
    };
    // A grid, then a finer one around its least place; the parabola through the least three.
    let (mut middle, mut half) = (strength_gev, strength_gev);
    for _ in 0..4 {
        let places: Vec<f64> = (0..=200)
            .map(|i| (middle - half + 0.01 * half * f64::from(i)).max(0.0))
            .collect();
        let best = places
            .iter()
            .copied()
            .min_by(|a, b| at(*a).total_cmp(&at(*b)))
            .unwrap();
        middle = best;
        half *= 0.02;
    }
    at(middle)
}

#[test]
fn profile_intervals_against_a_grid() {
    for sheet in 0..20u64 {
        let mut stream = Stream::new(77, sheet);
        let width = 0.6e-3 + 1.5e-3 * stream.uniform();
        let strength = 3e-9 + 10e-9 * stream.uniform();
        let mut all = scan(Hypothesis::PartialWave(wave(2.9, width, strength, 2)), 2.9);
        all.chain.spread = Spread::None;
        for p in &mut all.points {
            p.w_gev += 0.4e-3 * (stream.uniform() - 0.5);
        }
        as_expected(&mut all);
        for p in &mut all.points {
            if let Measured::Counts { n, .. } = &mut p.measured {
                *n = stream.poisson(*n);
            }
        }
        let mut fitter = Fitter::new(&all, &settings(&["r1.mass", "r1.strength"])).unwrap();
        let minimum = fitter.minimum().unwrap();
        let covariance = fitter.covariance(&minimum).unwrap();
        let interval = fitter
            .interval("r1.mass", RISE_ONE, &minimum, &covariance)
            .unwrap();
        let (best, error) = (minimum.x[0], covariance.error(0).unwrap());
        let least = profiled(&all, best, minimum.x[1]);
        assert!(
            (least - minimum.expansion.value).abs() < 1e-6,
            "sheet {sheet}"
        );
        for side in [-1.0, 1.0] {
            // Steps of a hundredth of an error until the rise passes 1; straight between the last two.
            let (mut last, mut end) = ((0.0, 0.0), 0.0);
            for k in 1..400 {
                let at = side * 0.01 * f64::from(k) * error;
                let rise = profiled(&all, best + at, minimum.x[1]) - least;
                if rise >= 1.0 {
                    end = last.0 + (at - last.0) * (1.0 - last.1) / (rise - last.1);
                    break;
                }
                last = (at, rise);
            }
            let found = if side < 0.0 {
                interval.low
            } else {
                interval.high
            };
            let found = found.value(side) - best;
            assert!(
                (found - end).abs() < 5e-3 * error,
                "sheet {sheet}: {found} against {end}, error {error}"
            );
        }
    }
}
