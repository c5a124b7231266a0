//! Which J^PC a fermion-antifermion pair can form, and the helicity couplings of LS states.

use super::hypothesis::{Couplings, HelicityCoupling};
use super::wigner::clebsch_gordan;
use crate::error::{Answer, Refusal};
use crate::math;
use num_complex::Complex64;

/// (L, S) of a fermion-antifermion pair.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct PairState {
    /// Orbital momentum.
    pub l: u8,
    /// Total spin, 0 or 1.
    pub s: u8,
}

/// The (L, S) in which a fermion-antifermion pair forms J^PC: P = (-1)^(L+1), C = (-1)^(L+S)
/// (PDG, "Quark model"). P and C are +1 or -1.
///
/// # Errors
/// J^PC that no L and S give, with the reason.
pub fn fermion_pair_states(j: u8, parity: i8, c_parity: i8) -> Answer<Vec<PairState>> {
    let sign = |n: u8| if n.is_multiple_of(2) { 1 } else { -1 };
    let mut states = Vec::new();
    for s in 0..=1u8 {
        for l in j.saturating_sub(s)..=j + s {
            let couples = l.abs_diff(s) <= j;
            if couples && sign(l + 1) == parity && sign(l + s) == c_parity {
                states.push(PairState { l, s });
            }
        }
    }
    if !states.is_empty() {
        return Ok(states);
    }
    let mark = |x: i8| if x > 0 { "+" } else { "\u{2212}" };
    let name = format!("{j}^{}{}", mark(parity), mark(c_parity));
    let reason = if j == 0 && parity < 0 {
        "P = \u{2212} needs even L and J = 0 then L = S = 0, so C = (\u{2212}1)^(L+S) = +"
    } else if j == 0 {
        "P = + needs odd L, J = 0 then L = S = 1, so C = (\u{2212}1)^(L+S) = +"
    } else if sign(j) == parity {
        "this parity makes L = J \u{b1} 1 and so S = 1, which gives C = P"
    } else {
        "this parity makes L = J, and both S = 0 and S = 1 give another C"
    };
    Err(Refusal::new(
        "model.jpc",
        &name,
        "a J^PC with P = (-1)^(L+1) and C = (-1)^(L+S)",
        format!("a fermion and its antifermion cannot form {name}: {reason}"),
    ))
}

/// One normalised helicity amplitude of a two-particle state.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct HelicityAmplitude {
    /// 2 lambda_1.
    pub twice_l1: i8,
    /// 2 lambda_2.
    pub twice_l2: i8,
    /// Amplitude; the squares of all sum to 1.
    pub value: Complex64,
}

/// Helicity amplitudes of a state of given J, normalised. LS couplings go through
/// H_l1l2 = sum_LS g sqrt((2L+1)/(2J+1)) <L 0 S l|J l> <s1 l1 s2 -l2|S l>, l = l1 - l2
/// (Jacob & Wick, Ann. Phys. 7 (1959) 404).
///
/// # Errors
/// Couplings that are none, not numbers, all zero, or that cannot form this J.
pub fn helicity_amplitudes(
    couplings: &Couplings,
    twice_j: u8,
    path: &str,
) -> Answer<Vec<HelicityAmplitude>> {
    let refuse = |value: String, message: &str| {
        Err(Refusal::new(
            path,
            value,
            "helicity or LS couplings that can form this J, not all zero",
            message,
        ))
    };
    let mut all = Vec::new();
    match couplings {
        Couplings::Helicity { amplitudes } => {
            for HelicityCoupling {
                twice_l1,
                twice_l2,
                magnitude,
                phase_rad,
            } in amplitudes
            {
                let along = i16::from(*twice_l1) - i16::from(*twice_l2);
                if along.unsigned_abs() > u16::from(twice_j)
                    || (along - i16::from(twice_j)) % 2 != 0
                {
                    return refuse(
                        format!("lambda = {along}/2"),
                        "the difference of the helicities is larger than J, or half-integer where J is whole",
                    );
                }
                all.push(HelicityAmplitude {
                    twice_l1: *twice_l1,
                    twice_l2: *twice_l2,
                    value: math::polar(*magnitude, *phase_rad),
                });
            }
        }
        Couplings::Ls {
            twice_s1,
            twice_s2,
            terms,
        } => {
            for twice_l1 in helicities(*twice_s1) {
                for twice_l2 in helicities(*twice_s2) {
                    let along = twice_l1 - twice_l2;
                    let mut value = Complex64::new(0.0, 0.0);
                    for term in terms {
                        let (l, s) = (2 * term.l, term.twice_s);
                        let geometry = (f64::from(l + 1) / (f64::from(twice_j) + 1.0)).sqrt()
                            * clebsch_gordan(l, 0, s, along, twice_j, along)
                            * clebsch_gordan(*twice_s1, twice_l1, *twice_s2, -twice_l2, s, along);
                        value += math::polar(term.magnitude, term.phase_rad) * geometry;
                    }
                    if value.norm_sqr() > 0.0 {
                        all.push(HelicityAmplitude {
                            twice_l1,
                            twice_l2,
                            value,
                        });
                    }
                }
            }
        }
    }
    let norm: f64 = all.iter().map(|amplitude| amplitude.value.norm_sqr()).sum();
    if !(norm.is_finite() && norm > 0.0) {
        return refuse(
            format!("{couplings:?}"),
            "these couplings form no state of this J",
        );
    }
    let scale = 1.0 / norm.sqrt();
    for amplitude in &mut all {
        amplitude.value *= scale;
    }
    Ok(all)
}

