//! Resonances of one partial wave with their backgrounds, as a Born cross section:
//! sigma_f = (2J+1)/(n_a n_b) (4 pi/k^2) |T_f|^2 (PDG, "Resonances").

use super::background::{Coherent, Incoherent, finite};
use super::born::{Born, Energy, Feature};
use super::hypothesis::{PartialWave, Resonance, Strength};
use super::vertex::PreparedVertex;
use crate::beam::Beams;
use crate::error::{Answer, Refusal, Warning};
use crate::kinematics::momentum_squared_gev2;
use crate::math;
use crate::propagator::Propagator;
use crate::units::HBARC2_GEV2_NB;
use num_complex::Complex64;

/// Most resonances in one coherent sum: their amplitudes live on the stack.
pub const MOST_RESONANCES: usize = 12;

/// One resonance, ready: T_r = -factor sqrt(entrance exit) Delta.
#[derive(Debug, Clone, PartialEq)]
struct Term {
    propagator: Propagator,
    /// M sqrt(Gamma_in Gamma_f), GeV^2.
    strength_gev2: f64,
    /// -e^{i phi}.
    minus_phase: Complex64,
    /// `None`: both vertices constant.
    vertices: Option<(PreparedVertex, PreparedVertex)>,
}

impl Term {
    #[inline]
    fn vertex_gev2(&self, at: Energy) -> f64 {
        match &self.vertices {
            None => self.strength_gev2,
            Some((entrance, exit)) => {
                self.strength_gev2
                    * (entrance.ratio(at, &self.propagator) * exit.ratio(at, &self.propagator))
                        .sqrt()
            }
        }
    }

    #[inline]
    fn amplitude(&self, at: Energy, vertex_gev2: f64) -> Complex64 {
        let inverse = self.propagator.inverse_gev2(at);
        let scale = vertex_gev2 / inverse.norm_sqr();
        self.minus_phase * inverse.conj() * scale
    }
}

/// A prepared coherent sum. Every quantity that does not depend on W is worked out once;
/// an evaluation allocates nothing.
#[derive(Debug, Clone, PartialEq)]
pub struct PreparedPartialWave {
    names: Vec<String>,
    m1_gev: f64,
    m2_gev: f64,
    threshold_gev: f64,
    /// (2J+1)/(n_a n_b) 4 pi (hbar c)^2, nb GeV^2.
    flux_nb_gev2: f64,
    terms: Vec<Term>,
    coherent: Coherent,
    incoherent: Incoherent,
}

impl PreparedPartialWave {
    /// Checks the hypothesis and works out what does not depend on W.
    ///
    /// # Errors
    /// The first thing that is wrong, named by its path in the sheet.
    pub fn new(wave: &PartialWave, beams: &Beams) -> Answer<Self> {
        Self::numbered(wave, beams, 0, "model.j")
    }

    /// The same as one wave of several, whose resonances are numbered through: the first of this
    /// one is `first`, and its spin stands at `j_path`.
    ///
    /// # Errors
    /// As [`PreparedPartialWave::new`].
    pub(crate) fn numbered(
        wave: &PartialWave,
        beams: &Beams,
        first: usize,
        j_path: &str,
    ) -> Answer<Self> {
        use super::born::Checked;
        beams.check("beam")?;
        let path = "model";
        check_spin(wave.twice_j, beams, j_path)?;
        if wave.resonances.len() > MOST_RESONANCES {
            return Err(Refusal::new(
                format!("{path}.resonances"),
                wave.resonances.len(),
                format!("at most {MOST_RESONANCES}"),
                "there are more resonances than one coherent sum takes",
            ));
        }
        let final_threshold = wave.final_threshold_gev;
        if !(final_threshold.is_finite() && final_threshold >= 0.0) {
            return Err(Refusal::new(
                format!("{path}.final_threshold"),
                final_threshold,
                "0 or more",
                "the sum of the final state's masses is a number, 0 or more",
            ));
        }
        let flux_nb_gev2 = flux_nb_gev2(wave.twice_j, beams);
        let terms = wave
            .resonances
            .iter()
            .enumerate()
            .map(|(i, resonance)| term(resonance, i, &format!("{path}.resonances[{}]", first + i)))
            .collect::<Answer<Vec<_>>>()?;
        let coherent = Coherent::new(
            wave.coherent.as_ref(),
            flux_nb_gev2,
            wave.continuum_factor,
            wave.resonances.first().map(|resonance| resonance.mass_gev),
            path,
        )?;
        let incoherent = Incoherent::new(wave.incoherent.as_ref(), path)?;
        let (m1_gev, m2_gev) = (beams.first.mass_gev, beams.second.mass_gev);
        Ok(Self {
            names: names(wave),
            m1_gev,
            m2_gev,
            threshold_gev: (m1_gev + m2_gev).max(final_threshold),
            flux_nb_gev2,
            terms,
            coherent,
            incoherent,
        })
    }

