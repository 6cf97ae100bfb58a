//! Distances between operators of one size, in spectral norm.

use std::f64::consts::TAU;

use crate::decompose::eigen_unitary;
use crate::norm::{spectral, unitarity_error};
use crate::{C64, Matrix, Result};

/// Largest ‖U†U − I‖ at which the eigenphases of `A†B` still give the distance
/// to better than the usual tolerances of claims.
const UNITARY: f64 = 1e-9;

/// Below this distance the eigenphases, good to about 1e-15, are exact enough
/// and no alternative is tried.
const TINY: f64 = 1e-13;

/// ‖A − B‖.
///
/// # Errors
/// `NotFinite`, `NoConvergence`.
pub fn exact(a: &Matrix, b: &Matrix) -> Result<f64> {
    spectral(&(a - b))
}

/// The least ‖A − e^{iφ}B‖ over all phases φ.
///
/// Of two unitaries it is `2 sin(Δ/4)`, Δ being the shortest arc that holds
/// all eigenvalues of `A†B`. For other matrices the phase of `tr(B†A)` is
/// taken, which is the best in Frobenius norm and gives an upper bound.
///
/// # Errors
/// `NotFinite`, `NoConvergence`.
pub fn up_to_phase(a: &Matrix, b: &Matrix) -> Result<f64> {
    let trace: C64 = b.as_slice().iter().zip(a.as_slice()).map(|(b, a)| b.conj() * a).sum();
    let phase = if trace == C64::ZERO { C64::ONE } else { trace / trace.norm() };
    let bound = exact(a, &b.scaled(phase))?;
    if bound <= TINY || unitarity_error(a)? > UNITARY || unitarity_error(b)? > UNITARY {
        return Ok(bound);
    }
    let eigen = eigen_unitary(&(&a.adjoint() * b))?;
    let mut angles: Vec<f64> = eigen.values.iter().map(|z| z.arg()).collect();
    angles.sort_by(f64::total_cmp);
    let between = angles.windows(2).map(|pair| pair[1] - pair[0]);
    let around = match (angles.first(), angles.last()) {
        (Some(first), Some(last)) => first + TAU - last,
        _ => TAU,
    };
    let arc = TAU - between.fold(around, f64::max);
    Ok(bound.min(2.0 * (arc / 4.0).sin()))
}

#[cfg(test)]
mod tests {
    use super::{exact, up_to_phase};
    use crate::{C64, Matrix};

    fn diagonal(angles: &[f64]) -> Matrix {
        Matrix::from_diagonal(&angles.iter().map(|a| C64::cis(*a)).collect::<Vec<_>>())
    }

    #[test]
    fn a_global_phase_counts_only_if_asked() {
        let (a, b) = (diagonal(&[0.3, 1.1]), diagonal(&[0.8, 1.6]));
        assert!(up_to_phase(&a, &b).expect("distance") < 1e-14);
        let expected = 2.0 * (0.25_f64).sin();
        assert!((exact(&a, &b).expect("distance") - expected).abs() < 1e-14);
    }

    /// The arc of eight eigenvalues, seven of them in one place: the phase of
    /// the trace would answer with more.
    #[test]
    fn the_best_phase_is_not_that_of_the_trace() {
        let identity = Matrix::identity(8);
        let other = diagonal(&[0.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0, 1.5]);
        let expected = 2.0 * (1.5_f64 / 4.0).sin();
        let found = up_to_phase(&identity, &other).expect("distance");
        assert!((found - expected).abs() < 1e-12, "{found}");
    }
}
