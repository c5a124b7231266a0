//! A sheet made ready for evaluation: frame, Born cross section and chain.

use super::first_problem;
use crate::check::{self, Frame};
use crate::doc::Sheet;
use widthwise_core::amplitude::born::{Born, Feature};
use widthwise_core::error::{Answer, Warning};
use widthwise_core::line_shape::Chain;
use widthwise_core::scan::Stage;

/// What curve, cursor and points share.
pub struct Ready {
    /// The sheet without rows.
    pub frame: Frame,
    /// Born cross section.
    pub born: Box<dyn Born + Send + Sync>,
    /// Radiation and spread.
    pub chain: Chain,
    /// What was assumed.
    pub warnings: Vec<Warning>,
}

impl Ready {
    /// Of a sheet.
    ///
    /// # Errors
    /// The first thing that is wrong with beams, model or detection.
    pub fn new(sheet: &Sheet) -> Answer<Self> {
        let (frame, warnings) = check::frame(sheet).map_err(first_problem)?;
        Self::of(frame, warnings)
    }

    /// Of a frame that is already understood.
    ///
    /// # Errors
    /// What the core refuses.
    pub fn of(frame: Frame, warnings: Vec<Warning>) -> Answer<Self> {
        let scan = &frame.scan;
        let born = scan.hypothesis.prepare(&scan.beams)?;
        let chain = Chain::new(&scan.chain, &scan.beams)?;
        Ok(Self {
            frame,
            born,
            chain,
            warnings,
        })
    }

    /// (position, full width) of every peak, GeV.
    #[must_use]
    pub fn peaks(&self) -> Vec<(f64, f64)> {
        self.born
            .features()
            .into_iter()
            .filter_map(|f| match f {
                Feature::Peak { w_gev, width_gev } => Some((w_gev, width_gev)),
                Feature::Kink { .. } => None,
            })
            .collect()
    }

    /// |dsigma/dW| scale: a step of W over which the observed curve hardly bends, GeV.
    fn step_gev(&self, w_gev: f64) -> f64 {
        let spread = self.chain.sigma_w_gev(w_gev).unwrap_or(0.0);
        let width = self
            .peaks()
            .iter()
            .map(|(_, width)| *width)
            .fold(f64::INFINITY, f64::min);
        let scale = spread.max(if width.is_finite() { width } else { 0.0 });
        0.02 * if scale > 0.0 { scale } else { 1e-3 * w_gev }
    }

    /// sigma and dsigma/dW at each energy, at a stage: central differences, about 1e-4 relative.
    ///
    /// # Errors
    /// What the chain refuses.
    pub fn sigma_and_slope(
        &self,
        w_gev: &[f64],
        sigma_w_gev: &[Option<f64>],
        stage: Stage,
    ) -> Answer<Vec<(f64, f64)>> {
        let mut energies = Vec::with_capacity(3 * w_gev.len());
        let mut spreads = Vec::with_capacity(3 * w_gev.len());
        for (i, &w) in w_gev.iter().enumerate() {
            let h = self.step_gev(w);
            energies.extend([w, w - h, w + h]);
            spreads.extend([sigma_w_gev.get(i).copied().flatten(); 3]);
        }
        let found =
            self.chain
                .cross_sections(self.born.as_ref(), &energies, Some(&spreads), stage)?;
        let triples = found
            .values_nb
            .chunks_exact(3)
            .zip(energies.chunks_exact(3));
        Ok(triples
            .filter_map(|(s, w)| match (s, w) {
                ([at, below, above], [_, low, high]) => Some((*at, (above - below) / (high - low))),
                _ => None,
            })
            .collect())
    }
}
