//! Running partial widths: two spinless daughters with a centrifugal barrier, and tables.

use super::Branch;
use crate::amplitude::born::Energy;
use crate::amplitude::hypothesis::{ChannelShape, TwoBody, WidthChannel};
use crate::error::{Answer, Refusal};
use crate::kinematics::{break_up_momentum_complex_gev, momentum_squared_gev2};
use crate::math::csqrt;
use core::ops::{Add, Mul};
use num_complex::Complex64;

/// p_l(z) = x^2 |h_l(x)|^2 times z^l with z = x^2, h_l the spherical Hankel function: the
/// barrier polynomials, l = 0 to 4 (PDG, "Resonances"; l above 4 is refused elsewhere).
#[inline]
#[must_use]
pub fn barrier_polynomial<T>(l: u8, z: T) -> T
where
    T: Copy + From<f64> + Add<f64, Output = T> + Mul<Output = T>,
{
    match l {
        0 => T::from(1.0),
        1 => z + 1.0,
        2 => z * (z + 3.0) + 9.0,
        3 => z * (z * (z + 6.0) + 45.0) + 225.0,
        _ => z * (z * (z * (z + 10.0) + 135.0) + 1575.0) + 11025.0,
    }
}

/// M Gamma_c(s)/(M Gamma_c(M)) of a two-body channel, everything that does not depend on W
/// worked out beforehand.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct RunningPair {
    m1_gev: f64,
    m2_gev: f64,
    sum_gev: f64,
    l: u8,
    radius2: f64,
    /// 1/q0^2.
    inverse_q02: f64,
    /// M p_l(z0); M without barrier.
    norm: f64,
}

impl RunningPair {
    /// Prepares the channel for a resonance of mass M.
    ///
    /// # Errors
    /// Negative masses or radius, l above 4, M at or below the channel's threshold.
    pub fn new(pair: &TwoBody, mass_gev: f64, path: &str) -> Answer<Self> {
        for (name, value) in [
            ("m1", pair.m1_gev),
            ("m2", pair.m2_gev),
            ("radius", pair.radius_per_gev),
        ] {
            if !(value.is_finite() && value >= 0.0) {
                return Err(Refusal::new(
                    format!("{path}.{name}"),
                    value,
                    "0 or more",
                    "a daughter's mass and the barrier radius are numbers, 0 or more",
                ));
            }
        }
        if pair.l > 4 {
            return Err(Refusal::new(
                format!("{path}.l"),
                pair.l,
                "0 to 4",
                "barrier factors are known here up to l = 4",
            ));
        }
        let sum_gev = pair.m1_gev + pair.m2_gev;
        let q02 = momentum_squared_gev2(mass_gev, mass_gev - sum_gev, pair.m1_gev, pair.m2_gev);
        if !(mass_gev > sum_gev && q02 > 0.0) {
            return Err(Refusal::new(
                path,
                format!("{sum_gev} GeV"),
                format!("a threshold below M = {mass_gev} GeV"),
                "the channel's threshold does not lie below the resonance's mass, so there is no width at M to scale from; the two-channel (Flatte) form continues below a threshold",
            ));
        }
        let radius2 = pair.radius_per_gev * pair.radius_per_gev;
        Ok(Self {
            m1_gev: pair.m1_gev,
            m2_gev: pair.m2_gev,
            sum_gev,
            l: pair.l,
            radius2,
            inverse_q02: 1.0 / q02,
            norm: if radius2 == 0.0 {
                mass_gev
            } else {
                mass_gev * barrier_polynomial(pair.l, q02 * radius2)
            },
        })
    }

