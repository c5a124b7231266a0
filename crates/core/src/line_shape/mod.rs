//! Line shape: Born, then radiation, then spread.
//!
//! sigma_rad(W') = int_0^xmax F(x, W'^2) sigma(W' sqrt(1-x)) dx with xmax = 1 - W_min^2/W'^2,
//! 0 for W' <= W_min; F takes W' before radiation, everything inside sigma the W that is left.
//! sigma_obs(W) = int G(W'-W) sigma_rad(W') dW' over W' > 0, sigma_W constant inside the integral.

mod direct;
mod radiator;

pub use radiator::{Emission, Radiator};

use crate::amplitude::born::{Born, Energy};
use crate::beam::Beams;
use crate::error::{Answer, Refusal, Warning};
use crate::math;
use crate::numerics::quadrature::Rule;
use crate::scan::{ChainSettings, Spread, Stage};
use direct::{Shape, Source};

/// What acts on a Born cross section before the detector sees it.
#[derive(Debug, Clone)]
pub struct Chain {
    radiator: Option<Radiator>,
    spread: Spread,
    accuracy: f64,
    rule: Rule,
}

/// The total at requested energies.
#[derive(Debug, Clone, PartialEq)]
pub struct CrossSections {
    /// nb, in the order of the request.
    pub values_nb: Vec<f64>,
    /// Relative accuracy reached, a bound on the error of every value.
    pub accuracy: f64,
    /// What the user should know.
    pub warnings: Vec<Warning>,
}

/// A curve with its contributions.
#[derive(Debug, Clone, PartialEq)]
pub struct Curve {
    /// W as requested, GeV.
    pub w_gev: Vec<f64>,
    /// Born cross section, nb.
    pub born_nb: Vec<f64>,
    /// After radiation, nb (the Born values where there is none).
    pub radiated_nb: Vec<f64>,
    /// After radiation and spread, nb.
    pub observed_nb: Vec<f64>,
    /// Each named contribution after radiation and spread, nb; they sum to `observed_nb`.
    pub contributions: Vec<(String, Vec<f64>)>,
    /// Relative accuracy reached, a bound on the error of every value.
    pub accuracy: f64,
    /// What the user should know.
    pub warnings: Vec<Warning>,
}

impl Chain {
    /// A chain for these settings and beams.
    ///
    /// # Errors
    /// Radiation of beams of unequal mass, a W_min, spread or accuracy out of range.
    pub fn new(settings: &ChainSettings, beams: &Beams) -> Answer<Self> {
        let radiator = match settings.w_min_gev {
            None => None,
            Some(w_min_gev) => {
                let (first, second) = (&beams.first, &beams.second);
                if !(w_min_gev.is_finite() && w_min_gev > 0.0) {
                    return Err(Refusal::new(
                        "radiation.w_min",
                        w_min_gev,
                        "an energy above 0",
                        "The least W after radiation has to be above 0.",
                    ));
                }
                if first.mass_gev != second.mass_gev || first.mass_gev <= 0.0 {
                    return Err(Refusal::new(
                        "radiation.w_min",
                        format!("beams {} and {}", first.name, second.name),
                        "two beams of one lepton mass",
                        "Initial-state radiation is computed for a lepton and its antiparticle only.",
                    ));
                }
                Some(Radiator {
                    beam_mass_gev: first.mass_gev,
                    w_min_gev,
                })
            }
        };
        check_spread(&settings.spread)?;
        if !(settings.accuracy >= 1e-9 && settings.accuracy <= 1e-3) {
            return Err(Refusal::new(
                "accuracy",
                settings.accuracy,
                "1e-9 to 1e-3",
                "The relative accuracy of the curve is out of range.",
            ));
        }
        Ok(Self {
            radiator,
            spread: settings.spread.clone(),
            accuracy: settings.accuracy,
            rule: Rule::new(),
        })
    }

    /// sigma_W of the Gaussian spread at a nominal setting, GeV; `None` if there is no
    /// Gaussian spread.
    #[must_use]
    pub fn sigma_w_gev(&self, w_gev: f64) -> Option<f64> {
        match self.spread {
            Spread::Gaussian {
                sigma_gev,
                w0_gev,
                power,
            } => Some(sigma_gev * math::pow(w_gev / w0_gev, power)),
            Spread::None | Spread::Table { .. } => None,
        }
    }

    /// The total at `w_gev` (any order, duplicates allowed), compared at `stage`.
    /// `sigma_w_gev`, one entry per energy, overrides the Gaussian spread where it is `Some`.
    ///
    /// # Errors
    /// An energy or a spread that is not a number above 0.
    pub fn cross_sections(
        &self,
        born: &dyn Born,
        w_gev: &[f64],
        sigma_w_gev: Option<&[Option<f64>]>,
        stage: Stage,
    ) -> Answer<CrossSections> {
        check_energies(w_gev)?;
        let source = Source::new(born, false);
        let mut values_nb = Vec::with_capacity(w_gev.len());
        for (index, &w) in w_gev.iter().enumerate() {
            let own = sigma_w_gev.and_then(|list| list.get(index).copied().flatten());
            values_nb.push(
                self.at_stage(&source, w, own, stage)?
                    .first()
                    .copied()
                    .unwrap_or(0.0),
            );
        }
        Ok(CrossSections {
            values_nb,
            accuracy: self.accuracy,
            warnings: Vec::new(),
        })
    }

