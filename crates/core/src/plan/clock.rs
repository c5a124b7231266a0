//! The machine's clock: when there is beam, in which fill, and how bright.

use super::problem::refuse;
use crate::error::Answer;
use crate::math;
use serde::{Deserialize, Serialize};

/// Fills of a storage ring.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct Fills {
    /// Beam for physics in one fill, h.
    pub length_h: f64,
    /// From the end of one fill's beam to the next one's, h.
    pub refill_h: f64,
    /// Luminosity falls as exp(-age/lifetime) within a fill; `None`: constant. The rates are those at age 0.
    pub lifetime_h: Option<f64>,
}

/// Time to settle after a change of energy: fixed + size times a slope by direction.
#[derive(Debug, Clone, Copy, Default, PartialEq, Serialize, Deserialize)]
pub struct Settle {
    /// For any change, h.
    pub fixed_h: f64,
    /// Per GeV upwards, h/GeV.
    pub up_h_per_gev: f64,
    /// Per GeV downwards, h/GeV.
    pub down_h_per_gev: f64,
}

/// The machine as it is.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct Machine {
    /// Hours on the clock that are left, from now.
    pub hours: f64,
    /// Hours of the schedule that are over; fills, calibrations and blocked times count from its beginning.
    pub elapsed_h: f64,
    /// Fills; `None`: continuous beam.
    pub fills: Option<Fills>,
    /// Intervals (from, to) without beam, h from the beginning of the schedule.
    pub blocked_h: Vec<(f64, f64)>,
    /// Calibration block of (every so many hours, lasting so many hours), before the beam that follows.
    pub calibration_h: Option<(f64, f64)>,
    /// Unit of a dwell, h.
    pub dwell_step_h: f64,
    /// Least dwell, h.
    pub least_dwell_h: f64,
    /// Settle time.
    pub settle: Settle,
    /// Energies within a fill only rise (`Some(true)`) or only fall (`Some(false)`): hysteresis.
    pub one_way: Option<bool>,
    /// W at which the machine stands now, GeV.
    pub current_w_gev: Option<f64>,
}

/// One stretch of beam.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Window {
    /// Start, h from now.
    pub start_h: f64,
    /// End, h from now.
    pub end_h: f64,
    /// Age of the fill at `start_h`, h: above 0 for a fill that is running now.
    pub age_h: f64,
}

impl Machine {
    /// Checks every number.
    ///
    /// # Errors
    /// The first value that cannot be: a negative time, no dwell step, less time than one least dwell.
    pub fn check(&self) -> Answer<()> {
        let positive = [
            ("plan.hours", self.hours),
            ("plan.dwell_step", self.dwell_step_h),
        ];
        for (field, value) in positive {
            if !(value.is_finite() && value > 0.0) {
                return Err(refuse(
                    field,
                    &value.to_string(),
                    "a time above 0",
                    "This time has to be above 0.",
                ));
            }
        }
        let mut others = vec![
            ("plan.hours_used", self.elapsed_h),
            ("plan.least_dwell", self.least_dwell_h),
            ("plan.settle", self.settle.fixed_h),
            ("plan.settle", self.settle.up_h_per_gev),
            ("plan.settle", self.settle.down_h_per_gev),
        ];
        if let Some(f) = self.fills {
            others.push(("plan.refill", f.refill_h));
            let lifetime = f.lifetime_h.unwrap_or(1.0);
            if !(f.length_h.is_finite() && f.length_h > 0.0 && lifetime > 0.0) {
                return Err(refuse(
                    "plan.fill",
                    &f.length_h.to_string(),
                    "a fill and a lifetime above 0",
                    "The length of a fill and the lifetime of the luminosity have to be above 0.",
                ));
            }
        }
        if let Some((every, lasting)) = self.calibration_h {
            others.push(("plan.calibration", lasting));
            if !(every.is_finite() && every > 0.0) {
                return Err(refuse(
                    "plan.calibration",
                    &every.to_string(),
                    "a time above 0",
                    "Calibrations have to be some time apart.",
                ));
            }
        }
        for (field, value) in others {
            if !(value.is_finite() && value >= 0.0) {
                return Err(refuse(
                    field,
                    &value.to_string(),
                    "a time of 0 or more",
                    "This time has to be 0 or more.",
                ));
            }
        }
        if self
            .blocked_h
            .iter()
            .any(|b| !(b.0.is_finite() && b.1.is_finite() && b.0 <= b.1))
        {
            return Err(refuse(
                "plan.blocked",
                "",
                "a start before its end",
                "A blocked time ends before it begins.",
            ));
        }
        let least = self.least_units() as f64 * self.dwell_step_h;
        let longest = self
            .windows()
            .iter()
            .map(|w| w.end_h - w.start_h)
            .fold(0.0, f64::max);
        if longest + 1e-9 < least {
            return Err(refuse(
                "plan.hours",
                &format!("{} h", self.hours),
                &format!("at least one dwell of {least} h of beam"),
                &format!(
                    "The longest stretch of beam is {longest:.3} h, shorter than the least dwell of {least:.3} h. More hours, a longer fill or a shorter least dwell would help."
                ),
            ));
        }
        Ok(())
    }

    /// Least dwell in whole dwell steps.
    #[must_use]
    pub fn least_units(&self) -> u32 {
        let units = (self.least_dwell_h / self.dwell_step_h - 1e-9)
            .ceil()
            .max(1.0);
        units.min(f64::from(u32::MAX)) as u32
    }

