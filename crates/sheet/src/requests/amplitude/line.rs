//! Propagator and amplitude against W, poles, the same state in other words.

use super::words::{self, convention_of};
use super::{Elastic, Grid, PoleReading, Subject, Subjects, column, resonances, wave_of};
use crate::doc::Sheet;
use crate::requests::{Body, Column, Reply};
use widthwise_core::amplitude::born::Energy;
use widthwise_core::amplitude::hypothesis::{Hypothesis, MediatorPropagator};
use widthwise_core::amplitude::partial_wave::PreparedPartialWave;
use widthwise_core::error::{Answer, Refusal, Warning};
use widthwise_core::math;
use widthwise_core::propagator::Propagator;
use widthwise_core::propagator::conventions::{Convention, MassAndWidth, lifetime_s};
use widthwise_core::propagator::poles::Pole;

/// Most energies of a line.
pub const MOST_PLACES: u32 = 20_000;
/// Widths of a narrow peak at which a coarse line looks as well.
const LOOKS: [f64; 9] = [0.0, 0.15, 0.3, 0.5, 0.8, 1.2, 2.0, 4.0, 8.0];

/// Everything about one propagator (or the K-matrix) over a grid of energies in GeV.
pub fn line(sheet: &Sheet, of: u16, grid: &Grid) -> Answer<Reply> {
    let subjects = Subjects::new(sheet)?;
    let subject = subjects.get(of)?;
    let mut warnings = subjects.warnings.clone();
    if grid.from <= 0.0 || grid.to > 1e5 {
        return Err(Refusal::new(
            "energies",
            format!("{} to {} GeV", grid.from, grid.to),
            "above 0 and up to 100 TeV",
            "this is no range of energies",
        ));
    }
    let mut w = grid.values("energies", MOST_PLACES)?;
    let hypothesis = &subjects.frame.scan.hypothesis;
    let (mut columns, mass_gev, width_gev) = match subject {
        Subject::Propagator(propagator) => {
            let (mass, width) = (propagator.mass_gev(), propagator.width_gev());
            refine(&mut w, mass, width, grid);
            keep_known(&mut w, propagator, &mut warnings);
            (propagator_columns(propagator, &w)?, mass, width)
        }
        Subject::Matrix(matrix, (entrance, exit)) => {
            let t: Vec<_> = w
                .iter()
                .map(|w| matrix.at(*w).physical(*entrance, *exit))
                .collect();
            let columns = vec![
                column("|T|^2", "", t.iter().map(|t| t.norm_sqr()).collect()),
                column("Re T", "", t.iter().map(|t| t.re).collect()),
                column("Im T", "", t.iter().map(|t| t.im).collect()),
                column(
                    "phase",
                    "deg",
                    t.iter().map(|t| degrees(math::arg(*t))).collect(),
                ),
            ];
            let mass = match hypothesis {
                Hypothesis::KMatrix(model) => model.poles.first().map_or(1.0, |pole| pole.mass_gev),
                _ => 1.0,
            };
            (columns, mass, 0.0)
        }
    };
    let mut elastic = None;
    if let Some(wave) = wave_of(hypothesis, of) {
        let beams = &subjects.frame.scan.beams;
        let prepared = PreparedPartialWave::new(wave, beams)?;
        let t: Vec<_> = w
            .iter()
            .map(|w| prepared.amplitude(Energy::at(*w)))
            .collect();
        columns.push(column("Re T", "", t.iter().map(|t| t.re).collect()));
        columns.push(column("Im T", "", t.iter().map(|t| t.im).collect()));
        let both = widthwise_core::amplitude::elastic::Elastic::new(wave, beams);
        // Other forms have no such K-matrix beside them; that is no fault of the sheet.
        if let Ok(both) = both {
            elastic = Some(beside(&both, &w, &mut columns));
        }
    }
    columns.insert(0, column("W", "GeV", w));
    let search = subject.poles();
    let first = search.poles.first();
    let stable = matches!(subject, Subject::Propagator(p) if p.is_stable());
    Ok(Reply {
        body: Body::Amplitude {
            names: subjects.names.clone(),
            mass_gev,
            width_gev,
            lifetime_s: if stable { None } else { lifetime_s(width_gev) },
            stable,
            thresholds: search
                .branches
                .iter()
                .map(|b| (b.name.clone(), b.threshold_gev))
                .collect(),
            sheet: subject.sheet_at(mass_gev),
            words: in_other_words(hypothesis, of, first),
            poles: search.poles.iter().map(reading).collect(),
            pole_note: search.message.clone(),
            elastic,
            warnings,
        },
        columns,
    })
}

fn degrees(rad: f64) -> f64 {
    rad * 180.0 / core::f64::consts::PI
}

/// Adds energies across a peak that is narrower than the grid.
fn refine(w: &mut Vec<f64>, mass_gev: f64, width_gev: f64, grid: &Grid) {
    let step = (grid.to - grid.from) / f64::from(grid.places);
    if !(width_gev > 0.0 && width_gev < 8.0 * step) {
        return;
    }
    for x in LOOKS {
        for at in [mass_gev - x * width_gev, mass_gev + x * width_gev] {
            if at > grid.from && at < grid.to {
                w.push(at);
            }
        }
    }
    w.sort_by(f64::total_cmp);
    w.dedup();
}

