//! Backgrounds inside and outside the modulus, prepared.

use super::born::Energy;
use super::hypothesis::{CoherentBackground, IncoherentBackground};
use crate::error::{Answer, Refusal};
use crate::math;
use crate::propagator::positive;
use num_complex::Complex64;

/// Coherent background as an amplitude in T.
#[derive(Debug, Clone, PartialEq)]
pub(crate) enum Coherent {
    None,
    /// e^{i phase} and real coefficients in W - W0.
    Polynomial {
        phase: Complex64,
        w0_gev: f64,
        coefficients: Vec<f64>,
    },
    /// C/M_1^2, to be multiplied with v_1(s).
    Shared {
        c_per_m2: f64,
    },
    /// A = amplitude k/W with `amplitude` = e^{i phase} sqrt(c W0^2/(flux at k = 1)).
    OnePhoton {
        amplitude: Complex64,
    },
}

impl Coherent {
    /// `flux_nb_gev2` is (2J+1)/(n_a n_b) 4 pi (hbar c)^2; `first_mass_gev` M of the first resonance.
    pub(crate) fn new(
        background: Option<&CoherentBackground>,
        flux_nb_gev2: f64,
        continuum_factor: f64,
        first_mass_gev: Option<f64>,
        path: &str,
    ) -> Answer<Self> {
        let path = format!("{path}.coherent");
        Ok(match background {
            None => Self::None,
            Some(CoherentBackground::Polynomial {
                w0_gev,
                coefficients,
                phase_rad,
            }) => {
                positive(
                    *w0_gev,
                    &path,
                    "w0",
                    "the energy that the polynomial is counted from has to be above 0",
                )?;
                finite(*phase_rad, &path, "phase")?;
                all_finite(coefficients, &path)?;
                Self::Polynomial {
                    phase: math::polar(1.0, *phase_rad),
                    w0_gev: *w0_gev,
                    coefficients: coefficients.clone(),
                }
            }
            Some(CoherentBackground::SharedVertices { c }) => {
                finite(*c, &path, "c")?;
                let Some(mass) = first_mass_gev else {
                    return Err(Refusal::new(
                        path,
                        c,
                        "a resonance to share vertices with",
                        "this background shares the first resonance's vertices, and there is no resonance",
                    ));
                };
                Self::Shared {
                    c_per_m2: c / (mass * mass),
                }
            }
            Some(CoherentBackground::OnePhoton {
                c_nb,
                w0_gev,
                phase_rad,
            }) => {
                positive(
                    *w0_gev,
                    &path,
                    "w0",
                    "the energy at which the continuum is given has to be above 0",
                )?;
                finite(*phase_rad, &path, "phase")?;
                let c = c_nb * continuum_factor;
                if !(c.is_finite() && *c_nb >= 0.0 && continuum_factor >= 0.0) {
                    return Err(Refusal::new(
                        format!("{path}.c"),
                        c_nb,
                        "0 or more",
                        "the continuum's cross section and the factor on it are numbers, 0 or more",
                    ));
                }
                Self::OnePhoton {
                    amplitude: math::polar((c / flux_nb_gev2).sqrt() * w0_gev, *phase_rad),
                }
            }
        })
    }

    /// Amplitude; `k_gev` is the beams' momentum, `first_vertex_gev2` v_1(s).
    #[inline]
    pub(crate) fn amplitude(&self, at: Energy, k_gev: f64, first_vertex_gev2: f64) -> Complex64 {
        match self {
            Self::None => Complex64::new(0.0, 0.0),
            Self::Polynomial {
                phase,
                w0_gev,
                coefficients,
            } => phase * horner(coefficients, at.above_gev(*w0_gev)),
            Self::Shared { c_per_m2 } => Complex64::new(c_per_m2 * first_vertex_gev2, 0.0),
            Self::OnePhoton { amplitude } => amplitude * (k_gev / at.w_gev()),
        }
    }
}

/// Incoherent background, nb.
#[derive(Debug, Clone, PartialEq)]
pub(crate) enum Incoherent {
    None,
    Power {
        c0_nb: f64,
        w0_gev: f64,
        n: f64,
    },
    Polynomial {
        w0_gev: f64,
        coefficients_nb: Vec<f64>,
    },
}

impl Incoherent {
    pub(crate) fn new(background: Option<&IncoherentBackground>, path: &str) -> Answer<Self> {
        let path = format!("{path}.incoherent");
        Ok(match background {
            None => Self::None,
            Some(IncoherentBackground::Power { c0_nb, w0_gev, n }) => {
                positive(
                    *w0_gev,
                    &path,
                    "w0",
                    "the energy at which the background is given has to be above 0",
                )?;
                finite(*n, &path, "n")?;
                if !(c0_nb.is_finite() && *c0_nb >= 0.0) {
                    return Err(Refusal::new(
                        format!("{path}.c0"),
                        c0_nb,
                        "0 or more",
                        "a background cross section is a number, 0 or more",
                    ));
                }
                Self::Power {
                    c0_nb: *c0_nb,
                    w0_gev: *w0_gev,
                    n: *n,
                }
            }
            Some(IncoherentBackground::Polynomial {
                w0_gev,
                coefficients_nb,
            }) => {
                positive(
                    *w0_gev,
                    &path,
                    "w0",
                    "the energy that the polynomial is counted from has to be above 0",
                )?;
                all_finite(coefficients_nb, &path)?;
                Self::Polynomial {
                    w0_gev: *w0_gev,
                    coefficients_nb: coefficients_nb.clone(),
                }
            }
        })
    }

    #[inline]
    pub(crate) fn sigma_nb(&self, at: Energy) -> f64 {
        match self {
            Self::None => 0.0,
            Self::Power { c0_nb, w0_gev, n } => {
                let x = w0_gev / at.w_gev();
                if *n == 2.0 {
                    c0_nb * x * x
                } else if *n == 0.0 {
                    *c0_nb
                } else {
                    c0_nb * math::pow(x, *n)
                }
            }
            Self::Polynomial {
                w0_gev,
                coefficients_nb,
            } => horner(coefficients_nb, at.above_gev(*w0_gev)),
        }
    }
}

#[inline]
fn horner(coefficients: &[f64], x: f64) -> f64 {
    coefficients.iter().rev().fold(0.0, |sum, c| sum * x + c)
}

fn all_finite(values: &[f64], path: &str) -> Answer<()> {
    for (i, value) in values.iter().enumerate() {
        finite(*value, path, &format!("coefficients[{i}]"))?;
    }
    Ok(())
}

pub(crate) fn finite(value: f64, path: &str, field: &str) -> Answer<()> {
    if value.is_finite() {
        return Ok(());
    }
    Err(Refusal::new(
        format!("{path}.{field}"),
        value,
        "a number",
        "this has to be a number",
    ))
}
