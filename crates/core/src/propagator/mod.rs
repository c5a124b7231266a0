//! Propagators Delta(s), each prepared once for its parameters and then evaluated cheaply.
//! "M Gamma(s)" always means -Im of the denominator s - M^2 + i M Gamma(s).

pub mod running;

use crate::amplitude::born::{Energy, Feature};
use crate::amplitude::hypothesis::Form;
use crate::error::{Answer, Refusal};
use num_complex::Complex64;
use running::RunningWidth;

/// A prepared propagator.
#[derive(Debug, Clone, PartialEq)]
pub struct Propagator {
    mass_gev: f64,
    width_gev: f64,
    kind: Kind,
}

#[derive(Debug, Clone, PartialEq)]
enum Kind {
    Constant,
    Massless,
    Running(RunningWidth),
}

impl Propagator {
    /// Prepares a form with mass M and width Gamma = Gamma(M), both in GeV.
    ///
    /// # Errors
    /// A mass or width that is not above 0, and what the form refuses; fields begin with `path`.
    pub fn new(form: &Form, mass_gev: f64, width_gev: f64, path: &str) -> Answer<Self> {
        positive(
            mass_gev,
            path,
            "mass",
            "a resonance's mass has to be above 0",
        )?;
        positive(
            width_gev,
            path,
            "width",
            "a resonance's width has to be above 0",
        )?;
        let kind = match form {
            Form::ConstantWidth => Kind::Constant,
            Form::MasslessChannels => Kind::Massless,
            Form::RunningWidth { channels } => {
                Kind::Running(RunningWidth::new(channels, mass_gev, path)?)
            }
        };
        Ok(Self {
            mass_gev,
            width_gev,
            kind,
        })
    }

    /// 1/Delta(s) on the real axis, GeV^2. W - M keeps the digits of `at`.
    #[inline]
    #[must_use]
    pub fn inverse_gev2(&self, at: Energy) -> Complex64 {
        let w = at.w_gev();
        let real = at.above_gev(self.mass_gev) * (w + self.mass_gev);
        let imaginary = match &self.kind {
            Kind::Constant => self.mass_gev * self.width_gev,
            Kind::Massless => w * w * self.width_gev / self.mass_gev,
            Kind::Running(running) => self.mass_gev * self.width_gev * running.ratio(at),
        };
        Complex64::new(real, imaginary)
    }

    /// Where quadrature has to look.
    #[must_use]
    pub fn features(&self) -> Vec<Feature> {
        let mut features = vec![Feature::Peak {
            w_gev: self.mass_gev,
            width_gev: self.width_gev,
        }];
        if let Kind::Running(running) = &self.kind {
            features.extend(
                running
                    .kinks_gev()
                    .into_iter()
                    .map(|w_gev| Feature::Kink { w_gev }),
            );
        }
        features
    }

    /// Last energy at which the form is known, GeV.
    #[must_use]
    pub fn upper_limit_gev(&self) -> f64 {
        match &self.kind {
            Kind::Running(running) => running.upper_limit_gev(),
            Kind::Constant | Kind::Massless => f64::INFINITY,
        }
    }
}

pub(crate) fn positive(value: f64, path: &str, field: &str, message: &str) -> Answer<()> {
    if value.is_finite() && value > 0.0 {
        return Ok(());
    }
    Err(Refusal::new(
        format!("{path}.{field}"),
        value,
        "a number above 0",
        message,
    ))
}
