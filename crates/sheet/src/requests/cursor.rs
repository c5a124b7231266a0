//! Everything about one W.

use super::ready::Ready;
use super::{Body, Named, Reply};
use crate::check::dial_dimension;
use crate::doc::Sheet;
use crate::quantity::unit::{Unit, read_unit};
use crate::quantity::{Dimension, format, read};
use widthwise_core::counts::{Exposure, HoursTo, SignalRates, hours_to_relative_error};
use widthwise_core::error::{Answer, Refusal};
use widthwise_core::scan::Stage;

/// Digits of a number to dial.
pub const DIAL_DIGITS: usize = 8;
/// Relative error of the signal whose time is told.
pub const WANTED: f64 = 0.1;

/// Contributions, dial, rate and derivative at `w_gev`.
pub fn answer(sheet: &Sheet, w_gev: f64) -> Answer<Reply> {
    if !(w_gev > 0.0 && w_gev <= 1e5) {
        return Err(Refusal::new(
            "w_gev",
            w_gev,
            "above 0 and up to 100 TeV",
            "this is no energy",
        ));
    }
    let ready = Ready::new(sheet)?;
    let curve = ready.chain.curve(ready.born.as_ref(), &[w_gev])?;
    let slope = ready
        .sigma_and_slope(&[w_gev], &[None], Stage::Observed)?
        .first()
        .map_or(0.0, |(_, slope)| *slope);
    let first = |values: &[f64]| values.first().copied().unwrap_or(0.0);
    let (born, radiated, observed) = (
        first(&curve.born_nb),
        first(&curve.radiated_nb),
        first(&curve.observed_nb),
    );
    let nb = |name: &str, value| Named::new(name, value, Dimension::CrossSection, None, 4);
    let number = |name: &str, value| Named::new(name, value, Dimension::Number, None, 4);
    let mut values = vec![
        nb("observed", observed),
        nb("radiated", radiated),
        nb("Born", born),
    ];
    for (name, column) in &curve.contributions {
        values.push(nb(name, first(column)));
    }
    if born != 0.0 {
        values.push(number("radiation factor", radiated / born));
    }
    if radiated != 0.0 {
        values.push(number("spread factor", observed / radiated));
    }
    values.push(Named {
        name: "slope of the observed curve".into(),
        value: slope,
        error: None,
        unit: "nb/GeV".into(),
        text: format!("{} nb/MeV", format::significant(slope * 1e-3, 4)),
    });
    if let Some(sigma) = ready.chain.sigma_w_gev(w_gev) {
        values.push(Named::new("sigma_W", sigma, Dimension::Energy, None, 4));
    }
    values.extend(rates(sheet, &ready, observed));
    Ok(Reply {
        body: Body::Cursor {
            w_gev,
            dial: dial(sheet, &ready, w_gev).unwrap_or_default(),
            values,
        },
        columns: Vec::new(),
    })
}

fn rates(sheet: &Sheet, ready: &Ready, observed_nb: f64) -> Vec<Named> {
    let detection = &ready.frame.scan.detection;
    if detection.luminosity_nbinv_per_h <= 0.0 {
        return Vec::new();
    }
    let hour = Exposure::per_hour(detection);
    let (signal, background) = (hour.signal(observed_nb), hour.background(detection));
    let rate = |name: &str, value: f64| Named {
        name: name.into(),
        value,
        error: None,
        unit: "1/h".into(),
        text: format!("{} per hour", format::significant(value, 4)),
    };
    let hours = hours_to_relative_error(
        &SignalRates {
            signal_per_h: signal,
            background_per_h: background,
            background_relative_error: 0.0,
            tau: tau(sheet),
            scale_relative_error: ready.frame.scan.common.scale,
            energy_relative_error: 0.0,
        },
        WANTED,
    );
    let mut out = vec![
        rate("rate", signal + background),
        rate("signal rate", signal),
        rate("background rate", background),
    ];
    if let HoursTo::Hours { hours, .. } = hours {
        out.push(Named::new(
            "time to 10 % on the signal",
            hours,
            Dimension::Time,
            None,
            3,
        ));
    }
    out
}

/// tau of the sheet, where off-region counts are taken.
pub fn tau(sheet: &Sheet) -> Option<f64> {
    let text = sheet.detection.tau.as_ref()?;
    read(text, Dimension::Number).ok().map(|r| r.value)
}

/// The number to dial for a true W; `None` where the beams cannot reach it.
pub fn dial(sheet: &Sheet, ready: &Ready, w_gev: f64) -> Option<String> {
    let setting = ready.frame.setting_of_w(w_gev).ok()?;
    let dimension = dial_dimension(sheet.beam.dial);
    let unit = dial_unit(sheet, dimension);
    Some(format::for_the_eye(
        setting,
        None,
        dimension,
        unit.as_ref(),
        DIAL_DIGITS,
    ))
}

/// The unit in which this sheet's settings are typed.
pub(super) fn dial_unit(sheet: &Sheet, dimension: Dimension) -> Option<Unit> {
    sheet
        .data
        .rows
        .iter()
        .filter_map(|row| row.setting.as_ref())
        .find_map(|text| read(text, dimension).ok())
        .map(|reading| reading.unit)
        .or_else(|| read_unit(dimension.core_unit()).ok())
}