    /// (q/q0)^(2l+1) (M/W) p_l(z0)/p_l(z); 0 at and below threshold.
    #[inline]
    #[must_use]
    pub fn ratio(&self, at: Energy) -> f64 {
        let above = at.above_gev(self.sum_gev);
        if above <= 0.0 {
            return 0.0;
        }
        let w = at.w_gev();
        let q2 = momentum_squared_gev2(w, above, self.m1_gev, self.m2_gev);
        let x = q2 * self.inverse_q02;
        let mut power = x.sqrt();
        for _ in 0..self.l {
            power *= x;
        }
        let barrier = if self.radius2 == 0.0 {
            1.0
        } else {
            barrier_polynomial(self.l, q2 * self.radius2)
        };
        power * self.norm / (w * barrier)
    }

    /// Threshold, GeV.
    #[must_use]
    pub fn threshold_gev(&self) -> f64 {
        self.sum_gev
    }

    /// The ratio continued to complex s; `first`: Im q > 0.
    fn on_sheet(&self, s: Complex64, first: bool) -> Complex64 {
        let mut q = break_up_momentum_complex_gev(s, self.m1_gev, self.m2_gev);
        if !first {
            q = -q;
        }
        let x2 = q * q * self.inverse_q02;
        let mut power = q * self.inverse_q02.sqrt();
        for _ in 0..self.l {
            power *= x2;
        }
        let z = q * q * self.radius2;
        let barrier = if self.radius2 == 0.0 {
            Complex64::new(1.0, 0.0)
        } else {
            barrier_polynomial(self.l, z)
        };
        power * self.norm / (csqrt(s) * barrier)
    }
}

/// Rows (W, Gamma_c(W)/Gamma_c(M)): linear between, 0 below the first, held above the last
/// (where the model says that it ends, see [`RunningWidth::upper_limit_gev`]).
#[derive(Debug, Clone, PartialEq)]
pub struct Table {
    rows: Vec<(f64, f64)>,
    inverse_at_mass: f64,
}

impl Table {
    fn new(rows: &[(f64, f64)], mass_gev: f64, path: &str) -> Answer<Self> {
        let refuse = |value: String, allowed: &str, message: &str| {
            Err(Refusal::new(
                format!("{path}.rows"),
                value,
                allowed,
                message,
            ))
        };
        if rows.len() < 2 {
            return refuse(
                rows.len().to_string(),
                "two rows or more",
                "a tabulated width needs at least two rows",
            );
        }
        for (i, row) in rows.iter().enumerate() {
            let rising = i == 0 || rows.get(i - 1).is_some_and(|before| before.0 < row.0);
            let valid = row.0.is_finite() && row.0 > 0.0 && row.1.is_finite() && row.1 >= 0.0;
            if !rising || !valid {
                return refuse(
                    format!("row {}: {}, {}", i + 1, row.0, row.1),
                    "energies strictly rising, ratios 0 or more",
                    "the rows of a tabulated width are out of order or not numbers",
                );
            }
        }
        let mut table = Self {
            rows: rows.to_vec(),
            inverse_at_mass: 1.0,
        };
        let inside = rows.first().is_some_and(|first| first.0 <= mass_gev)
            && rows.last().is_some_and(|last| last.0 >= mass_gev);
        let at_mass = table.ratio(Energy::at(mass_gev));
        if !inside || at_mass <= 0.0 {
            return refuse(
                format!("M = {mass_gev} GeV"),
                "a table that holds M, with a ratio above 0 there",
                "the resonance's mass lies outside the tabulated width, so there is no width at M to scale from",
            );
        }
        table.inverse_at_mass = 1.0 / at_mass;
        Ok(table)
    }

    fn ratio(&self, at: Energy) -> f64 {
        let w = at.w_gev();
        let after = self.rows.partition_point(|row| row.0 <= w);
        let (Some(below), above) = (
            after.checked_sub(1).and_then(|i| self.rows.get(i)),
            self.rows.get(after),
        ) else {
            return 0.0;
        };
        let value = above.map_or(below.1, |above| {
            let part = at.above_gev(below.0) / (above.0 - below.0);
            below.1 + part * (above.1 - below.1)
        });
        value * self.inverse_at_mass
    }
}

#[derive(Debug, Clone, PartialEq)]
enum Channel {
    Constant(f64),
    Massless(f64),
    Pair(f64, RunningPair),
    Table(f64, Table),
}

