//! The chance that a block encoding succeeds.

use crate::decompose::singular_values;
use crate::{Matrix, Result};

/// Probabilities that all ancillas are found in |0⟩ when `M/α` is applied to
/// a normalised input ψ: `‖Mψ‖²/α²`.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Success {
    /// Over uniformly random inputs: `‖M‖²_F / (α² N)`.
    pub average: f64,
    /// On the least favourable input: `σ_min²/α²`.
    pub worst: f64,
    /// On the most favourable input: `σ_max²/α²`.
    pub best: f64,
}

/// Success of encoding a square matrix at a scale `α`.
///
/// # Errors
/// `NotFinite`, `NoConvergence`.
pub fn success(m: &Matrix, scale: f64) -> Result<Success> {
    // Nothing is encoded by nothing: the zero matrix at scale zero never succeeds.
    let chance = |s: &f64| if *s == 0.0 { 0.0 } else { (s / scale).powi(2) };
    let chances: Vec<f64> = singular_values(m)?.iter().map(chance).collect();
    let average = chances.iter().sum::<f64>() / chances.len().max(1) as f64;
    let worst = chances.last().copied().unwrap_or(0.0);
    let best = chances.first().copied().unwrap_or(0.0);
    Ok(Success { average, worst, best })
}

#[cfg(test)]
mod tests {
    use super::*;

    /// The Dirichlet Laplacian of four points at scale 4: eigenvalues
    /// 2 − 2 cos(kπ/5), squares of the entries add to 22.
    #[test]
    fn a_laplacian_succeeds_by_its_eigenvalues() {
        let entry = |r: usize, c: usize| match r.abs_diff(c) {
            0 => 2.0,
            1 => -1.0,
            _ => 0.0,
        };
        let m = Matrix::from_fn(4, 4, |r, c| entry(r, c).into());
        let found = success(&m, 4.0).unwrap();
        let value = |k: f64| 2.0 - 2.0 * (k * std::f64::consts::PI / 5.0).cos();
        for (found, expected) in [
            (found.average, 22.0 / 64.0),
            (found.worst, value(1.0).powi(2) / 16.0),
            (found.best, value(4.0).powi(2) / 16.0),
        ] {
            assert!((found - expected).abs() < 1e-14, "{found} {expected}");
        }
    }

    #[test]
    fn nothing_never_succeeds() {
        let never = Success { average: 0.0, worst: 0.0, best: 0.0 };
        assert_eq!(success(&Matrix::zeros(2, 2), 0.0).unwrap(), never);
    }
}
