//! What a number measures, and how its units become the units of the core.

use super::decimal::Decimal;
use super::unit::{Dims, Unit, dims};
use serde::{Deserialize, Serialize};
use widthwise_core::units::FM_PER_GEV;

/// What a number measures.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
#[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
#[serde(rename_all = "snake_case")]
pub enum Dimension {
    /// Energies, masses and widths; GeV.
    Energy,
    /// Momenta; GeV.
    Momentum,
    /// Cross sections; nb.
    CrossSection,
    /// Coefficient i of a cross-section polynomial in (W-W0)/GeV; nb, per GeV^i understood or written.
    CrossSectionPerEnergy(u8),
    /// Covariances of cross sections; nb^2.
    CrossSectionSquared,
    /// Covariances of energies; GeV^2.
    EnergySquared,
    /// Integrated luminosity; 1/nb.
    Luminosity,
    /// Instantaneous luminosity; 1/nb per hour.
    LuminosityRate,
    /// Times; h.
    Time,
    /// Rates; 1/h.
    Rate,
    /// Angles and phases; rad.
    Angle,
    /// Barrier radii; GeV^-1.
    Radius,
    /// Numbers, fractions, relative errors; 1.
    Number,
    /// Coefficient i of a polynomial in (W-W0)/GeV; 1, per GeV^i understood or written.
    NumberPerEnergy(u8),
}

/// From base units to the core's: times 10^pow10, times `numerator`, over `denominator`, times `factor`.
pub struct Conversion {
    pow10: i64,
    numerator: u64,
    denominator: u64,
    factor: f64,
}

