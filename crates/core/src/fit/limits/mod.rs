//! When there is no peak: upper limits, significances, the look-elsewhere effect.

mod asymptotic;
mod counting;
mod template;
mod window;

pub use asymptotic::{asymptotic_cls, limit_against_phase, limit_with_errors};
pub use counting::{bayesian_upper_limit, cls_upper_limit, expected_significance, feldman_cousins};
pub use template::{Limit, Template};
pub(crate) use window::templates;
pub use window::{GlobalSignificance, WindowPlace, WindowSettings, mass_window};
