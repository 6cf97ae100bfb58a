//! What an operator is, in one short line.
//!
//! [`portrait`] tries the most telling descriptions first. Each is checked
//! on every entry before it is given, so a portrait never flatters.

use std::fmt;

use crate::structure::is_diagonal;
use crate::{C64, Matrix};

mod factor;
mod named;
mod text;

/// Largest difference of an entry, relative to the largest entry, that a
/// portrait overlooks: a few thousand roundings of 1e-16, far below any
/// angle that a person writes.
const SAME: f64 = 1e-12;

/// Most wires whose operator is searched for structure: the search for
/// factors may look at all `4ⁿ` entries for each of `2ⁿ` partitions.
const MAX_WIRES: usize = 8;

/// What an operator is. Angles are radians.
#[derive(Debug, Clone, PartialEq)]
pub enum Portrait {
    /// Every entry is zero.
    Zero,
    /// The identity.
    Identity,
    /// e^{iγ} times the identity.
    GlobalPhase(f64),
    /// e^{iγ} times a Pauli string, one letter a wire.
    Pauli {
        /// The angle γ.
        phase: f64,
        /// Letters of `I`, `X`, `Y`, `Z`, the most significant wire first.
        letters: String,
    },
    /// e^{iγ} times a gate of the standard library, on the wires in order.
    Named {
        /// The angle γ.
        phase: f64,
        /// The gate's name.
        gate: &'static str,
        /// Its parameter, if it has one.
        angle: Option<f64>,
    },
    /// Nothing off the diagonal.
    Diagonal,
    /// One 1 in each row and column.
    Permutation,
    /// The identity unless a wire holds a value.
    Controlled {
        /// The wire.
        wire: usize,
        /// The value at which `inner` acts.
        on: bool,
        /// What acts on the other wires.
        inner: Box<Portrait>,
    },
    /// A tensor product over a partition of the wires.
    Tensor(Vec<(Vec<usize>, Portrait)>),
    /// None of these.
    Plain {
        /// Number of rows.
        rows: usize,
        /// Number of columns.
        cols: usize,
    },
}

/// Describes a matrix.
pub fn portrait(matrix: &Matrix) -> Portrait {
    let plain = Portrait::Plain { rows: matrix.rows(), cols: matrix.cols() };
    let Some(wires) = matrix.qubits().filter(|&wires| wires <= MAX_WIRES) else { return plain };
    if matrix.check_finite().is_err() {
        return plain;
    }
    let tolerance = SAME * matrix.max_abs();
    if tolerance == 0.0 {
        return Portrait::Zero;
    }
    multiple_of_identity(matrix, tolerance)
        .or_else(|| named::pauli(matrix, wires, tolerance))
        .or_else(|| named::named(matrix, wires, tolerance))
        .or_else(|| sparse(matrix, tolerance))
        .or_else(|| factor::controlled(matrix, wires, tolerance))
        .or_else(|| factor::tensor(matrix, tolerance))
        .unwrap_or(plain)
}

/// The identity, or the identity with a phase.
fn multiple_of_identity(matrix: &Matrix, tolerance: f64) -> Option<Portrait> {
    let identity = Matrix::identity(matrix.rows());
    let phase = phase_between(matrix, &identity, tolerance)?;
    Some(if phase == 0.0 { Portrait::Identity } else { Portrait::GlobalPhase(phase) })
}

/// A diagonal or a permutation.
fn sparse(matrix: &Matrix, tolerance: f64) -> Option<Portrait> {
    let size = matrix.rows();
    let near = |z: C64, to: f64| (z - to).norm() <= tolerance;
    if is_diagonal(matrix, tolerance) {
        return Some(Portrait::Diagonal);
    }
    let mut taken = vec![false; size];
    for c in 0..size {
        let one = (0..size).find(|&r| near(matrix[(r, c)], 1.0))?;
        let others = (0..size).filter(|&r| r != one).all(|r| near(matrix[(r, c)], 0.0));
        if !others || std::mem::replace(&mut taken[one], true) {
            return None;
        }
    }
    Some(Portrait::Permutation)
}

/// The γ with `a = e^{iγ} b` entry by entry, or `None`; 0 if they are equal.
fn phase_between(a: &Matrix, b: &Matrix, tolerance: f64) -> Option<f64> {
    let largest = |m: &Matrix| {
        let entries = m.as_slice().iter().enumerate();
        entries.max_by(|x, y| x.1.norm().total_cmp(&y.1.norm())).map(|(at, _)| at)
    };
    let at = largest(b)?;
    let ratio = a.as_slice()[at] / b.as_slice()[at];
    if (ratio.norm() - 1.0).abs() > tolerance {
        return None;
    }
    let phase = if (ratio - 1.0).norm() <= tolerance { 0.0 } else { ratio.arg() };
    let turned = C64::cis(phase);
    let mut pairs = a.as_slice().iter().zip(b.as_slice());
    pairs.all(|(x, y)| (x - turned * y).norm() <= tolerance).then_some(phase)
}

impl fmt::Display for Portrait {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Portrait::Zero => f.write_str("zero"),
            Portrait::Identity => f.write_str("identity"),
            Portrait::GlobalPhase(phase) => write!(f, "global phase {}", text::angle(*phase)),
            Portrait::Pauli { phase, letters } => {
                write!(f, "{}Pauli {letters}", text::factor(*phase))
            }
            Portrait::Named { phase, gate, angle } => {
                write!(f, "{}{gate}", text::factor(*phase))?;
                match angle {
                    Some(angle) => write!(f, "({})", text::angle(*angle)),
                    None => Ok(()),
                }
            }
            Portrait::Diagonal => f.write_str("diagonal"),
            Portrait::Permutation => f.write_str("permutation"),
            Portrait::Controlled { wire, on, inner } => {
                let ctrl = if *on { "ctrl" } else { "negctrl" };
                write!(f, "{ctrl}[{wire}] @ {inner}")
            }
            Portrait::Tensor(factors) => text::tensor(f, factors),
            Portrait::Plain { rows, cols } => write!(f, "{rows}×{cols} matrix"),
        }
    }
}

#[cfg(test)]
mod tests;
