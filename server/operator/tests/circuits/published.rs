//! Circuits from the literature and the operators they are published for.

use std::f64::consts::{FRAC_PI_2, FRAC_PI_4};
use std::sync::Arc;

use operator::counts::{Counts, counts};
use operator::distance::{exact, up_to_phase};
use operator::portrait::portrait;
use operator::{Budget, C64, Circuit, Control, Gate, Matrix, evaluate};

/// Rounding of some twenty gates.
const CLOSE: f64 = 1e-14;

fn operator(circuit: &Circuit) -> Matrix {
    evaluate(circuit, &Budget::default()).expect("a small circuit")
}

/// The permutation that flips the last of three bits where the others are 1.
fn toffoli() -> Matrix {
    let image = |c: usize| if c >= 6 { c ^ 1 } else { c };
    Matrix::from_fn(8, 8, |r, c| C64::new(f64::from(u8::from(image(c) == r)), 0.0))
}

/// Six CX, seven T and two H: the circuit of Shende and Markov 2009 (arXiv
/// 0803.2316), which shows that six are needed.
#[test]
fn toffoli_of_six_cx_and_seven_t() {
    let mut circuit = Circuit::new(3);
    circuit.push(Gate::H, &[2]);
    for (control, gate) in [(1, Gate::Tdg), (0, Gate::T), (1, Gate::Tdg), (0, Gate::T)] {
        circuit.cx(control, 2);
        circuit.push(gate, &[2]);
    }
    circuit.push(Gate::T, &[1]);
    circuit.push(Gate::H, &[2]);
    circuit.cx(0, 1);
    circuit.push(Gate::T, &[0]);
    circuit.push(Gate::Tdg, &[1]);
    circuit.cx(0, 1);
    assert!(exact(&operator(&circuit), &toffoli()).unwrap() < CLOSE);
    assert_eq!(portrait(&operator(&circuit)).to_string(), "ccx");
    let expected = Counts {
        one_qubit: 9,
        two_qubit: 6,
        cx: Some(6),
        t_estimate: Some(7),
        depth: 11,
        two_qubit_depth: 6,
        ..Counts::default()
    };
    assert_eq!(counts(&circuit), expected);
}

/// Three CX give the Toffoli with one sign changed: Margolus's gate, in
/// Barenco et al. 1995 (Phys. Rev. A 52, 3457), section VI B.
#[test]
fn toffoli_up_to_a_sign_of_three_cx() {
    let mut circuit = Circuit::new(3);
    for (angle, control) in [(1.0, Some(1)), (1.0, Some(0)), (-1.0, Some(1)), (-1.0, None)] {
        circuit.push(Gate::Ry(angle * FRAC_PI_4), &[2]);
        control.into_iter().for_each(|control| circuit.cx(control, 2));
    }
    let relative = &operator(&circuit) * &toffoli();
    let signs = relative.diagonal();
    assert!(exact(&relative, &Matrix::from_diagonal(&signs)).unwrap() < CLOSE);
    let changed = signs.iter().filter(|z| (*z + 1.0).norm() < CLOSE).count();
    let kept = signs.iter().filter(|z| (*z - 1.0).norm() < CLOSE).count();
    assert_eq!((changed, kept), (1, 7));
    assert_eq!(counts(&circuit).cx, Some(3));
}

/// Barenco et al. 1995, Lemma 6.1 with V = (1−i)(I+iX)/2, the square root of
/// X of their example.
#[test]
fn toffoli_of_five_gates() {
    let (diagonal, off) = (C64::new(0.5, -0.5), C64::new(0.5, 0.5));
    let root = Gate::Dense(Arc::new(Matrix::from_rows(2, 2, &[diagonal, off, off, diagonal])));
    for v in [root, Gate::Sx, Gate::Sx.inverse(), Gate::Power(Box::new(Gate::X), 0.5)] {
        let mut circuit = Circuit::new(3);
        circuit.push_controlled(v.clone(), &[Control::one(1)], &[2]);
        circuit.cx(0, 1);
        circuit.push_controlled(v.inverse(), &[Control::one(1)], &[2]);
        circuit.cx(0, 1);
        circuit.push_controlled(v.clone(), &[Control::one(0)], &[2]);
        assert!(exact(&operator(&circuit), &toffoli()).unwrap() < CLOSE, "{v:?}");
        assert_eq!(counts(&circuit).two_qubit, 5);
    }
}

