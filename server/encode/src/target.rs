//! The matrix to encode, brought to a size that arithmetic likes.

use std::sync::OnceLock;

use operator::decompose::{Svd, svd};
use operator::{Budget, C64, Matrix};

use crate::{Error, Result};

/// Largest relative spread of the singular values of what is still called a
/// number times a unitary, however large the tolerance: past this it is
/// another matrix, not a rounded unitary.
const UNITARY_SPREAD: f64 = 1e-6;

/// Below this relative spread the matrix itself is as good a unitary as any
/// that a decomposition could give, and keeps its exact zeros.
const UNITARY_ROUNDING: f64 = 1e-13;

/// Share of the tolerance that replacing a matrix by a unitary may take; the
/// rest is left to the synthesis.
const UNITARY_SHARE: f64 = 0.25;

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
    svd: OnceLock<operator::Result<Svd>>,
    unitary: OnceLock<std::result::Result<(f64, Matrix), String>>,
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
            svd: OnceLock::new(),
            unitary: OnceLock::new(),
        })
    }

    /// Singular values and vectors of [`Target::matrix`], computed once.
    ///
    /// # Errors
    /// `NoConvergence`.
    pub fn svd(&self) -> Result<&Svd> {
        self.svd.get_or_init(|| svd(&self.matrix)).as_ref().map_err(|e| e.clone().into())
    }

    /// The matrix as a number times a unitary, if it is one within a share of
    /// the tolerance; else why not. The number is 1 (before the power of two
    /// was taken out) wherever the tolerance allows.
    pub fn unitary(&self) -> std::result::Result<(f64, &Matrix), String> {
        let found = self.unitary.get_or_init(|| self.find_unitary());
        found.as_ref().map(|(scale, unitary)| (*scale, unitary)).map_err(Clone::clone)
    }

    fn find_unitary(&self) -> std::result::Result<(f64, Matrix), String> {
        let svd = self.svd().map_err(|e| e.to_string())?;
        let (most, least) = match (svd.sigma.first(), svd.sigma.last()) {
            (Some(&most), Some(&least)) if most > 0.0 => (most, least),
            _ => return Err("the zero matrix is no multiple of a unitary".into()),
        };
        let allowed = UNITARY_SHARE * self.tolerance;
        if most - least > 2.0 * allowed.min(0.5 * UNITARY_SPREAD * most) {
            let (most, least) =
                [most, least].map(|s| scale_by_power_of_two(s, self.exponent)).into();
            return Err(format!(
                "not a multiple of a unitary: singular values {least:.6} to {most:.6}"
            ));
        }
        let one = scale_by_power_of_two(1.0, -self.exponent);
        let snapped =
            (most - one).abs().max((one - least).abs()) <= allowed.min(UNITARY_SPREAD * one);
        let scale = if snapped { one } else { 0.5 * (most + least) };
        let unitary = if most - least <= UNITARY_ROUNDING * most {
            self.matrix.scaled(C64::new(2.0 / (most + least), 0.0))
        } else {
            &svd.u * &svd.v.adjoint()
        };
        Ok((scale, unitary))
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
