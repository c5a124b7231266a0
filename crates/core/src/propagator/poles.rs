//! Poles of a propagator: 1/Delta(s_R) = 0 on the sheet next to the real axis at M, and on
//! neighbouring sheets where the pole's real part lies beyond another threshold.

use super::{Branch, Propagator};
use crate::math;
use num_complex::Complex64;

/// One pole.
#[derive(Debug, Clone, PartialEq)]
pub struct Pole {
    /// s_R, GeV^2.
    pub s_gev2: Complex64,
    /// M_p of sqrt(s_R) = M_p - i Gamma_p/2, GeV.
    pub mass_gev: f64,
    /// Gamma_p, GeV.
    pub width_gev: f64,
    /// Mb of s_R = Mb^2 - i Mb Gb, GeV; `None` if Re s_R <= 0.
    pub mass_bar_gev: Option<f64>,
    /// Gb, GeV.
    pub width_bar_gev: Option<f64>,
    /// Sign of Im q per branch (true: +).
    pub sheet: Vec<bool>,
    /// Residue of Delta, 1/(d(1/Delta)/ds); `None` where two poles coincide.
    pub residue: Option<Complex64>,
}

/// What a search found.
#[derive(Debug, Clone, PartialEq)]
pub struct PoleSearch {
    /// Poles: those of the sheet next to the real axis at M first, nearest to M first.
    pub poles: Vec<Pole>,
    /// Thresholds that the signs of the sheets belong to.
    pub branches: Vec<Branch>,
    /// The outcome in one plain sentence.
    pub message: String,
}

/// Most poles listed per sheet; remote ones belong to the parametrisation, not to a state.
const MOST_PER_SHEET: usize = 4;

/// Newton steps per start.
const MOST_STEPS: usize = 40;

/// What a pole search needs of a denominator.
pub trait Continued {
    /// The thresholds that separate sheets.
    fn branches(&self) -> Vec<Branch>;
    /// The denominator at complex s on a sheet (true: Im q > 0); `None`: not known off the real axis.
    fn on_sheet(&self, s: Complex64, first: &[bool]) -> Option<Complex64>;
}

impl Continued for Propagator {
    fn branches(&self) -> Vec<Branch> {
        Propagator::branches(self)
    }
    fn on_sheet(&self, s: Complex64, first: &[bool]) -> Option<Complex64> {
        Propagator::on_sheet(self, s, first)
    }
}

impl Propagator {
    /// Searches the poles of this propagator, see [`search`].
    #[must_use]
    pub fn poles(&self) -> PoleSearch {
        search(self, self.mass_gev(), self.width_gev())
    }
}

/// Searches the zeros of a denominator near M (GeV) with a guessed width (0: stable). Found
/// poles are accurate to 1e-12 relative to |s_R| (limited by rounding in the denominator); a
/// search can miss remote poles, never invent one: each is a zero to rounding.
#[must_use]
pub fn search(form: &dyn Continued, mass_gev: f64, width_gev: f64) -> PoleSearch {
    let branches = form.branches();
    let finder = Finder {
        form,
        mass_gev,
        width_gev,
        branches: &branches,
    };
    let at_mass: Vec<bool> = branches
        .iter()
        .map(|branch| branch.threshold_gev >= mass_gev)
        .collect();
    if form
        .on_sheet(Complex64::new(mass_gev * mass_gev, 0.0), &at_mass)
        .is_none()
    {
        return PoleSearch {
            poles: Vec::new(),
            branches,
            message: "A tabulated width is known on the real axis only: it has no continuation, so no pole can be given.".into(),
        };
    }
    let mut poles = finder.poles_on(&at_mass);
    let mut sheets = vec![at_mass];
    // Beyond another threshold the sheet next to the real axis is a different one.
    for pole in poles.clone() {
        let beyond: Vec<bool> = branches
            .iter()
            .map(|branch| branch.threshold_gev >= pole.mass_gev)
            .collect();
        if !sheets.contains(&beyond) {
            poles.extend(finder.poles_on(&beyond));
            sheets.push(beyond);
        }
    }
    let message = finder.message(&poles, sheets.len());
    PoleSearch {
        poles,
        branches,
        message,
    }
}

struct Finder<'a> {
    form: &'a dyn Continued,
    mass_gev: f64,
    width_gev: f64,
    branches: &'a [Branch],
}

