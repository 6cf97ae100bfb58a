//! What is looked for in a unitary before anything generic is used, beyond
//! what [`operator::structure`] offers.

use operator::structure::is_diagonal;
use operator::{C64, Matrix};

use crate::euler;

/// Entries below this are zeros spoilt by the factorisations before: their
/// rounding is near 1e-15 on the sizes in reach, and what is dropped here
/// stays two orders below the 1e-12 that a synthesis is held to.
pub(crate) const NOTHING: f64 = 1e-14;

/// The one-qubit gates of a unitary that every wire but `target` selects, in
/// the order of the other wires' value.
pub(crate) fn selected_gates(m: &Matrix, target: usize) -> Vec<Matrix> {
    let b = m.rows() >> (target + 1);
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
    gates.iter().all(|g| is_diagonal(&inside(g), NOTHING)).then_some(basis)
}