impl Dimension {
    /// Unit of the core.
    #[must_use]
    pub fn core_unit(self) -> &'static str {
        match self {
            Self::Energy => "GeV",
            Self::Momentum => "GeV/c",
            Self::CrossSection | Self::CrossSectionPerEnergy(_) => "nb",
            Self::CrossSectionSquared => "nb^2",
            Self::EnergySquared => "GeV^2",
            Self::Luminosity => "nb^-1",
            Self::LuminosityRate => "nb^-1/h",
            Self::Time => "h",
            Self::Rate => "1/h",
            Self::Angle => "rad",
            Self::Radius => "GeV^-1",
            Self::Number | Self::NumberPerEnergy(_) => "",
        }
    }

    /// Units that are understood, for people.
    #[must_use]
    pub fn units(self) -> &'static str {
        match self {
            Self::Energy => "eV, keV, MeV, GeV, TeV",
            Self::Momentum => "keV/c, MeV/c, GeV/c, TeV/c (or without /c)",
            Self::CrossSection => "fb, pb, nb, ub, mb, cm^2",
            Self::CrossSectionPerEnergy(_) => {
                "fb, pb, nb, ub, mb (per GeV^i understood, or nb/MeV)"
            }
            Self::CrossSectionSquared => "nb^2, pb^2",
            Self::EnergySquared => "keV^2, MeV^2, GeV^2",
            Self::Luminosity => "fb^-1, pb^-1, nb^-1, ub^-1, cm^-2",
            Self::LuminosityRate => "cm^-2 s^-1, nb^-1/h, pb^-1/h, nb^-1/s",
            Self::Time => "s, min, h, d, or 1h20",
            Self::Rate => "1/h, Hz, events/h, 1/s",
            Self::Angle => "deg, rad, mrad",
            Self::Radius => "GeV^-1, fm",
            Self::Number => "a plain number, or %",
            Self::NumberPerEnergy(_) => "a plain number (per GeV^i understood, or 1/MeV)",
        }
    }

    /// What it is called in a sentence.
    #[must_use]
    pub fn noun(self) -> &'static str {
        match self {
            Self::Energy => "an energy",
            Self::Momentum => "a momentum",
            Self::CrossSection | Self::CrossSectionPerEnergy(_) => "a cross section",
            Self::CrossSectionSquared => "a squared cross section",
            Self::EnergySquared => "a squared energy",
            Self::Luminosity => "an integrated luminosity",
            Self::LuminosityRate => "a luminosity (per time)",
            Self::Time => "a time",
            Self::Rate => "a rate",
            Self::Angle => "an angle",
            Self::Radius => "a radius",
            Self::Number | Self::NumberPerEnergy(_) => "a number",
        }
    }

    /// What a unit of these powers measures, for the message about a wrong unit.
    #[must_use]
    pub fn of(unit: &Unit) -> Option<Self> {
        [
            Self::Momentum,
            Self::Energy,
            Self::CrossSection,
            Self::CrossSectionSquared,
            Self::EnergySquared,
            Self::Luminosity,
            Self::LuminosityRate,
            Self::Time,
            Self::Rate,
            Self::Angle,
            Self::Number,
            Self::Radius,
        ]
        .into_iter()
        .find(|d| match d {
            // Energy without a c is an energy first.
            Self::Momentum => unit.dims == dims(1, 0, 0, 0, -1),
            _ => d.conversion(unit.dims).is_some(),
        })
    }

    /// How base units of these powers become the core's, if they measure this.
    #[must_use]
    pub fn conversion(self, unit: Dims) -> Option<Conversion> {
        let scale = |pow10, numerator, factor| {
            Some(Conversion {
                pow10,
                numerator,
                denominator: 1,
                factor,
            })
        };
        let same = |powers: Dims| unit == powers;
        let slope = |i: u8, length: i32| {
            same(dims(0, length, 0, 0, 0)) || same(dims(-i32::from(i), length, 0, 0, 0))
        };
        match self {
            Self::Energy if same(dims(1, 0, 0, 0, 0)) || same(dims(1, 0, 0, 0, -2)) => {
                scale(0, 1, 1.0)
            }
            Self::Momentum if same(dims(1, 0, 0, 0, 0)) || same(dims(1, 0, 0, 0, -1)) => {
                scale(0, 1, 1.0)
            }
            Self::CrossSection if same(dims(0, 2, 0, 0, 0)) => scale(33, 1, 1.0),
            Self::CrossSectionPerEnergy(i) if slope(i, 2) => scale(33, 1, 1.0),
            Self::CrossSectionSquared if same(dims(0, 4, 0, 0, 0)) => scale(66, 1, 1.0),
            Self::EnergySquared if same(dims(2, 0, 0, 0, 0)) => scale(0, 1, 1.0),
            Self::Luminosity if same(dims(0, -2, 0, 0, 0)) => scale(-33, 1, 1.0),
            Self::LuminosityRate if same(dims(0, -2, -1, 0, 0)) => scale(-33, 3600, 1.0),
            Self::Time if same(dims(0, 0, 1, 0, 0)) => Some(Conversion {
                pow10: 0,
                numerator: 1,
                denominator: 3600,
                factor: 1.0,
            }),
            Self::Rate if same(dims(0, 0, -1, 0, 0)) => scale(0, 3600, 1.0),
            Self::Angle if same(dims(0, 0, 0, 1, 0)) => scale(0, 1, 1.0),
            Self::Radius if same(dims(-1, 0, 0, 0, 0)) => scale(0, 1, 1.0),
            Self::Radius if same(dims(0, 1, 0, 0, 0)) => scale(13, 1, FM_PER_GEV),
            Self::Number if same(dims(0, 0, 0, 0, 0)) => scale(0, 1, 1.0),
            Self::NumberPerEnergy(i) if slope(i, 0) => scale(0, 1, 1.0),
            _ => None,
        }
    }

    /// A decimal number in `unit` as a number in the core's unit. Exactly rounded where the two
    /// differ by powers of ten and whole factors; one more rounding for divisors and other factors.
    /// `None` if the unit measures something else or the number does not fit.
    #[must_use]
    pub fn to_core(self, number: &Decimal, unit: &Unit) -> Option<f64> {
        let conversion = self.conversion(unit.dims)?;
        let (numerator, denominator) = whole_factor(unit, &conversion)?;
        let value = number
            .clone()
            .shifted(unit.pow10.saturating_add(conversion.pow10))
            .times(numerator)
            .to_f64()?;
        let mut value = value / f64::from(denominator);
        if unit.factor != 1.0 || conversion.factor != 1.0 {
            value *= unit.factor * conversion.factor;
        }
        value.is_finite().then_some(value)
    }

    /// A number of the core in `unit`, as the decimal that reads back to the same bits;
    /// `None` where only the core's own unit can promise that, or the unit does not fit.
    #[must_use]
    pub fn to_decimal(self, value: f64, unit: &Unit) -> Option<Decimal> {
        let conversion = self.conversion(unit.dims)?;
        let exact = whole_factor(unit, &conversion)? == (1, 1)
            && unit.factor == 1.0
            && conversion.factor == 1.0;
        let shift = unit.pow10.saturating_add(conversion.pow10);
        exact
            .then(|| Decimal::shortest(value))
            .flatten()
            .map(|d| d.shifted(-shift))
    }

    /// A number of the core in `unit`, for display (last bits may differ); `None` if the unit does not fit.
    #[must_use]
    pub fn in_unit(self, value: f64, unit: &Unit) -> Option<f64> {
        let one = self.to_core(&Decimal::read("1")?.0, unit)?;
        Some(value / one)
    }
}

fn whole_factor(unit: &Unit, conversion: &Conversion) -> Option<(u32, u32)> {
    let up = unit.numerator.checked_mul(conversion.numerator)?;
    let down = unit.denominator.checked_mul(conversion.denominator)?;
    let (mut a, mut b) = (up, down);
    while b > 0 {
        (a, b) = (b, a % b);
    }
    let common = a.max(1);
    Some((
        u32::try_from(up / common).ok()?,
        u32::try_from(down / common).ok()?,
    ))
}
