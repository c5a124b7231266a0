//! The document. Version 1.
//!
//! Every number is kept as the text a person typed, with its unit ("2874.20(5) MeV",
//! "9.0e30 cm^-2 s^-1", "3 %"), so that nothing typed is lost, no digit is invented, a
//! half-typed field can be saved, and every number in the file carries its unit.
//! What the text means is decided in one place (`quantity`), what is allowed in another (`limits`).

use serde::{Deserialize, Serialize};

/// Text of one number with its unit, as typed.
pub type Quantity = String;

macro_rules! document {
    ($($(#[$meta:meta])* pub $kind:ident $name:ident { $($body:tt)* })*) => {
        $(
            $(#[$meta])*
            #[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
            #[cfg_attr(feature = "typescript", derive(ts_rs::TS))]
            pub $kind $name { $($body)* }
        )*
    };
}

document! {
    /// The scan sheet.
    #[serde(deny_unknown_fields)]
    pub struct Sheet {
        /// Always "widthwise scan sheet".
        pub format: String,
        /// Version of the document's layout.
        pub version: u32,
        /// Title.
        #[serde(default)]
        pub title: String,
        /// True for invented data: shown wherever the sheet shows.
        #[serde(default)]
        pub invented: bool,
        /// Free note.
        #[serde(default)]
        pub note: String,
        /// Beams and their dial.
        pub beam: Beam,
        /// Hypothesis.
        pub model: Model,
        /// From cross section to counts.
        pub detection: Detection,
        /// What has been measured.
        pub data: Data,
        /// What the fit leaves free.
        #[serde(default)]
        pub fit: Fit,
        /// What the plan may do.
        #[serde(default)]
        pub plan: Plan,
    }

    /// Beams.
    #[serde(deny_unknown_fields)]
    pub struct Beam {
        /// How the beams meet.
        pub arrangement: Arrangement,
        /// Beam 1.
        pub first: ParticleChoice,
        /// Beam 2, or the target.
        pub second: ParticleChoice,
        /// What the dial shows.
        pub dial: Dial,
        /// Crossing angle, 0 = head-on.
        #[serde(default, skip_serializing_if = "Option::is_none")]
        pub crossing_angle: Option<Quantity>,
        /// Fixed energy of beam 2, in the dial's kind (total, kinetic or momentum; total if the dial is W).
        #[serde(default, skip_serializing_if = "Option::is_none")]
        pub second_setting: Option<Quantity>,
        /// Spread.
        pub spread: Spread,
        /// Instantaneous luminosity.
        #[serde(default, skip_serializing_if = "Option::is_none")]
        pub luminosity: Option<Quantity>,
        /// Tie between dialled value and true W.
        #[serde(default)]
        pub calibration: Calibration,
    }

    /// How the beams meet.
    #[derive(Copy, Eq)]
    #[serde(rename_all = "snake_case")]
    pub enum Arrangement {
        /// Two beams dialled alike.
        EqualBeams,
        /// Beam 1 dialled, beam 2 fixed.
        UnequalBeams,
        /// Beam 2 at rest.
        FixedTarget,
    }

    /// What the dial shows.
    #[derive(Copy, Eq)]
    #[serde(rename_all = "snake_case")]
    pub enum Dial {
        /// W.
        W,
        /// Total energy of beam 1.
        TotalEnergy,
        /// Kinetic energy of beam 1.
        KineticEnergy,
        /// Momentum of beam 1.
        Momentum,
    }

    /// A particle from the table (name alone) or typed in.
    #[serde(deny_unknown_fields)]
    pub struct ParticleChoice {
        /// Name.
        pub name: String,
        /// Mass, if not from the table.
        #[serde(default, skip_serializing_if = "Option::is_none")]
        pub mass: Option<Quantity>,
        /// Spin ("0", "1/2", "1"), if not from the table.
        #[serde(default, skip_serializing_if = "Option::is_none")]
        pub spin: Option<String>,
    }

    /// Spread of the beams.
    #[serde(deny_unknown_fields)]
    pub struct Spread {
        /// Which of the numbers below count.
        pub kind: SpreadKind,
        /// sigma_W (kind w), or relative spread of each beam (kind relative), or absolute spread of beam 1 in the dial's kind (kind each).
        #[serde(default, skip_serializing_if = "Option::is_none")]
        pub first: Option<Quantity>,
        /// Spread of beam 2 where it differs.
        #[serde(default, skip_serializing_if = "Option::is_none")]
        pub second: Option<Quantity>,
        /// How well it is known, relative ("3 %").
        #[serde(default, skip_serializing_if = "Option::is_none")]
        pub known_to: Option<Quantity>,
        /// Growth with W: "0", "1" or "2" (power).
        #[serde(default, skip_serializing_if = "Option::is_none")]
        pub power: Option<String>,
        /// Rows (offset, weight) of a tabulated shape.
        #[serde(default, skip_serializing_if = "Vec::is_empty")]
        pub table: Vec<(Quantity, Quantity)>,
    }

    /// Kind of spread.
    #[derive(Copy, Eq)]
    #[serde(rename_all = "snake_case")]
    pub enum SpreadKind {
        /// None.
        None,
        /// Gaussian of W.
        W,
        /// Gaussian, relative per beam (of the dial's kind).
        Relative,
        /// Gaussian, absolute per beam (of the dial's kind).
        Each,
        /// Tabulated in W.
        Table,
    }

    /// Dialled value -> true W: W_true = (1 + slope) W_dialled + offset.
    #[derive(Default)]
    #[serde(deny_unknown_fields, default)]
    pub struct Calibration {
        /// Offset of W.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub offset: Option<Quantity>,
        /// Relative slope.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub slope: Option<Quantity>,
        /// When it was taken (RFC 3339 with zone).
        #[serde(skip_serializing_if = "Option::is_none")]
        pub at: Option<String>,
        /// How, by whom.
        #[serde(skip_serializing_if = "String::is_empty")]
        pub note: String,
    }

    /// Hypothesis.
    #[serde(deny_unknown_fields)]
    pub struct Model {
        /// J of the coherent sum ("0", "1/2", "1", ...).
        pub j: String,
        /// Resonances.
        pub resonances: Vec<Resonance>,
        /// Background inside the modulus.
        #[serde(default, skip_serializing_if = "Option::is_none")]
        pub coherent: Option<Coherent>,
        /// Background outside the modulus.
        #[serde(default, skip_serializing_if = "Option::is_none")]
        pub incoherent: Option<Incoherent>,
        /// Final state as shown ("b bbar").
        #[serde(default)]
        pub final_state: String,
        /// Sum of the final state's masses.
        #[serde(default, skip_serializing_if = "Option::is_none")]
        pub final_threshold: Option<Quantity>,
        /// Radiation.
        pub radiation: Radiation,
        /// Number on the continuum.
        #[serde(default, skip_serializing_if = "Option::is_none")]
        pub continuum_factor: Option<Quantity>,
        /// Requested relative accuracy; 1e-6 if absent.
        #[serde(default, skip_serializing_if = "Option::is_none")]
        pub accuracy: Option<Quantity>,
    }

    /// Initial-state radiation.
    #[serde(deny_unknown_fields)]
    pub struct Radiation {
        /// On or off.
        pub on: bool,
        /// Least W left after radiation; required if on.
        #[serde(default, skip_serializing_if = "Option::is_none")]
        pub w_min: Option<Quantity>,
    }

    /// One resonance.
    #[serde(deny_unknown_fields)]
    pub struct Resonance {
        /// Name.
        pub name: String,
        /// Mass.
        pub mass: Quantity,
        /// Width.
        pub width: Quantity,
        /// Strength.
        pub strength: Strength,
        /// Phase; absent = 0.
        #[serde(default, skip_serializing_if = "Option::is_none")]
        pub phase: Option<Quantity>,
        /// Propagator.
        pub form: Form,
        /// Width channels (running width).
        #[serde(default, skip_serializing_if = "Vec::is_empty")]
        pub channels: Vec<Channel>,
        /// Entrance vertex; absent = the form's default.
        #[serde(default, skip_serializing_if = "Option::is_none")]
        pub entrance: Option<Vertex>,
        /// Exit vertex; absent = the form's default.
        #[serde(default, skip_serializing_if = "Option::is_none")]
        pub exit: Option<Vertex>,
    }

    /// Strength of a resonance.
    #[serde(tag = "kind", rename_all = "snake_case", deny_unknown_fields)]
    pub enum Strength {
        /// Gamma_in B_f.
        GammaInBf {
            /// Energy.
            value: Quantity,
        },
        /// B_in B_f.
        BinBf {
            /// Number.
            value: Quantity,
        },
        /// B_in and B_f.
        Branchings {
            /// Number.
            b_in: Quantity,
            /// Number.
            b_f: Quantity,
        },
        /// Gamma_in and Gamma_f.
        PartialWidths {
            /// Energy.
            gamma_in: Quantity,
            /// Energy.
            gamma_f: Quantity,
        },
    }

    /// Propagator.
    #[derive(Copy, Eq)]
    #[serde(rename_all = "snake_case")]
    pub enum Form {
        /// Constant width.
        ConstantWidth,
        /// Massless channels.
        MasslessChannels,
        /// Running width over the declared channels.
        RunningWidth,
    }

    /// One declared channel.
    #[serde(deny_unknown_fields)]
    pub struct Channel {
        /// Name.
        pub name: String,
        /// Gamma_c(M)/Gamma ("50.1 %").
        pub fraction: Quantity,
        /// How it runs.
        pub shape: Shape,
    }

    /// How a channel's width runs.
    #[serde(tag = "kind", rename_all = "snake_case", deny_unknown_fields)]
    pub enum Shape {
        /// Constant.
        Constant,
        /// s/M^2.
        Massless,
        /// Two spinless daughters.
        TwoBody {
            /// Mass 1.
            m1: Quantity,
            /// Mass 2.
            m2: Quantity,
            /// Orbital momentum.
            l: u8,
            /// Barrier radius (fm or GeV^-1); absent = none.
            #[serde(default, skip_serializing_if = "Option::is_none")]
            radius: Option<Quantity>,
        },
        /// Rows (W, ratio).
        Tabulated {
            /// Rows.
            rows: Vec<(Quantity, Quantity)>,
        },
    }

    /// Vertex.
    #[serde(tag = "kind", rename_all = "snake_case", deny_unknown_fields)]
    pub enum Vertex {
        /// M Gamma_c.
        Constant,
        /// M Gamma_c M^2/s.
        OnePhoton,
        /// M Gamma_c s/M^2.
        Massless,
        /// Running two-body channel.
        Running {
            /// Mass 1.
            m1: Quantity,
            /// Mass 2.
            m2: Quantity,
            /// Orbital momentum.
            l: u8,
            /// Barrier radius.
            #[serde(default, skip_serializing_if = "Option::is_none")]
            radius: Option<Quantity>,
        },
    }

    /// Background inside the modulus.
    #[serde(tag = "kind", rename_all = "snake_case", deny_unknown_fields)]
    pub enum Coherent {
        /// Polynomial in (W-W0)/GeV.
        Polynomial {
            /// W0.
            w0: Quantity,
            /// Coefficients.
            coefficients: Vec<Quantity>,
            /// Phase.
            phase: Quantity,
        },
        /// C/M_1^2 v_1(s).
        SharedVertices {
            /// C.
            c: Quantity,
        },
        /// One-photon continuum.
        OnePhoton {
            /// c at W0.
            c: Quantity,
            /// W0.
            w0: Quantity,
            /// Phase.
            phase: Quantity,
        },
    }

    /// Background outside the modulus.
    #[serde(tag = "kind", rename_all = "snake_case", deny_unknown_fields)]
    pub enum Incoherent {
        /// c0 (W0/W)^n.
        Power {
            /// c0.
            c0: Quantity,
            /// W0.
            w0: Quantity,
            /// n.
            n: Quantity,
        },
        /// Polynomial in (W-W0)/GeV.
        Polynomial {
            /// W0.
            w0: Quantity,
            /// Coefficients (cross sections; per GeV^i understood).
            coefficients: Vec<Quantity>,
        },
    }

    /// From cross section to counts.
    #[derive(Default)]
    #[serde(deny_unknown_fields, default)]
    pub struct Detection {
        /// Efficiency where a row brings none.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub efficiency: Option<Quantity>,
        /// Decay fractions of the final state's particles.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub decay_fraction: Option<Quantity>,
        /// Visible background cross section.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub background_cross_section: Option<Quantity>,
        /// Background rate.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub background_rate: Option<Quantity>,
        /// Live fraction where a row brings none.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub live_fraction: Option<Quantity>,
        /// tau where a row with off-region counts brings none.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub tau: Option<Quantity>,
    }

    /// What has been measured.
    #[derive(Default)]
    #[serde(deny_unknown_fields, default)]
    pub struct Data {
        /// How far the data are corrected.
        pub stage: Stage,
        /// With which cut on W radiation was removed (stage radiation_removed).
        #[serde(skip_serializing_if = "Option::is_none")]
        pub photon_cut: Option<Quantity>,
        /// Energy error common to all rows.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub common_energy_error: Option<Quantity>,
        /// Relative scale error common to all rows.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub common_scale_error: Option<Quantity>,
        /// Energy error common to a fill or group.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub group_energy_error: Option<Quantity>,
        /// Which luminosity counts where rows bring both.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub luminosity_source: Option<LuminositySource>,
        /// Rows.
        #[serde(skip_serializing_if = "Vec::is_empty")]
        pub rows: Vec<Row>,
        /// Pasted covariance of the rows' cross sections (row by row, with unit).
        #[serde(skip_serializing_if = "Vec::is_empty")]
        pub covariance: Vec<Vec<Quantity>>,
    }

    /// How far the data are corrected.
    #[derive(Copy, Eq, Default)]
    #[serde(rename_all = "snake_case")]
    pub enum Stage {
        /// As observed.
        #[default]
        Observed,
        /// Radiation removed.
        RadiationRemoved,
        /// Radiation and spread removed.
        Born,
    }

    /// Source of a luminosity.
    #[derive(Copy, Eq)]
    #[serde(rename_all = "snake_case")]
    pub enum LuminositySource {
        /// Monitor while running.
        Online,
        /// Final analysis.
        Final,
    }

    /// One row of data. Every field but setting or w, and counts or cross section, is optional.
    #[derive(Default)]
    #[serde(deny_unknown_fields, default)]
    pub struct Row {
        /// Id, unique in the sheet.
        pub id: String,
        /// Start, RFC 3339 with zone.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub start: Option<String>,
        /// Stop, RFC 3339 with zone.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub stop: Option<String>,
        /// Fill or group.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub group: Option<String>,
        /// Setting as dialled, in the dial's kind.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub setting: Option<Quantity>,
        /// W as calibrated; wins over setting.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub w: Option<Quantity>,
        /// Error of this W.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub w_error: Option<Quantity>,
        /// sigma_W of this point.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub sigma_w: Option<Quantity>,
        /// Integrated luminosity.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub luminosity: Option<Quantity>,
        /// Its statistical error.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub luminosity_error: Option<Quantity>,
        /// Where it comes from.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub luminosity_source: Option<LuminositySource>,
        /// The luminosity from the other source, kept for the swap.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub other_luminosity: Option<Quantity>,
        /// Live fraction.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub live_fraction: Option<Quantity>,
        /// Live time, if not stop - start.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub live_time: Option<Quantity>,
        /// Counts n.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub counts: Option<Quantity>,
        /// Counts in the off region.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub off_counts: Option<Quantity>,
        /// Ratio of off to on region.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub tau: Option<Quantity>,
        /// Efficiency.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub efficiency: Option<Quantity>,
        /// Its error.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub efficiency_error: Option<Quantity>,
        /// Exit channel.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub channel: Option<String>,
        /// Angular bins: edges in |cos theta| (or -1, 0, 1 for backward/forward) and counts.
        #[serde(skip_serializing_if = "Vec::is_empty")]
        pub angle_bins: Vec<AngleBin>,
        /// Cross section instead of counts.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub cross_section: Option<Quantity>,
        /// Its error.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub cross_section_error: Option<Quantity>,
        /// Left out of the fit.
        #[serde(skip_serializing_if = "core::ops::Not::not")]
        pub left_out: bool,
        /// Running now.
        #[serde(skip_serializing_if = "core::ops::Not::not")]
        pub running: bool,
        /// Comment.
        #[serde(skip_serializing_if = "String::is_empty")]
        pub comment: String,
        /// Columns of a loaded file that mean nothing to us, kept: (header, text).
        #[serde(skip_serializing_if = "Vec::is_empty")]
        pub other: Vec<(String, String)>,
    }

    /// One angular bin of a row.
    #[serde(deny_unknown_fields)]
    pub struct AngleBin {
        /// Lower edge.
        pub from: Quantity,
        /// Upper edge.
        pub to: Quantity,
        /// Counts.
        pub counts: Quantity,
    }

    /// What the fit leaves free. Parameter ids: `r1.mass`, `r1.width`, `r1.strength`, `r1.phase`,
    /// `coherent.phase`, `coherent.0`..., `incoherent.0`..., `spread`, `background.cross_section`, `background.rate`.
    #[derive(Default)]
    #[serde(deny_unknown_fields, default)]
    pub struct Fit {
        /// Ids of free parameters.
        pub free: Vec<String>,
        /// Constraints (id, value with error).
        #[serde(skip_serializing_if = "Vec::is_empty")]
        pub constraints: Vec<Constraint>,
    }

    /// A Gaussian constraint on a parameter.
    #[serde(deny_unknown_fields)]
    pub struct Constraint {
        /// Id.
        pub parameter: String,
        /// Value with error, "0.71(2) MeV".
        pub value: Quantity,
    }

    /// What the plan may do (grows with the planning room).
    #[derive(Default)]
    #[serde(deny_unknown_fields, default)]
    pub struct Plan {
        /// Parameter whose error is to be least; absent: all (D-optimal).
        #[serde(skip_serializing_if = "Option::is_none")]
        pub goal: Option<String>,
        /// Least W.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub from: Option<Quantity>,
        /// Largest W.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub to: Option<Quantity>,
        /// Step between allowed settings.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub step: Option<Quantity>,
        /// Hours left.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub hours: Option<Quantity>,
        /// Unit of dwell time.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub dwell_step: Option<Quantity>,
        /// Least dwell.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub least_dwell: Option<Quantity>,
        /// Settle time per change.
        #[serde(skip_serializing_if = "Option::is_none")]
        pub settle: Option<Quantity>,
    }
}