    /// Amplitudes of every term (resonances, then the coherent background if there is one)
    /// into `out`; returns how many.
    #[inline]
    fn amplitudes(
        &self,
        at: Energy,
        k_gev: f64,
        out: &mut [Complex64; MOST_RESONANCES + 1],
    ) -> usize {
        let mut first_vertex = 0.0;
        let mut n = 0;
        for (term, slot) in self.terms.iter().zip(out.iter_mut()) {
            let vertex = term.vertex_gev2(at);
            if n == 0 {
                first_vertex = vertex;
            }
            *slot = term.amplitude(at, vertex);
            n += 1;
        }
        if self.coherent != Coherent::None
            && let Some(slot) = out.get_mut(n)
        {
            *slot = self.coherent.amplitude(at, k_gev, first_vertex);
            n += 1;
        }
        n
    }

    /// k^2 at an energy above threshold, GeV^2.
    #[inline]
    fn k2(&self, at: Energy) -> f64 {
        let above = at.above_gev(self.m1_gev + self.m2_gev);
        momentum_squared_gev2(at.w_gev(), above, self.m1_gev, self.m2_gev)
    }

    /// Largest |T|^2 against its bound between two energies (GeV): 1 for elastic scattering or
    /// the total, 1/4 for one inelastic final state. Above 1 the sum of resonances breaks
    /// unitarity there, as a sum of Breit-Wigners can; returns (W, ratio) of the worst point.
    #[must_use]
    pub fn unitarity(&self, from_gev: f64, to_gev: f64, points: u32, elastic: bool) -> (f64, f64) {
        let bound = if elastic { 1.0 } else { 0.25 };
        let points = points.max(2);
        let mut worst = (from_gev, 0.0);
        let mut include = |w: f64| {
            let ratio = self.amplitude(Energy::at(w)).norm_sqr() / bound;
            if ratio > worst.1 {
                worst = (w, ratio);
            }
        };
        for i in 0..points {
            include(from_gev + (to_gev - from_gev) * f64::from(i) / f64::from(points - 1));
        }
        for term in &self.terms {
            let (mass, width) = (term.propagator.mass_gev(), term.propagator.width_gev());
            for step in -8..=8 {
                let w = mass + 0.25 * f64::from(step) * width;
                if w >= from_gev && w <= to_gev {
                    include(w);
                }
            }
        }
        worst
    }

    /// T_f of the whole coherent sum (the point of the Argand diagram); 0 below threshold.
    #[must_use]
    pub fn amplitude(&self, at: Energy) -> Complex64 {
        if at.above_gev(self.threshold_gev) <= 0.0 {
            return Complex64::new(0.0, 0.0);
        }
        let k = if matches!(self.coherent, Coherent::OnePhoton { .. }) {
            self.k2(at).sqrt()
        } else {
            0.0
        };
        let mut total = Complex64::new(0.0, 0.0);
        let mut first_vertex = 0.0;
        for (i, term) in self.terms.iter().enumerate() {
            let vertex = term.vertex_gev2(at);
            if i == 0 {
                first_vertex = vertex;
            }
            total += term.amplitude(at, vertex);
        }
        total + self.coherent.amplitude(at, k, first_vertex)
    }
}

