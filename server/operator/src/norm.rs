//! Norms, all spectral, and distances of one matrix from a property.

use crate::decompose::svd;
use crate::{Matrix, Result};

/// The largest singular value; zero for an empty matrix.
///
/// # Errors
/// `NotFinite`, `NoConvergence`.
pub fn spectral(m: &Matrix) -> Result<f64> {
    if m.rows() == 0 || m.cols() == 0 {
        return Ok(0.0);
    }
    Ok(svd(m)?.sigma.first().copied().unwrap_or(0.0))
}

/// ‖M†M − I‖.
///
/// # Errors
/// As [`spectral`].
pub fn unitarity_error(m: &Matrix) -> Result<f64> {
    spectral(&gram_defect(m))
}

/// `M†M − I`.
fn gram_defect(m: &Matrix) -> Matrix {
    &(&m.adjoint() * m) - &Matrix::identity(m.cols())
}

/// The column of `M†M − I` with the largest Euclidean norm, and that norm:
/// the column of `M` most at fault for its not being unitary.
pub fn worst_column(m: &Matrix) -> (usize, f64) {
    let defect = gram_defect(m);
    let size = |c: usize| defect.column(c).iter().map(|z| z.norm_sqr()).sum::<f64>().sqrt();
    let sizes = (0..m.cols()).map(|c| (c, size(c)));
    sizes.max_by(|a, b| a.1.total_cmp(&b.1)).unwrap_or((0, 0.0))
}

/// The unitary nearest to a square matrix in every unitarily invariant norm:
/// `W V†` of its singular-value decomposition.
///
/// # Errors
/// As [`spectral`].
pub fn nearest_unitary(m: &Matrix) -> Result<Matrix> {
    let svd = svd(m)?;
    Ok(&svd.u * &svd.v.adjoint())
}

/// Distance to [`nearest_unitary`]: the largest |σ − 1|.
///
/// # Errors
/// As [`spectral`].
pub fn distance_to_unitary(m: &Matrix) -> Result<f64> {
    Ok(svd(m)?.sigma.iter().fold(0.0, |most, s| most.max((s - 1.0).abs())))
}

/// ‖M − M†‖.
///
/// # Errors
/// As [`spectral`].
pub fn hermiticity_error(m: &Matrix) -> Result<f64> {
    spectral(&(m - &m.adjoint()))
}
