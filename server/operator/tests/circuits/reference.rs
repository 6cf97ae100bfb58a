//! Random circuits against operators that are put together from Kronecker
//! products of 2×2 matrices, as on paper.

use std::sync::Arc;

use operator::norm::unitarity_error;
use operator::{
    Budget, C64, Circuit, Control, Definition, Gate, Matrix, Step, encoded_columns, evaluate,
    evaluate_columns, gate_matrix,
};
use proptest::prelude::*;
use proptest::test_runner::RngSeed;

/// Rounding of a few dozen gates on four wires.
const CLOSE: f64 = 1e-13;

/// The 2×2 matrix of a gate, written out from the standard's definitions.
fn small(gate: &Gate) -> Matrix {
    let (o, l, i) = (C64::ZERO, C64::ONE, C64::I);
    let e = |angle: f64| C64::new(angle.cos(), angle.sin());
    let rows = match *gate {
        Gate::Id => [l, o, o, l],
        Gate::X => [o, l, l, o],
        Gate::Y => [o, -i, i, o],
        Gate::Z => [l, o, o, -l],
        Gate::H => [l, l, l, -l].map(|z| z / 2.0_f64.sqrt()),
        Gate::S => [l, o, o, i],
        Gate::Sdg => [l, o, o, -i],
        Gate::T => [l, o, o, (l + i) / 2.0_f64.sqrt()],
        Gate::Tdg => [l, o, o, (l - i) / 2.0_f64.sqrt()],
        Gate::Sx => [l + i, l - i, l - i, l + i].map(|z| z / 2.0),
        Gate::P(angle) => [l, o, o, e(angle)],
        Gate::Rx(angle) => exponential(&[o, l, l, o], angle),
        Gate::Ry(angle) => exponential(&[o, -i, i, o], angle),
        Gate::Rz(angle) => exponential(&[l, o, o, -l], angle),
        Gate::U(theta, phi, lambda) => {
            let (plus, minus) = (l + e(theta), l - e(theta));
            [plus, -i * e(lambda) * minus, i * e(phi) * minus, e(phi + lambda) * plus]
                .map(|z| z / 2.0)
        }
        ref other => panic!("{other:?} is no gate on one wire"),
    };
    Matrix::from_rows(2, 2, &rows)
}

/// exp(−iθP/2) of a Pauli matrix, by its power series.
fn exponential(pauli: &[C64; 4], theta: f64) -> [C64; 4] {
    let p = Matrix::from_rows(2, 2, pauli).scaled(C64::new(0.0, -0.5 * theta));
    let (mut sum, mut term) = (Matrix::identity(2), Matrix::identity(2));
    for k in 1..60 {
        term = (&term * &p).scaled(C64::new(1.0 / f64::from(k), 0.0));
        sum = &sum + &term;
    }
    [sum[(0, 0)], sum[(0, 1)], sum[(1, 0)], sum[(1, 1)]]
}

/// The Kronecker product of one matrix a wire.
fn kron(factors: &[Matrix]) -> Matrix {
    factors.iter().fold(Matrix::identity(1), |product, factor| product.kron(factor))
}

/// The operator of a step: `I + Π ⊗ (G − I)`, Π projecting on the values of
/// the controls; a swap is half the sum of P ⊗ P over the Pauli matrices.
fn naive(step: &Step, wires: usize) -> Matrix {
    let place = |targets: &[Matrix]| {
        let mut factors = vec![Matrix::identity(2); wires];
        for control in &step.controls {
            let value = usize::from(control.on);
            factors[control.wire] = Matrix::zeros(2, 2);
            factors[control.wire][(value, value)] = C64::ONE;
        }
        step.targets.iter().zip(targets).for_each(|(&wire, m)| factors[wire] = m.clone());
        kron(&factors)
    };
    let nothing = vec![Matrix::identity(2); step.targets.len()];
    let acting = match step.gate {
        Gate::Phase(angle) => place(&nothing).scaled(C64::cis(angle)),
        Gate::Swap => {
            let half = C64::new(0.5, 0.0);
            let paulis = [Gate::Id, Gate::X, Gate::Y, Gate::Z].map(|gate| small(&gate));
            let terms = paulis.map(|p| place(&[p.clone(), p]).scaled(half));
            terms.iter().fold(Matrix::zeros(1 << wires, 1 << wires), |sum, term| &sum + term)
        }
        ref gate => place(&[small(gate)]),
    };
    &(&Matrix::identity(1 << wires) - &place(&nothing)) + &acting
}

