//! One-qubit unitaries as gates: Euler angles with the exact phase.

use std::f64::consts::{FRAC_1_SQRT_2, FRAC_PI_2, FRAC_PI_4, PI};

use operator::{C64, Circuit, Gate, Matrix};

/// Angles closer than this are taken as equal when a gate is given its
/// name: a few units of rounding in an angle of order one, far below any
/// tolerance a user can ask for.
pub(crate) const SAME_ANGLE: f64 = 1e-14;

/// Appends a 2×2 unitary with its exact global phase.
pub fn push(circuit: &mut Circuit, gate: &Matrix, target: usize) {
    let phase = push_up_to_phase(circuit, gate, target);
    push_phase(circuit, phase.arg());
}

/// Appends a global phase unless it is nothing.
pub(crate) fn push_phase(circuit: &mut Circuit, angle: f64) {
    let angle = wrap(angle);
    if angle.abs() > SAME_ANGLE {
        circuit.push(Gate::Phase(angle), &[]);
    }
}

/// Appends a 2×2 unitary as at most one gate, named where it has a name.
///
/// Returns the factor of modulus 1 that is still missing.
pub fn push_up_to_phase(circuit: &mut Circuit, gate: &Matrix, target: usize) -> C64 {
    let (found, phase) = name(&Angles::of(gate));
    if let Some(found) = found {
        circuit.push(found, &[target]);
    }
    C64::cis(phase)
}

/// `e^{iδ} [[cos θ/2, −e^{iλ} sin θ/2], [e^{iφ} sin θ/2, e^{i(φ+λ)} cos θ/2]]`.
#[derive(Debug, Clone, Copy)]
struct Angles {
    theta: f64,
    phi: f64,
    lambda: f64,
    delta: f64,
}

impl Angles {
    /// Angles of a 2×2 unitary, `θ` in [0, π], the others in (−π, π].
    ///
    /// Phases are read off the two larger entries, so an entry that is only
    /// rounding never decides an angle that matters.
    fn of(gate: &Matrix) -> Angles {
        let (m00, m01, m10, m11) = (gate[(0, 0)], gate[(0, 1)], gate[(1, 0)], gate[(1, 1)]);
        let (cosine, sine) = (m00.norm(), m10.norm());
        let theta = 2.0 * sine.atan2(cosine);
        if cosine >= sine {
            let delta = m00.arg();
            let phi = if sine > SAME_ANGLE { m10.arg() - delta } else { 0.0 };
            let lambda = m11.arg() - delta - phi;
            return Angles { theta, phi: wrap(phi), lambda: wrap(lambda), delta };
        }
        let (left, right) = (m10.arg(), (-m01).arg());
        let delta = if cosine > SAME_ANGLE { m00.arg() } else { left };
        Angles { theta, phi: wrap(left - delta), lambda: wrap(right - delta), delta }
    }
}

/// The gate that the angles describe up to a phase, and that phase.
fn name(angles: &Angles) -> (Option<Gate>, f64) {
    let Angles { theta, phi, lambda, delta } = *angles;
    if theta < SAME_ANGLE {
        return (phase_gate(wrap(phi + lambda)), delta);
    }
    let flat = |angle: f64| same(angle, 0.0);
    let turned = |angle: f64| same(angle.abs(), PI);
    if same(theta, PI) && flat(phi) && turned(lambda) {
        return (Some(Gate::X), delta);
    }
    if same(theta, PI) && flat(phi) && flat(lambda) {
        return (Some(Gate::Y), delta - FRAC_PI_2);
    }
    if flat(phi) && flat(lambda) {
        return (Some(Gate::Ry(theta)), delta);
    }
    if turned(phi) && turned(lambda) {
        return (Some(Gate::Ry(-theta)), delta);
    }
    if same(theta, FRAC_PI_2) && flat(phi) && turned(lambda) {
        return (Some(Gate::H), delta);
    }
    for sign in [1.0, -1.0] {
        if same(phi, -sign * FRAC_PI_2) && same(lambda, sign * FRAC_PI_2) {
            let sx = same(theta, FRAC_PI_2) && sign > 0.0;
            return match sx {
                true => (Some(Gate::Sx), delta - FRAC_PI_4),
                false => (Some(Gate::Rx(sign * theta)), delta),
            };
        }
    }
    (Some(Gate::U(theta, phi, lambda)), delta - 0.5 * theta)
}

