//! Propagators Delta(s), each prepared once for its parameters and then evaluated cheaply.
//! "M Gamma(s)" always means -Im of the denominator s - M^2 + i M Gamma(s).
//!
//! On the real axis a form is what its table of definitions says, thresholds included; off it
//! [`Propagator::on_sheet`] continues it, one sign per threshold. Poles are found in [`poles`].

pub mod conventions;
pub mod dressed;
pub mod flatte;
pub mod gounaris_sakurai;
#[allow(
    clippy::indexing_slicing,
    reason = "numeric kernels: vectors and matrices whose shape is fixed where they are made; fuzzed (crates/fuzz)"
)]
pub mod kmatrix;
pub mod loops;
pub mod poles;
pub mod running;

use crate::amplitude::born::{Energy, Feature};
use crate::amplitude::hypothesis::Form;
use crate::error::{Answer, Refusal, Warning};
use dressed::SelfEnergy;
use flatte::PreparedChannel;
use gounaris_sakurai::GounarisSakurai;
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
    Free,
    Constant,
    Massless,
    Running(RunningWidth),
    Flatte([PreparedChannel; 2]),
    GounarisSakurai(GounarisSakurai),
    Dressed(SelfEnergy),
}

/// A threshold at which the sheets of a propagator meet.
#[derive(Debug, Clone, PartialEq)]
pub struct Branch {
    /// Channel as declared.
    pub name: String,
    /// Threshold in W, GeV.
    pub threshold_gev: f64,
}

impl Propagator {
    /// Prepares a form with mass M and width Gamma = Gamma(M), both in GeV. Forms whose width
    /// follows from couplings (Flatte, dressed, free) take the width 0.
    ///
    /// # Errors
    /// A mass or width that is not above 0, a width where couplings make it, and what the form
    /// refuses; fields begin with `path`.
    pub fn new(form: &Form, mass_gev: f64, width_gev: f64, path: &str) -> Answer<Self> {
        positive(
            mass_gev,
            path,
            "mass",
            "a resonance's mass has to be above 0",
        )?;
        let coupled = matches!(
            form,
            Form::Flatte { .. } | Form::Dressed { .. } | Form::Free
        );
        if !coupled {
            positive(
                width_gev,
                path,
                "width",
                "a resonance's width has to be above 0",
            )?;
        } else if width_gev != 0.0 {
            return Err(Refusal::new(
                format!("{path}.width"),
                width_gev,
                "0 in this form",
                "the width of this form follows from its couplings and is not given beside them",
            ));
        }
        let (kind, width_gev) = match form {
            Form::Free => (Kind::Free, 0.0),
            Form::ConstantWidth => (Kind::Constant, width_gev),
            Form::MasslessChannels => (Kind::Massless, width_gev),
            Form::RunningWidth { channels } => (
                Kind::Running(RunningWidth::new(channels, mass_gev, path)?),
                width_gev,
            ),
            Form::Flatte {
                channels: [one, two],
            } => {
                let channels = [
                    PreparedChannel::new(one, &format!("{path}.channels[0]"))?,
                    PreparedChannel::new(two, &format!("{path}.channels[1]"))?,
                ];
                let m_gamma: f64 = channels
                    .iter()
                    .map(|channel| {
                        channel
                            .term(mass_gev, mass_gev - channel.threshold_gev())
                            .re
                    })
                    .sum();
                (Kind::Flatte(channels), m_gamma / mass_gev)
            }
            Form::GounarisSakurai { m_gev } => (
                Kind::GounarisSakurai(GounarisSakurai::new(mass_gev, width_gev, *m_gev, path)?),
                width_gev,
            ),
            Form::Dressed {
                pseudoscalar,
                loops,
            } => {
                let energy = SelfEnergy::new(loops, *pseudoscalar, mass_gev, path)?;
                let width = energy.width_gev();
                (Kind::Dressed(energy), width)
            }
        };
        Ok(Self {
            mass_gev,
            width_gev,
            kind,
        })
    }

    /// M, GeV.
    #[must_use]
    pub fn mass_gev(&self) -> f64 {
        self.mass_gev
    }