fn reference(circuit: &Circuit) -> Matrix {
    let start = Matrix::identity(1 << circuit.wires);
    circuit.steps.iter().fold(start, |done, step| &naive(step, circuit.wires) * &done)
}

fn operator(circuit: &Circuit) -> Matrix {
    evaluate(circuit, &Budget::default()).expect("a small circuit")
}

fn same(a: &Matrix, b: &Matrix) -> bool {
    (a - b).max_abs() < CLOSE
}

fn a_gate() -> impl Strategy<Value = Gate> {
    let angle = || prop_oneof![-7.0..7.0_f64, Just(std::f64::consts::PI), Just(0.0)];
    let fixed = prop::sample::select(vec![
        Gate::Id,
        Gate::X,
        Gate::Y,
        Gate::Z,
        Gate::H,
        Gate::S,
        Gate::Sdg,
        Gate::T,
        Gate::Tdg,
        Gate::Sx,
        Gate::Swap,
    ]);
    prop_oneof![
        3 => fixed,
        1 => angle().prop_map(Gate::Phase),
        1 => angle().prop_map(Gate::P),
        1 => angle().prop_map(Gate::Rx),
        1 => angle().prop_map(Gate::Ry),
        1 => angle().prop_map(Gate::Rz),
        2 => (angle(), angle(), angle()).prop_map(|(a, b, c)| Gate::U(a, b, c)),
    ]
}

/// A step on some of the wires, in any order, with any number of controls.
fn a_step(wires: usize) -> impl Strategy<Value = Step> {
    let order = Just((0..wires).collect::<Vec<usize>>()).prop_shuffle();
    let on = prop::collection::vec(any::<bool>(), wires);
    (a_gate(), order, on, 0..=wires).prop_filter_map("too few wires", move |drawn| {
        let (gate, order, on, controls) = drawn;
        let (targets, rest) = order.split_at_checked(gate.wires())?;
        let controls = rest.iter().zip(on).map(|(&wire, on)| Control { wire, on }).take(controls);
        Some(Step { gate, controls: controls.collect(), targets: targets.to_vec() })
    })
}

fn a_circuit(wires: std::ops::RangeInclusive<usize>) -> impl Strategy<Value = Circuit> {
    wires.prop_flat_map(|wires| {
        let steps = prop::collection::vec(a_step(wires), 0..12);
        steps.prop_map(move |steps| Circuit { wires, steps })
    })
}

fn settings() -> ProptestConfig {
    ProptestConfig {
        cases: 64,
        rng_seed: RngSeed::Fixed(1),
        failure_persistence: None,
        ..ProptestConfig::default()
    }
}