impl Finder<'_> {
    fn is_stable(&self) -> bool {
        self.width_gev == 0.0
    }

    fn message(&self, poles: &[Pole], sheets: usize) -> String {
        if self.is_stable() {
            return format!(
                "Stable: no channel is open at {} GeV, and the pole lies on the real axis.",
                self.mass_gev
            );
        }
        match (poles.len(), sheets) {
            (0, _) => format!(
                "No pole was found near {} GeV on the sheet next to the real axis: with these parameters the curve belongs to no nearby state.",
                self.mass_gev
            ),
            (1, 1) => "One pole on the sheet next to the real axis.".into(),
            (n, 1) => format!(
                "{n} poles on the sheet next to the real axis; the first is the nearest, the others usually belong to the parametrisation."
            ),
            (n, sheets) => format!(
                "{n} poles on {sheets} sheets: the nearest lies beyond a threshold that is not open at M, so the sheets on both sides of it are listed."
            ),
        }
    }

    fn poles_on(&self, sheet: &[bool]) -> Vec<Pole> {
        let mass = self.mass_gev;
        let width = self.width_gev.max(1e-9 * mass);
        let mut starts = vec![Complex64::new(mass * mass, -mass * width)];
        for re in [1.0, 0.9, 1.1, 0.7, 1.4] {
            for im in [1e-3, 0.03, 0.15, 0.4] {
                let w = Complex64::new(re * mass, -im * mass);
                starts.push(w * w);
            }
        }
        for k in [-1.0, 1.0] {
            let w = Complex64::new(mass + k * width, -0.5 * width);
            starts.push(w * w);
        }
        let mut found: Vec<Pole> = Vec::new();
        for start in starts {
            let Some(s) = self.newton(start, sheet) else {
                continue;
            };
            let new = found.iter().all(|pole| {
                math::abs(pole.s_gev2 - s) > 1e-7 * math::abs(s).min(mass * width / 1e-3)
            });
            if new && let Some(pole) = self.pole_at(s, sheet) {
                found.push(pole);
            }
        }
        let distance = |pole: &Pole| math::hypot(pole.mass_gev - mass, 0.5 * pole.width_gev);
        found.retain(|pole| distance(pole) < 0.8 * mass);
        found.sort_by(|a, b| distance(a).total_cmp(&distance(b)));
        found.truncate(MOST_PER_SHEET);
        found
    }

    fn pole_at(&self, s: Complex64, sheet: &[bool]) -> Option<Pole> {
        let root = math::csqrt(s);
        let slope = self.slope(s, sheet, 12)?;
        let mass_bar = (s.re > 0.0).then(|| s.re.sqrt());
        Some(Pole {
            s_gev2: s,
            mass_gev: root.re,
            width_gev: -2.0 * root.im,
            mass_bar_gev: mass_bar,
            width_bar_gev: mass_bar.map(|mass| -s.im / mass),
            sheet: sheet.to_vec(),
            residue: (math::abs(slope) > 1e-7).then(|| slope.inv()),
        })
    }

    /// Zero of 1/Delta in the lower half-plane from a start.
    fn newton(&self, start: Complex64, sheet: &[bool]) -> Option<Complex64> {
        let mut s = start;
        let symmetric = !self.branches.is_empty();
        for _ in 0..MOST_STEPS {
            let value = self.form.on_sheet(s, sheet)?;
            let slope = self.slope(s, sheet, 4)?;
            let step = value / slope;
            if !(step.re.is_finite() && step.im.is_finite()) {
                return None;
            }
            s -= step;
            // 1/Delta takes conjugate values at conjugate points of a sheet.
            if symmetric && s.im > 0.0 {
                s = s.conj();
            }
            if math::abs(step) <= 4.0 * f64::EPSILON * math::abs(s) {
                break;
            }
        }
        let value = self.form.on_sheet(s, sheet)?;
        let zero = math::abs(value) <= 1e-11 * (math::abs(s) + self.mass_gev * self.mass_gev);
        let below = s.im < 0.0 || self.is_stable();
        (zero && below).then_some(s)
    }

    /// d(1/Delta)/ds by Cauchy's formula on a circle of `points` points that stays away from
    /// every branch point and does not cross the cut.
    fn slope(&self, s: Complex64, sheet: &[bool], points: u32) -> Option<Complex64> {
        let mut free = math::abs(s);
        if !self.branches.is_empty() {
            // The cuts run along the real axis.
            if self.is_stable() {
                for branch in self.branches {
                    free = free.min((branch.threshold_gev * branch.threshold_gev - s.re).abs());
                }
            } else {
                free = free.min(s.im.abs());
            }
        }
        let radius = 0.1 * free.max(1e-12 * self.mass_gev * self.mass_gev);
        let mut sum = Complex64::new(0.0, 0.0);
        for n in 0..points {
            let turn = math::polar(
                1.0,
                2.0 * core::f64::consts::PI * f64::from(n) / f64::from(points),
            );
            sum += self.form.on_sheet(s + turn * radius, sheet)? * turn.conj();
        }
        Some(sum / (f64::from(points) * radius))
    }
}