impl Born for PreparedPartialWave {
    fn threshold_gev(&self) -> f64 {
        self.threshold_gev
    }

    fn upper_limit_gev(&self) -> f64 {
        self.terms
            .iter()
            .map(|term| term.propagator.upper_limit_gev())
            .fold(f64::INFINITY, f64::min)
    }

    fn features(&self) -> Vec<Feature> {
        let mut features = vec![Feature::Kink {
            w_gev: self.threshold_gev,
        }];
        for term in &self.terms {
            features.extend(term.propagator.features());
            if let Some((entrance, exit)) = &term.vertices {
                for w_gev in [entrance.kink_gev(), exit.kink_gev()].into_iter().flatten() {
                    features.push(Feature::Kink { w_gev });
                }
            }
        }
        features
    }

    fn contribution_names(&self) -> Vec<String> {
        self.names.clone()
    }

    fn contributions_nb(&self, at: Energy, out: &mut [f64]) {
        out.fill(0.0);
        if at.above_gev(self.threshold_gev) <= 0.0 {
            return;
        }
        let k2 = self.k2(at);
        let scale = self.flux_nb_gev2 / k2;
        let mut amplitudes = [Complex64::new(0.0, 0.0); MOST_RESONANCES + 1];
        let n = self.amplitudes(at, k2.sqrt(), &mut amplitudes);
        let amplitudes = amplitudes.get(..n).unwrap_or_default();
        let mut slots = out.iter_mut();
        for a in amplitudes {
            if let Some(slot) = slots.next() {
                *slot = scale * a.norm_sqr();
            }
        }
        for (i, a) in amplitudes.iter().enumerate() {
            for b in amplitudes.iter().skip(i + 1) {
                if let Some(slot) = slots.next() {
                    *slot = 2.0 * scale * (a.re * b.re + a.im * b.im);
                }
            }
        }
        if let Some(slot) = slots.next() {
            *slot = self.incoherent.sigma_nb(at);
        }
    }

    fn warnings(&self) -> Vec<Warning> {
        self.terms
            .iter()
            .flat_map(|term| term.propagator.warnings())
            .collect()
    }

    #[inline]
    fn sigma_nb(&self, at: Energy) -> f64 {
        if at.above_gev(self.threshold_gev) <= 0.0 {
            return 0.0;
        }
        self.flux_nb_gev2 / self.k2(at) * self.amplitude(at).norm_sqr()
            + self.incoherent.sigma_nb(at)
    }
}

/// (2J+1)/(n_a n_b) 4 pi (hbar c)^2, nb GeV^2.
pub(crate) fn flux_nb_gev2(twice_j: u8, beams: &Beams) -> f64 {
    let states = f64::from(beams.first.spin_states) * f64::from(beams.second.spin_states);
    (f64::from(twice_j) + 1.0) / states * 4.0 * core::f64::consts::PI * HBARC2_GEV2_NB
}

/// Names: each term alone, the interference of each pair, the incoherent background.
fn names(wave: &PartialWave) -> Vec<String> {
    let mut alone: Vec<String> = wave
        .resonances
        .iter()
        .map(|resonance| resonance.name.clone())
        .collect();
    if wave.coherent.is_some() {
        alone.push("coherent background".into());
    }
    let mut all = alone.clone();
    for (i, a) in alone.iter().enumerate() {
        for b in alone.iter().skip(i + 1) {
            all.push(format!("interference {a} \u{d7} {b}"));
        }
    }
    if wave.incoherent.is_some() {
        all.push("incoherent background".into());
    }
    all
}