/// `diag(1, e^{iλ})` under its shortest name.
fn phase_gate(lambda: f64) -> Option<Gate> {
    if same(lambda, 0.0) {
        return None;
    }
    let eighths = [
        (FRAC_PI_4, Gate::T),
        (FRAC_PI_2, Gate::S),
        (-FRAC_PI_4, Gate::Tdg),
        (-FRAC_PI_2, Gate::Sdg),
        (PI, Gate::Z),
        (-PI, Gate::Z),
    ];
    let named = eighths.into_iter().find(|&(angle, _)| same(lambda, angle));
    Some(named.map_or(Gate::P(lambda), |(_, gate)| gate))
}

fn same(a: f64, b: f64) -> bool {
    (a - b).abs() < SAME_ANGLE
}

/// An angle brought into (−π, π].
pub(crate) fn wrap(angle: f64) -> f64 {
    let turned = angle - 2.0 * PI * (angle / (2.0 * PI)).round();
    if turned <= -PI { turned + 2.0 * PI } else { turned }
}

/// Orthonormal eigenvectors of `n·σ` for a real unit vector `n`, the one
/// with eigenvalue +1 first.
pub(crate) fn basis_along([x, y, z]: [f64; 3]) -> Matrix {
    let (a, b) = if z >= 0.0 {
        (C64::new(1.0 + z, 0.0), C64::new(x, y))
    } else {
        (C64::new(x, -y), C64::new(1.0 - z, 0.0))
    };
    let norm = (a.norm_sqr() + b.norm_sqr()).sqrt();
    let (a, b) = (a / norm, b / norm);
    Matrix::from_rows(2, 2, &[a, -b.conj(), b, a.conj()])
}

/// The 2×2 matrix of H.
pub(crate) fn hadamard() -> Matrix {
    let s = FRAC_1_SQRT_2;
    Matrix::from_real(2, 2, &[s, s, s, -s])
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::testing::{gap, haar, matrix_of};

    #[test]
    fn any_one_qubit_unitary_is_one_gate_and_a_phase() {
        for seed in 0..200 {
            let gate = haar(2, seed);
            let mut circuit = Circuit::new(1);
            push(&mut circuit, &gate, 0);
            assert!(gap(&matrix_of(&circuit), &gate) < 1e-15 * 4.0);
            assert!(circuit.steps.len() <= 2);
        }
    }

    #[test]
    fn named_gates_keep_their_names() {
        let gates = [
            Gate::X,
            Gate::Y,
            Gate::Z,
            Gate::H,
            Gate::S,
            Gate::Sdg,
            Gate::T,
            Gate::Tdg,
            Gate::Sx,
            Gate::P(0.3),
            Gate::Rx(0.3),
            Gate::Rx(-0.3),
            Gate::Ry(0.3),
            Gate::Ry(-0.3),
        ];
        for gate in gates {
            let mut once = Circuit::new(1);
            once.push(gate.clone(), &[0]);
            let mut again = Circuit::new(1);
            push(&mut again, &matrix_of(&once), 0);
            assert!(gap(&matrix_of(&once), &matrix_of(&again)) < 4e-15, "{gate:?}");
            assert_eq!(again.steps.len(), 1, "{gate:?}: {:?}", again.steps);
            let kind = std::mem::discriminant::<Gate>;
            assert_eq!(kind(&gate), kind(&again.steps[0].gate), "{gate:?}");
        }
    }

    #[test]
    fn nearly_diagonal_and_nearly_flipped_gates_are_exact() {
        for small in [1e-7, 1e-13, 1e-15, 1e-17, 0.0] {
            for flip in [false, true] {
                let (s, c) = f64::sin_cos(small);
                let (a, b) = if flip { (s, c) } else { (c, s) };
                let e = C64::cis;
                let rows = [e(0.3) * a, -e(1.1) * b, e(2.9) * b, e(2.9 + 1.1 - 0.3) * a];
                let gate = Matrix::from_rows(2, 2, &rows);
                let mut circuit = Circuit::new(1);
                push(&mut circuit, &gate, 0);
                assert!(gap(&matrix_of(&circuit), &gate) < 2e-14);
            }
        }
    }
}
