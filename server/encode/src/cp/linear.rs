//! Hermitian positive definite systems in either field.
//!
//! The damped normal equations need one solve an iteration, of the order of
//! a few hundred unknowns, with a matrix that is positive definite by
//! construction: a Cholesky factorisation without pivoting is enough, and a
//! pivot that is not positive says that more damping is needed.

use super::scalar::Scalar;

/// A square matrix stored by rows.
#[derive(Debug, Clone)]
pub struct Square<S> {
    /// Number of rows and of columns.
    pub order: usize,
    /// Entries, row after row.
    pub data: Vec<S>,
}

impl<S: Scalar> Square<S> {
    /// All zeros.
    pub fn zeros(order: usize) -> Self {
        Square { order, data: vec![S::ZERO; order * order] }
    }

    /// Row `r` as a slice.
    pub fn row(&self, r: usize) -> &[S] {
        &self.data[r * self.order..(r + 1) * self.order]
    }

    /// Adds a real number to every diagonal entry.
    pub fn shift(&mut self, by: f64) {
        for k in 0..self.order {
            self.data[k * self.order + k] += S::ONE.times(by);
        }
    }

    /// Overwrites the lower triangle with `L`, where `self = L L†`; `false`
    /// when a pivot is not positive (the matrix is not definite enough).
    pub fn factor(&mut self) -> bool {
        let order = self.order;
        for r in 0..order {
            let (above, rest) = self.data.split_at_mut(r * order);
            let row = &mut rest[..order];
            for c in 0..r {
                let pivot_row = &above[c * order..c * order + c + 1];
                let sum = row[c] - dot(&pivot_row[..c], &row[..c]);
                row[c] = sum.times(1.0 / pivot_row[c].re());
            }
            let pivot = row[r].re() - row[..r].iter().map(|z| z.abs2()).sum::<f64>();
            if !(pivot > 0.0 && pivot.is_finite()) {
                return false;
            }
            row[r] = S::ONE.times(pivot.sqrt());
        }
        true
    }

    /// Solves `L L† x = b` in place, `self` holding `L` of [`Square::factor`].
    pub fn solve_factored(&self, b: &mut [S]) {
        for r in 0..self.order {
            let row = self.row(r);
            let mut sum = b[r];
            for (l, x) in row[..r].iter().zip(b.iter()) {
                sum -= *l * *x;
            }
            b[r] = sum.times(1.0 / row[r].re());
        }
        for r in (0..self.order).rev() {
            let row = self.row(r);
            let x = b[r].times(1.0 / row[r].re());
            b[r] = x;
            for (l, y) in row[..r].iter().zip(b.iter_mut()) {
                *y -= l.conj() * x;
            }
        }
    }
}

/// `Σ conj(a_k) b_k`, with four running sums so that it vectorises.
pub fn dot<S: Scalar>(a: &[S], b: &[S]) -> S {
    let mut sums = [S::ZERO; 4];
    let (a4, b4) = (a.chunks_exact(4), b.chunks_exact(4));
    let tail = a4.remainder().iter().zip(b4.remainder());
    let mut last = S::ZERO;
    for (x, y) in tail {
        last += x.conj() * *y;
    }
    for (x, y) in a4.zip(b4) {
        for k in 0..4 {
            sums[k] += x[k].conj() * y[k];
        }
    }
    (sums[0] + sums[1]) + (sums[2] + sums[3]) + last
}
