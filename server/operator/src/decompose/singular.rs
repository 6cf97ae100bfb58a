//! The singular-value decomposition.

use super::{
    RESIDUAL, accept, accept_orthonormal, from_library, normalised, times_power_of_two, to_library,
};
use crate::{C64, Error, Matrix, Result};

/// `M = U diag(σ) V†`, `σ` descending; `U` and `V` square and unitary.
#[derive(Debug, Clone)]
pub struct Svd {
    /// Left singular vectors, one a column.
    pub u: Matrix,
    /// Singular values, descending, as many as the shorter side.
    pub sigma: Vec<f64>,
    /// Right singular vectors, one a column.
    pub v: Matrix,
}

impl Svd {
    /// `U diag(σ) V†`.
    pub fn reconstruct(&self) -> Matrix {
        let mut left = Matrix::zeros(self.u.rows(), self.v.rows());
        for (k, &s) in self.sigma.iter().enumerate() {
            let column = self.u.column(k).iter().map(|z| z * s);
            left.column_mut(k).iter_mut().zip(column).for_each(|(to, from)| *to = from);
        }
        &left * &self.v.adjoint()
    }
}

/// Singular values and vectors of any finite matrix.
///
/// # Errors
/// `NotFinite`; `NoConvergence` when the factors do not give the matrix back.
pub fn svd(m: &Matrix) -> Result<Svd> {
    let (scaled, exponent) = normalised(m)?;
    let failed = |_| Error::NoConvergence { iterations: 0, residual: f64::INFINITY };
    let found = to_library(&scaled).svd().map_err(failed)?;
    let sigma: Vec<f64> = found.S().column_vector().iter().map(|z: &C64| z.re.max(0.0)).collect();
    let mut svd = Svd { u: from_library(found.U()), sigma, v: from_library(found.V()) };
    accept((&svd.reconstruct() - &scaled).frobenius(), scaled.frobenius().max(1.0))?;
    accept_orthonormal(&svd.u)?;
    accept_orthonormal(&svd.v)?;
    svd.sigma.iter_mut().for_each(|s| *s = times_power_of_two(*s, exponent));
    Ok(svd)
}

/// Singular values alone, descending; a fraction of the work of [`svd`].
///
/// Checked by `Σσ² = ‖M‖²` in Frobenius norm, and where that fails taken from
/// the full decomposition, which has stricter checks.
///
/// # Errors
/// `NotFinite`; `NoConvergence`.
pub fn singular_values(m: &Matrix) -> Result<Vec<f64>> {
    let (scaled, exponent) = normalised(m)?;
    let size = scaled.frobenius();
    let fits = |sigma: &Vec<f64>| {
        let found = sigma.iter().map(|s| s * s).sum::<f64>().sqrt();
        (found - size).abs() <= RESIDUAL * size
    };
    match to_library(&scaled).singular_values().ok().filter(fits) {
        Some(sigma) => Ok(sigma.iter().map(|s| times_power_of_two(s.max(0.0), exponent)).collect()),
        None => Ok(svd(m)?.sigma),
    }
}
