//! Dense complex matrices: the one matrix type that other crates see.
//!
//! A thin cover over the matrix library, so that the library stays private to
//! this crate and only the operations that have a meaning here are offered.

use std::ops::{Add, Index, IndexMut, Mul, Sub};

use faer::linalg::matmul::matmul;
use faer::{Accum, MatMut, MatRef, Par};
use nalgebra::DMatrix;

use crate::{C64, Error, Result};

/// Products at least this large on each side are worth a blocked kernel.
const BLOCKED: usize = 16;

/// A dense complex matrix, stored by columns.
#[derive(Debug, Clone, PartialEq)]
pub struct Matrix(pub(crate) DMatrix<C64>);

impl Matrix {
    /// All zeros.
    pub fn zeros(rows: usize, cols: usize) -> Self {
        Matrix(DMatrix::zeros(rows, cols))
    }

    /// The `n × n` identity.
    pub fn identity(n: usize) -> Self {
        Matrix(DMatrix::identity(n, n))
    }

    /// Entries from a function of (row, column).
    pub fn from_fn(rows: usize, cols: usize, f: impl FnMut(usize, usize) -> C64) -> Self {
        Matrix(DMatrix::from_fn(rows, cols, f))
    }

    /// Entries listed row by row; `entries.len()` must be `rows * cols`.
    pub fn from_rows(rows: usize, cols: usize, entries: &[C64]) -> Self {
        Matrix(DMatrix::from_row_slice(rows, cols, entries))
    }

    /// Real entries listed row by row.
    pub fn from_real(rows: usize, cols: usize, entries: &[f64]) -> Self {
        Matrix::from_fn(rows, cols, |r, c| C64::new(entries[r * cols + c], 0.0))
    }

    /// A square matrix with these diagonal entries.
    pub fn from_diagonal(diagonal: &[C64]) -> Self {
        let n = diagonal.len();
        Matrix::from_fn(n, n, |r, c| if r == c { diagonal[r] } else { C64::ZERO })
    }

    /// Number of rows.
    pub fn rows(&self) -> usize {
        self.0.nrows()
    }

    /// Number of columns.
    pub fn cols(&self) -> usize {
        self.0.ncols()
    }

    /// Whether rows and columns agree.
    pub fn is_square(&self) -> bool {
        self.0.is_square()
    }

    /// Qubits of a square matrix whose size is a power of two.
    pub fn qubits(&self) -> Option<usize> {
        let n = self.rows();
        (self.is_square() && n.is_power_of_two()).then(|| n.trailing_zeros() as usize)
    }

    /// Column `c` as a slice.
    pub fn column(&self, c: usize) -> &[C64] {
        let rows = self.rows();
        &self.0.as_slice()[c * rows..(c + 1) * rows]
    }

    /// Column `c` as a mutable slice.
    pub fn column_mut(&mut self, c: usize) -> &mut [C64] {
        let rows = self.rows();
        &mut self.0.as_mut_slice()[c * rows..(c + 1) * rows]
    }

    /// All entries, column after column.
    pub fn as_slice(&self) -> &[C64] {
        self.0.as_slice()
    }

    /// All entries, column after column.
    pub fn as_mut_slice(&mut self) -> &mut [C64] {
        self.0.as_mut_slice()
    }

    /// Conjugate transpose.
    pub fn adjoint(&self) -> Matrix {
        Matrix(self.0.adjoint())
    }

    /// Transpose without conjugation.
    pub fn transpose(&self) -> Matrix {
        Matrix(self.0.transpose())
    }

    /// Entrywise complex conjugate.
    pub fn conjugate(&self) -> Matrix {
        Matrix(self.0.conjugate())
    }

    /// Kronecker product; `self` is the more significant factor.
    pub fn kron(&self, other: &Matrix) -> Matrix {
        Matrix(self.0.kronecker(&other.0))
    }

    /// Multiplied by a number.
    pub fn scaled(&self, factor: C64) -> Matrix {
        Matrix(&self.0 * factor)
    }

    /// Sum of the diagonal entries.
    pub fn trace(&self) -> C64 {
        self.0.trace()
    }

    /// Diagonal entries of a square matrix.
    pub fn diagonal(&self) -> Vec<C64> {
        (0..self.rows().min(self.cols())).map(|k| self[(k, k)]).collect()
    }

    /// The `rows × cols` block whose corner is at (`row`, `col`).
    pub fn block(&self, row: usize, col: usize, rows: usize, cols: usize) -> Matrix {
        Matrix(self.0.view((row, col), (rows, cols)).into_owned())
    }

    /// Overwrites the block whose corner is at (`row`, `col`).
    pub fn set_block(&mut self, row: usize, col: usize, block: &Matrix) {
        self.0.view_mut((row, col), (block.rows(), block.cols())).copy_from(&block.0);
    }

    /// Frobenius norm.
    pub fn frobenius(&self) -> f64 {
        self.0.norm()
    }

    /// Largest magnitude of an entry; zero for an empty matrix.
    pub fn max_abs(&self) -> f64 {
        self.0.iter().fold(0.0, |most, z| most.max(z.norm()))
    }

    /// `Err` with the place of the first NaN or infinite entry, if any.
    pub fn check_finite(&self) -> Result<()> {
        for col in 0..self.cols() {
            if let Some(row) = self.column(col).iter().position(|z| !z.is_finite()) {
                return Err(Error::NotFinite { row, col });
            }
        }
        Ok(())
    }
}

impl Index<(usize, usize)> for Matrix {
    type Output = C64;
    fn index(&self, at: (usize, usize)) -> &C64 {
        &self.0[at]
    }
}

impl IndexMut<(usize, usize)> for Matrix {
    fn index_mut(&mut self, at: (usize, usize)) -> &mut C64 {
        &mut self.0[at]
    }
}

impl Mul for &Matrix {
    type Output = Matrix;
    fn mul(self, other: &Matrix) -> Matrix {
        if self.rows().min(self.cols()).min(other.cols()) < BLOCKED {
            return Matrix(&self.0 * &other.0);
        }
        assert_eq!(self.cols(), other.rows(), "inner sizes of a product");
        let (rows, inner, cols) = (self.rows(), self.cols(), other.cols());
        let mut product = Matrix::zeros(rows, cols);
        matmul(
            MatMut::from_column_major_slice_mut(product.as_mut_slice(), rows, cols),
            Accum::Replace,
            MatRef::from_column_major_slice(self.as_slice(), rows, inner),
            MatRef::from_column_major_slice(other.as_slice(), inner, cols),
            C64::ONE,
            Par::Seq,
        );
        product
    }
}

impl Add for &Matrix {
    type Output = Matrix;
    fn add(self, other: &Matrix) -> Matrix {
        Matrix(&self.0 + &other.0)
    }
}

impl Sub for &Matrix {
    type Output = Matrix;
    fn sub(self, other: &Matrix) -> Matrix {
        Matrix(&self.0 - &other.0)
    }
}
