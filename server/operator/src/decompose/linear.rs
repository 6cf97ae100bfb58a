//! Orthogonal triangular factors and linear systems.

use faer::Side;
use faer::linalg::solvers::Solve;

use super::{RESIDUAL, accept, from_library, normalised, times_power_of_two, to_library};
use crate::{C64, Error, Matrix, Result};

/// `M = QR`: `Q` square and unitary, `R` of the shape of `M`, upper triangular
/// with a real diagonal that is not negative.
///
/// # Errors
/// `NotFinite`; `NoConvergence` when the factors do not give the matrix back.
pub fn qr(m: &Matrix) -> Result<(Matrix, Matrix)> {
    let (scaled, exponent) = normalised(m)?;
    let found = to_library(&scaled).qr();
    let mut q = from_library(found.compute_Q().as_ref());
    let upper = found.thin_R();
    let entry = |r, c| if r <= c && r < upper.nrows() { upper[(r, c)] } else { C64::ZERO };
    let mut r = Matrix::from_fn(m.rows(), m.cols(), entry);
    for k in 0..m.rows().min(m.cols()) {
        let size = r[(k, k)].norm();
        let phase = if size > 0.0 { r[(k, k)] / size } else { C64::ONE };
        q.column_mut(k).iter_mut().for_each(|z| *z *= phase);
        (k..m.cols()).for_each(|c| r[(k, c)] *= phase.conj());
        r[(k, k)] = C64::new(size, 0.0);
    }
    accept((&(&q * &r) - &scaled).frobenius(), scaled.frobenius().max(1.0))?;
    Ok((q, rescaled(&r, exponent)))
}

/// The solution `X` of `AX = B` for a Hermitian `A`, definite or not. Only
/// the lower triangle of `A` is read.
///
/// Pivoted block factors (Bunch and Kaufman 1977) and one step of refinement.
///
/// # Errors
/// `NotFinite`; `BadDimension`; `NoConvergence` when `AX` is not `B`, as for a
/// singular `A`.
pub fn solve_hermitian(a: &Matrix, b: &Matrix) -> Result<Matrix> {
    if !a.is_square() || a.rows() != b.rows() {
        return Err(Error::BadDimension { rows: a.rows(), cols: a.cols() });
    }
    let ((a, a_exponent), (b, b_exponent)) = (normalised(a)?, normalised(b)?);
    let whole = Matrix::from_fn(a.rows(), a.cols(), |r, c| match r.cmp(&c) {
        std::cmp::Ordering::Less => a[(c, r)].conj(),
        std::cmp::Ordering::Equal => C64::new(a[(r, r)].re, 0.0),
        std::cmp::Ordering::Greater => a[(r, c)],
    });
    let factors = to_library(&whole).lblt(Side::Lower);
    let solve = |right: &Matrix| from_library(factors.solve(to_library(right)).as_ref());
    let first = solve(&b);
    let x = &first + &solve(&(&b - &(&whole * &first)));
    let residual = (&b - &(&whole * &x)).frobenius();
    let size = whole.frobenius() * x.frobenius() + b.frobenius();
    // A solution that dwarfs both sides answers a singular system: it cancels
    // to the right-hand side by luck of rounding only.
    if !x.frobenius().is_finite() || x.frobenius() * RESIDUAL > b.frobenius() {
        return Err(Error::NoConvergence { iterations: 2, residual: f64::INFINITY });
    }
    accept(residual, size.max(f64::MIN_POSITIVE))?;
    Ok(rescaled(&x, b_exponent - a_exponent))
}

/// Every entry times a power of two.
fn rescaled(m: &Matrix, exponent: i32) -> Matrix {
    let part = |x: f64| times_power_of_two(x, exponent);
    Matrix::from_fn(m.rows(), m.cols(), |r, c| C64::new(part(m[(r, c)].re), part(m[(r, c)].im)))
}
