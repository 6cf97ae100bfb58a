//! The parts of the circuits, each against its matrix.

use super::*;
use crate::cp::spectral_norm;
use crate::testing::{gap, haar, matrix_of};

/// Rounding of a few products of 2×2 matrices.
const ROUNDING: f64 = 1e-13;

#[test]
fn factors_are_taken_apart() {
    let mut rng = fastrand::Rng::with_seed(4);
    let entry = |rng: &mut fastrand::Rng| C64::new(rng.f64() - 0.5, rng.f64() - 0.5);
    let mut cases: Vec<Matrix> =
        (0..50).map(|_| Matrix::from_fn(2, 2, |_, _| entry(&mut rng))).collect();
    cases.push(haar(2, 9));
    cases.push(Matrix::from_real(2, 2, &[0.0, 1.0, 0.0, 0.0]));
    cases.push(Matrix::from_real(2, 2, &[1.0, 1.0, 1.0, 1.0]));
    cases.push(Matrix::from_real(2, 2, &[1.0, 1e-9, 1e-9, 1.0]));
    cases.push(Matrix::from_real(2, 2, &[0.0, 0.0, 0.0, 1.0]));
    for a in cases {
        let a = a.scaled(C64::from(1.0 / spectral_norm(&a)));
        let factor = Factor::of(&a);
        let middle = Matrix::from_diagonal(&factor.cosines.map(C64::from));
        let rebuilt = &(&factor.left * &middle) * &factor.right.adjoint();
        assert!(gap(&rebuilt, &a) < ROUNDING, "{a:?} {:e}", gap(&rebuilt, &a));
        for unitary in [&factor.left, &factor.right] {
            assert!(gap(&(unitary * &unitary.adjoint()), &Matrix::identity(2)) < ROUNDING);
        }
    }
}

#[test]
fn controlled_gates_cost_no_more_than_they_must() {
    let z = Matrix::from_real(2, 2, &[1.0, 0.0, 0.0, -1.0]);
    let reflection = &(&haar(2, 5) * &z) * &haar(2, 5).adjoint();
    let phase = Matrix::identity(2).scaled(C64::cis(0.4));
    for (gate, cx) in [(phase, 0), (z, 1), (reflection, 1), (haar(2, 6), 2)] {
        let mut circuit = Circuit::new(2);
        let mut global = C64::ONE;
        let left = controlled(&mut circuit, &gate, (0, 1), &mut global);
        push_flag_phase(&mut circuit, left, 0);
        let mut wanted = Matrix::identity(4);
        wanted.set_block(2, 2, &gate);
        assert!(gap(&matrix_of(&circuit).scaled(global), &wanted) < ROUNDING);
        assert_eq!(prepare::two_qubit_gates(&circuit), cx);
    }
}
