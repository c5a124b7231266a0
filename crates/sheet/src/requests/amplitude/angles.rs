//! |M|^2 and dsigma/dcos over energy and angle, as an image and along one line.

use super::{Grid, column, plane::MOST_SIDE};
use crate::check;
use crate::doc::Sheet;
use crate::requests::{Along, Body, Column, DiagramReading, Reply, first_problem};
use widthwise_core::amplitude::Region;
use widthwise_core::amplitude::born::{Born, Energy};
use widthwise_core::amplitude::diagrams::{Channel, PreparedDiagrams};
use widthwise_core::amplitude::hypothesis::{Diagrams, Hypothesis};
use widthwise_core::amplitude::waves::PreparedWaves;
use widthwise_core::beam::Beams;
use widthwise_core::error::{Answer, Refusal, Warning};

/// What has angles.
enum Angular {
    Diagrams(Box<Diagrams>, Box<PreparedDiagrams>),
    Waves(Box<PreparedWaves>),
}

struct Prepared {
    angular: Angular,
    warnings: Vec<Warning>,
    last_gev: f64,
}

impl Prepared {
    fn new(sheet: &Sheet) -> Answer<Self> {
        let (frame, warnings) = check::frame(sheet).map_err(first_problem)?;
        let beams: &Beams = &frame.scan.beams;
        let (angular, last_gev) = match &frame.scan.hypothesis {
            Hypothesis::Diagrams(model) => {
                let prepared = PreparedDiagrams::new(model, beams)?;
                let total = frame.scan.hypothesis.prepare(beams)?;
                (
                    Angular::Diagrams(Box::new(model.clone()), Box::new(prepared)),
                    total.upper_limit_gev(),
                )
            }
            Hypothesis::Waves(model) => {
                let prepared = PreparedWaves::new(model, beams, &Region::all())?;
                let last = prepared.upper_limit_gev();
                (Angular::Waves(Box::new(prepared)), last)
            }
            _ => {
                return Err(Refusal::new(
                    "model.hypothesis",
                    "no angles",
                    "diagrams, or several partial waves",
                    "this hypothesis says nothing about angles: give the helicity or LS couplings of entrance and exit, or diagrams",
                ));
            }
        };
        Ok(Self {
            angular,
            warnings,
            last_gev,
        })
    }

    fn known(&self, w: &mut Vec<f64>) {
        w.retain(|w| *w > 0.0 && *w <= self.last_gev);
    }
}

fn check_cos(grid: &Grid) -> Answer<()> {
    if grid.from >= -1.0 && grid.to <= 1.0 {
        return Ok(());
    }
    Err(Refusal::new(
        "cos",
        format!("{} to {}", grid.from, grid.to),
        "-1 to 1",
        "cos theta lies between -1 and 1",
    ))
}

/// The (W, cos theta) plane, row by row in W: |M|^2, or dsigma/dcos in nb with `cross_section`.
pub fn image(sheet: &Sheet, w: &Grid, cos: &Grid, cross_section: bool) -> Answer<Reply> {
    let prepared = Prepared::new(sheet)?;
    check_cos(cos)?;
    let mut energies = w.values("w", MOST_SIDE)?;
    prepared.known(&mut energies);
    let angles = cos.values("cos", MOST_SIDE)?;
    let mut values = match &prepared.angular {
        Angular::Diagrams(_, diagrams) => diagrams.m2_grid(&energies, &angles),
        Angular::Waves(waves) => waves.dsigma_dcos_grid_nb(&energies, &angles),
    };
    if let (Angular::Diagrams(_, diagrams), true) = (&prepared.angular, cross_section) {
        for (row, w) in values.chunks_mut(angles.len()).zip(&energies) {
            let scale = diagrams.prefactor_nb(*w);
            for value in row {
                *value *= scale;
            }
        }
    }
    let squared = matches!(prepared.angular, Angular::Diagrams(..)) && !cross_section;
    let (name, unit) = if squared {
        ("|M|^2", "")
    } else {
        ("dsigma/dcos", "nb")
    };
    let least = values.iter().copied().fold(f64::INFINITY, f64::min);
    let most = values.iter().copied().fold(f64::NEG_INFINITY, f64::max);
    Ok(Reply {
        body: Body::Image {
            columns: cos.places,
            rows: u32::try_from(energies.len()).unwrap_or(0),
            least,
            most,
            sheet: Vec::new(),
            warnings: prepared.warnings,
        },
        columns: vec![
            column(name, unit, values),
            column("cos theta", "", angles),
            column("W", "GeV", energies),
        ],
    })
}

