//! Line shape: Born, then radiation, then spread.
//!
//! sigma_rad(W') = int_0^xmax F(x, W'^2) sigma(W' sqrt(1-x)) dx with xmax = 1 - W_min^2/W'^2,
//! 0 for W' <= W_min; F takes W' before radiation, everything inside sigma the W that is left.
//! sigma_obs(W) = int G(W'-W) sigma_rad(W') dW' over W' > 0, sigma_W constant inside the integral.

mod blurred;
mod engine;
mod radiated;
mod radiator;
mod shape;
mod skeleton;
mod smear;
mod source;
mod targets;

pub use radiator::{Emission, Radiator};

use crate::amplitude::born::{Born, Energy};
use crate::beam::Beams;
use crate::error::{Answer, Refusal, Warning};
use crate::scan::{ChainSettings, Spread, Stage};
use blurred::Law;
use engine::{Engine, Spreading};
use source::BornSource;

/// What acts on a Born cross section before the detector sees it.
///
/// It remembers kernels and rows of recent energies, so that a second model at the same energies
/// costs little; the answers do not depend on what is remembered. One chain serves one thread:
/// clone it for others.
#[derive(Debug, Clone)]
pub struct Chain {
    radiator: Option<Radiator>,
    spread: Spread,
    accuracy: f64,
    engine: Engine,
}