/// -2s, ..., 2s in steps of 2.
fn helicities(twice_s: u8) -> impl Iterator<Item = i8> {
    let top = i8::try_from(twice_s).unwrap_or(0);
    (-top..=top).step_by(2)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::amplitude::hypothesis::LsTerm;

    #[test]
    fn quark_model_table() {
        // PDG, "Quark model": 0-+ 1S0, 1-- 3S1 and 3D1, 1+- 1P1, 0++ 3P0, 2++ 3P2 and 3F2; exotic:
        // 0--, 0+-, 1-+, 2+-, 3-+.
        let states = |j, p, c| fermion_pair_states(j, p, c).unwrap();
        assert_eq!(states(0, -1, 1), [PairState { l: 0, s: 0 }]);
        assert_eq!(
            states(1, -1, -1),
            [PairState { l: 0, s: 1 }, PairState { l: 2, s: 1 }]
        );
        assert_eq!(states(1, 1, -1), [PairState { l: 1, s: 0 }]);
        assert_eq!(states(0, 1, 1), [PairState { l: 1, s: 1 }]);
        assert_eq!(states(1, 1, 1), [PairState { l: 1, s: 1 }]);
        assert_eq!(
            states(2, 1, 1),
            [PairState { l: 1, s: 1 }, PairState { l: 3, s: 1 }]
        );
        for (j, p, c) in [(0, -1, -1), (0, 1, -1), (1, -1, 1), (2, 1, -1), (3, -1, 1)] {
            let refusal = fermion_pair_states(j, p, c).unwrap_err();
            assert!(
                refusal.message.contains("cannot form"),
                "{}",
                refusal.message
            );
        }
    }

    #[test]
    fn scalar_and_vector_pairs() {
        let ls = |terms: Vec<(u8, u8, f64)>| Couplings::Ls {
            twice_s1: 1,
            twice_s2: 1,
            terms: terms
                .into_iter()
                .map(|(l, twice_s, magnitude)| LsTerm {
                    l,
                    twice_s,
                    magnitude,
                    phase_rad: 0.0,
                })
                .collect(),
        };
        // 0++ (3P0): ++ and -- with opposite sign; 0-+ (1S0): helicity amplitudes of equal size too.
        for state in [(1, 2, 1.0), (0, 0, 1.0)] {
            let amplitudes = helicity_amplitudes(&ls(vec![state]), 0, "").unwrap();
            assert_eq!(amplitudes.len(), 2);
            assert!((amplitudes[0].value.norm_sqr() - 0.5).abs() < 1e-14);
        }
        // 3S1 alone: |H_+-|^2 = 2 |H_++|^2, so 1/3 of each of +-, -+ and 1/6 of each of ++, --.
        let amplitudes = helicity_amplitudes(&ls(vec![(0, 2, 1.0)]), 2, "").unwrap();
        for a in &amplitudes {
            let expected = if a.twice_l1 == a.twice_l2 {
                1.0 / 6.0
            } else {
                1.0 / 3.0
            };
            assert!((a.value.norm_sqr() - expected).abs() < 1e-14);
        }
        assert!(helicity_amplitudes(&ls(vec![(2, 0, 1.0)]), 0, "").is_err());
    }
}
