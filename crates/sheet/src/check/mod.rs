//! From the sheet to the core's scan - or everything that is wrong with it.
//!
//! Nothing is repaired: a field that is not understood is a refusal that names its path, the text
//! and what is allowed; what is assumed in a field's absence is a warning. A half-typed row does
//! not keep the curve from being drawn: beams, model and detection ([`Frame`]) are understood
//! apart from the rows.

mod amplitude;
mod beam;
mod channels;
mod data;
mod detection;
mod log;
mod model;
mod plan;
mod resonance;
mod rows;

pub use beam::{Frame, dial_dimension, setting_kind, twice};
pub use channels::{path_of as channel_path, sheet_of as channel_sheet};
pub use plan::{CombReading, GoalReading, PlanReading, Wanted};
pub use rows::RowReading;

use crate::doc::Sheet;
use log::Log;
use widthwise_core::error::{Refusal, Warning};
use widthwise_core::scan::{CommonErrors, Scan};

/// A sheet as the core understands it.
#[derive(Debug, Clone)]
pub struct Understood {
    /// Everything that is wrong; rows that are left out included.
    pub problems: Vec<Refusal>,
    /// What was assumed, and what the user should know.
    pub warnings: Vec<Warning>,
    /// Beams, model, detection and common errors; `None` if one of them is not understood.
    pub frame: Option<Frame>,
    /// Rows in the sheet's order.
    pub rows: Vec<RowReading>,
    /// Covariance of the cross sections of all rows, nb^2.
    covariance_nb2: Vec<Vec<f64>>,
    /// Covariance of the energies of all rows, GeV^2.
    energy_covariance_gev2: Vec<Vec<f64>>,
}

impl Understood {
    /// The scan with the points in use.
    ///
    /// # Errors
    /// Everything that is wrong, rows that are left out excepted.
    pub fn scan(&self) -> Result<Scan, Vec<Refusal>> {
        let left_out: Vec<String> = self
            .rows
            .iter()
            .enumerate()
            .filter(|(_, row)| row.left_out)
            .map(|(i, _)| format!("data.rows[{i}]."))
            .collect();
        let problems: Vec<Refusal> = self
            .problems
            .iter()
            .filter(|p| !left_out.iter().any(|path| p.field.starts_with(path)))
            .cloned()
            .collect();
        let Some(frame) = self.frame.as_ref().filter(|_| problems.is_empty()) else {
            return Err(problems);
        };
        let used: Vec<usize> = (0..self.rows.len())
            .filter(|i| {
                self.rows
                    .get(*i)
                    .is_some_and(|r| !r.left_out && r.point.is_some())
            })
            .collect();
        let points = used
            .iter()
            .filter_map(|i| self.rows.get(*i).and_then(|r| r.point.clone()))
            .collect();
        let mut scan = frame.scan.clone();
        scan.points = points;
        scan.covariance_nb2 = select(&self.covariance_nb2, &used);
        scan.common = CommonErrors {
            energy_covariance_gev2: select(&self.energy_covariance_gev2, &used),
            ..scan.common
        };
        Ok(scan)
    }
}

/// The rows and columns of a matrix that belong to the rows in use.
fn select(matrix: &[Vec<f64>], used: &[usize]) -> Option<Vec<f64>> {
    if matrix.is_empty() {
        return None;
    }
    let mut out = Vec::with_capacity(used.len() * used.len());
    for i in used {
        for j in used {
            out.push(*matrix.get(*i)?.get(*j)?);
        }
    }
    Some(out)
}

/// Understands a sheet.
#[must_use]
pub fn understand(sheet: &Sheet) -> Understood {
    let mut log = Log::default();
    header(sheet, &mut log);
    let frame = frame_into(sheet, &mut log);
    let rows = rows::read(sheet, frame.as_ref(), &mut log);
    let covariance_nb2 = data::cross_section_covariance(sheet, &mut log);
    let energy_covariance_gev2 = data::energy_covariance(sheet, &mut log);
    Understood {
        problems: log.problems,
        warnings: log.warnings,
        frame,
        rows,
        covariance_nb2,
        energy_covariance_gev2,
    }
}

/// Understands what the plan may do.
///
/// # Errors
/// Everything that is wrong with it.
pub fn plan(sheet: &Sheet) -> Result<PlanReading, Vec<Refusal>> {
    let mut log = Log::default();
    let reading = plan::read(sheet, &mut log);
    if log.problems.is_empty() {
        Ok(reading)
    } else {
        Err(log.problems)
    }
}

/// Understands all but the rows.
///
/// # Errors
/// Everything that is wrong with beams, model, detection or common errors.
pub fn frame(sheet: &Sheet) -> Result<(Frame, Vec<Warning>), Vec<Refusal>> {
    let mut log = Log::default();
    header(sheet, &mut log);
    match frame_into(sheet, &mut log) {
        Some(frame) if log.problems.is_empty() => Ok((frame, log.warnings)),
        _ => Err(log.problems),
    }
}

fn frame_into(sheet: &Sheet, log: &mut Log) -> Option<Frame> {
    let before = log.problems.len();
    let beams = beam::beams(&sheet.beam, log);
    let calibration = beam::calibration(&sheet.beam.calibration, log);
    let hypothesis = model::hypothesis(&sheet.model, beams.as_ref(), log);
    let w0 = hypothesis.as_ref().and_then(model::resonance_gev);
    let anchor = hypothesis
        .as_ref()
        .zip(beams.as_ref())
        .map(|(hypothesis, beams)| model::anchor_gev(sheet, hypothesis, beams));
    let spread = beam::spread(&sheet.beam, beams.as_ref(), anchor, log);
    let above = |mass: &f64| {
        beams
            .as_ref()
            .is_some_and(|b| *mass > b.first.mass_gev + b.second.mass_gev)
    };
    let chain = model::chain(sheet, beams.as_ref(), spread, w0.filter(above), log);
    let detection = detection::detection(sheet, log);
    let exits = channels::channels(sheet, beams.as_ref(), chain.as_ref(), log);
    let common = data::common_errors(sheet, log);
    plan::read(sheet, log);
    if log.problems.len() > before {
        return None;
    }
    Some(Frame {
        calibration,
        scan: Scan {
            beams: beams?,
            hypothesis: hypothesis?,
            chain: chain?,
            detection,
            stage: data::stage(&sheet.data, log),
            points: Vec::new(),
            common,
            covariance_nb2: None,
            exits,
        },
    })
}

fn header(sheet: &Sheet, log: &mut Log) {
    if let Err(refusal) = crate::json::check_header(&sheet.format, u64::from(sheet.version)) {
        log.problems.push(refusal);
    }
}
