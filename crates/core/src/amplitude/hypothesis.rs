//! The hypothesis as plain data: resonances of one partial wave with their backgrounds
//! (physics of "Partial-wave resonances"); later also tree-level diagrams.

use serde::{Deserialize, Serialize};

/// What is believed of the cross section.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(tag = "kind", rename_all = "snake_case")]
pub enum Hypothesis {
    /// A coherent sum of resonances in one partial wave.
    PartialWave(PartialWave),
    /// A two-channel K-matrix: unitary where a sum of resonances is not.
    KMatrix(KMatrix),
    /// Tree-level diagrams.
    Diagrams(Diagrams),
    /// Several partial waves with their angles.
    Waves(Waves),
}

/// Partial waves of several J (or several LS or helicity states of one J) with angles. In the
/// total they add incoherently; inside a cut or a bin those of common helicities interfere.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct Waves {
    /// Waves; their resonances are numbered through.
    pub waves: Vec<AngularWave>,
    /// Total inside |cos theta| < this; `None`: all angles.
    pub cos_cut: Option<f64>,
    /// Background outside the modulus, isotropic.
    pub incoherent: Option<IncoherentBackground>,
}

/// One partial wave with its couplings.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct AngularWave {
    /// T^J(W).
    pub wave: PartialWave,
    /// Phase against the first wave, rad; 0 for the first.
    pub phase_rad: f64,
    /// Helicities of the beams.
    pub entrance: Couplings,
    /// Helicities of the final state.
    pub exit: Couplings,
}

/// How a state of given J is made of two particles; only ratios count, the size is in T.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(tag = "kind", rename_all = "snake_case")]
pub enum Couplings {
    /// Helicity amplitudes.
    Helicity {
        /// Those that are not zero.
        amplitudes: Vec<HelicityCoupling>,
    },
    /// LS couplings.
    Ls {
        /// Twice the spin of particle 1.
        twice_s1: u8,
        /// Twice the spin of particle 2.
        twice_s2: u8,
        /// Terms.
        terms: Vec<LsTerm>,
    },
}

/// One helicity amplitude.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct HelicityCoupling {
    /// 2 lambda_1.
    pub twice_l1: i8,
    /// 2 lambda_2.
    pub twice_l2: i8,
    /// Modulus.
    pub magnitude: f64,
    /// Phase, rad.
    pub phase_rad: f64,
}

/// One LS term.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct LsTerm {
    /// L.
    pub l: u8,
    /// 2S.
    pub twice_s: u8,
    /// Modulus.
    pub magnitude: f64,
    /// Phase, rad.
    pub phase_rad: f64,
}

/// Two-channel K-matrix of one partial wave.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct KMatrix {
    /// 2J.
    pub twice_j: u8,
    /// Bare poles.
    pub poles: Vec<KPole>,
    /// c_11, c_12, c_22: the constant part, real and symmetric.
    pub constant: [f64; 3],
    /// The two channels.
    pub channels: [KChannel; 2],
    /// True: Chew-Mandelstam functions; false: i rho.
    pub chew_mandelstam: bool,
    /// Which channel the beams are (0 or 1).
    pub entrance: u8,
    /// Which channel is seen (0 or 1).
    pub exit: u8,
    /// Background outside the modulus.
    pub incoherent: Option<IncoherentBackground>,
}

/// A bare pole of K.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
pub struct KPole {
    /// M_p, GeV.
    pub mass_gev: f64,
    /// g_p1, GeV.
    pub g1_gev: f64,
    /// g_p2, GeV.
    pub g2_gev: f64,
}

/// A channel of the K-matrix.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct KChannel {
    /// Name as shown.
    pub name: String,
    /// Mass 1, GeV.
    pub m1_gev: f64,
    /// Mass 2, GeV.
    pub m2_gev: f64,
}

/// Tree-level Yukawa diagrams of one reaction; f has the mass of beam 1.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct Diagrams {
    /// Reaction.
    pub reaction: Reaction,
    /// Mass of F (f fbar -> F Fbar, f F -> f F), GeV; no meaning elsewhere.
    pub other_mass_gev: f64,
    /// Mediators; exactly one, the external scalar, where phi is in the initial or final state.
    pub mediators: Vec<Mediator>,
    /// Total inside |cos theta| < this; `None`: all angles.
    pub cos_cut: Option<f64>,
    /// Background outside the modulus.
    pub incoherent: Option<IncoherentBackground>,
}

