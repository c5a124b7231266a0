//! One setting into every other.

use super::{Body, Named, Reply, first_problem};
use crate::check::{self, dial_dimension, setting_kind};
use crate::doc::{Dial, Sheet};
use crate::quantity::unit::{Unit, read_unit};
use crate::quantity::{Dimension, format, read};
use widthwise_core::beam::Arrangement;
use widthwise_core::error::{Answer, Refusal};
use widthwise_core::kinematics::break_up_momentum_gev;
use widthwise_core::line_shape::Chain;

/// Digits of a setting: a keV in a TeV.
const DIGITS: usize = 9;

/// Converts `value`, a setting of kind `from`, into every kind.
pub fn answer(sheet: &Sheet, from: Dial, value: &str) -> Answer<Reply> {
    let (frame, _) = check::frame(sheet).map_err(first_problem)?;
    let beams = &frame.scan.beams;
    let reading = read(value, dial_dimension(from)).map_err(|p| p.at("value", value))?;
    let at_value = |refusal: Refusal| Refusal {
        field: "value".into(),
        value: value.into(),
        ..refusal
    };
    let kind = setting_kind(from);
    let settings = beams.settings(kind, reading.value).map_err(at_value)?;
    let at = beams.at(kind, reading.value).map_err(at_value)?;
    let energy_unit = energy_unit(&reading.unit);
    let momentum_unit = read_unit(&format!("{}/c", energy_unit.text)).ok();
    let unit_of = |dimension| match dimension {
        Dimension::Momentum => momentum_unit.as_ref(),
        _ => Some(&energy_unit),
    };
    let list = [
        Dial::W,
        Dial::TotalEnergy,
        Dial::KineticEnergy,
        Dial::Momentum,
    ]
    .into_iter()
    .map(|dial| {
        let dimension = dial_dimension(dial);
        let number = settings.of(setting_kind(dial));
        let text = format::for_the_eye(number, None, dimension, unit_of(dimension), DIGITS);
        (dial, text)
    })
    .collect();
    let true_w = frame.true_w(settings.w_gev);
    let named = |name: &str, value: f64, dimension: Dimension| {
        Named::new(name, value, dimension, unit_of(dimension), DIGITS)
    };
    let mut values = vec![
        named("true W", true_w, Dimension::Energy),
        named("energy of beam 1", at.e1_gev, Dimension::Energy),
        named("energy of beam 2", at.e2_gev, Dimension::Energy),
        named("momentum of beam 1", at.p1_gev, Dimension::Momentum),
        named("momentum of beam 2", at.p2_gev, Dimension::Momentum),
        named(
            "momentum of each beam in the centre of mass",
            break_up_momentum_gev(settings.w_gev, beams.first.mass_gev, beams.second.mass_gev),
            Dimension::Momentum,
        ),
    ];
    if let Some(sigma) = Chain::new(&frame.scan.chain, beams)?.sigma_w_gev(true_w) {
        values.push(Named::new("sigma_W", sigma, Dimension::Energy, None, 4));
    }
    // Both beams are dialled alike where they are equal.
    let equal = matches!(beams.arrangement, Arrangement::EqualBeams { .. });
    let slope = if equal {
        at.dw_dp1 + at.dw_dp2
    } else {
        at.dw_dp1
    };
    values.push(Named::new("dW/dp", slope, Dimension::Number, None, 6));
    Ok(Reply {
        body: Body::Convert {
            settings: list,
            values,
        },
        columns: Vec::new(),
    })
}

/// The unit of the value as typed, without a /c.
fn energy_unit(unit: &Unit) -> Unit {
    let text = unit.text.split('/').next().unwrap_or("GeV").trim();
    read_unit(text)
        .ok()
        .filter(|u| Dimension::Energy.conversion(u.dims).is_some())
        .or_else(|| read_unit("GeV").ok())
        .unwrap_or_default()
}
