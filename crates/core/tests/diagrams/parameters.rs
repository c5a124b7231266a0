//! Every parameter of a hypothesis of diagrams does something.

use super::*;

#[test]
fn every_parameter_of_every_hypothesis_moves() {
    let dressed = Mediator {
        propagator: MediatorPropagator::Dressed {
            others: vec![Loop::Scalar {
                name: "chi".into(),
                h_gev: 0.3,
                m1_gev: 0.2,
                m2_gev: 0.2,
                identical: true,
            }],
        },
        ..mediator("scalar", 2.2, 0.0, 1.0, 0.6)
    };
    let (model, beams) = model(
        "f fbar -> F Fbar",
        vec![dressed, mediator("pseudoscalar", 1.9, 0.1, 0.5, 0.5)],
        0.3,
        0.4,
        None,
    );
    let mut hypothesis = Hypothesis::Diagrams(model);
    let ids: Vec<String> = hypothesis
        .parameters()
        .iter()
        .map(|p| p.id.to_string())
        .collect();
    assert_eq!(
        ids,
        [
            "d1.mass",
            "d1.g",
            "d1.g_other",
            "d1.g1",
            "d2.mass",
            "d2.g",
            "d2.g_other",
            "d2.width"
        ]
    );
    let sigma = |h: &Hypothesis| h.prepare(&beams).unwrap().sigma_nb(Energy::at(2.0));
    let before = sigma(&hypothesis);
    for id in ids {
        let value = hypothesis.get(&id).unwrap();
        hypothesis.set(&id, 1.05 * value).unwrap();
        assert!((sigma(&hypothesis) / before - 1.0).abs() > 1e-6, "{id}");
        hypothesis.set(&id, value).unwrap();
    }
}