/// The six reactions.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "snake_case")]
pub enum Reaction {
    /// f fbar -> F Fbar: s channel.
    PairToOtherPair,
    /// f F -> f F: t channel.
    OtherElastic,
    /// f fbar -> f fbar: s and t.
    PairElastic,
    /// f f -> f f: t and u.
    SameElastic,
    /// f phi -> f phi: s and u of the fermion.
    Compton,
    /// f fbar -> phi phi: t and u of the fermion.
    PairToScalars,
}

/// A mediator of the diagrams (or the external scalar).
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct Mediator {
    /// Name as shown.
    pub name: String,
    /// True: couples with gamma5.
    pub pseudoscalar: bool,
    /// M, GeV.
    pub mass_gev: f64,
    /// Yukawa coupling to f.
    pub g: f64,
    /// Yukawa coupling to F.
    pub g_other: f64,
    /// Propagator in the s channel; t and u are free, or dressed with the same loops.
    pub propagator: MediatorPropagator,
}

/// Propagator of a mediator.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(tag = "kind", rename_all = "snake_case")]
pub enum MediatorPropagator {
    /// A form with its width (0 where the form's couplings make it).
    Form {
        /// Form.
        form: Form,
        /// Gamma, GeV.
        width_gev: f64,
    },
    /// Dressed by its own couplings: loops of f and, where the reaction has it, of F with the
    /// mediator's g, and further loops.
    Dressed {
        /// Further loops.
        others: Vec<Loop>,
    },
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
    /// Partial width of the one side whose vertex does not bring its own strength, GeV.
    OneWidth {
        /// GeV.
        gev: f64,
    },
    /// Both vertices bring their own strength.
    FromForm,
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
    /// 1/(s-M^2+i(g1^2 rho1+g2^2 rho2)): two channels near a threshold. The width follows from
    /// the couplings; the resonance's own is 0.
    Flatte {
        /// The two channels.
        channels: [FlatteChannel; 2],
    },
    /// Gounaris-Sakurai, for two equal daughters in a P wave.
    GounarisSakurai {
        /// Mass of each daughter, GeV.
        m_gev: f64,
    },
    /// 1/(s-M^2-Sigma(s)) in the on-shell scheme. The width follows from the couplings; the
    /// resonance's own is 0.
    Dressed {
        /// True: couples with gamma5 to fermions.
        pseudoscalar: bool,
        /// Loops.
        loops: Vec<Loop>,
    },
    /// 1/(s-M^2): a stable mediator. Refused where the scan could reach s = M^2.
    Free,
}

/// One channel of the Flatte form.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
pub struct FlatteChannel {
    /// Name as shown.
    pub name: String,
    /// Squared coupling, GeV^2 (no extra M).
    pub g2_gev2: f64,
    /// Mass of daughter 1, GeV.
    pub m1_gev: f64,
    /// Mass of daughter 2, GeV.
    pub m2_gev: f64,
}

/// One loop of a dressed mediator.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(tag = "kind", rename_all = "snake_case")]
pub enum Loop {
    /// Dirac fermion pair, L = -g phi psibar psi or -i g phi psibar gamma5 psi.
    Fermion {
        /// Name as shown.
        name: String,
        /// Yukawa coupling.
        g: f64,
        /// Fermion mass, GeV.
        m_gev: f64,
        /// Colour factor, 1 if there is none.
        colours: u8,
    },
    /// Scalar pair, L = -h phi chi1 chi2, or -(h/2) phi chi^2 for identical ones.
    Scalar {
        /// Name as shown.
        name: String,
        /// h, GeV.
        h_gev: f64,
        /// Mass 1, GeV.
        m1_gev: f64,
        /// Mass 2, GeV.
        m2_gev: f64,
        /// True: one real field twice.
        identical: bool,
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
    /// g_c^2 rho_c of the form's own Flatte channel (0 or 1); 0 below its threshold. Brings
    /// its own strength.
    Flatte {
        /// Which channel.
        channel: u8,
    },
    /// -Im Sigma_c of the form's own loop. Brings its own strength.
    Dressed {
        /// Which loop.
        index: u8,
    },
}

impl Vertex {
    /// True if its strength is a coupling of the form, not a partial width of [`Strength`].
    #[must_use]
    pub fn brings_strength(&self) -> bool {
        matches!(self, Self::Flatte { .. } | Self::Dressed { .. })
    }
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