/// The total at requested energies.
#[derive(Debug, Clone, PartialEq)]
pub struct CrossSections {
    /// nb, in the order of the request.
    pub values_nb: Vec<f64>,
    /// Relative accuracy reached: every value is within this part of itself or, for a value below
    /// 1e-9 of what the spread could show at best at that energy (the most that the Born curve in
    /// reach would give with all its area at the density's top), within this part of that floor.
    /// Without a Gaussian spread there is no floor. It covers integration and interpolation, not
    /// the radiator's own truncation.
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
    /// Relative accuracy reached by the radiated column and by the observed total, defined as
    /// in [`CrossSections::accuracy`]; contributions that cancel have no bound of their own.
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
            engine: Engine::default(),
        })
    }

    fn law(&self) -> Option<Law> {
        match self.spread {
            Spread::Gaussian {
                sigma_gev,
                w0_gev,
                power,
            } => Some(Law {
                sigma_gev,
                w0_gev,
                power,
            }),
            Spread::None | Spread::Table { .. } => None,
        }
    }

    /// sigma_W of the Gaussian spread at a nominal setting, GeV; `None` if there is no
    /// Gaussian spread.
    #[must_use]
    pub fn sigma_w_gev(&self, w_gev: f64) -> Option<f64> {
        self.law().map(|law| law.at(w_gev))
    }

    /// The radiation, if any.
    #[must_use]
    pub fn radiator(&self) -> Option<&Radiator> {
        self.radiator.as_ref()
    }

    /// Requested relative accuracy.
    #[must_use]
    pub fn accuracy(&self) -> f64 {
        self.accuracy
    }

    /// The total at `w_gev` (any order, duplicates allowed), compared at `stage`.
    /// `sigma_w_gev`, one entry per energy, overrides the spread where it is `Some`.
    ///
    /// # Errors
    /// An energy or a spread that is not a number above 0; what the model refuses (an energy
    /// beyond its tables, radiation without the cut that it needs).
    pub fn cross_sections(
        &self,
        born: &dyn Born,
        w_gev: &[f64],
        sigma_w_gev: Option<&[Option<f64>]>,
        stage: Stage,
    ) -> Answer<CrossSections> {
        check_energies(w_gev)?;
        let radiated = stage == Stage::Observed && self.radiator.is_some();
        let mut out = CrossSections {
            values_nb: vec![0.0; w_gev.len()],
            accuracy: 0.0,
            warnings: consult(born, w_gev, radiated)?,
        };
        let radiator = match stage {
            Stage::Observed => self.radiator.as_ref(),
            Stage::RadiationRemoved => None,
            Stage::Born => {
                for (slot, w) in out.values_nb.iter_mut().zip(w_gev) {
                    *slot = born.sigma_nb(Energy::at(*w));
                }
                return Ok(out);
            }
        };
        let source = BornSource::new(born, false, radiator.map_or(0.0, |r| r.w_min_gev));
        // Energies of one spread go through the chain together.
        let mut groups: Vec<(Option<f64>, Vec<usize>)> = Vec::new();
        for index in 0..w_gev.len() {
            let own = sigma_w_gev.and_then(|list| list.get(index).copied().flatten());
            if let Some(sigma) = own
                && !(sigma.is_finite() && sigma > 0.0)
            {
                return Err(bad_sigma("points.sigma_w", sigma));
            }
            match groups.iter_mut().find(|group| group.0 == own) {
                Some(group) => group.1.push(index),
                None => groups.push((own, vec![index])),
            }
        }
        for (own, members) in groups {
            let energies: Vec<f64> = members.iter().map(|&i| w_gev[i]).collect();
            let reached = self.engine.run(
                radiator,
                self.spreading(own),
                self.accuracy,
                &source,
                &energies,
            );
            out.accuracy = out.accuracy.max(reached.accuracy);
            for (member, value) in members.into_iter().zip(reached.total()) {
                out.values_nb[member] = value;
            }
        }
        out.warnings.extend(self.shortfall(out.accuracy));
        Ok(out)
    }

    /// Born, radiated and observed cross section and each contribution at `w_gev`.
    ///
    /// # Errors
    /// An energy that is not a number above 0; what the model refuses, as above.
    pub fn curve(&self, born: &dyn Born, w_gev: &[f64]) -> Answer<Curve> {
        check_energies(w_gev)?;
        let mut warnings = consult(born, w_gev, self.radiator.is_some())?;
        let floor = self.radiator.map_or(0.0, |r| r.w_min_gev);
        let (total, split) = (
            BornSource::new(born, false, floor),
            BornSource::new(born, true, floor),
        );
        let born_nb: Vec<f64> = w_gev
            .iter()
            .map(|&w| born.sigma_nb(Energy::at(w)))
            .collect();
        let radiator = self.radiator.as_ref();
        let run = |spreading, source| {
            self.engine
                .run(radiator, spreading, self.accuracy, source, w_gev)
        };
        let observed = run(self.spreading(None), &split);
        let (radiated_nb, radiated_accuracy) = if radiator.is_none() {
            (born_nb.clone(), 0.0)
        } else {
            let radiated = run(Spreading::None, &total);
            (radiated.total(), radiated.accuracy)
        };
        let accuracy = observed.accuracy.max(radiated_accuracy);
        warnings.extend(self.shortfall(accuracy));
        Ok(Curve {
            w_gev: w_gev.to_vec(),
            born_nb,
            radiated_nb,
            observed_nb: observed.total(),
            contributions: born
                .contribution_names()
                .into_iter()
                .zip(observed.channels)
                .collect(),
            accuracy,
            warnings,
        })
    }

    fn spreading(&self, own_sigma_gev: Option<f64>) -> Spreading<'_> {
        match (own_sigma_gev, &self.spread, self.law()) {
            (Some(sigma), ..) => Spreading::Gaussian(Law::constant(sigma)),
            (None, _, Some(law)) => Spreading::Gaussian(law),
            (None, Spread::Table { rows }, None) => Spreading::Rows {
                rows,
                area: trapezium_area(rows),
            },
            _ => Spreading::None,
        }
    }

    fn shortfall(&self, reached: f64) -> Vec<Warning> {
        if reached <= self.accuracy {
            return Vec::new();
        }
        vec![Warning::new(
            "accuracy-not-reached",
            format!(
                "The curve is accurate to {reached:.1e} only; {:.1e} was asked for.",
                self.accuracy
            ),
        )]
    }
}

/// Whether the model may be asked at these energies and with this radiation, and what the
/// user should know of it.
fn consult(born: &dyn Born, w_gev: &[f64], radiated: bool) -> Answer<Vec<Warning>> {
    let limit = born.upper_limit_gev();
    if let Some(beyond) = w_gev.iter().find(|w| **w > limit) {
        return Err(Refusal::new(
            "points.w",
            beyond,
            format!("at most {limit} GeV"),
            "The model's tabulated width ends below this energy; extend the table.",
        ));
    }
    let mut warnings = born.warnings();
    if radiated {
        warnings.extend(born.radiation()?);
    }
    Ok(warnings)
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
