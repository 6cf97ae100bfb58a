//! Structure that shows in the zeros of a matrix: diagonals, wires that only
//! select or flip, tensor products.
//!
//! A wire is a bit of the index; wire 0 of `n` is the most significant. What
//! is below `nothing` in magnitude counts as zero.

use crate::{C64, Matrix};

/// The bit of a wire among `n`.
fn bit(wire: usize, n: usize) -> usize {
    1 << (n - 1 - wire)
}

/// Whether every entry off the diagonal is nothing.
pub fn is_diagonal(m: &Matrix, nothing: f64) -> bool {
    all_nothing(m, nothing, |r, c| r != c)
}

/// Whether no amplitude moves from one value of this wire to the other.
pub fn selects(m: &Matrix, wire: usize, nothing: f64) -> bool {
    let b = bit(wire, qubits(m));
    all_nothing(m, nothing, |r, c| (r ^ c) & b != 0)
}

/// Whether every amplitude moves from one value of this wire to the other.
pub fn flips(m: &Matrix, wire: usize, nothing: f64) -> bool {
    let b = bit(wire, qubits(m));
    all_nothing(m, nothing, |r, c| (r ^ c) & b == 0)
}

/// Whether two matrices are the same.
pub fn equal(a: &Matrix, b: &Matrix, nothing: f64) -> bool {
    (a - b).max_abs() < nothing
}

fn all_nothing(m: &Matrix, nothing: f64, watched: impl Fn(usize, usize) -> bool) -> bool {
    (0..m.cols()).all(|c| (0..m.rows()).all(|r| !watched(r, c) || m[(r, c)].norm() < nothing))
}

fn qubits(m: &Matrix) -> usize {
    m.rows().trailing_zeros() as usize
}

/// The blocks of a matrix over the value of one wire: out value, in value.
pub fn block(m: &Matrix, wire: usize, out: bool, into: bool) -> Matrix {
    let b = bit(wire, qubits(m));
    let half = m.rows() / 2;
    let place = |k: usize, on: bool| (k & (b - 1)) | ((k & !(b - 1)) << 1) | if on { b } else { 0 };
    Matrix::from_fn(half, half, |r, c| m[(place(r, out), place(c, into))])
}

/// Two factors of a tensor product and the wires that each acts on.
#[derive(Debug, Clone)]
pub struct Factors {
    /// Wires, ascending, and the factor on them; the smaller part first.
    pub parts: [(Vec<usize>, Matrix); 2],
}

/// Splits a tensor product over some partition of its wires, if it is one.
///
/// Smaller first parts are tried first, so factors come off one by one.
pub fn factors(m: &Matrix, nothing: f64) -> Option<Factors> {
    let n = qubits(m);
    let mut masks: Vec<usize> = (1..(1_usize << n) - 1).collect();
    masks.retain(|mask| 2 * mask.count_ones() as usize <= n);
    masks.sort_by_key(|mask| (mask.count_ones(), *mask));
    let pivot = largest(m);
    masks.into_iter().find_map(|mask| split(m, mask, pivot, nothing))
}

/// Place of the largest entry.
fn largest(m: &Matrix) -> (usize, usize) {
    let places = (0..m.cols()).flat_map(|c| (0..m.rows()).map(move |r| (r, c)));
    let mut best = (0, 0);
    for at in places {
        if m[at].norm() > m[best].norm() {
            best = at;
        }
    }
    best
}

/// `m` as a product of a factor on the index bits in `mask` and one on the
/// rest: all entries follow from the row and the column of the pivot.
fn split(m: &Matrix, mask: usize, pivot: (usize, usize), nothing: f64) -> Option<Factors> {
    let rest = !mask & (m.rows() - 1);
    let whole = m[pivot];
    let mix = |a: usize, b: usize| (a & mask) | (b & rest);
    let product = |r: usize, c: usize| {
        m[(mix(r, pivot.0), mix(c, pivot.1))] * m[(mix(pivot.0, r), mix(pivot.1, c))] / whole
    };
    let same = |r: usize, c: usize| (m[(r, c)] - product(r, c)).norm() < nothing / whole.norm();
    if !(0..m.cols()).all(|c| (0..m.rows()).all(|r| same(r, c))) {
        return None;
    }
    let part = |mask: usize, other: usize| {
        let n = qubits(m);
        let wires: Vec<usize> = (0..n).filter(|&w| mask & bit(w, n) != 0).collect();
        let spread = |k: usize| {
            let bits = wires.iter().enumerate().filter(|(i, _)| k & bit(*i, wires.len()) != 0);
            bits.map(|(_, &w)| bit(w, n)).sum::<usize>()
        };
        let size = 1 << wires.len();
        let factor = Matrix::from_fn(size, size, |r, c| {
            m[(spread(r) | (pivot.0 & other), spread(c) | (pivot.1 & other))]
        });
        (wires, factor)
    };
    let (wires, a) = part(mask, rest);
    let (others, b) = part(rest, mask);
    // Each column of a unitary factor has norm 1; one scale is shared.
    let norm = a.frobenius() / (a.rows() as f64).sqrt();
    let a = a.scaled(C64::new(1.0 / norm, 0.0));
    let b = b.scaled(C64::new(norm, 0.0) / whole);
    Some(Factors { parts: [(wires, a), (others, b)] })
}
