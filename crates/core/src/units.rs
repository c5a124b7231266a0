//! Units and physical constants. hbar = c = 1 inside; every constant cites its source.

/// (hbar c)^2 in GeV^2 nb: turns GeV^-2 into nb. CODATA 2022 (exact hbar, c, e).
pub const HBARC2_GEV2_NB: f64 = 389_379.372_171_859_5;
/// Fine-structure constant at zero momentum transfer. CODATA 2022.
pub const ALPHA: f64 = 1.0 / 137.035_999_177;
/// hbar in GeV s. CODATA 2022 (exact).
pub const HBAR_GEV_S: f64 = 6.582_119_569_509e-25;
/// One femtometre in GeV^-1 (1/(hbar c)).
pub const FM_PER_GEV: f64 = 5.067_730_7;
/// Electron mass in GeV. CODATA 2022.
pub const M_ELECTRON_GEV: f64 = 0.510_998_950_69e-3;
/// Muon mass in GeV. CODATA 2022.
pub const M_MUON_GEV: f64 = 0.105_658_375_5;
/// Proton mass in GeV. CODATA 2022.
pub const M_PROTON_GEV: f64 = 0.938_272_089_43;
/// Charged pion mass in GeV. PDG 2026.
pub const M_PION_GEV: f64 = 0.139_570_39;
/// 1 nb^-1 in cm^-2 (1 b = 1e-24 cm^2).
pub const NB_INV_CM2: f64 = 1e33;