/// Gamma(s)/Gamma(M) summed over the declared channels.
#[derive(Debug, Clone, PartialEq)]
pub struct RunningWidth {
    channels: Vec<Channel>,
    names: Vec<String>,
    inverse_mass2: f64,
}

impl RunningWidth {
    /// Prepares the channels of a resonance of mass M.
    ///
    /// # Errors
    /// No channel, a negative fraction, fractions that do not sum to 1 (1e-9), and what the
    /// shapes refuse.
    pub fn new(channels: &[WidthChannel], mass_gev: f64, path: &str) -> Answer<Self> {
        let mut sum = 0.0;
        let mut prepared = Vec::with_capacity(channels.len());
        for (i, channel) in channels.iter().enumerate() {
            let path = format!("{path}.channels[{i}]");
            let fraction = channel.fraction;
            if !(fraction.is_finite() && fraction >= 0.0) {
                return Err(Refusal::new(
                    format!("{path}.fraction"),
                    fraction,
                    "0 to 1",
                    "a channel's share of the width is a number from 0 to 1",
                ));
            }
            sum += fraction;
            let path = format!("{path}.shape");
            prepared.push(match &channel.shape {
                ChannelShape::Constant => Channel::Constant(fraction),
                ChannelShape::Massless => Channel::Massless(fraction),
                ChannelShape::TwoBody(pair) => {
                    Channel::Pair(fraction, RunningPair::new(pair, mass_gev, &path)?)
                }
                ChannelShape::Tabulated { rows } => {
                    Channel::Table(fraction, Table::new(rows, mass_gev, &path)?)
                }
            });
        }
        if (sum - 1.0).abs() > 1e-9 {
            return Err(Refusal::new(
                format!("{path}.channels"),
                sum,
                "fractions that sum to 1",
                "the channels' shares of the width do not sum to 1; declare what is left as a constant or massless channel",
            ));
        }
        Ok(Self {
            channels: prepared,
            names: channels
                .iter()
                .map(|channel| channel.name.clone())
                .collect(),
            inverse_mass2: 1.0 / (mass_gev * mass_gev),
        })
    }

    /// M Gamma(s)/(M Gamma).
    #[inline]
    #[must_use]
    pub fn ratio(&self, at: Energy) -> f64 {
        let w = at.w_gev();
        let mut sum = 0.0;
        for channel in &self.channels {
            sum += match channel {
                Channel::Constant(fraction) => *fraction,
                Channel::Massless(fraction) => fraction * w * w * self.inverse_mass2,
                Channel::Pair(fraction, pair) => fraction * pair.ratio(at),
                Channel::Table(fraction, table) => fraction * table.ratio(at),
            };
        }
        sum
    }

    /// The two-body channels, in order: each separates two sheets.
    #[must_use]
    pub fn branches(&self) -> Vec<Branch> {
        self.pairs()
            .map(|(name, pair)| Branch {
                name: name.clone(),
                threshold_gev: pair.sum_gev,
            })
            .collect()
    }

    fn pairs(&self) -> impl Iterator<Item = (&String, &RunningPair)> {
        self.channels
            .iter()
            .zip(&self.names)
            .filter_map(|(channel, name)| match channel {
                Channel::Pair(_, pair) => Some((name, pair)),
                _ => None,
            })
    }

    /// [`RunningWidth::ratio`] continued to complex s, one sign of Im q per two-body channel;
    /// `None` if a channel is tabulated.
    #[must_use]
    pub fn on_sheet(&self, s: Complex64, first: &[bool]) -> Option<Complex64> {
        let mut sum = Complex64::new(0.0, 0.0);
        let mut signs = first.iter();
        for channel in &self.channels {
            sum += match channel {
                Channel::Constant(fraction) => Complex64::new(*fraction, 0.0),
                Channel::Massless(fraction) => s * (fraction * self.inverse_mass2),
                Channel::Pair(fraction, pair) => {
                    pair.on_sheet(s, signs.next().copied().unwrap_or(true)) * *fraction
                }
                Channel::Table(..) => return None,
            };
        }
        Some(sum)
    }

