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
    assert_eq!(shown(2, |c| c.cx(1, 0)), "cx[1,0]");
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

#[test]
fn rotations_about_strings() {
    // exp(−iφ ZZ) between two CX; the letters turn with the frames.
    let zz = |c: &mut Circuit, angle: f64| {
        c.cx(0, 2);
        c.push(Gate::Rz(2.0 * angle), &[2]);
        c.cx(0, 2);
    };
    assert_eq!(shown(3, |c| zz(c, 0.3)), "exp(-i 0.3 ZIZ)");
    assert_eq!(shown(3, |c| zz(c, -0.3)), "exp(i 0.3 ZIZ)");
    assert_eq!(shown(3, |c| zz(c, 1e-5)), "exp(-i 1e-5 ZIZ)");
    assert_eq!(shown(3, |c| zz(c, 3.0 * std::f64::consts::FRAC_PI_4)), "exp(-i 3π/4 ZIZ)");
    let turned = |c: &mut Circuit| {
        let (h, v) = (Gate::H, Gate::Sx);
        c.push(h.clone(), &[0]);
        c.push(v.clone(), &[2]);
        zz(c, std::f64::consts::FRAC_PI_8);
        c.push(h, &[0]);
        c.push(v.inverse(), &[2]);
        c.push(Gate::Phase(0.25), &[]);
    };
    // √X† Z √X = Z Rx(π) = −i Z X = Y.
    assert_eq!(shown(3, turned), "e^(i 0.25) exp(-i π/8 XIY)");
}

#[test]
fn wires_are_those_of_the_whole() {
    let inner = |c: &mut Circuit| {
        c.push_controlled(Gate::X, &[Control::one(3), Control::zero(1)], &[0]);
    };
    assert_eq!(shown(4, inner), "negctrl[1] @ cx[3,0] ⊗ identity[2]");
    let nested = |c: &mut Circuit| {
        c.push_controlled(Gate::Ry(0.3), &[Control::one(0), Control::one(2)], &[1]);
    };
    assert_eq!(shown(3, nested), "ctrl[0] @ cry(0.3)[2,1]");
    let swapped = |c: &mut Circuit| c.push_controlled(Gate::Swap, &[Control::one(1)], &[0, 2]);
    assert_eq!(shown(3, swapped), "cswap[1,0,2]");
    assert_eq!(shown(3, |c| c.cx(2, 1)), "identity[0] ⊗ cx[2,1]");
}

#[test]
fn permutations_with_phases_and_reflections() {
    let shift = |c: &mut Circuit| {
        c.push_controlled(Gate::X, &[Control::one(1), Control::one(2)], &[0]);
        c.cx(2, 1);
        c.push(Gate::X, &[2]);
    };
    assert_eq!(shown(3, shift), "permutation");
    let phased = |c: &mut Circuit| {
        shift(c);
        c.push(Gate::T, &[0]);
    };
    assert_eq!(shown(3, phased), "phased permutation");
    // About the uniform state: I − 2|+⟩⟨+|.
    let about = |c: &mut Circuit| {
        (0..3).for_each(|wire| c.push(Gate::H, &[wire]));
        let zeros = [Control::zero(0), Control::zero(1)];
        c.push(Gate::X, &[2]);
        c.push_controlled(Gate::Z, &zeros, &[2]);
        c.push(Gate::X, &[2]);
        (0..3).for_each(|wire| c.push(Gate::H, &[wire]));
    };
    assert_eq!(shown(3, about), "reflection I - 2P, rank P = 1");
}

/// What is off by less than a portrait can tell is called by its name, what
/// is off by more is not, at every scale.
#[test]
fn deviations_decide() {
    for (deviation, same) in [(1e-14, true), (1e-10, false), (1e-7, false)] {
        let off = |m: &Matrix, r: usize, c: usize| {
            let mut m = m.clone();
            m[(r, c)] += C64::new(deviation, 0.0);
            portrait(&m).to_string()
        };
        let cx =
            Matrix::from_fn(4, 4, |r, c| C64::new(f64::from(u8::from([0, 1, 3, 2][c] == r)), 0.0));
        assert_eq!(off(&Matrix::identity(4), 0, 1) == "identity", same);
        assert_eq!(off(&cx, 3, 2) == "cx", same);
        assert_eq!(off(&cx, 0, 3) == "cx", same);
        let mut phase = Matrix::identity(4);
        phase[(3, 3)] = C64::cis(deviation);
        assert_eq!(portrait(&phase) == Portrait::Identity, same);
    }
    let tiny = Matrix::from_real(2, 2, &[1e-320, 0.0, 0.0, 0.0]);
    assert_ne!(portrait(&tiny), Portrait::Zero);
}

/// Random unitaries, controlled and multiplied, are told apart from what
/// they are not.
#[test]
fn structure_is_found_wherever_the_wires_are() {
    let mut random = fastrand::Rng::with_seed(5);
    for _ in 0..30 {
        let mut wires = [0, 1, 2, 3];
        random.shuffle(&mut wires);
        let [a, b, c, d] = wires;
        let mut angle = || 0.2 + 2.0 * random.f64();
        let gates: Vec<Gate> = (0..5).map(|_| Gate::U(angle(), angle(), angle())).collect();
        let entangle = |circuit: &mut Circuit, a: usize, b: usize| {
            circuit.push(gates[0].clone(), &[a]);
            circuit.cx(a, b);
            circuit.push(gates[1].clone(), &[b]);
            circuit.cx(b, a);
        };
        let product = |circuit: &mut Circuit| {
            entangle(circuit, a, b);
            entangle(circuit, c, d);
        };
        let mut circuit = Circuit::new(4);
        product(&mut circuit);
        let whole = portrait(&evaluate(&circuit, &Budget::default()).unwrap());
        let Portrait::Tensor(factors) = whole else { panic!("no product") };
        let mut parts: Vec<Vec<usize>> = factors.into_iter().map(|(wires, _)| wires).collect();
        let mut expected = vec![[a, b], [c, d]];
        expected.iter_mut().for_each(|pair| pair.sort_unstable());
        expected.sort_unstable();
        parts.sort_unstable();
        assert_eq!(parts, expected);

        let mut body = Circuit::new(3);
        entangle(&mut body, 0, 1);
        entangle(&mut body, 1, 2);
        let call = Gate::Call(std::sync::Arc::new(crate::Definition::new("body", body)));
        let mut circuit = Circuit::new(4);
        circuit.push_controlled(call, &[Control { wire: a, on: angle() > 1.2 }], &[b, c, d]);
        let whole = portrait(&evaluate(&circuit, &Budget::default()).unwrap());
        let Portrait::Controlled { wire, inner, .. } = whole else { panic!("no control") };
        assert_eq!((wire, *inner), (a, Portrait::Plain { rows: 8, cols: 8 }));
    }
}

#[test]
fn large_operators_are_looked_at_but_not_searched() {
    let idle = |_: &mut Circuit| {};
    assert_eq!(shown(9, idle), "identity");
    assert_eq!(shown(9, |c| c.push(Gate::Y, &[8])), "Pauli IIIIIIIIY");
    assert_eq!(shown(9, |c| c.cx(0, 8)), "permutation");
    assert_eq!(shown(9, |c| c.push(Gate::H, &[8])), "512×512 matrix");
}