fn term(resonance: &Resonance, index: usize, path: &str) -> Answer<Term> {
    let mass = resonance.mass_gev;
    let propagator = Propagator::new(&resonance.form, mass, resonance.width_gev, path)?;
    finite(resonance.phase_rad, path, "phase")?;
    if index == 0 && resonance.phase_rad != 0.0 {
        return Err(Refusal::new(
            format!("{path}.phase"),
            resonance.phase_rad,
            "0 for the first resonance",
            "phases are counted from the first resonance, whose own phase is 0",
        ));
    }
    let entrance = PreparedVertex::new(
        &resonance.entrance,
        &propagator,
        &format!("{path}.entrance"),
    )?;
    let exit = PreparedVertex::new(&resonance.exit, &propagator, &format!("{path}.exit"))?;
    let own =
        u8::from(resonance.entrance.brings_strength()) + u8::from(resonance.exit.brings_strength());
    let strength_gev2 = strength(&resonance.strength, own, mass, propagator.width_gev(), path)?;
    let constant = entrance == PreparedVertex::Constant && exit == PreparedVertex::Constant;
    Ok(Term {
        propagator,
        strength_gev2,
        minus_phase: -math::polar(1.0, resonance.phase_rad),
        vertices: (!constant).then_some((entrance, exit)),
    })
}

/// What multiplies sqrt(entrance exit): M sqrt(Gamma_in Gamma_f), or with one vertex that
/// brings its own strength sqrt(M Gamma_a), or with two 1.
fn strength(strength: &Strength, own: u8, mass: f64, width: f64, path: &str) -> Answer<f64> {
    let allowed = match own {
        0 => "the product, two fractions or two partial widths",
        1 => "the partial width of the side whose vertex is not the form's own",
        _ => "no strength beside the form's own couplings",
    };
    let fits = match strength {
        Strength::OneWidth { .. } => own == 1,
        Strength::FromForm => own == 2,
        _ => own == 0,
    };
    if !fits {
        return Err(Refusal::new(
            format!("{path}.strength"),
            format!("{strength:?}"),
            allowed,
            "the strength does not go with the vertices: each vertex needs exactly one strength, its own or a given one",
        ));
    }
    let product = widths_product(strength, mass, width, path)?;
    Ok(if own == 0 {
        mass * product.sqrt()
    } else {
        product.sqrt()
    })
}

/// Gamma_in Gamma_f in GeV^2; M Gamma_a for one width; 1 for none.
fn widths_product(strength: &Strength, mass: f64, width: f64, path: &str) -> Answer<f64> {
    let number = |value: f64, field: &str, most: f64| {
        if value.is_finite() && value >= 0.0 && value <= most {
            return Ok(value);
        }
        let allowed = if most.is_finite() {
            "0 to 1"
        } else {
            "0 or more"
        };
        Err(Refusal::new(
            format!("{path}.strength.{field}"),
            value,
            allowed,
            "a strength is a partial width (0 or more) or a branching fraction (0 to 1)",
        ))
    };
    Ok(match *strength {
        Strength::OneWidth { gev } => number(gev, "value", f64::INFINITY)? * mass,
        Strength::FromForm => 1.0,
        Strength::GammaInBf { gev } => number(gev, "value", f64::INFINITY)? * width,
        Strength::BinBf { product } => number(product, "value", 1.0)? * width * width,
        Strength::Branchings { b_in, b_f } => {
            number(b_in, "b_in", 1.0)? * number(b_f, "b_f", 1.0)? * width * width
        }
        Strength::PartialWidths {
            gamma_in_gev,
            gamma_f_gev,
        } => {
            number(gamma_in_gev, "gamma_in", f64::INFINITY)?
                * number(gamma_f_gev, "gamma_f", f64::INFINITY)?
        }
    })
}

/// Two massive beams fix whether J is whole or half. (A massless beam's number of states does
/// not tell its spin.)
pub(crate) fn check_spin(twice_j: u8, beams: &Beams, path: &str) -> Answer<()> {
    if beams.first.mass_gev == 0.0 || beams.second.mass_gev == 0.0 {
        return Ok(());
    }
    let odd = (u32::from(beams.first.spin_states) + u32::from(beams.second.spin_states)) % 2 == 1;
    if odd == (twice_j % 2 == 1) {
        return Ok(());
    }
    let (allowed, have) = if odd {
        ("1/2, 3/2, ...", "half-integer")
    } else {
        ("0, 1, 2, ...", "whole")
    };
    Err(Refusal::new(
        path,
        f64::from(twice_j) / 2.0,
        allowed,
        format!("these two beams together have {have} angular momentum"),
    ))
}