/// |M|^2 (and the pre-factor of dsigma/dcos) by diagram and interference along W at fixed
/// cos theta, or along cos theta at fixed W (GeV); of waves dsigma/dcos.
pub fn slice(sheet: &Sheet, along: Along, at: f64, grid: &Grid) -> Answer<Reply> {
    let prepared = Prepared::new(sheet)?;
    let mut x = grid.values("grid", super::line::MOST_PLACES)?;
    match along {
        Along::W => {
            check_cos(&Grid {
                from: at.min(1.0),
                to: at.max(-1.0),
                places: 2,
            })?;
            prepared.known(&mut x);
        }
        Along::Cos => {
            check_cos(grid)?;
            if !(at > 0.0 && at <= prepared.last_gev.min(1e5)) {
                return Err(Refusal::new(
                    "at",
                    at,
                    "an energy above 0 at which the model is known",
                    "this is no energy of this model",
                ));
            }
        }
    }
    let place = |x: f64| match along {
        Along::W => (Energy::at(x), at),
        Along::Cos => (Energy::at(at), x),
    };
    let mut columns: Vec<Column> = Vec::new();
    let (mut identical_factor, mut drawn) = (1.0, Vec::new());
    match &prepared.angular {
        Angular::Diagrams(model, diagrams) => {
            identical_factor = model.reaction.identical_factor();
            drawn = drawn_diagrams(model);
            let n = drawn.len() * (drawn.len() + 1) / 2;
            let names = diagrams.names().get(..n).unwrap_or_default();
            let mut parts = vec![Vec::with_capacity(x.len()); n];
            let mut out = vec![0.0; n];
            let (mut total, mut prefactor) = (Vec::new(), Vec::new());
            for x in &x {
                let (energy, cos) = place(*x);
                diagrams.m2_parts(energy, cos, &mut out);
                for (list, value) in parts.iter_mut().zip(&out) {
                    list.push(*value);
                }
                total.push(diagrams.m2(energy, cos));
                prefactor.push(diagrams.prefactor_nb(energy.w_gev()));
            }
            columns.push(column("pre-factor", "nb", prefactor));
            columns.push(column("|M|^2", "", total));
            for (name, values) in names.iter().zip(parts) {
                columns.push(column(name.clone(), "", values));
            }
        }
        Angular::Waves(waves) => {
            let values = x
                .iter()
                .map(|x| {
                    let (energy, cos) = place(*x);
                    waves.dsigma_dcos_nb(energy, cos)
                })
                .collect();
            columns.push(column("dsigma/dcos", "nb", values));
        }
    }
    let first = match along {
        Along::W => column("W", "GeV", x),
        Along::Cos => column("cos theta", "", x),
    };
    columns.insert(0, first);
    Ok(Reply {
        body: Body::Slice {
            identical_factor,
            diagrams: drawn,
            warnings: prepared.warnings,
        },
        columns,
    })
}

/// The diagrams in the order of their names.
fn drawn_diagrams(model: &Diagrams) -> Vec<DiagramReading> {
    let mut all = Vec::new();
    for channel in model.reaction.channels() {
        for mediator in &model.mediators {
            all.push(DiagramReading {
                channel: match channel {
                    Channel::S => "s",
                    Channel::T => "t",
                    Channel::U => "u",
                }
                .to_string(),
                mediator: mediator.name.clone(),
                fermion_exchanged: model.reaction.exchanges_fermion(),
            });
        }
    }
    all
}
