use super::*;
use crate::{Budget, Circuit, Control, Gate, evaluate};

fn shown(wires: usize, build: impl Fn(&mut Circuit)) -> String {
    let mut circuit = Circuit::new(wires);
    build(&mut circuit);
    portrait(&evaluate(&circuit, &Budget::default()).expect("small")).to_string()
}

#[test]
fn one_line_each() {
    let one = |gate: Gate| shown(1, |c| c.push(gate.clone(), &[0]));
    for (gate, text) in [
        (Gate::Id, "identity"),
        (Gate::X, "Pauli X"),
        (Gate::Y, "Pauli Y"),
        (Gate::Z, "Pauli Z"),
        (Gate::H, "h"),
        (Gate::S, "s"),
        (Gate::Tdg, "tdg"),
        (Gate::Sx, "sx"),
        (Gate::P(0.3), "p(0.3)"),
        (Gate::Rx(0.7), "rx(0.7)"),
        (Gate::Rx(std::f64::consts::PI / 3.0), "rx(π/3)"),
        (Gate::Ry(-2.5), "ry(-2.5)"),
        (Gate::U(std::f64::consts::PI, 0.0, std::f64::consts::PI), "i Pauli X"),
        (Gate::U(0.3, 0.4, 0.5), "2×2 matrix"),
    ] {
        assert_eq!(one(gate.clone()), text, "{gate:?}");
    }
    assert_eq!(shown(2, |c| c.push(Gate::Phase(0.25), &[])), "global phase 0.25");
    assert_eq!(shown(2, |c| c.cx(0, 1)), "cx");
    assert_eq!(shown(2, |c| c.cx(1, 0)), "permutation");
    assert_eq!(shown(2, |c| c.push(Gate::Swap, &[0, 1])), "swap");
    let crx =
        |angle: f64| shown(2, |c| c.push_controlled(Gate::Rx(angle), &[Control::one(0)], &[1]));
    assert_eq!((crx(0.7), crx(4.0)), ("crx(0.7)".into(), "crx(4)".into()));
    let toffoli = [Control::one(0), Control::one(1)];
    assert_eq!(shown(3, |c| c.push_controlled(Gate::X, &toffoli, &[2])), "ccx");
}

#[test]
fn strings_controls_and_products() {
    let string = |c: &mut Circuit| {
        c.push(Gate::X, &[0]);
        c.push(Gate::Z, &[2]);
        c.push(Gate::Y, &[3]);
        c.push(Gate::Phase(std::f64::consts::PI), &[]);
    };
    assert_eq!(shown(4, string), "-Pauli XIZY");
    let odd = |c: &mut Circuit| {
        c.push_controlled(Gate::U(0.3, 0.4, 0.5), &[Control::zero(1)], &[0]);
    };
    assert_eq!(shown(2, odd), "negctrl[1] @ 2×2 matrix");
    let product = |c: &mut Circuit| {
        c.cx(0, 2);
        c.push(Gate::H, &[1]);
    };
    assert_eq!(shown(3, product), "cx[0,2] ⊗ h[1]");
    let two = |c: &mut Circuit| {
        for (a, b) in [(0, 1), (2, 3)] {
            c.push(Gate::H, &[a]);
            c.cx(a, b);
        }
    };
    assert_eq!(shown(4, two), "4×4 matrix[0,1] ⊗ 4×4 matrix[2,3]");
    assert_eq!(shown(2, |c| c.push_controlled(Gate::T, &[Control::one(0)], &[1])), "cp(π/4)");
}

#[test]
fn what_is_no_operator_on_qubits_is_plain_or_zero() {
    assert_eq!(portrait(&Matrix::zeros(4, 4)).to_string(), "zero");
    assert_eq!(portrait(&Matrix::zeros(3, 3)).to_string(), "3×3 matrix");
    assert_eq!(portrait(&Matrix::zeros(2, 4)).to_string(), "2×4 matrix");
    let bad = Matrix::from_real(2, 2, &[1.0, f64::NAN, 0.0, 1.0]);
    assert_eq!(portrait(&bad).to_string(), "2×2 matrix");
    let bench = Matrix::from_real(2, 2, &[2.0, -1.0, -1.0, 2.0]);
    assert_eq!(portrait(&bench).to_string(), "2×2 matrix");
    assert_eq!(
        portrait(&bench.kron(&Matrix::identity(2))).to_string(),
        "2×2 matrix[0] ⊗ identity[1]"
    );
    let half = Matrix::from_real(2, 2, &[0.5, 0.0, 0.0, 0.25]);
    assert_eq!(portrait(&half).to_string(), "diagonal");
}

#[test]
fn a_small_difference_is_not_overlooked() {
    let mut nearly = Matrix::identity(4);
    nearly[(3, 2)] = C64::new(1e-9, 0.0);
    assert!(!matches!(portrait(&nearly), Portrait::Identity | Portrait::Diagonal));
}