    /// Born, radiated and observed cross section and each contribution at `w_gev`.
    ///
    /// # Errors
    /// An energy that is not a number above 0.
    pub fn curve(&self, born: &dyn Born, w_gev: &[f64]) -> Answer<Curve> {
        check_energies(w_gev)?;
        let (total, split) = (Source::new(born, false), Source::new(born, true));
        let mut curve = Curve {
            w_gev: w_gev.to_vec(),
            born_nb: Vec::with_capacity(w_gev.len()),
            radiated_nb: Vec::with_capacity(w_gev.len()),
            observed_nb: Vec::with_capacity(w_gev.len()),
            contributions: born
                .contribution_names()
                .into_iter()
                .map(|name| (name, Vec::with_capacity(w_gev.len())))
                .collect(),
            accuracy: self.accuracy,
            warnings: Vec::new(),
        };
        for &w in w_gev {
            curve.born_nb.push(born.sigma_nb(Energy::at(w)));
            let radiated = direct::before_spread(&self.rule, self.radiator.as_ref(), &total, w);
            curve
                .radiated_nb
                .push(radiated.first().copied().unwrap_or(0.0));
            let parts = self.at_stage(&split, w, None, Stage::Observed)?;
            curve.observed_nb.push(parts.iter().sum());
            for (part, (_, column)) in parts.iter().zip(&mut curve.contributions) {
                column.push(*part);
            }
        }
        Ok(curve)
    }

    fn at_stage(
        &self,
        source: &Source<'_>,
        w_gev: f64,
        own_sigma_gev: Option<f64>,
        stage: Stage,
    ) -> Answer<Vec<f64>> {
        let radiator = match stage {
            Stage::Observed => self.radiator.as_ref(),
            Stage::RadiationRemoved => None,
            Stage::Born => return Ok(direct::before_spread(&self.rule, None, source, w_gev)),
        };
        if let Some(sigma) = own_sigma_gev
            && !(sigma.is_finite() && sigma > 0.0)
        {
            return Err(bad_sigma("points.sigma_w", sigma));
        }
        let shape = match (&self.spread, own_sigma_gev.or(self.sigma_w_gev(w_gev))) {
            (_, Some(sigma_gev)) => Shape::Gaussian { sigma_gev },
            (Spread::Table { rows }, None) => Shape::Table {
                rows,
                area: trapezium_area(rows),
            },
            _ => return Ok(direct::before_spread(&self.rule, radiator, source, w_gev)),
        };
        Ok(direct::after_spread(
            &self.rule, radiator, source, w_gev, &shape,
        ))
    }
}

fn trapezium_area(rows: &[(f64, f64)]) -> f64 {
    rows.windows(2)
        .map(|pair| match pair {
            [(x0, y0), (x1, y1)] => 0.5 * (x1 - x0) * (y0 + y1),
            _ => 0.0,
        })
        .sum()
}

fn bad_sigma(field: &str, sigma: f64) -> Refusal {
    Refusal::new(
        field,
        sigma,
        "a spread above 0",
        "The spread of W has to be a number above 0.",
    )
}

fn check_spread(spread: &Spread) -> Answer<()> {
    match spread {
        Spread::None => Ok(()),
        Spread::Gaussian {
            sigma_gev,
            w0_gev,
            power,
        } => {
            let fine = sigma_gev.is_finite() && *sigma_gev > 0.0;
            if !fine {
                return Err(bad_sigma("beam.spread.value", *sigma_gev));
            }
            if !(w0_gev.is_finite() && *w0_gev > 0.0 && power.is_finite()) {
                return Err(Refusal::new(
                    "beam.spread",
                    format!("W0 = {w0_gev} GeV, power {power}"),
                    "a W0 above 0 and a finite power",
                    "The growth of the spread with W is not defined.",
                ));
            }
            Ok(())
        }
        Spread::Table { rows } => {
            let rising = rows.windows(2).all(|p| matches!(p, [a, b] if a.0 < b.0));
            let fine = rows
                .iter()
                .all(|(x, y)| x.is_finite() && y.is_finite() && *y >= 0.0);
            if rows.len() < 2 || !rising || !fine || trapezium_area(rows) <= 0.0 {
                return Err(Refusal::new(
                    "beam.spread.rows",
                    format!("{} rows", rows.len()),
                    "two or more rows, offsets strictly rising, weights 0 or more, not all 0",
                    "The tabulated spread is not a density.",
                ));
            }
            Ok(())
        }
    }
}

fn check_energies(w_gev: &[f64]) -> Answer<()> {
    match w_gev.iter().find(|w| !(w.is_finite() && **w > 0.0)) {
        None => Ok(()),
        Some(w) => Err(Refusal::new(
            "points.w",
            w,
            "an energy above 0",
            "The cross section is defined for W above 0 only.",
        )),
    }
}
