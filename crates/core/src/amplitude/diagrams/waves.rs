//! Partial waves a^J of the tree-level reactions and where they break unitarity:
//! a^J = sqrt(k_i k_f)/(16 pi W) int dcos d^J_{lambda mu} M, S = 1 + 2 i a, another 1/sqrt2 per
//! pair of identical particles. Exact to 1e-10 of the largest wave.

use super::helicity::{Helicities, states};
use super::total::DiagramTotal;
use crate::amplitude::born::Energy;
use crate::amplitude::hypothesis::Reaction;
use crate::amplitude::wigner::small_d;
use crate::kinematics::break_up_momentum_gev;
use core::f64::consts::{FRAC_1_SQRT_2, PI};
use num_complex::Complex64;

/// A two-particle state of definite J and parity: (|h1 h2> + sign |-h1 -h2>)/sqrt2, or |h1 h2>
/// itself for two scalars.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct ParityState {
    /// Helicity signs.
    pub helicities: Helicities,
    /// +1 or -1; 0 for two scalars.
    pub sign: i8,
}

impl core::fmt::Display for ParityState {
    fn fmt(&self, f: &mut core::fmt::Formatter<'_>) -> core::fmt::Result {
        let mark = |h: i8| match h {
            0 => "",
            1 => "+",
            _ => "\u{2212}",
        };
        let (a, b) = self.helicities;
        match self.sign {
            0 => write!(f, "|0 0\u{27e9}"),
            sign => write!(
                f,
                "|{}{}\u{27e9} {} |{}{}\u{27e9}",
                mark(a),
                mark(b),
                mark(sign),
                mark(-a),
                mark(-b)
            ),
        }
    }
}

/// One partial wave.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Wave {
    /// 2J.
    pub twice_j: u8,
    /// Incoming state.
    pub initial: ParityState,
    /// Outgoing state.
    pub outgoing: ParityState,
    /// a^J.
    pub amplitude: Complex64,
}

/// Where a partial wave leaves |Re a| <= 1/2.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Breach {
    /// The wave, at its first breach.
    pub wave: Wave,
    /// Lowest W in the range at which |Re a| > 1/2, GeV (to the grid, then bisected to 1e-6).
    pub w_gev: f64,
}

/// A wave between helicity states (for comparison with other calculations).
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct HelicityWave {
    /// 2J.
    pub twice_j: u8,
    /// Incoming helicity signs.
    pub initial: Helicities,
    /// Outgoing helicity signs.
    pub outgoing: Helicities,
    /// a^J.
    pub amplitude: Complex64,
}

impl DiagramTotal {
    /// Partial waves between helicity states, J from the least up to `most_twice_j`/2.
    #[must_use]
    pub fn helicity_waves(&self, at: Energy, most_twice_j: u8) -> Vec<HelicityWave> {
        let diagrams = self.diagrams();
        let w = at.w_gev();
        if w <= diagrams.masses.threshold_gev() {
            return Vec::new();
        }
        let half_integer = diagrams.reaction == Reaction::Compton;
        let spins: Vec<u8> = (0..=most_twice_j)
            .filter(|twice_j| (twice_j % 2 == 1) == half_integer)
            .collect();
        let (rows, columns) = states(diagrams.reaction);
        let n = rows.len() * columns.len();
        let mut sums = vec![Complex64::new(0.0, 0.0); n * spins.len()];
        let s_part = diagrams.s_sums(at);
        self.each_node(w, &[(-1.0, 1.0)], |cos, weight| {
            let x = diagrams.stu(w, cos);
            let amplitudes = diagrams.helicity_amplitudes(at, cos, &diagrams.sums(at, &x, s_part));
            for (block, twice_j) in sums.chunks_mut(n).zip(&spins) {
                let pairs = rows
                    .iter()
                    .flat_map(|row| columns.iter().map(move |column| (row, column)));
                for ((slot, m), (row, column)) in block.iter_mut().zip(&amplitudes).zip(pairs) {
                    let d = small_d(*twice_j, spin_along(*row), spin_along(*column), cos);
                    *slot += m * (weight * d);
                }
            }
        });
        let k_i = break_up_momentum_gev(w, diagrams.masses.m1_gev, diagrams.masses.m2_gev);
        let k_f = break_up_momentum_gev(w, diagrams.masses.m3_gev, diagrams.masses.m4_gev);
        let identical = match diagrams.reaction {
            Reaction::SameElastic => 0.5,
            Reaction::PairToScalars => FRAC_1_SQRT_2,
            _ => 1.0,
        };
        let scale = identical * (k_i * k_f).sqrt() / (16.0 * PI * w);
        let mut waves = Vec::with_capacity(sums.len());
        for (block, twice_j) in sums.chunks(n).zip(&spins) {
            let pairs = rows
                .iter()
                .flat_map(|row| columns.iter().map(move |column| (row, column)));
            for (sum, (row, column)) in block.iter().zip(pairs) {
                let fits = |h: Helicities| spin_along(h).unsigned_abs() <= *twice_j;
                if fits(*row) && fits(*column) {
                    waves.push(HelicityWave {
                        twice_j: *twice_j,
                        initial: *row,
                        outgoing: *column,
                        amplitude: sum * scale,
                    });
                }
            }
        }
        waves
    }

