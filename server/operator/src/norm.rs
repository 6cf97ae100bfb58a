//! Norms, all spectral, and distances of one matrix from a property.

use crate::decompose::{singular_values, svd};
use crate::{C64, Error, Matrix, Result};

/// The largest singular value; zero for an empty matrix.
///
/// # Errors
/// `NotFinite`, `NoConvergence`.
pub fn spectral(m: &Matrix) -> Result<f64> {
    if m.rows() == 0 || m.cols() == 0 {
        return Ok(0.0);
    }
    Ok(singular_values(m)?.first().copied().unwrap_or(0.0))
}

/// ‖M†M − I‖, which is the largest |σ² − 1|; infinite where that overflows.
///
/// # Errors
/// As [`spectral`].
pub fn unitarity_error(m: &Matrix) -> Result<f64> {
    // More columns than rows leave vectors that M sends to zero.
    let least: f64 = if m.cols() > m.rows() { 1.0 } else { 0.0 };
    let sigma = if m.rows() == 0 { Vec::new() } else { singular_values(m)? };
    Ok(sigma.iter().fold(least, |most, s| most.max(((s - 1.0) * (s + 1.0)).abs())))
}

/// Entries past this have squares that overflow.
const LARGE: f64 = 1e150;

/// The column of `M†M − I` with the largest Euclidean norm, and that norm:
/// the column of a finite `M` most at fault for its not being unitary. The
/// norm is infinite where it overflows.
pub fn worst_column(m: &Matrix) -> (usize, f64) {
    // Beside entries that large the identity does not count.
    let large = m.max_abs() > LARGE;
    let (shrink, unit) = if large { (1.0 / m.max_abs(), 0.0) } else { (1.0, 1.0) };
    let scaled = m.scaled(C64::new(shrink, 0.0));
    let mut defect = &scaled.adjoint() * &scaled;
    (0..m.cols()).for_each(|k| defect[(k, k)] -= unit);
    let size = |c: usize| defect.column(c).iter().map(|z| z.norm_sqr()).sum::<f64>().sqrt();
    let sizes = (0..m.cols()).map(|c| (c, size(c)));
    let (column, most) = sizes.max_by(|a, b| a.1.total_cmp(&b.1)).unwrap_or((0, 0.0));
    (column, most / shrink / shrink)
}

/// The unitary nearest to a square matrix in every unitarily invariant norm:
/// `W V†` of its singular-value decomposition. Of a singular matrix it is one
/// of many that are equally near.
///
/// # Errors
/// As [`spectral`]; `BadDimension` when the matrix is not square.
pub fn nearest_unitary(m: &Matrix) -> Result<Matrix> {
    if !m.is_square() {
        return Err(Error::BadDimension { rows: m.rows(), cols: m.cols() });
    }
    let svd = svd(m)?;
    Ok(&svd.u * &svd.v.adjoint())
}

/// Distance to [`nearest_unitary`]: the largest |σ − 1|.
///
/// # Errors
/// As [`spectral`].
pub fn distance_to_unitary(m: &Matrix) -> Result<f64> {
    Ok(singular_values(m)?.iter().fold(0.0, |most, s| most.max((s - 1.0).abs())))
}

/// ‖M − M†‖.
///
/// # Errors
/// As [`spectral`]; `BadDimension` when the matrix is not square.
pub fn hermiticity_error(m: &Matrix) -> Result<f64> {
    if !m.is_square() {
        return Err(Error::BadDimension { rows: m.rows(), cols: m.cols() });
    }
    spectral(&(m - &m.adjoint()))
}

#[cfg(test)]
mod tests;
