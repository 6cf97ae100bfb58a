//! A matrix on `n` qubits as a tensor of order `n` and mode size 4.
//!
//! The row bit and the column bit of one qubit become one index, and that
//! index is then taken in the Pauli basis `I, X, Y, Z`. Up to the factor
//! `2^{n/2}` this keeps the Frobenius norm, so fitting coefficients is fitting
//! entries; and it is where Hermitian matrices become real.

use operator::{C64, Matrix};

use super::model::MODE;

/// What stands for the third basis matrix, chosen so that the tensor is real
/// where it can be.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Basis {
    /// `I, X, Y, Z`: Hermitian matrices have real coefficients.
    Hermitian,
    /// `I, X, iY, Z`: real matrices have real coefficients.
    Real,
}

impl Basis {
    /// The factor on Y.
    fn y_factor(self) -> C64 {
        match self {
            Basis::Hermitian => C64::ONE,
            Basis::Real => C64::I,
        }
    }

    /// The coefficients of a 2×2 matrix.
    pub fn coefficients(self, a: &Matrix) -> [C64; MODE] {
        let y = C64::I * (a[(0, 1)] - a[(1, 0)]) * 0.5 / self.y_factor();
        let (sum, difference) = (a[(0, 0)] + a[(1, 1)], a[(0, 0)] - a[(1, 1)]);
        [sum * 0.5, (a[(0, 1)] + a[(1, 0)]) * 0.5, y, difference * 0.5]
    }

    /// The 2×2 matrix with these coefficients.
    pub fn matrix(self, c: &[C64]) -> Matrix {
        let y = c[2] * self.y_factor();
        let entries = [c[0] + c[3], c[1] - C64::I * y, c[1] + C64::I * y, c[0] - c[3]];
        Matrix::from_rows(2, 2, &entries)
    }
}

/// Coefficients of a matrix over tensor products of a [`Basis`].
#[derive(Debug, Clone)]
pub struct Tensor {
    /// Number of qubits.
    pub modes: usize,
    /// The basis of every mode.
    pub basis: Basis,
    /// `4ⁿ` coefficients, qubit 0 the most significant digit.
    pub data: Vec<C64>,
}

/// Imaginary parts below this share of the largest coefficient are rounding:
/// a coefficient is a sum of at most `2ⁿ` entries, each off by one unit in
/// the last place.
const REAL_SHARE: f64 = 1e-15;

impl Tensor {
    /// The tensor of a square matrix on `modes` qubits, in the basis that
    /// makes it real if one of the two does.
    pub fn of(matrix: &Matrix, modes: usize) -> Tensor {
        let data = pauli_coefficients(matrix, modes);
        let tensor = Tensor { modes, basis: Basis::Hermitian, data };
        if tensor.is_real() {
            return tensor;
        }
        let turned = tensor.in_real_basis();
        if turned.is_real() { turned } else { tensor }
    }

    /// The matrix with these coefficients.
    #[cfg(test)]
    pub fn matrix(&self) -> Matrix {
        let mut sum = Matrix::zeros(1 << self.modes, 1 << self.modes);
        for (at, &z) in self.data.iter().enumerate() {
            let letter = |k: usize| {
                let mut c = [C64::ZERO; MODE];
                c[at >> (2 * (self.modes - 1 - k)) & 3] = C64::ONE;
                self.basis.matrix(&c)
            };
            let unit = Matrix::from_rows(1, 1, &[z]);
            sum = &sum + &(0..self.modes).fold(unit, |left, k| left.kron(&letter(k)));
        }
        sum
    }

    /// Whether all coefficients are real up to rounding.
    pub fn is_real(&self) -> bool {
        let most = self.data.iter().fold(0.0_f64, |most, z| most.max(z.norm()));
        let bound = REAL_SHARE * (1u64 << self.modes) as f64 * most;
        self.data.iter().all(|z| z.im.abs() <= bound)
    }

    fn in_real_basis(&self) -> Tensor {
        let data = self.data.iter().enumerate().map(|(at, &z)| z * (-C64::I).powu(count_y(at)));
        Tensor { modes: self.modes, basis: Basis::Real, data: data.collect() }
    }

    /// Euclidean norm of the coefficients: `‖M‖_F / 2^{n/2}`.
    pub fn norm(&self) -> f64 {
        super::model::norm(&self.data)
    }

    /// Largest rank over all ways to part the qubits in two: a lower bound of
    /// the tensor rank. Singular values are not needed, so elimination with
    /// complete pivoting decides, with pivots below `threshold` taken as zero.
    pub fn flattening_rank(&self, threshold: f64) -> usize {
        // Qubit 0 is always on the row side: the other half are transposes.
        let parts = 1usize << (self.modes.max(1) - 1);
        let sides = (0..parts).map(|part| part << 1 | 1).filter(|&s| s + 1 != 1 << self.modes);
        sides.map(|side| elimination_rank(self.flatten(side), threshold)).max().unwrap_or(1)
    }

