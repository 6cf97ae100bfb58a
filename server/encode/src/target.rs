//! The matrix to encode, brought to a size that arithmetic likes.

use operator::{Budget, Matrix};

use crate::{Error, Result};

/// A square matrix on whole qubits, with its power of two taken out.
///
/// Methods see `M / 2ᵉ` with entries of order one, so that matrices of any
/// magnitude take the same path; the frame puts the power back afterwards.
#[derive(Debug)]
pub struct Target {
    /// `M / 2ᵉ`: the largest entry has magnitude in [1, 2), or all are zero.
    pub matrix: Matrix,
    /// Number of signal qubits `n`; the matrix is `2ⁿ × 2ⁿ`.
    pub wires: usize,
    /// The power `e` that was taken out.
    pub exponent: i32,
    /// The allowed error on [`Target::matrix`]: the user's over `2ᵉ`.
    pub tolerance: f64,
}

impl Target {
    /// Checks shape, size and entries, and takes out the power of two.
    ///
    /// # Errors
    /// [`Error::NotQubits`], or `TooLarge`, `NotFinite`, `Stopped`.
    pub fn new(matrix: &Matrix, tolerance: f64, budget: &Budget) -> Result<Target> {
        let (rows, cols) = (matrix.rows(), matrix.cols());
        let wires = matrix.qubits().ok_or(Error::NotQubits { rows, cols })?;
        budget.admit(wires)?;
        matrix.check_finite()?;
        let exponent = exponent_of(matrix);
        Ok(Target {
            matrix: times_power_of_two(matrix, -exponent),
            wires,
            exponent,
            tolerance: scale_by_power_of_two(tolerance, -exponent),
        })
    }
}

/// The `e` with `2ᵉ ≤ max |entry| < 2ᵉ⁺¹`; zero for a zero matrix.
fn exponent_of(matrix: &Matrix) -> i32 {
    let largest = matrix.as_slice().iter().fold(0.0_f64, |m, z| m.max(z.re.abs()).max(z.im.abs()));
    if largest == 0.0 { 0 } else { largest.log2().floor() as i32 }
}

/// Every entry times `2ᵉ`, exact unless it leaves the range of doubles.
fn times_power_of_two(matrix: &Matrix, e: i32) -> Matrix {
    Matrix::from_fn(matrix.rows(), matrix.cols(), |r, c| {
        let z = matrix[(r, c)];
        operator::C64::new(scale_by_power_of_two(z.re, e), scale_by_power_of_two(z.im, e))
    })
}

/// `x · 2ᵉ` in two steps, so that the factor itself cannot overflow.
pub(crate) fn scale_by_power_of_two(x: f64, e: i32) -> f64 {
    let half = e / 2;
    x * 2.0_f64.powi(half) * 2.0_f64.powi(e - half)
}