/// exp(i(α XX + β YY + γ ZZ)) of three CX: Vatan and Williams 2004 (Phys. Rev.
/// A 69, 032315), Figure 6, with rotations exp(−iθP/2).
#[test]
fn canonical_circuit_of_two_qubits() {
    let (zero, one, i) = (C64::ZERO, C64::ONE, C64::I);
    let x = Matrix::from_rows(2, 2, &[zero, one, one, zero]);
    let y = Matrix::from_rows(2, 2, &[zero, -i, i, zero]);
    let z = Matrix::from_rows(2, 2, &[one, zero, zero, -one]);
    // exp(iφ P⊗P) = cos φ + i sin φ P⊗P.
    let turn = |pauli: &Matrix, angle: f64| {
        let string = pauli.kron(pauli).scaled(C64::new(0.0, angle.sin()));
        &Matrix::identity(4).scaled(C64::new(angle.cos(), 0.0)) + &string
    };
    for (a, b, c) in [(0.3, 0.7, -0.45), (0.0, 0.0, 0.0), (FRAC_PI_4, 0.2, 0.1), (1.1, -0.6, 2.0)] {
        let expected = &(&turn(&x, a) * &turn(&y, b)) * &turn(&z, c);
        let mut circuit = Circuit::new(2);
        circuit.push(Gate::Rz(FRAC_PI_2), &[1]);
        circuit.cx(1, 0);
        circuit.push(Gate::Rz(FRAC_PI_2 - 2.0 * c), &[0]);
        circuit.push(Gate::Ry(FRAC_PI_2 - 2.0 * a), &[1]);
        circuit.cx(0, 1);
        circuit.push(Gate::Ry(2.0 * b - FRAC_PI_2), &[1]);
        circuit.cx(1, 0);
        circuit.push(Gate::Rz(-FRAC_PI_2), &[0]);
        let distance = up_to_phase(&operator(&circuit), &expected).unwrap();
        assert!(distance < CLOSE, "{distance}");
        circuit.push(Gate::Phase(FRAC_PI_4), &[]);
        assert!(exact(&operator(&circuit), &expected).unwrap() < CLOSE);
        assert_eq!(counts(&circuit).cx, Some(3));
    }
}

/// The quantum Fourier transform of Coppersmith 1994: Hadamards, controlled
/// phases and a final reversal, n(n+1)/2 gates and ⌊n/2⌋ swaps.
#[test]
fn fourier_transforms() {
    for n in 1..=6 {
        let mut circuit = Circuit::new(n);
        for wire in 0..n {
            circuit.push(Gate::H, &[wire]);
            for other in wire + 1..n {
                let angle = FRAC_PI_2 / 2.0_f64.powi((other - wire - 1) as i32);
                circuit.push_controlled(Gate::P(angle), &[Control::one(other)], &[wire]);
            }
        }
        (0..n / 2).for_each(|wire| circuit.push(Gate::Swap, &[wire, n - 1 - wire]));
        let size = 1_usize << n;
        let expected = Matrix::from_fn(size, size, |r, c| {
            let turn = std::f64::consts::TAU * (r * c % size) as f64 / size as f64;
            C64::from_polar((size as f64).sqrt().recip(), turn)
        });
        assert!(exact(&operator(&circuit), &expected).unwrap() < CLOSE);
        let found = counts(&circuit);
        assert_eq!((found.one_qubit, found.two_qubit), (n, n * (n - 1) / 2 + n / 2));
    }
}
