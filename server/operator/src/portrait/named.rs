//! Gates of the standard library, up to a global phase.

use std::sync::Arc;

use super::{Portrait, SAME, phase_between};
use crate::{Budget, C64, Circuit, Control, Gate, Matrix, evaluate, gate_matrix};

/// e^{iγ} times a gate of the standard library on exactly these wires; one
/// without a phase if there is one, and in the given order if it fits.
pub(super) fn named(matrix: &Matrix, wires: usize, tolerance: f64) -> Option<Portrait> {
    let mut best = None;
    for order in ORDERS.iter().filter(|order| order.len() == wires) {
        let turned = reordered(matrix, order);
        for (phase, gate, angle) in in_order(&turned, wires, tolerance) {
            let found = Portrait::Named { phase, wires: order.to_vec(), gate, angle };
            if phase == 0.0 {
                return Some(found);
            }
            best = best.or(Some(found));
        }
    }
    best
}

/// Orders in which a gate may take one, two or three wires.
const ORDERS: [&[usize]; 9] = [
    &[0],
    &[0, 1],
    &[1, 0],
    &[0, 1, 2],
    &[0, 2, 1],
    &[1, 0, 2],
    &[1, 2, 0],
    &[2, 0, 1],
    &[2, 1, 0],
];

/// The matrix with wire `order[k]` as its wire `k`.
fn reordered(matrix: &Matrix, order: &[usize]) -> Matrix {
    let top = order.len() - 1;
    let place = |index: usize| {
        let bits = order.iter().enumerate().filter(|(k, _)| index >> (top - k) & 1 == 1);
        bits.map(|(_, wire)| 1 << (top - wire)).sum::<usize>()
    };
    Matrix::from_fn(matrix.rows(), matrix.cols(), |r, c| matrix[(place(r), place(c))])
}

/// Phases, names and angles of the gates that a matrix is.
fn in_order(
    matrix: &Matrix,
    wires: usize,
    tolerance: f64,
) -> Vec<(f64, &'static str, Option<f64>)> {
    let fixed = FIXED.iter().map(|(name, controls, gate)| (*name, *controls, gate.clone(), None));
    let turned = TURNED.iter().filter(|(_, controls, _)| controls + 1 == wires);
    let turned = turned.map(|(name, controls, gate)| {
        let angle = angle(matrix, wires, gate);
        (*name, *controls, gate(angle), Some(angle))
    });
    let fits =
        fixed.chain(turned).filter(|(_, controls, gate, _)| controls + gate.wires() == wires);
    let found = fits.filter_map(|(name, controls, gate, angle)| {
        let phase = phase_between(matrix, &*controlled(&gate, controls)?, tolerance)?;
        Some((phase, name, angle))
    });
    found.collect()
}

/// Gates without a parameter: name, controls, gate.
const FIXED: [(&str, usize, Gate); 13] = [
    ("h", 0, Gate::H),
    ("s", 0, Gate::S),
    ("sdg", 0, Gate::Sdg),
    ("t", 0, Gate::T),
    ("tdg", 0, Gate::Tdg),
    ("sx", 0, Gate::Sx),
    ("cx", 1, Gate::X),
    ("cy", 1, Gate::Y),
    ("cz", 1, Gate::Z),
    ("ch", 1, Gate::H),
    ("swap", 0, Gate::Swap),
    ("ccx", 2, Gate::X),
    ("cswap", 1, Gate::Swap),
];

type Turn = (&'static str, usize, fn(f64) -> Gate);

/// Gates with one angle: name, controls, gate. A controlled phase comes
/// before the controlled rotation, of which it is no case.
const TURNED: [Turn; 8] = [
    ("rx", 0, Gate::Rx),
    ("ry", 0, Gate::Ry),
    ("rz", 0, Gate::Rz),
    ("p", 0, Gate::P),
    ("cp", 1, Gate::P),
    ("crx", 1, Gate::Rx),
    ("cry", 1, Gate::Ry),
    ("crz", 1, Gate::Rz),
];

/// The angle that a gate would have, from the last 2×2 block.
fn angle(matrix: &Matrix, wires: usize, gate: &fn(f64) -> Gate) -> f64 {
    let last = (1 << wires) - 2;
    let block = matrix.block(last, last, 2, 2);
    let (a, c, d) = (block[(0, 0)], block[(1, 0)], block[(1, 1)]);
    match gate(0.0) {
        Gate::P(_) => d.arg() - a.arg(),
        Gate::Rz(_) if wires == 1 => d.arg() - a.arg(),
        Gate::Rz(_) => 2.0 * d.arg(),
        Gate::Rx(_) => from_halves(a, c * C64::I, wires),
        _ => from_halves(a, c, wires),
    }
}

/// θ from cos(θ/2) and sin(θ/2). A gate alone may have a phase in front that
/// makes them complex; it is divided out.
fn from_halves(cos: C64, sin: C64, wires: usize) -> f64 {
    let larger = if cos.norm() > sin.norm() { cos } else { sin };
    let real = wires > 1 || larger.im.abs() <= SAME * larger.norm();
    let turn = if real { C64::ONE } else { larger.conj() / larger.norm() };
    2.0 * (sin * turn).re.atan2((cos * turn).re)
}

/// The matrix of a gate under that many controls on the first wires.
fn controlled(gate: &Gate, controls: usize) -> Option<Arc<Matrix>> {
    let budget = Budget::default();
    if controls == 0 {
        return gate_matrix(gate, &budget).ok();
    }
    let mut circuit = Circuit::new(controls + gate.wires());
    let on: Vec<Control> = (0..controls).map(Control::one).collect();
    let targets: Vec<usize> = (controls..circuit.wires).collect();
    circuit.push_controlled(gate.clone(), &on, &targets);
    evaluate(&circuit, &budget).ok().map(Arc::new)
}