    /// Where the width is not smooth, GeV.
    #[must_use]
    pub fn kinks_gev(&self) -> Vec<f64> {
        let mut kinks = Vec::new();
        for channel in &self.channels {
            match channel {
                Channel::Pair(_, pair) => kinks.push(pair.sum_gev),
                Channel::Table(_, table) => kinks.extend(table.rows.iter().map(|row| row.0)),
                Channel::Constant(_) | Channel::Massless(_) => {}
            }
        }
        kinks
    }

    /// Last energy at which every channel is known, GeV; infinite without tables.
    #[must_use]
    pub fn upper_limit_gev(&self) -> f64 {
        self.channels
            .iter()
            .filter_map(|channel| match channel {
                Channel::Table(_, table) => table.rows.last().map(|row| row.0),
                _ => None,
            })
            .fold(f64::INFINITY, f64::min)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn barriers_are_those_of_spherical_hankel_functions() {
        // z^(l+1) |h_l(x)|^2 with z = x^2, from mpmath (tests/reference/hankel_barriers.py).
        let table = include_str!("../../../../tests/reference/hankel_barriers.csv");
        let mut rows = 0;
        for line in table.lines().filter(|line| !line.starts_with(['#', 'l'])) {
            let cells: Vec<f64> = line.split(',').map(|cell| cell.parse().unwrap()).collect();
            let ours = barrier_polynomial(cells[0] as u8, cells[1] * cells[1]);
            assert!((ours / cells[2] - 1.0).abs() < 4e-15, "{line}: {ours}");
            rows += 1;
        }
        assert_eq!(rows, 30);
    }

    #[test]
    fn tables_and_shares_are_checked() {
        let channel = |fraction, shape| WidthChannel {
            name: "c".into(),
            fraction,
            shape,
        };
        let table = |rows: &[(f64, f64)]| ChannelShape::Tabulated {
            rows: rows.to_vec(),
        };
        let path = "model.resonances[0]";
        let good = RunningWidth::new(
            &[
                channel(0.5, ChannelShape::Constant),
                channel(0.5, table(&[(0.9, 0.0), (1.1, 2.0), (1.3, 3.0)])),
            ],
            1.0,
            path,
        )
        .unwrap();
        assert!((good.ratio(Energy::at(1.0)) - 1.0).abs() < 1e-15);
        assert!((good.ratio(Energy::at(1.2)) - (0.5 + 0.5 * 2.5)).abs() < 1e-14);
        assert!((good.ratio(Energy::at(0.8)) - 0.5).abs() < 1e-15);
        assert_eq!(good.upper_limit_gev(), 1.3);
        for (channels, field) in [
            (
                vec![channel(0.9, ChannelShape::Constant)],
                "model.resonances[0].channels",
            ),
            (vec![], "model.resonances[0].channels"),
            (
                vec![channel(-0.1, ChannelShape::Massless)],
                "model.resonances[0].channels[0].fraction",
            ),
            (
                vec![channel(1.0, table(&[(1.1, 1.0), (1.2, 1.0)]))],
                "model.resonances[0].channels[0].shape.rows",
            ),
            (
                vec![channel(1.0, table(&[(0.9, 1.0), (0.9, 1.0)]))],
                "model.resonances[0].channels[0].shape.rows",
            ),
            (
                vec![channel(
                    1.0,
                    ChannelShape::TwoBody(TwoBody {
                        m1_gev: 0.5,
                        m2_gev: 0.5,
                        l: 0,
                        radius_per_gev: 0.0,
                    }),
                )],
                "model.resonances[0].channels[0].shape",
            ),
        ] {
            assert_eq!(
                RunningWidth::new(&channels, 1.0, path).unwrap_err().field,
                field
            );
        }
    }
}
