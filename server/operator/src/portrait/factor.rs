//! Controlled operators and tensor products.

use super::{Portrait, SAME, portrait};
use crate::structure::{block, equal, factors};
use crate::{C64, Matrix};

/// The identity where one wire holds a value, something else where it does not.
pub(super) fn controlled(matrix: &Matrix, wires: usize, tolerance: f64) -> Option<Portrait> {
    if wires < 2 {
        return None;
    }
    let nothing = Matrix::zeros(matrix.rows() / 2, matrix.cols() / 2);
    let identity = Matrix::identity(matrix.rows() / 2);
    for wire in 0..wires {
        let of = |out: bool, into: bool| block(matrix, wire, out, into);
        let mixes = [(false, true), (true, false)];
        if !mixes.iter().all(|&(out, into)| equal(&of(out, into), &nothing, tolerance)) {
            continue;
        }
        for on in [true, false] {
            if equal(&of(!on, !on), &identity, tolerance) {
                let others: Vec<usize> = (0..wires).filter(|&other| other != wire).collect();
                let inner = Box::new(portrait(&of(on, on)).placed(&others));
                return Some(Portrait::Controlled { wire, on, inner });
            }
        }
    }
    None
}

/// A product over a partition of the wires, as fine as it goes.
pub(super) fn tensor(matrix: &Matrix, tolerance: f64) -> Option<Portrait> {
    let [(first, a), (second, b)] = factors(matrix, tolerance)?.parts;
    let (a, b) = balanced(&a, &b);
    let mut all = placed(&a, &first);
    all.extend(placed(&b, &second));
    all.sort_by_key(|(wires, _)| wires.first().copied());
    Some(Portrait::Tensor(all))
}

/// The portrait of a factor, taken apart further, on the whole's wires.
fn placed(matrix: &Matrix, wires: &[usize]) -> Vec<(Vec<usize>, Portrait)> {
    match portrait(matrix).placed(wires) {
        Portrait::Tensor(factors) => factors,
        whole => vec![(wires.to_vec(), whole)],
    }
}

/// The factors with their common scale on one side: where one of them is a
/// multiple of a unitary, it is made that unitary.
fn balanced(a: &Matrix, b: &Matrix) -> (Matrix, Matrix) {
    let (unit_a, scale) = unit(a);
    let defect = (&(&unit_a.adjoint() * &unit_a) - &Matrix::identity(a.rows())).max_abs();
    if defect <= SAME {
        return (unit_a, b.scaled(scale));
    }
    let (unit_b, scale) = unit(b);
    (a.scaled(scale), unit_b)
}

/// A matrix scaled to the Frobenius norm of a unitary and a positive first
/// largest entry, and the factor that was taken out.
fn unit(matrix: &Matrix) -> (Matrix, C64) {
    let size = matrix.frobenius() / (matrix.rows() as f64).sqrt();
    // The first of equals, whatever rounding made of them.
    let larger = |best: C64, z: &C64| if z.norm() > best.norm() * (1.0 + SAME) { *z } else { best };
    let lead = matrix.as_slice().iter().fold(C64::ZERO, larger);
    let scale = lead * (size / lead.norm());
    (matrix.scaled(scale.inv()), scale)
}