    /// Rows of the flattening whose row qubits are the bits of `side`.
    fn flatten(&self, side: usize) -> Vec<Vec<C64>> {
        let rows = 1usize << (2 * side.count_ones());
        let mut out = vec![vec![C64::ZERO; self.data.len() / rows]; rows];
        for (at, &z) in self.data.iter().enumerate() {
            let (mut row, mut col) = (0, 0);
            for k in 0..self.modes {
                let digit = at >> (2 * (self.modes - 1 - k)) & 3;
                let index = if side >> k & 1 == 1 { &mut row } else { &mut col };
                *index = *index * MODE + digit;
            }
            out[row][col] = z;
        }
        out
    }
}

/// Number of digits 2 (that is, of letters Y) of a base-4 index.
fn count_y(at: usize) -> u32 {
    const LOW: usize = usize::MAX / 3;
    ((at >> 1) & !at & LOW).count_ones()
}

/// Coefficients of a `2ⁿ × 2ⁿ` matrix over Pauli strings, qubit 0 the most
/// significant base-4 digit, letters `I, X, Y, Z` = 0, 1, 2, 3.
///
/// One pass of four-point transforms for each qubit: `O(n·4ⁿ)` operations.
pub fn pauli_coefficients(matrix: &Matrix, modes: usize) -> Vec<C64> {
    let mut data = vec![C64::ZERO; 1 << (2 * modes)];
    for col in 0..matrix.cols() {
        let column = matrix.column(col);
        let low = spread(col);
        for (row, &z) in column.iter().enumerate() {
            data[spread(row) << 1 | low] = z;
        }
    }
    for k in 0..modes {
        let stride = 1 << (2 * k);
        for block in data.chunks_exact_mut(MODE * stride) {
            for at in 0..stride {
                let e = [0, 1, 2, 3].map(|digit| block[digit * stride + at]);
                block[at] = (e[0] + e[3]) * 0.5;
                block[stride + at] = (e[1] + e[2]) * 0.5;
                block[2 * stride + at] = C64::I * (e[1] - e[2]) * 0.5;
                block[3 * stride + at] = (e[0] - e[3]) * 0.5;
            }
        }
    }
    data
}

/// Puts a zero bit above every bit of `x`.
fn spread(x: usize) -> usize {
    (0..usize::BITS / 2).fold(0, |out, k| out | (x >> k & 1) << (2 * k))
}

/// Rank by Gaussian elimination with complete pivoting.
fn elimination_rank(mut rows: Vec<Vec<C64>>, threshold: f64) -> usize {
    let mut rank = 0;
    while rank < rows.len() {
        let (mut best, mut at) = (threshold, None);
        for (r, row) in rows.iter().enumerate().skip(rank) {
            for (c, z) in row.iter().enumerate() {
                if z.norm() > best {
                    (best, at) = (z.norm(), Some((r, c)));
                }
            }
        }
        let Some((r, c)) = at else { break };
        rows.swap(rank, r);
        let (done, rest) = rows.split_at_mut(rank + 1);
        let pivot_row = &done[rank];
        for row in rest {
            let factor = row[c] / pivot_row[c];
            row.iter_mut().zip(pivot_row).for_each(|(x, &p)| *x -= factor * p);
        }
        rank += 1;
    }
    rank
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn coefficients_rebuild_the_matrix() {
        let mut rng = fastrand::Rng::with_seed(5);
        let m = Matrix::from_fn(8, 8, |_, _| C64::new(rng.f64() - 0.5, rng.f64() - 0.5));
        let tensor = Tensor::of(&m, 3);
        assert!((&tensor.matrix() - &m).max_abs() < 1e-14);
    }

    #[test]
    fn real_and_hermitian_matrices_have_real_coefficients() {
        let real = Matrix::from_real(
            4,
            4,
            &[1., 2., 3., 4., 5., 6., 7., 8., 9., 1., 2., 3., 4., 5., 6., 7.],
        );
        assert_eq!(
            (Tensor::of(&real, 2).basis, Tensor::of(&real, 2).is_real()),
            (Basis::Real, true)
        );
        let skew = real.scaled(C64::I);
        let hermitian = &skew + &skew.adjoint();
        assert_eq!(Tensor::of(&hermitian, 2).basis, Basis::Hermitian);
        assert!(Tensor::of(&hermitian, 2).is_real());
    }

    #[test]
    fn flattening_bounds_the_rank_from_below() {
        // Three terms: the last bit flips alone, or with the second, or with both.
        let shift = Matrix::from_fn(8, 8, |r, c| C64::from(f64::from(u8::from(r == (c + 1) % 8))));
        assert_eq!(Tensor::of(&shift, 3).flattening_rank(1e-9), 3);
        assert_eq!(Tensor::of(&Matrix::identity(8), 3).flattening_rank(1e-9), 1);
    }
}
