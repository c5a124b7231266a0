//! Wigner's small d-functions, in the convention of the PDG table.

use crate::math;

/// Largest 2J: the alternating sum keeps 12 digits up to there.
pub const MOST_TWICE_J: u8 = 20;

/// d^J_{lambda mu}(theta) with J, lambda, mu given doubled; 0 where |lambda| or |mu| exceed J or
/// do not go with J, and for 2J above [`MOST_TWICE_J`]. Absolute error below 1e-12
/// (1e-14 up to J = 4). PDG, "Clebsch-Gordan coefficients, spherical harmonics, and d functions".
#[must_use]
pub fn small_d(twice_j: u8, twice_lambda: i8, twice_mu: i8, cos_theta: f64) -> f64 {
    let (j, l, m) = (
        i32::from(twice_j),
        i32::from(twice_lambda),
        i32::from(twice_mu),
    );
    if twice_j > MOST_TWICE_J || l.abs() > j || m.abs() > j || (j - l) % 2 != 0 || (j - m) % 2 != 0
    {
        return 0.0;
    }
    let half = |x: i32| u32::try_from(x / 2).unwrap_or(0);
    // cos^2 and sin^2 of the half angle without cancellation at either end.
    let (c2, s2) = (0.5 * (1.0 + cos_theta), 0.5 * (1.0 - cos_theta));
    let (c, s) = (c2.max(0.0).sqrt(), s2.max(0.0).sqrt());
    let root = (factorial(half(j + l))
        * factorial(half(j - l))
        * factorial(half(j + m))
        * factorial(half(j - m)))
    .sqrt();
    let first = ((m - l) / 2).max(0);
    let last = half(j + m).min(half(j - l)) as i32;
    let mut sum = 0.0;
    for k in first..=last {
        let up = |x: i32| u32::try_from(x).unwrap_or(0);
        let bottom = factorial(up((j + m) / 2 - k))
            * factorial(up(k))
            * factorial(up((l - m) / 2 + k))
            * factorial(up((j - l) / 2 - k));
        let sign = if ((l - m) / 2 + k) % 2 == 0 {
            1.0
        } else {
            -1.0
        };
        let cosines = math::powi(c, up(j + (m - l) / 2 - 2 * k));
        let sines = math::powi(s, up((l - m) / 2 + 2 * k));
        sum += sign / bottom * cosines * sines;
    }
    root * sum
}

/// n! for n <= 20: exact in a double.
fn factorial(n: u32) -> f64 {
    (2..=n).fold(1.0, |product, k| product * f64::from(k))
}