    /// Partial waves between states of definite J and parity; those that parity forbids are left out.
    #[must_use]
    pub fn waves(&self, at: Energy, most_twice_j: u8) -> Vec<Wave> {
        let helicity = self.helicity_waves(at, most_twice_j);
        let largest = helicity
            .iter()
            .map(|wave| crate::math::abs(wave.amplitude))
            .fold(0.0, f64::max);
        let (rows, columns) = states(self.diagrams().reaction);
        let (rows, columns) = (parity_states(&rows), parity_states(&columns));
        let mut waves = Vec::new();
        let mut spins: Vec<u8> = helicity.iter().map(|wave| wave.twice_j).collect();
        spins.dedup();
        for twice_j in spins {
            for initial in &rows {
                for outgoing in &columns {
                    let mut amplitude = Complex64::new(0.0, 0.0);
                    let mut found = false;
                    for wave in helicity.iter().filter(|wave| wave.twice_j == twice_j) {
                        let weight =
                            projection(initial, wave.initial) * projection(outgoing, wave.outgoing);
                        found |= weight != 0.0;
                        amplitude += wave.amplitude * weight;
                    }
                    if found && crate::math::abs(amplitude) > 1e-12 * largest {
                        waves.push(Wave {
                            twice_j,
                            initial: *initial,
                            outgoing: *outgoing,
                            amplitude,
                        });
                    }
                }
            }
        }
        waves
    }

    /// Which partial waves leave |Re a| <= 1/2 between two energies (GeV), and where first, on a
    /// grid of `points` energies refined by bisection. Empty: tree level keeps unitarity there.
    #[must_use]
    pub fn unitarity_breaches(
        &self,
        from_gev: f64,
        to_gev: f64,
        points: u32,
        most_twice_j: u8,
    ) -> Vec<Breach> {
        let mut breaches: Vec<Breach> = Vec::new();
        let points = points.max(2);
        let mut before = from_gev;
        for i in 0..points {
            let w = from_gev + (to_gev - from_gev) * f64::from(i) / f64::from(points - 1);
            for wave in self.waves(Energy::at(w), most_twice_j) {
                let same = |other: &Wave| {
                    other.twice_j == wave.twice_j
                        && other.initial == wave.initial
                        && other.outgoing == wave.outgoing
                };
                if wave.amplitude.re.abs() <= 0.5 || breaches.iter().any(|known| same(&known.wave))
                {
                    continue;
                }
                let excess = |w: f64| {
                    let waves = self.waves(Energy::at(w), most_twice_j);
                    waves
                        .iter()
                        .find(|other| same(other))
                        .is_some_and(|other| other.amplitude.re.abs() > 0.5)
                };
                let (mut low, mut high) = (before, w);
                while i > 0 && high - low > 1e-6 * high {
                    let middle = 0.5 * (low + high);
                    if excess(middle) {
                        high = middle;
                    } else {
                        low = middle;
                    }
                }
                breaches.push(Breach { wave, w_gev: high });
            }
            before = w;
        }
        breaches
    }
}

/// 2 (lambda_1 - lambda_2) from signs of spin-1/2 helicities.
fn spin_along((a, b): Helicities) -> i8 {
    a - b
}

fn parity_states(helicities: &[Helicities]) -> Vec<ParityState> {
    let mut all = Vec::new();
    for &h in helicities {
        if h == (0, 0) {
            all.push(ParityState {
                helicities: h,
                sign: 0,
            });
        } else if h.0 > 0 {
            for sign in [1, -1] {
                all.push(ParityState {
                    helicities: h,
                    sign,
                });
            }
        }
    }
    all
}

/// <helicity state | parity state>.
fn projection(state: &ParityState, h: Helicities) -> f64 {
    let (a, b) = state.helicities;
    if state.sign == 0 {
        return f64::from(u8::from(h == (a, b)));
    }
    if h == (a, b) {
        FRAC_1_SQRT_2
    } else if h == (-a, -b) {
        f64::from(state.sign) * FRAC_1_SQRT_2
    } else {
        0.0
    }
}
