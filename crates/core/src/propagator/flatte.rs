//! Two channels near a threshold: 1/(s - M^2 + i (g1^2 rho1 + g2^2 rho2)), rho = 2q/W, which
//! is +i|rho| below its threshold (Flatte, Phys. Lett. B 63 (1976) 224).

use crate::amplitude::hypothesis::FlatteChannel;
use crate::error::{Answer, Refusal};
use crate::kinematics::{break_up_momentum_complex_gev, momentum_squared_gev2};
use crate::math;
use num_complex::Complex64;

/// One channel, checked.
#[derive(Debug, Clone, PartialEq)]
pub struct PreparedChannel {
    g2_gev2: f64,
    m1_gev: f64,
    m2_gev: f64,
    name: String,
}

impl PreparedChannel {
    /// Checks a channel.
    ///
    /// # Errors
    /// Negative squared coupling or masses.
    pub fn new(channel: &FlatteChannel, path: &str) -> Answer<Self> {
        for (field, value) in [
            ("g_squared", channel.g2_gev2),
            ("m1", channel.m1_gev),
            ("m2", channel.m2_gev),
        ] {
            if !(value.is_finite() && value >= 0.0) {
                return Err(Refusal::new(
                    format!("{path}.{field}"),
                    value,
                    "0 or more",
                    "squared couplings and masses are numbers, 0 or more",
                ));
            }
        }
        Ok(Self {
            g2_gev2: channel.g2_gev2,
            m1_gev: channel.m1_gev,
            m2_gev: channel.m2_gev,
            name: channel.name.clone(),
        })
    }

    /// Name as declared.
    #[must_use]
    pub fn name(&self) -> &str {
        &self.name
    }

    /// Threshold, GeV.
    #[must_use]
    pub fn threshold_gev(&self) -> f64 {
        self.m1_gev + self.m2_gev
    }

    /// rho on the real axis: real above threshold, +i|rho| below.
    #[must_use]
    pub fn rho(&self, w_gev: f64, above_gev: f64) -> Complex64 {
        let rho2 = 4.0 * momentum_squared_gev2(w_gev, above_gev, self.m1_gev, self.m2_gev)
            / (w_gev * w_gev);
        if rho2 >= 0.0 {
            Complex64::new(rho2.sqrt(), 0.0)
        } else {
            Complex64::new(0.0, (-rho2).sqrt())
        }
    }

    /// g^2 rho on the real axis, GeV^2.
    #[must_use]
    pub fn term(&self, w_gev: f64, above_gev: f64) -> Complex64 {
        self.rho(w_gev, above_gev) * self.g2_gev2
    }

    /// g^2 rho at complex s; `first`: Im q > 0.
    #[must_use]
    pub fn term_on_sheet(&self, s: Complex64, first: bool) -> Complex64 {
        let q = break_up_momentum_complex_gev(s, self.m1_gev, self.m2_gev);
        let rho = q * 2.0 / math::csqrt(s) * self.g2_gev2;
        if first { rho } else { -rho }
    }
}