/// Clebsch-Gordan coefficient <j1 m1 j2 m2 | j m>, all doubled (Racah's formula); 0 where the
/// angular momenta do not add.
#[must_use]
pub fn clebsch_gordan(j1: u8, m1: i8, j2: u8, m2: i8, j: u8, m: i8) -> f64 {
    let (a, b, c) = (i32::from(j1), i32::from(j2), i32::from(j));
    let (x, y, z) = (i32::from(m1), i32::from(m2), i32::from(m));
    let bad = x + y != z
        || c < (a - b).abs()
        || c > a + b
        || (a + b + c) % 2 != 0
        || x.abs() > a
        || y.abs() > b
        || z.abs() > c
        || (a - x) % 2 != 0
        || (b - y) % 2 != 0;
    if bad || a + b + c > 2 * i32::from(MOST_TWICE_J) {
        return 0.0;
    }
    let f = |twice: i32| factorial(u32::try_from(twice / 2).unwrap_or(0));
    let delta = f(a + b - c) * f(a - b + c) * f(b + c - a) / f(a + b + c + 2);
    let root = (f64::from(c + 1)
        * delta
        * f(a + x)
        * f(a - x)
        * f(b + y)
        * f(b - y)
        * f(c + z)
        * f(c - z))
    .sqrt();
    let mut sum = 0.0;
    for k in 0..=(a + b - c) / 2 {
        let terms = [
            2 * k,
            a + b - c - 2 * k,
            a - x - 2 * k,
            b + y - 2 * k,
            c - b + x + 2 * k,
            c - a - y + 2 * k,
        ];
        if terms.iter().any(|term| *term < 0) {
            continue;
        }
        let bottom: f64 = terms.iter().map(|term| f(*term)).product();
        sum += if k % 2 == 0 {
            1.0 / bottom
        } else {
            -1.0 / bottom
        };
    }
    root * sum
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::numerics::gauss_legendre::gauss_legendre;

    #[test]
    fn entries_of_the_review_table() {
        // PDG d-function table, by hand.
        for cos in [-0.9, -0.3, 0.0, 0.4, 0.99] {
            let theta = math::acos(cos);
            let (s, c) = (math::sin(theta), cos);
            let half = math::sin(0.5 * theta);
            let table: [(u8, i8, i8, f64); 8] = [
                (1, 1, -1, -half),
                (2, 0, 0, c),
                (2, 2, 2, 0.5 * (1.0 + c)),
                (2, 2, 0, -s / 2f64.sqrt()),
                (2, 2, -2, 0.5 * (1.0 - c)),
                (3, 3, 1, -(3f64.sqrt()) * 0.5 * (1.0 + c) * half),
                (4, 2, 0, -(1.5f64.sqrt()) * s * c),
                (4, 4, -2, -0.5 * s * (1.0 - c)),
            ];
            for (j, l, m, expected) in table {
                let ours = small_d(j, l, m, cos);
                assert!(
                    (ours - expected).abs() < 1e-15,
                    "{j} {l} {m} {cos}: {ours} {expected}"
                );
            }
        }
    }

    #[test]
    fn every_element_up_to_four_against_sympy() {
        // tests/reference/wigner_d.py, exact arithmetic in sympy.
        let table = include_str!("../../../../tests/reference/wigner_d.csv");
        let mut rows = 0;
        for line in table.lines().filter(|line| !line.starts_with(['#', 't'])) {
            let x: Vec<f64> = line.split(',').map(|cell| cell.parse().unwrap()).collect();
            let ours = small_d(x[0] as u8, x[1] as i8, x[2] as i8, x[3]);
            assert!((ours - x[4]).abs() < 1e-14, "{line}: {ours}");
            rows += 1;
        }
        assert_eq!(rows, 3 * 284);
    }

    #[test]
    fn clebsch_gordan_of_the_review_table() {
        // PDG: 1/2 x 1/2, 1 x 1/2, 2 x 1.
        for (arguments, expected) in [
            ((1, 1, 1, -1, 2, 0), 0.5f64.sqrt()),
            ((1, -1, 1, 1, 0, 0), -(0.5f64.sqrt())),
            ((2, 0, 1, 1, 3, 1), (2.0f64 / 3.0).sqrt()),
            ((2, 0, 1, 1, 1, 1), -((1.0f64 / 3.0).sqrt())),
            ((4, 2, 2, 0, 4, 2), (1.0f64 / 6.0).sqrt()),
            ((4, 0, 2, 0, 2, 0), -((2.0f64 / 5.0).sqrt())),
            ((4, 0, 2, 2, 4, 0), 0.0),
        ] {
            let (a, x, b, y, c, z) = arguments;
            assert!(
                (clebsch_gordan(a, x, b, y, c, z) - expected).abs() < 1e-14,
                "{arguments:?}"
            );
        }
    }

    #[test]
    fn orthogonality() {
        // Integral of d^J d^J' dcos = 2/(2J+1) for J = J', else 0.
        let rule = gauss_legendre(20);
        for j in 0..=12u8 {
            for k in (j % 2..=j).step_by(2) {
                let top = i8::try_from(k).unwrap();
                for l in (-top..=top).step_by(2) {
                    for m in (-top..=top).step_by(2) {
                        let product = |x: f64| small_d(j, l, m, x) * small_d(k, l, m, x);
                        let sum: f64 = rule.iter().map(|(x, w)| w * product(*x)).sum();
                        let expected = if j == k {
                            2.0 / (f64::from(j) + 1.0)
                        } else {
                            0.0
                        };
                        assert!((sum - expected).abs() < 1e-12, "{j} {k} {l} {m}: {sum}");
                    }
                }
            }
        }
    }
}