/// Leaves out what has no value: on shell without a width, beyond the end of a table.
fn keep_known(w: &mut Vec<f64>, propagator: &Propagator, warnings: &mut Vec<Warning>) {
    let last = propagator.upper_limit_gev();
    if w.last().is_some_and(|w| *w > last) {
        w.retain(|w| *w <= last);
        warnings.push(Warning::new(
            "table-ends",
            format!("The tabulated width ends at {last} GeV: beyond it the propagator is not known and not shown."),
        ));
    }
    let mass = propagator.mass_gev();
    let on_shell = |w: &f64| {
        // A place that is M but for rounding has no value either.
        let near = (w - mass).abs() <= 1e-12 * mass;
        let w = if near { mass } else { *w };
        propagator.delta_per_gev2(Energy::at(w)).err()
    };
    if let Some(refusal) = w.iter().find_map(on_shell) {
        w.retain(|w| on_shell(w).is_none());
        warnings.push(Warning::new("on-shell", refusal.message));
    }
}

fn propagator_columns(propagator: &Propagator, w: &[f64]) -> Answer<Vec<Column>> {
    let n = w.len();
    let mut values: [Vec<f64>; 6] = core::array::from_fn(|_| Vec::with_capacity(n));
    for w in w {
        // Next to a narrow pole W - M is counted from M.
        let at = Energy {
            reference_gev: propagator.mass_gev(),
            offset_gev: w - propagator.mass_gev(),
        };
        let inverse = propagator.inverse_gev2(at);
        let delta = inverse.inv();
        // With a = -M Gamma(s) Delta: |1 + 2 i a| = 1, elastic scattering through this state alone.
        let a = -delta * inverse.im;
        let phase = degrees(math::arg(-delta));
        for (list, value) in
            values
                .iter_mut()
                .zip([delta.norm_sqr(), delta.re, delta.im, phase, a.re, a.im])
        {
            list.push(value);
        }
    }
    let names = [
        ("|Delta|^2", "GeV^-4"),
        ("Re Delta", "GeV^-2"),
        ("Im Delta", "GeV^-2"),
        ("phase", "deg"),
        ("Re a", ""),
        ("Im a", ""),
    ];
    Ok(names
        .iter()
        .zip(values)
        .map(|((name, unit), values)| column(*name, unit, values))
        .collect())
}

fn beside(
    both: &widthwise_core::amplitude::elastic::Elastic,
    w: &[f64],
    columns: &mut Vec<Column>,
) -> Elastic {
    let (sum, matrix): (Vec<f64>, Vec<f64>) = w.iter().map(|w| both.at(Energy::at(*w))).unzip();
    let (mut worst, mut at, mut largest) = (0.0, 0.0, 0.0f64);
    for ((w, sum), matrix) in w.iter().zip(&sum).zip(&matrix) {
        if *sum > worst {
            (worst, at) = (*sum, *w);
        }
        largest = largest.max(*matrix);
    }
    columns.push(column("elastic, sum", "", sum));
    columns.push(column("elastic, K-matrix", "", matrix));
    let how = if both.taken_elastic {
        " Only products of couplings are known, so entrance and exit were taken to be alike."
    } else {
        ""
    };
    let note = if worst > 1.0 + 1e-9 {
        format!(
            "The sum of resonances breaks unitarity: the elastic |T|^2 reaches {worst:.4} at {at:.6} GeV, and 1 is the most. The K-matrix with the same masses and partial widths stays at or below {largest:.4}.{how}"
        )
    } else {
        format!(
            "The sum of resonances keeps unitarity here: the elastic |T|^2 reaches {}, and 1 is the most.{how}",
            crate::quantity::format::significant(worst, 4)
        )
    };
    Elastic {
        w_gev: at,
        sum: worst,
        k_matrix: largest,
        note,
    }
}

fn reading(pole: &Pole) -> PoleReading {
    PoleReading {
        mass_gev: pole.mass_gev,
        width_gev: pole.width_gev,
        mass_bar_gev: pole.mass_bar_gev,
        width_bar_gev: pole.width_bar_gev,
        residue: pole.residue.map(|r| (r.re, r.im)),
        sheet: pole.sheet.clone(),
    }
}

/// Mass and width in all conventions: from the form's own where it has one, else from its pole.
fn in_other_words(hypothesis: &Hypothesis, of: u16, pole: Option<&Pole>) -> Vec<super::Words> {
    let index = usize::from(of);
    let declared = match hypothesis {
        Hypothesis::Diagrams(model) => {
            model
                .mediators
                .get(index)
                .and_then(|m| match &m.propagator {
                    MediatorPropagator::Form { form, width_gev } => {
                        Some((form, m.mass_gev, *width_gev))
                    }
                    MediatorPropagator::Dressed { .. } => None,
                })
        }
        _ => resonances(hypothesis)
            .nth(index)
            .map(|r| (&r.form, r.mass_gev, r.width_gev)),
    };
    let own = declared.and_then(|(form, mass_gev, width_gev)| {
        Some(MassAndWidth {
            convention: convention_of(form)?,
            mass_gev,
            width_gev,
        })
    });
    let from_pole = || {
        pole.map(|pole| MassAndWidth {
            convention: Convention::PoleInW,
            mass_gev: pole.mass_gev,
            width_gev: pole.width_gev,
        })
    };
    own.or_else(from_pole).map_or_else(Vec::new, words::all)
}
