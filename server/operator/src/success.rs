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
