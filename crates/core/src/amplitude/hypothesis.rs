//! The hypothesis as plain data: resonances of one partial wave with their backgrounds
//! (physics of "Partial-wave resonances"); later also tree-level diagrams.

use serde::{Deserialize, Serialize};

/// What is believed of the cross section.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(tag = "kind", rename_all = "snake_case")]
pub enum Hypothesis {
    /// A coherent sum of resonances in one partial wave.
    PartialWave(PartialWave),
}

/// One coherent sum, one J.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct PartialWave {
    /// 2J.
    pub twice_j: u8,
    /// Resonances; the first has phase 0.
    pub resonances: Vec<Resonance>,
    /// Background inside the modulus.
    pub coherent: Option<CoherentBackground>,
    /// Background outside the modulus.
    pub incoherent: Option<IncoherentBackground>,
    /// Sum of the final state's masses, GeV.
    pub final_threshold_gev: f64,
    /// Number that multiplies the one-photon continuum (vacuum polarisation); 1 if none.
    pub continuum_factor: f64,
}

/// One resonance.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct Resonance {
    /// Name as shown.
    pub name: String,
    /// M, GeV, in the convention of `form`.
    pub mass_gev: f64,
    /// Gamma = Gamma(M), GeV.
    pub width_gev: f64,
    /// Strength of entrance times exit.
    pub strength: Strength,
    /// phi_r, rad; 0 for the first.
    pub phase_rad: f64,
    /// Propagator.
    pub form: Form,
    /// Entrance vertex.
    pub entrance: Vertex,
    /// Exit vertex.
    pub exit: Vertex,
}

/// Entrance and exit strength; all are numbers at W = M.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
#[serde(tag = "kind", rename_all = "snake_case")]
pub enum Strength {
    /// Gamma_in B_f, GeV: Gamma_in Gamma_f = (Gamma_in B_f) Gamma.
    GammaInBf {
        /// GeV.
        gev: f64,
    },
    /// B_in B_f.
    BinBf {
        /// Product, 0 to 1.
        product: f64,
    },
    /// B_in and B_f.
    Branchings {
        /// 0 to 1.
        b_in: f64,
        /// 0 to 1.
        b_f: f64,
    },
    /// Gamma_in and Gamma_f, GeV.
    PartialWidths {
        /// GeV.
        gamma_in_gev: f64,
        /// GeV.
        gamma_f_gev: f64,
    },
}

/// Propagator of a resonance.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(tag = "kind", rename_all = "snake_case")]
pub enum Form {
    /// 1/(s-M^2+i M Gamma).
    ConstantWidth,
    /// Gamma(s) = Gamma s/M^2.
    MasslessChannels,
    /// Gamma(s) = sum of the declared channels; fractions sum to 1.
    RunningWidth {
        /// Width channels.
        channels: Vec<WidthChannel>,
    },
}

/// One declared channel of a running width.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct WidthChannel {
    /// Name as shown.
    pub name: String,
    /// Gamma_c(M)/Gamma.
    pub fraction: f64,
    /// How it runs.
    pub shape: ChannelShape,
}

/// How Gamma_c runs with W.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(tag = "kind", rename_all = "snake_case")]
pub enum ChannelShape {
    /// Does not run.
    Constant,
    /// Gamma_c s/M^2.
    Massless,
    /// Two spinless daughters.
    TwoBody(TwoBody),
    /// Rows (W in GeV, Gamma_c(W)/Gamma_c(M)).
    Tabulated {
        /// Rows, W strictly rising.
        rows: Vec<(f64, f64)>,
    },
}

/// Two spinless daughters in orbital momentum l with a barrier radius.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct TwoBody {
    /// Mass of daughter 1, GeV.
    pub m1_gev: f64,
    /// Mass of daughter 2, GeV.
    pub m2_gev: f64,
    /// Orbital momentum, 0 to 4.
    pub l: u8,
    /// Barrier radius R, GeV^-1; 0: none.
    pub radius_per_gev: f64,
}

/// M Gamma_a(s) of a vertex.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(tag = "kind", rename_all = "snake_case")]
pub enum Vertex {
    /// M Gamma_c.
    Constant,
    /// M Gamma_c M^2/s.
    OnePhoton,
    /// M Gamma_c s/M^2.
    Massless,
    /// As a running two-body channel.
    Running(TwoBody),
}

/// Background inside the modulus.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(tag = "kind", rename_all = "snake_case")]
pub enum CoherentBackground {
    /// e^{i phase} times a real polynomial in (W-W0)/GeV.
    Polynomial {
        /// W0, GeV.
        w0_gev: f64,
        /// Coefficients, constant first.
        coefficients: Vec<f64>,
        /// phi_bg, rad.
        phase_rad: f64,
    },
    /// C/M_1^2 v_1(s), sharing the first resonance's vertices.
    SharedVertices {
        /// C, real.
        c: f64,
    },
    /// One-photon continuum: alone it gives c (W0/W)^2.
    OnePhoton {
        /// c, nb at W0.
        c_nb: f64,
        /// W0, GeV.
        w0_gev: f64,
        /// phi_bg, rad.
        phase_rad: f64,
    },
}

/// Background outside the modulus, nb; inside radiation, spread and efficiency.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(tag = "kind", rename_all = "snake_case")]
pub enum IncoherentBackground {
    /// c0 (W0/W)^n.
    Power {
        /// nb at W0.
        c0_nb: f64,
        /// W0, GeV.
        w0_gev: f64,
        /// n.
        n: f64,
    },
    /// Polynomial in (W-W0)/GeV, nb, constant first.
    Polynomial {
        /// W0, GeV.
        w0_gev: f64,
        /// Coefficients, nb.
        coefficients_nb: Vec<f64>,
    },
}
