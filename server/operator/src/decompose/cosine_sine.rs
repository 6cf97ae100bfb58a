//! The cosine–sine decomposition of a unitary cut into four equal blocks.

use std::f64::consts::FRAC_1_SQRT_2;

use super::{accept, qr, svd};
use crate::{C64, Matrix, Result};

/// `U = (l0 ⊕ l1) [[C, −S], [S, C]] (r0 ⊕ r1)` with `C = diag(cos θ)`,
/// `S = diag(sin θ)` and θ in [0, π/2], descending.
#[derive(Debug, Clone)]
pub struct CosineSine {
    /// Upper left factor.
    pub l0: Matrix,
    /// Lower left factor.
    pub l1: Matrix,
    /// Angles θ.
    pub theta: Vec<f64>,
    /// Upper right factor.
    pub r0: Matrix,
    /// Lower right factor.
    pub r1: Matrix,
}

impl CosineSine {
    /// The product of the factors.
    pub fn reconstruct(&self) -> Matrix {
        let half = self.theta.len();
        let (c, s) = (self.diagonal(f64::cos), self.diagonal(f64::sin));
        let mut whole = Matrix::zeros(2 * half, 2 * half);
        whole.set_block(0, 0, &(&(&self.l0 * &c) * &self.r0));
        whole.set_block(half, 0, &(&(&self.l1 * &s) * &self.r0));
        whole.set_block(0, half, &(&(&self.l0 * &s) * &self.r1).scaled(-C64::ONE));
        whole.set_block(half, half, &(&(&self.l1 * &c) * &self.r1));
        whole
    }

    fn diagonal(&self, f: fn(f64) -> f64) -> Matrix {
        Matrix::from_diagonal(&self.theta.iter().map(|&a| C64::new(f(a), 0.0)).collect::<Vec<_>>())
    }
}

/// Cuts a unitary of even size in four.
///
/// Where cosines are small, the singular vectors of the upper left block fix
/// the left block's too; where they are near one, the sines have to be
/// separated in the lower left block, or they are lost in rounding.
///
/// # Errors
/// `NotFinite`; `NoConvergence` when the factors do not give the matrix back,
/// as for one that is not unitary.
pub fn cosine_sine(unitary: &Matrix) -> Result<CosineSine> {
    assert!(
        unitary.is_square() && unitary.rows().is_multiple_of(2),
        "a square matrix of even size"
    );
    unitary.check_finite()?;
    let half = unitary.rows() / 2;
    let block = |r: usize, c: usize| unitary.block(r * half, c * half, half, half);
    let upper = svd(&block(0, 0))?;
    let mut l0 = reversed(&upper.u);
    let mut r0 = reversed(&upper.v).adjoint();
    let mut cosines: Vec<f64> = upper.sigma.iter().rev().copied().collect();
    let (mut l1, mut right) = qr(&(&block(1, 0) * &r0.adjoint()))?;
    let small = cosines.iter().filter(|&&c| c <= FRAC_1_SQRT_2).count();
    if small < half {
        let rest = half - small;
        let sines = svd(&right.block(small, small, rest, rest))?;
        right.set_block(
            small,
            small,
            &Matrix::from_diagonal(
                &sines.sigma.iter().map(|&s| C64::new(s, 0.0)).collect::<Vec<_>>(),
            ),
        );
        turn_columns(&mut l1, small, &sines.u);
        r0.set_block(small, 0, &(&sines.v.adjoint() * &r0.block(small, 0, rest, half)));
        let weights: Vec<C64> = cosines[small..].iter().map(|&c| C64::new(c, 0.0)).collect();
        let (q, r) = qr(&(&Matrix::from_diagonal(&weights) * &sines.v))?;
        turn_columns(&mut l0, small, &q);
        (0..rest).for_each(|k| cosines[small + k] = r[(k, k)].re);
    }
    let theta: Vec<f64> = (0..half).map(|k| right[(k, k)].re.atan2(cosines[k])).collect();
    let mut found = CosineSine { l0, l1, theta, r0, r1: Matrix::zeros(half, half) };
    found.r1 = &(&found.diagonal(f64::cos) * &(&found.l1.adjoint() * &block(1, 1)))
        - &(&found.diagonal(f64::sin) * &(&found.l0.adjoint() * &block(0, 1)));
    accept((&found.reconstruct() - unitary).frobenius(), (2.0 * half as f64).sqrt())?;
    Ok(found)
}

/// Columns in opposite order.
fn reversed(m: &Matrix) -> Matrix {
    Matrix::from_fn(m.rows(), m.cols(), |r, c| m[(r, m.cols() - 1 - c)])
}

/// The columns from `first` on, times a matrix.
fn turn_columns(m: &mut Matrix, first: usize, by: &Matrix) {
    let part = &m.block(0, first, m.rows(), m.cols() - first) * by;
    m.set_block(0, first, &part);
}
