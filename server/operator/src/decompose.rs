//! Decompositions of dense matrices, each checked before it is returned.
//!
//! The matrix library works on numbers of order one only: entries are brought
//! there by an exact power of two first, and NaN and infinities are refused.

mod cosine_sine;
mod eigen;
mod linear;
mod singular;

pub use cosine_sine::{CosineSine, cosine_sine};
pub use eigen::{Eigen, UnitaryEigen, eigen_hermitian, eigen_unitary};
pub use linear::{qr, solve_hermitian};
pub use singular::{Svd, singular_values, svd};

use faer::MatRef;

use crate::{C64, Error, Matrix, Result};

/// Largest residual of a decomposition, relative to the Frobenius norm. The
/// algorithms leave about 1e-15 times the size; a thousand times more is a
/// failure, not rounding.
const RESIDUAL: f64 = 1e-12;

/// `Err` when a residual is too large for what it is relative to.
fn accept(residual: f64, size: f64) -> Result<()> {
    if residual <= RESIDUAL * size {
        return Ok(());
    }
    Err(Error::NoConvergence { iterations: 0, residual: residual / size })
}

/// `Err` when columns that should be orthonormal are not: a small residual of
/// the whole product does not show this where singular values are small.
fn accept_orthonormal(q: &Matrix) -> Result<()> {
    let size = (q.cols() as f64).sqrt().max(1.0);
    accept((&(&q.adjoint() * q) - &Matrix::identity(q.cols())).frobenius(), size)
}

/// `x · 2ᵉ` in two steps, so that the factor itself cannot overflow.
fn times_power_of_two(x: f64, e: i32) -> f64 {
    let half = e / 2;
    x * 2.0_f64.powi(half) * 2.0_f64.powi(e - half)
}

/// The matrix over a power of two that makes its entries of order one, and
/// the exponent of that power. Refuses what is not finite.
fn normalised(m: &Matrix) -> Result<(Matrix, i32)> {
    m.check_finite()?;
    let largest = m.as_slice().iter().fold(0.0_f64, |most, z| most.max(z.re.abs()).max(z.im.abs()));
    let e = if largest == 0.0 { 0 } else { largest.log2().floor() as i32 };
    let scaled = |x: f64| times_power_of_two(x, -e);
    let entry = |r, c| C64::new(scaled(m[(r, c)].re), scaled(m[(r, c)].im));
    Ok((Matrix::from_fn(m.rows(), m.cols(), entry), e))
}

fn to_library(m: &Matrix) -> MatRef<'_, C64> {
    MatRef::from_column_major_slice(m.as_slice(), m.rows(), m.cols())
}

fn from_library(m: MatRef<'_, C64>) -> Matrix {
    Matrix::from_fn(m.nrows(), m.ncols(), |r, c| m[(r, c)])
}

#[cfg(test)]
mod tests;