    /// Gamma = -Im(1/Delta)(M^2)/(-M): the width at M, tree width of coupled forms, GeV.
    #[must_use]
    pub fn width_gev(&self) -> f64 {
        self.width_gev
    }

    /// True if nothing is open at M: the mediator is stable and its pole lies on the real axis.
    #[must_use]
    pub fn is_stable(&self) -> bool {
        self.width_gev == 0.0
    }

    /// 1/Delta(s) on the real axis, GeV^2. W - M keeps the digits of `at`.
    #[inline]
    #[must_use]
    pub fn inverse_gev2(&self, at: Energy) -> Complex64 {
        let w = at.w_gev();
        let real = at.above_gev(self.mass_gev) * (w + self.mass_gev);
        let imaginary = match &self.kind {
            Kind::Free => 0.0,
            Kind::Constant => self.mass_gev * self.width_gev,
            Kind::Massless => w * w * self.width_gev / self.mass_gev,
            Kind::Running(running) => self.mass_gev * self.width_gev * running.ratio(at),
            Kind::Flatte(channels) => {
                let mut sum = Complex64::new(real, 0.0);
                for channel in channels {
                    let term = channel.term(w, at.above_gev(channel.threshold_gev()));
                    sum += Complex64::new(-term.im, term.re);
                }
                return sum;
            }
            Kind::GounarisSakurai(form) => {
                return form.inverse(Complex64::new(w * w, 0.0), w <= form.threshold_gev());
            }
            Kind::Dressed(energy) => {
                return -energy.on_sheet(Complex64::new(w * w, 0.0), &[]) + real;
            }
        };
        Complex64::new(real, imaginary)
    }

    /// 1/Delta at space-like t (GeV^2): real, never a constant width there. Dressed mediators
    /// bring their self-energy, all others are free.
    #[must_use]
    pub fn inverse_space_like_gev2(&self, t_gev2: f64) -> f64 {
        let free = t_gev2 - self.mass_gev * self.mass_gev;
        match &self.kind {
            Kind::Dressed(energy) => free - energy.on_sheet(Complex64::new(t_gev2, 0.0), &[]).re,
            _ => free,
        }
    }

    /// Delta(s) on the real axis, GeV^-2.
    ///
    /// # Errors
    /// On shell without a width: there is no such number, and the refusal says what makes it finite.
    pub fn delta_per_gev2(&self, at: Energy) -> Answer<Complex64> {
        let inverse = self.inverse_gev2(at);
        if inverse.re == 0.0 && inverse.im == 0.0 {
            return Err(Refusal::new(
                "",
                format!("W = {} GeV", at.w_gev()),
                "W away from M, or a form with a width",
                "the free propagator 1/(s - M^2) has no value on shell, s = M^2: a mediator that can decay is dressed by its own decay channels, and their width M Gamma in the denominator makes it finite; a stable one is an external particle there",
            ));
        }
        Ok(inverse.inv())
    }

    /// The channels whose thresholds separate sheets, in the order of the signs.
    #[must_use]
    pub fn branches(&self) -> Vec<Branch> {
        let branch = |name: &str, threshold_gev| Branch {
            name: name.into(),
            threshold_gev,
        };
        match &self.kind {
            Kind::Free | Kind::Constant | Kind::Massless => Vec::new(),
            Kind::Running(running) => running.branches(),
            Kind::Flatte(channels) => channels
                .iter()
                .map(|channel| branch(channel.name(), channel.threshold_gev()))
                .collect(),
            Kind::GounarisSakurai(form) => vec![branch("daughters", form.threshold_gev())],
            Kind::Dressed(energy) => energy
                .loops()
                .iter()
                .map(|of| branch(of.name(), of.threshold_gev()))
                .collect(),
        }
    }

