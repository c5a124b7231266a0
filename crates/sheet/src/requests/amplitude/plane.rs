//! |Delta| over the complex plane of sqrt(s) on a chosen sheet.

use super::{Grid, Subjects, column};
use crate::doc::Sheet;
use crate::requests::{Body, Reply};
use widthwise_core::error::{Answer, Refusal};
use widthwise_core::math;
use widthwise_core::math::Complex64;

/// Most places of an image on each side.
pub const MOST_SIDE: u32 = 1000;

/// ln |Delta| over a grid in Re and Im of sqrt(s), GeV, row by row from the least imaginary part;
/// `sheet`: signs of Im q per threshold (true: +), empty: the sheet next to the real axis at M.
pub fn plane(sheet: &Sheet, of: u16, signs: &[bool], re: &Grid, im: &Grid) -> Answer<Reply> {
    let subjects = Subjects::new(sheet)?;
    let subject = subjects.get(of)?;
    let (x, y) = (re.values("re", MOST_SIDE)?, im.values("im", MOST_SIDE)?);
    let form = subject.continued();
    let middle = match subject {
        super::Subject::Propagator(of) => of.mass_gev(),
        super::Subject::Matrix(..) => 0.5 * (re.from + re.to),
    };
    let own = subject.sheet_at(middle);
    let signs = if signs.is_empty() {
        own.as_slice()
    } else {
        signs
    };
    if signs.len() != own.len() {
        return Err(Refusal::new(
            "sheet",
            signs.len(),
            format!("{} signs", own.len()),
            "every threshold has two sheets, so there is one sign for each",
        ));
    }
    let mut values = Vec::with_capacity(x.len() * y.len());
    let (mut least, mut most) = (f64::INFINITY, f64::NEG_INFINITY);
    for im in &y {
        for re in &x {
            let w = Complex64::new(*re, *im);
            let Some(inverse) = form.on_sheet(w * w, signs) else {
                return Err(Refusal::new(
                    "of",
                    "tabulated width",
                    "a form that can be continued",
                    "a tabulated width is known on the real axis only: it has no continuation to complex energies",
                ));
            };
            // On a pole or a branch point the logarithm is held at what a double can say.
            let value = -math::ln(math::abs(inverse).clamp(1e-300, 1e300));
            least = least.min(value);
            most = most.max(value);
            values.push(value);
        }
    }
    Ok(Reply {
        body: Body::Image {
            columns: re.places,
            rows: im.places,
            least,
            most,
            sheet: signs.to_vec(),
            warnings: subjects.warnings,
        },
        columns: vec![
            column("ln |Delta|", "", values),
            column("Re sqrt(s)", "GeV", x),
            column("Im sqrt(s)", "GeV", y),
        ],
    })
}