proptest! {
    #![proptest_config(settings())]

    #[test]
    fn circuits_are_products_of_their_steps(circuit in a_circuit(1..=4)) {
        prop_assert!(same(&operator(&circuit), &reference(&circuit)));
    }

    #[test]
    fn circuits_are_unitary_and_undone_by_their_inverses(circuit in a_circuit(1..=5)) {
        let whole = operator(&circuit);
        prop_assert!(unitarity_error(&whole).unwrap() < CLOSE);
        prop_assert!(same(&operator(&circuit.inverse()), &whole.adjoint()));
    }

    #[test]
    fn columns_are_those_of_the_whole(circuit in a_circuit(2..=5), ancillas in 0_usize..=2) {
        let (whole, budget) = (operator(&circuit), Budget::default());
        let last = whole.cols() - 1;
        let some = evaluate_columns(&circuit, &[last, 0, last], &budget).unwrap();
        prop_assert_eq!(some.column(0), whole.column(last));
        prop_assert_eq!(some.column(1), whole.column(0));
        let kept = whole.cols() >> ancillas;
        let encoded = encoded_columns(&circuit, ancillas, &budget).unwrap();
        prop_assert_eq!(encoded, whole.block(0, 0, whole.rows(), kept));
    }

    /// A call under controls, its inverse and its powers, for definitions
    /// that are applied as a matrix and for those that are applied in place.
    #[test]
    fn calls_act_like_their_bodies(
        body in a_circuit(1..=5),
        on in any::<bool>(),
        times in -3_i32..=3,
    ) {
        let wires = body.wires + 1;
        let map: Vec<usize> = (0..body.wires).rev().collect();
        let control = Control { wire: body.wires, on };
        let call = Gate::Call(Arc::new(Definition::new("body", body.clone())));
        let gate = Gate::Power(Box::new(call), f64::from(times));
        let mut called = Circuit::new(wires);
        called.push_controlled(gate, &[control], &map);
        let mut written = Circuit::new(wires);
        for _ in 0..times.abs() {
            written.append(&if times < 0 { body.inverse() } else { body.clone() }, &map);
        }
        written.steps.iter_mut().for_each(|step| step.controls.push(control));
        prop_assert!(same(&operator(&called), &operator(&written)));
    }

    /// Roots of a circuit: their powers give it back, also past the cut of
    /// the phases, and a root turns by half of each phase or less.
    #[test]
    fn roots_multiply_up(body in a_circuit(1..=3), parts in 2_u32..=5) {
        let call = Gate::Call(Arc::new(Definition::new("body", body.clone())));
        let root = Gate::Power(Box::new(call), 1.0 / f64::from(parts));
        let budget = Budget::default();
        let again = Gate::Power(Box::new(root.clone()), f64::from(parts));
        let product = gate_matrix(&again, &budget).unwrap();
        prop_assert!(same(&product, &operator(&body)));
        let phases = operator::decompose::eigen_unitary(&gate_matrix(&root, &budget).unwrap());
        let widest = std::f64::consts::PI / f64::from(parts) + 1e-9;
        prop_assert!(phases.unwrap().values.iter().all(|z| z.arg().abs() <= widest));
    }
}

/// The cut of a root lies at −1: rounding must not choose its side, and
/// inverting before or after the root is not the same.
#[test]
fn roots_at_the_cut() {
    let half = |gate: Gate| Gate::Power(Box::new(gate), 0.5);
    let matrix = |gate: &Gate| (*gate_matrix(gate, &Budget::default()).unwrap()).clone();
    let pi = std::f64::consts::PI;
    let minus = |m: &Matrix| m.scaled(-C64::ONE);
    let table = [
        (half(Gate::Z), small(&Gate::S)),
        (half(Gate::Z).inverse(), small(&Gate::Sdg)),
        (half(Gate::Z.inverse()), small(&Gate::S)),
        (half(Gate::P(-pi)), small(&Gate::S)),
        (half(Gate::P(pi * (1.0 + 1e-15))), small(&Gate::S)),
        (half(Gate::Rx(3.0 * pi)), minus(&small(&Gate::Rx(1.5 * pi)))),
        (half(Gate::X), small(&Gate::Sx)),
        (half(Gate::Id), small(&Gate::Id)),
    ];
    for (gate, expected) in table {
        assert!(same(&matrix(&gate), &expected), "{gate:?}");
    }
}

#[test]
fn what_has_no_operator_is_an_error() {
    use operator::Error;
    let find = |gate: Gate| gate_matrix(&gate, &Budget::default()).unwrap_err();
    let dense = |rows: usize, cols: usize| Gate::Dense(Arc::new(Matrix::zeros(rows, cols)));
    assert_eq!(find(dense(6, 6)), Error::BadDimension { rows: 6, cols: 6 });
    assert_eq!(find(dense(4, 2)), Error::BadDimension { rows: 4, cols: 2 });
    let root = Gate::Power(Box::new(dense(2, 2)), 0.5);
    assert!(matches!(find(root), Error::NotUnitary { residual, .. } if residual == 1.0));
    let wide = |wires| Gate::Call(Arc::new(Definition::new("wide", Circuit::new(wires))));
    let root = |wires| Gate::Power(Box::new(wide(wires)), 0.5);
    assert!(matches!(find(root(11)), Error::TooLarge { wires: 11, .. }));
    assert!(matches!(find(wide(80)), Error::TooLarge { wires: 80, .. }));
    let infinite = Gate::Power(Box::new(Gate::X), f64::INFINITY);
    let found = gate_matrix(&infinite, &Budget::default()).unwrap();
    assert!(matches!(found.check_finite(), Err(Error::NotFinite { .. })));
}
