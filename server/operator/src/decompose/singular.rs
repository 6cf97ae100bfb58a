//! The singular-value decomposition.

use super::{accept, from_library, normalised, times_power_of_two, to_library};
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
    svd.sigma.iter_mut().for_each(|s| *s = times_power_of_two(*s, exponent));
    Ok(svd)
}
