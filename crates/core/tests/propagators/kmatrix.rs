//! The two-channel K-matrix against values from outside, unitarity and limits.

use super::*;

#[test]
fn kmatrix_of_the_table() {
    let table = pole_table();
    for case in list(&table["K-matrix"]) {
        for (chew_mandelstam, key) in [(true, "t_chew_mandelstam"), (false, "t_i_rho")] {
            let channel = |i: usize| KChannel {
                name: "c".into(),
                m1_gev: number(&case["channels_gev"][i][0]),
                m2_gev: number(&case["channels_gev"][i][1]),
            };
            let model = KMatrix {
                poles: list(&case["poles_of_k"])
                    .iter()
                    .map(|pole| KPole {
                        mass_gev: number(&pole["mass_gev"]),
                        g1_gev: number(&pole["g_gev"][0]),
                        g2_gev: number(&pole["g_gev"][1]),
                    })
                    .collect(),
                constant: [
                    number(&case["c"][0][0]),
                    number(&case["c"][0][1]),
                    number(&case["c"][1][1]),
                ],
                channels: [channel(0), channel(1)],
                ..two_channels(chew_mandelstam)
            };
            let matrix = PreparedKMatrix::new(&model, "").unwrap();
            for point in list(&case["points"]) {
                let at = matrix.at(number(&point["w_gev"]));
                let expected = &point[key];
                for (ours, expected) in
                    at.t.iter()
                        .zip([&expected[0][0], &expected[0][1], &expected[1][1]])
                {
                    assert!(
                        math::abs(ours - complex(expected)) < 1e-11 * (1.0 + math::abs(*ours)),
                        "{point} {ours}"
                    );
                }
            }
        }
    }
}

fn two_channels(chew_mandelstam: bool) -> KMatrix {
    let channel = |name: &str, m_gev| KChannel {
        name: name.into(),
        m1_gev: m_gev,
        m2_gev: m_gev,
    };
    KMatrix {
        twice_j: 0,
        poles: vec![
            KPole {
                mass_gev: 0.95,
                g1_gev: 0.3,
                g2_gev: 0.5,
            },
            KPole {
                mass_gev: 1.4,
                g1_gev: 0.5,
                g2_gev: -0.2,
            },
        ],
        constant: [0.3, -0.2, 0.1],
        channels: [channel("pi pi", 0.13957), channel("K K", 0.493677)],
        chew_mandelstam,
        entrance: 0,
        exit: 1,
        incoherent: None,
    }
}

#[test]
fn kmatrix_is_unitary_and_finite_at_its_poles() {
    for chew_mandelstam in [true, false] {
        let matrix = PreparedKMatrix::new(&two_channels(chew_mandelstam), "").unwrap();
        for i in 0..400 {
            let w = 0.3 + 0.004 * f64::from(i);
            let at = matrix.at(w);
            assert!(
                at.unitarity_defect() < 1e-12,
                "{w}: {}",
                at.unitarity_defect()
            );
        }
        for mass in [0.95, 1.4] {
            let (at, near) = (matrix.at(mass), matrix.at(mass + 1e-10));
            for (a, b) in at.t.iter().zip(near.t) {
                assert!(a.re.is_finite() && math::abs(a - b) < 1e-7 * (1.0 + math::abs(b)));
            }
        }
        for search in matrix.poles() {
            assert!(!search.poles.is_empty(), "{}", search.message);
        }
    }
}

#[test]
fn kmatrix_with_one_channel_is_the_flatte_form() {
    // One pole, i rho, no constant: T_12 = g1 g2/(M^2 - s - i(g1^2 rho1 + g2^2 rho2)) = -g1 g2 Delta.
    let mut model = two_channels(false);
    model.poles.truncate(1);
    model.constant = [0.0; 3];
    let matrix = PreparedKMatrix::new(&model, "").unwrap();
    let Form::Flatte { mut channels } = f0() else {
        unreachable!()
    };
    channels[0].g2_gev2 = 0.09;
    channels[1].g2_gev2 = 0.25;
    channels[0].m1_gev = 0.13957;
    channels[0].m2_gev = 0.13957;
    let flatte = Propagator::new(&Form::Flatte { channels }, 0.95, 0.0, "").unwrap();
    for w in [0.5, 0.9, 0.98, 0.99, 1.3] {
        let expected = -flatte.inverse_gev2(Energy::at(w)).inv() * 0.15;
        assert!(math::abs(matrix.at(w).t[1] - expected) < 1e-13, "{w}");
    }
    let mut twice = two_channels(true);
    twice.poles[1].mass_gev = 0.95;
    assert!(
        PreparedKMatrix::new(&twice, "")
            .unwrap_err()
            .message
            .contains("coincide")
    );
}
