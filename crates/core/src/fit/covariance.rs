//! Curvature errors: covariance = 2 H^-1, H the observed second derivatives of 2 NLL.

use nalgebra::{DMatrix, DVector, SymmetricEigen};

/// Inverse curvature at a minimum.
#[derive(Debug, Clone)]
pub struct Covariance {
    /// Over all coordinates; rows of coordinates at a bound, and of undetermined ones, are 0.
    pub matrix: DMatrix<f64>,
    /// Largest over smallest eigenvalue of the matrix of second derivatives, scaled to unit diagonal.
    pub condition: f64,
    /// Coordinates (by index) that the data do not determine: they belong to a direction of no curvature.
    pub undetermined: Vec<usize>,
    /// The observed curvature was not positive; the expected one has been used.
    pub expected_used: bool,
}

/// Smallest eigenvalue of the scaled curvature that counts as determined.
const FLAT: f64 = 1e-9;

impl Covariance {
    /// From observed and expected second derivatives, without the coordinates in `out`.
    #[must_use]
    pub fn new(observed: &DMatrix<f64>, expected: &DMatrix<f64>, out: &[bool]) -> Self {
        let open: Vec<usize> = (0..observed.nrows())
            .filter(|&i| !out.get(i).copied().unwrap_or(false))
            .collect();
        let first = Self::invert(observed, &open);
        match first {
            Some(found) if found.undetermined.is_empty() => found,
            other => {
                let mut fallback = Self::invert(expected, &open).unwrap_or_else(|| Self {
                    matrix: DMatrix::zeros(observed.nrows(), observed.nrows()),
                    condition: f64::INFINITY,
                    undetermined: open.clone(),
                    expected_used: false,
                });
                // A flat direction of the observed curvature may only be rounding of a positive one.
                if let Some(found) = other
                    && found.undetermined.len() <= fallback.undetermined.len()
                {
                    return found;
                }
                fallback.expected_used = true;
                fallback
            }
        }
    }

    /// Inverse on the determined subspace; `None` if a clearly negative direction exists.
    fn invert(curvature: &DMatrix<f64>, open: &[usize]) -> Option<Self> {
        let n = curvature.nrows();
        let mut out = Self {
            matrix: DMatrix::zeros(n, n),
            condition: 1.0,
            undetermined: Vec::new(),
            expected_used: false,
        };
        if open.is_empty() {
            return Some(out);
        }
        let mut scale = Vec::with_capacity(open.len());
        for &i in open {
            let c = curvature[(i, i)];
            if c.is_nan() || c < 0.0 {
                return None;
            }
            scale.push(if c > 0.0 { 1.0 / c.sqrt() } else { 0.0 });
        }
        let scaled = DMatrix::from_fn(open.len(), open.len(), |a, b| {
            curvature[(open[a], open[b])] * scale[a] * scale[b]
        });
        if !scaled.iter().all(|v| v.is_finite()) {
            return None;
        }
        let eigen = SymmetricEigen::new(scaled);
        let largest = eigen.eigenvalues.max();
        let smallest = eigen.eigenvalues.min();
        if smallest < -1e-6 {
            return None;
        }
        out.condition = if smallest > 0.0 {
            largest / smallest
        } else {
            f64::INFINITY
        };
        let mut flat = vec![0.0; open.len()];
        let inverse = DVector::from_iterator(
            open.len(),
            eigen
                .eigenvalues
                .iter()
                .map(|&v| if v > FLAT { 2.0 / v } else { 0.0 }),
        );
        for (m, &v) in eigen.eigenvalues.iter().enumerate() {
            if v <= FLAT {
                for (a, slot) in flat.iter_mut().enumerate() {
                    *slot += eigen.eigenvectors[(a, m)] * eigen.eigenvectors[(a, m)];
                }
            }
        }
        let full =
            &eigen.eigenvectors * DMatrix::from_diagonal(&inverse) * eigen.eigenvectors.transpose();
        let undetermined: Vec<bool> = flat.iter().map(|&f| f > 1e-3).collect();
        for (a, &i) in open.iter().enumerate() {
            if undetermined[a] {
                out.undetermined.push(i);
                continue;
            }
            for (b, &k) in open.iter().enumerate() {
                if !undetermined[b] {
                    out.matrix[(i, k)] = full[(a, b)] * scale[a] * scale[b];
                }
            }
        }
        Some(out)
    }

    /// Standard error of a coordinate; `None` at a bound or where undetermined.
    #[must_use]
    pub fn error(&self, i: usize) -> Option<f64> {
        let v = self.matrix[(i, i)];
        (v > 0.0 && v.is_finite()).then(|| v.sqrt())
    }

    /// Correlation of two coordinates; 0 where one has no error.
    #[must_use]
    pub fn correlation(&self, i: usize, k: usize) -> f64 {
        match (self.error(i), self.error(k)) {
            (Some(a), Some(b)) => (self.matrix[(i, k)] / (a * b)).clamp(-1.0, 1.0),
            _ => 0.0,
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Two parameters whose sum alone is determined have no errors of their own; the third keeps its.
    #[test]
    fn flat_direction_is_named() {
        let h = DMatrix::from_row_slice(3, 3, &[2.0, 2.0, 0.0, 2.0, 2.0, 0.0, 0.0, 0.0, 8.0]);
        let c = Covariance::new(&h, &h, &[false; 3]);
        assert_eq!(c.undetermined, [0, 1]);
        assert!((c.error(2).unwrap() - 0.5).abs() < 1e-12);
        assert!(c.error(0).is_none());
    }

    #[test]
    fn inverse_of_a_correlated_pair() {
        // Covariance ((1, 0.5), (0.5, 1)) has curvature 2 x inverse = (8/3, -4/3).
        let h = DMatrix::from_row_slice(2, 2, &[8.0 / 3.0, -4.0 / 3.0, -4.0 / 3.0, 8.0 / 3.0]);
        let c = Covariance::new(&h, &h, &[false; 2]);
        assert!((c.error(0).unwrap() - 1.0).abs() < 1e-12);
        assert!((c.correlation(0, 1) - 0.5).abs() < 1e-12);
    }
}