    /// 1/Delta at complex s on the sheet with the given signs of Im q, one per branch (true:
    /// +, the first sheet). `None` for a tabulated width, which cannot be continued.
    #[must_use]
    pub fn on_sheet(&self, s: Complex64, first: &[bool]) -> Option<Complex64> {
        let (m, g) = (self.mass_gev, self.width_gev);
        let free = s - m * m;
        let i = Complex64::new(0.0, 1.0);
        let sign = |n: usize| first.get(n).copied().unwrap_or(true);
        Some(match &self.kind {
            Kind::Free => free,
            Kind::Constant => free + i * (m * g),
            Kind::Massless => free + i * s * (g / m),
            Kind::Running(running) => free + i * (m * g) * running.on_sheet(s, first)?,
            Kind::Flatte([one, two]) => {
                free + i * (one.term_on_sheet(s, sign(0)) + two.term_on_sheet(s, sign(1)))
            }
            Kind::GounarisSakurai(form) => form.inverse(s, sign(0)),
            Kind::Dressed(energy) => free - energy.on_sheet(s, first),
        })
    }

    /// Where quadrature has to look.
    #[must_use]
    pub fn features(&self) -> Vec<Feature> {
        let mut features = Vec::new();
        if self.width_gev > 0.0 {
            features.push(Feature::Peak {
                w_gev: self.mass_gev,
                width_gev: self.width_gev,
            });
        }
        if let Kind::Running(running) = &self.kind {
            features.extend(
                running
                    .kinks_gev()
                    .into_iter()
                    .map(|w_gev| Feature::Kink { w_gev }),
            );
        } else {
            features.extend(self.branches().into_iter().map(|branch| Feature::Kink {
                w_gev: branch.threshold_gev,
            }));
        }
        features
    }

    /// Last energy at which the form is known, GeV.
    #[must_use]
    pub fn upper_limit_gev(&self) -> f64 {
        match &self.kind {
            Kind::Running(running) => running.upper_limit_gev(),
            _ => f64::INFINITY,
        }
    }

    /// What the user should know: a stable mediator, a space-like ghost within reach.
    #[must_use]
    pub fn warnings(&self) -> Vec<Warning> {
        let mut warnings = Vec::new();
        if self.is_stable() {
            warnings.push(Warning::new(
                "stable-mediator",
                format!(
                    "the mediator of {} GeV lies below all its thresholds: it is stable, its pole is on the real axis",
                    self.mass_gev
                ),
            ));
        }
        if let Kind::Dressed(energy) = &self.kind {
            let reach = 1e4 * self.mass_gev * self.mass_gev;
            if let Some(t) = energy.ghost_gev2(reach) {
                warnings.push(Warning::new(
                    "space-like-ghost",
                    format!(
                        "the coupling is so strong that the propagator has a space-like pole at t = {t:.4} GeV^2: one-loop dressing means nothing near and beyond that scale"
                    ),
                ));
            }
        }
        warnings
    }

    /// M Gamma_c(s) of one of the form's own channels on the real axis, GeV^2.
    pub(crate) fn own_channel_gev2(&self, index: usize, at: Energy) -> f64 {
        match &self.kind {
            Kind::Flatte(channels) => channels.get(index).map_or(0.0, |channel| {
                channel
                    .term(at.w_gev(), at.above_gev(channel.threshold_gev()))
                    .re
            }),
            Kind::Dressed(energy) => energy.loops().get(index).map_or(0.0, |of| {
                if at.above_gev(of.threshold_gev()) <= 0.0 {
                    0.0
                } else {
                    of.m_gamma_gev2(at.w_gev() * at.w_gev())
                }
            }),
            _ => 0.0,
        }
    }

    /// How many own channels [`Propagator::own_channel_gev2`] knows.
    pub(crate) fn own_channels(&self) -> usize {
        match &self.kind {
            Kind::Flatte(channels) => channels.len(),
            Kind::Dressed(energy) => energy.loops().len(),
            _ => 0,
        }
    }

    /// Form factor of the Gounaris-Sakurai form at s, F(0) = 1.
    #[must_use]
    pub fn form_factor(&self, s_gev2: f64) -> Option<Complex64> {
        match &self.kind {
            Kind::GounarisSakurai(form) => Some(form.form_factor(s_gev2)),
            _ => None,
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
