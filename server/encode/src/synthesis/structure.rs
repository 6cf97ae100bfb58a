//! What to look for in a unitary before anything generic is used.
//!
//! A wire is a bit of the index; wire 0 of `n` is the most significant.

use operator::{C64, Matrix};

use crate::euler;

/// Entries below this are zeros spoilt by the factorisations before: their
/// rounding is near 1e-15 on the sizes in reach, and what is dropped here
/// stays two orders below the 1e-12 that a synthesis is held to.
const NOTHING: f64 = 1e-14;

/// The bit of a wire among `n`.
fn bit(wire: usize, n: usize) -> usize {
    1 << (n - 1 - wire)
}

/// Whether every entry off the diagonal is nothing.
pub(crate) fn is_diagonal(m: &Matrix) -> bool {
    all_nothing(m, |r, c| r != c)
}

/// Whether no amplitude moves from one value of this wire to the other.
pub(crate) fn selects(m: &Matrix, wire: usize) -> bool {
    let b = bit(wire, qubits(m));
    all_nothing(m, |r, c| (r ^ c) & b != 0)
}

/// Whether every amplitude moves from one value of this wire to the other.
pub(crate) fn flips(m: &Matrix, wire: usize) -> bool {
    let b = bit(wire, qubits(m));
    all_nothing(m, |r, c| (r ^ c) & b == 0)
}

/// Whether two matrices are the same.
pub(crate) fn equal(a: &Matrix, b: &Matrix) -> bool {
    (a - b).max_abs() < NOTHING
}

fn all_nothing(m: &Matrix, watched: impl Fn(usize, usize) -> bool) -> bool {
    (0..m.cols()).all(|c| (0..m.rows()).all(|r| !watched(r, c) || m[(r, c)].norm() < NOTHING))
}

fn qubits(m: &Matrix) -> usize {
    m.rows().trailing_zeros() as usize
}

/// The blocks of a matrix over the value of one wire: out value, in value.
pub(crate) fn block(m: &Matrix, wire: usize, out: bool, into: bool) -> Matrix {
    let b = bit(wire, qubits(m));
    let half = m.rows() / 2;
    let place = |k: usize, on: bool| (k & (b - 1)) | ((k & !(b - 1)) << 1) | if on { b } else { 0 };
    Matrix::from_fn(half, half, |r, c| m[(place(r, out), place(c, into))])
}

/// Two factors of a tensor product and the wires that each acts on.
pub(crate) struct Factors {
    pub parts: [(Vec<usize>, Matrix); 2],
}

/// Splits a tensor product over some partition of its wires, if it is one.
///
/// Smaller first parts are tried first, so factors come off one by one.
pub(crate) fn factors(m: &Matrix) -> Option<Factors> {
    let n = qubits(m);
    let mut masks: Vec<usize> = (1..(1_usize << n) - 1).collect();
    masks.retain(|mask| 2 * mask.count_ones() as usize <= n);
    masks.sort_by_key(|mask| (mask.count_ones(), *mask));
    let pivot = largest(m);
    masks.into_iter().find_map(|mask| split(m, mask, pivot))
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
fn split(m: &Matrix, mask: usize, pivot: (usize, usize)) -> Option<Factors> {
    let rest = !mask & (m.rows() - 1);
    let whole = m[pivot];
    let mix = |a: usize, b: usize| (a & mask) | (b & rest);
    let product = |r: usize, c: usize| {
        m[(mix(r, pivot.0), mix(c, pivot.1))] * m[(mix(pivot.0, r), mix(pivot.1, c))] / whole
    };
    let same = |r: usize, c: usize| (m[(r, c)] - product(r, c)).norm() < NOTHING / whole.norm();
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

/// The one-qubit gates of a unitary that every wire but `target` selects, in
/// the order of the other wires' value.
pub(crate) fn selected_gates(m: &Matrix, target: usize) -> Vec<Matrix> {
    let b = bit(target, qubits(m));
    let place = |k: usize, on: usize| (k & (b - 1)) | ((k & !(b - 1)) << 1) | (b * on);
    (0..m.rows() / 2).map(|k| Matrix::from_fn(2, 2, |r, c| m[(place(k, r), place(k, c))])).collect()
}

/// A basis in which all of these one-qubit gates are diagonal, if any.
pub(crate) fn common_basis(gates: &[Matrix]) -> Option<Matrix> {
    let traceless = |g: &Matrix| {
        let half = 0.5 * g.trace();
        Matrix::from_fn(2, 2, |r, c| g[(r, c)] - if r == c { half } else { C64::ZERO })
    };
    let parts = gates.iter().map(traceless);
    let widest = parts.max_by(|a, b| a.frobenius().total_cmp(&b.frobenius()))?;
    // A traceless normal 2×2 matrix is a number times n·σ with n real.
    let (x, y, z) = (
        0.5 * (widest[(0, 1)] + widest[(1, 0)]),
        0.5 * C64::I * (widest[(0, 1)] - widest[(1, 0)]),
        0.5 * (widest[(0, 0)] - widest[(1, 1)]),
    );
    let most = [x, y, z].into_iter().max_by(|a, b| a.norm().total_cmp(&b.norm()))?;
    if most.norm() < NOTHING {
        return Some(Matrix::identity(2));
    }
    let direction = [x, y, z].map(|part| (part / most).re);
    let length = direction.iter().map(|d| d * d).sum::<f64>().sqrt();
    let basis = euler::basis_along(direction.map(|d| d / length));
    let inside = |g: &Matrix| &(&basis.adjoint() * g) * &basis;
    gates.iter().all(|g| is_diagonal(&inside(g))).then_some(basis)
}