    /// The stretches of beam, in order; each is one fill. A blocked time ends a fill.
    #[must_use]
    pub fn windows(&self) -> Vec<Window> {
        let mut blocked = self.blocked_h.clone();
        blocked.sort_by(|a, b| a.0.total_cmp(&b.0).then(a.1.total_cmp(&b.1)));
        let shortest = self.least_units() as f64 * self.dwell_step_h;
        let mut windows = Vec::new();
        let mut now = 0.0_f64;
        // The first calibration is the one that has just been made.
        let mut calibrated = 0.0_f64;
        // Every pass moves `now` by at least `shortest`, a refill or a blocked end.
        let all_h = self.elapsed_h + self.hours;
        while now + 1e-9 < all_h && windows.len() < 10_000 {
            if let Some(&(_, end)) = blocked.iter().find(|b| b.0 <= now && now < b.1) {
                now = end;
                continue;
            }
            if let Some((every, lasting)) = self.calibration_h
                && now - calibrated >= every - 1e-9
            {
                now += lasting;
                calibrated = now;
                continue;
            }
            let mut end = self.fills.map_or(all_h, |f| now + f.length_h).min(all_h);
            if let (Some((every, _)), None) = (self.calibration_h, self.fills) {
                end = end.min(calibrated + every);
            }
            if let Some(&(start, _)) = blocked.iter().find(|b| b.0 > now && b.0 < end) {
                end = start;
            }
            let start = now.max(self.elapsed_h);
            if end - start + 1e-9 >= shortest {
                windows.push(Window {
                    start_h: start - self.elapsed_h,
                    end_h: end - self.elapsed_h,
                    age_h: start - now,
                });
            }
            now = end.max(now + 1e-6);
            if let Some(f) = self.fills {
                now += f.refill_h;
            }
        }
        windows
    }

    /// Hours of full luminosity in `live_h` hours that begin at `age_h` of a fill.
    #[must_use]
    pub fn bright_hours(&self, age_h: f64, live_h: f64) -> f64 {
        match self.fills.and_then(|f| f.lifetime_h) {
            Some(tau) => -tau * math::exp(-age_h / tau) * math::expm1(-live_h / tau),
            None => live_h,
        }
    }

    /// Settle time from one W to the next, h; 0 if nothing changes.
    #[must_use]
    pub fn settle_h(&self, from_gev: f64, to_gev: f64) -> f64 {
        let step = to_gev - from_gev;
        if step == 0.0 {
            return 0.0;
        }
        let slope = if step > 0.0 {
            self.settle.up_h_per_gev
        } else {
            self.settle.down_h_per_gev
        };
        self.settle.fixed_h + slope * step.abs()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    pub(crate) fn plain(hours: f64) -> Machine {
        Machine {
            hours,
            elapsed_h: 0.0,
            fills: None,
            blocked_h: Vec::new(),
            calibration_h: None,
            dwell_step_h: 0.5,
            least_dwell_h: 1.0,
            settle: Settle::default(),
            one_way: None,
            current_w_gev: None,
        }
    }

    #[test]
    fn windows_by_hand() {
        let mut m = plain(24.0);
        assert_eq!(
            m.windows(),
            vec![Window {
                start_h: 0.0,
                end_h: 24.0,
                age_h: 0.0
            }]
        );
        m.fills = Some(Fills {
            length_h: 6.0,
            refill_h: 1.0,
            lifetime_h: None,
        });
        m.blocked_h = vec![(8.0, 10.0)];
        let starts: Vec<(f64, f64)> = m.windows().iter().map(|w| (w.start_h, w.end_h)).collect();
        // 7-8 is cut by the block at 8; refilling ends at 9, inside the block.
        assert_eq!(
            starts,
            vec![(0.0, 6.0), (7.0, 8.0), (10.0, 16.0), (17.0, 23.0)]
        );
        m.blocked_h.clear();
        m.calibration_h = Some((10.0, 2.0));
        let starts: Vec<(f64, f64)> = m.windows().iter().map(|w| (w.start_h, w.end_h)).collect();
        assert_eq!(
            starts,
            vec![(0.0, 6.0), (7.0, 13.0), (16.0, 22.0), (23.0, 24.0)]
        );
    }

    /// Five hours into the schedule above: the rest of the first fill, then as it was planned.
    #[test]
    fn a_schedule_goes_on_where_it_is() {
        let mut m = plain(19.0);
        m.elapsed_h = 5.0;
        m.fills = Some(Fills {
            length_h: 6.0,
            refill_h: 1.0,
            lifetime_h: None,
        });
        m.blocked_h = vec![(8.0, 10.0)];
        let windows: Vec<(f64, f64, f64)> = m
            .windows()
            .iter()
            .map(|w| (w.start_h, w.end_h, w.age_h))
            .collect();
        assert_eq!(
            windows,
            vec![
                (0.0, 1.0, 5.0),
                (2.0, 3.0, 0.0),
                (5.0, 11.0, 0.0),
                (12.0, 18.0, 0.0)
            ]
        );
    }

    #[test]
    fn brightness_decays() {
        let mut m = plain(10.0);
        m.fills = Some(Fills {
            length_h: 5.0,
            refill_h: 1.0,
            lifetime_h: Some(4.0),
        });
        let parts = m.bright_hours(0.0, 2.0) + m.bright_hours(2.0, 3.0);
        assert!((parts - m.bright_hours(0.0, 5.0)).abs() < 1e-14);
        assert!((parts - 4.0 * (1.0 - math::exp(-1.25))).abs() < 1e-12);
    }

    #[test]
    fn too_little_time_is_refused_in_words() {
        let refusal = plain(0.5).check().unwrap_err();
        assert_eq!(refusal.field, "plan.hours");
        assert!(refusal.message.contains("least dwell"));
    }
}
