//! What an operator is, in one short line.
//!
//! [`portrait`] tries the most telling descriptions first. Each is checked
//! on every entry before it is given, so a portrait never flatters.

use std::fmt;

use crate::structure::is_diagonal;
use crate::{C64, Matrix};

mod factor;
mod named;
mod pauli;
mod text;

/// Largest difference of an entry, relative to the largest entry, that a
/// portrait overlooks: a few thousand roundings of 1e-16, far below any
/// angle that a person writes.
const SAME: f64 = 1e-12;

/// Most wires whose operator is looked at: each look reads `4ⁿ` entries.
const MAX_WIRES: usize = 10;

/// Most wires whose operator is searched for parts: the search for factors
/// may look at all `4ⁿ` entries for each of `2ⁿ` partitions, that for
/// reflections multiplies.
const MAX_SEARCHED: usize = 8;

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
    /// e^{iγ} exp(−iφP) for a Pauli string P of two letters or more besides I.
    Rotation {
        /// The angle γ.
        phase: f64,
        /// The angle φ, in (−π, π].
        angle: f64,
        /// Letters of P, the most significant wire first.
        letters: String,
    },
    /// e^{iγ} times a gate of the standard library.
    Named {
        /// The angle γ.
        phase: f64,
        /// The wires in operand order.
        wires: Vec<usize>,
        /// The gate's name.
        gate: &'static str,
        /// Its parameter, if it has one.
        angle: Option<f64>,
    },
    /// Nothing off the diagonal.
    Diagonal,
    /// One 1 in each row and column.
    Permutation,
    /// One entry of modulus 1 in each row and column.
    PhasedPermutation,
    /// The identity unless a wire holds a value.
    Controlled {
        /// The wire.
        wire: usize,
        /// The value at which `inner` acts.
        on: bool,
        /// What acts on the other wires; wires that it names are of the whole.
        inner: Box<Portrait>,
    },
    /// A tensor product over a partition of the wires; wires that the factors
    /// name are of the whole.
    Tensor(Vec<(Vec<usize>, Portrait)>),
    /// I − 2P for a projector P: Hermitian and unitary.
    Reflection {
        /// The rank of P: how many orthogonal states change sign.
        rank: usize,
    },
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
    let largest = matrix.max_abs();
    if largest == 0.0 {
        return Portrait::Zero;
    }
    let tolerance = SAME * largest;
    multiple_of_identity(matrix, tolerance)
        .or_else(|| pauli::string(matrix, wires, tolerance))
        .or_else(|| pauli::rotation(matrix, wires, tolerance))
        .or_else(|| named::named(matrix, wires, tolerance))
        .or_else(|| match wires {
            0..=MAX_SEARCHED => {
                composed(matrix, wires, tolerance).or_else(|| reflection(matrix, tolerance))
            }
            _ => sparse(matrix, tolerance),
        })
        .unwrap_or(plain)
}

/// Diagonals and permutations, products and controlled operators. The latter
/// two come first where they say what all of their parts are; products before
/// controls, so that idle wires drop out.
fn composed(matrix: &Matrix, wires: usize, tolerance: f64) -> Option<Portrait> {
    let parts =
        factor::tensor(matrix, tolerance).or_else(|| factor::controlled(matrix, wires, tolerance));
    match parts {
        Some(parts) if parts.is_told() => Some(parts),
        parts => sparse(matrix, tolerance).or(parts),
    }
}

/// The identity, or the identity with a phase.
fn multiple_of_identity(matrix: &Matrix, tolerance: f64) -> Option<Portrait> {
    let identity = Matrix::identity(matrix.rows());
    let phase = phase_between(matrix, &identity, tolerance)?;
    Some(if phase == 0.0 { Portrait::Identity } else { Portrait::GlobalPhase(phase) })
}

/// A diagonal, or a permutation with or without phases.
fn sparse(matrix: &Matrix, tolerance: f64) -> Option<Portrait> {
    if is_diagonal(matrix, tolerance) {
        return Some(Portrait::Diagonal);
    }
    let size = matrix.rows();
    let mut taken = vec![false; size];
    let mut phased = false;
    for c in 0..size {
        let one = (0..size).find(|&r| matrix[(r, c)].norm() > tolerance)?;
        let others = (0..size).filter(|&r| r != one).all(|r| matrix[(r, c)].norm() <= tolerance);
        let entry = matrix[(one, c)];
        if !others || (entry.norm() - 1.0).abs() > tolerance {
            return None;
        }
        if std::mem::replace(&mut taken[one], true) {
            return None;
        }
        phased |= (entry - 1.0).norm() > tolerance;
    }
    Some(if phased { Portrait::PhasedPermutation } else { Portrait::Permutation })
}

/// A Hermitian matrix whose square is the identity.
fn reflection(matrix: &Matrix, tolerance: f64) -> Option<Portrait> {
    let size = matrix.rows();
    // Each entry of the square sums that many products.
    let allowed = tolerance * size as f64;
    let square = matrix * matrix;
    let near = |a: &Matrix, b: &Matrix, allowed: f64| (a - b).max_abs() <= allowed;
    if !near(matrix, &matrix.adjoint(), tolerance)
        || !near(&square, &Matrix::identity(size), allowed)
    {
        return None;
    }
    let rank = ((size as f64 - matrix.trace().re) / 2.0).round() as usize;
    Some(Portrait::Reflection { rank })
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

impl Portrait {
    /// Whether nothing is left open: the operator follows from the portrait.
    fn is_told(&self) -> bool {
        match self {
            Portrait::Controlled { inner, .. } => inner.is_told(),
            Portrait::Tensor(factors) => factors.iter().all(|(_, factor)| factor.is_told()),
            Portrait::Zero
            | Portrait::Identity
            | Portrait::GlobalPhase(_)
            | Portrait::Pauli { .. }
            | Portrait::Rotation { .. }
            | Portrait::Named { .. } => true,
            Portrait::Diagonal
            | Portrait::Permutation
            | Portrait::PhasedPermutation
            | Portrait::Reflection { .. }
            | Portrait::Plain { .. } => false,
        }
    }

    /// The same with the wire `k` called `wires[k]`.
    fn placed(self, wires: &[usize]) -> Portrait {
        let mapped = |own: &[usize]| own.iter().map(|&wire| wires[wire]).collect::<Vec<usize>>();
        match self {
            Portrait::Named { phase, wires: own, gate, angle } => {
                Portrait::Named { phase, wires: mapped(&own), gate, angle }
            }
            Portrait::Controlled { wire, on, inner } => {
                let inner = Box::new(inner.placed(wires));
                Portrait::Controlled { wire: wires[wire], on, inner }
            }
            Portrait::Tensor(factors) => {
                let placed =
                    |(own, factor): (Vec<usize>, Portrait)| (mapped(&own), factor.placed(wires));
                Portrait::Tensor(factors.into_iter().map(placed).collect())
            }
            whole => whole,
        }
    }
}

impl fmt::Display for Portrait {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        text::whole(f, self)
    }
}

#[cfg(test)]
mod tests;
