//! Multiplexed gates: one gate for each value of some control wires.
//!
//! The first control is the most significant bit of the index that selects
//! the gate. Circuits are appended to the caller's. Sources: multiplexed
//! rotations, Möttönen, Vartiainen, Bergholm, Salomaa 2004; multiplexed
//! one-qubit unitaries, Bergholm, Vartiainen, Möttönen, Salomaa 2005.

use std::f64::consts::{FRAC_PI_2, FRAC_PI_4, PI};

use operator::{C64, Circuit, Gate, Matrix};

use crate::euler;

/// A rotation angle below this is a rounding left-over of angles of order
/// one and is dropped with its entanglers; the operator moves by less than
/// the rounding of one product of matrices.
pub(crate) const NO_ANGLE: f64 = 1e-14;

/// The axis of a multiplexed rotation.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Axis {
    /// `Ry`.
    Y,
    /// `Rz`.
    Z,
}

impl Axis {
    fn gate(self, angle: f64) -> Gate {
        match self {
            Axis::Y => Gate::Ry(angle),
            Axis::Z => Gate::Rz(angle),
        }
    }
}

/// Rotates `target` by `angles[i]` where the controls hold `i`.
///
/// With `k` controls: at most 2ᵏ rotations and 2ᵏ CX (none for no control).
/// Rotations that come out zero are dropped and the CX between them merged.
pub fn rotation(
    circuit: &mut Circuit,
    axis: Axis,
    angles: &[f64],
    controls: &[usize],
    target: usize,
) {
    let mut parity = 0;
    for (mask, angle) in gray_angles(angles, controls.len()) {
        entangle(circuit, parity ^ mask, controls, target);
        circuit.push(axis.gate(angle), &[target]);
        parity = mask;
    }
    entangle(circuit, parity, controls, target);
}

/// [`rotation`] about Y with CZ for CX and the closing CZs left off.
///
/// The circuit appended is the multiplexed rotation *followed by* a CZ
/// between `target` and each returned control: one of them for generic
/// angles, so `2ᵏ − 1` CX. A caller merges the CZs into its neighbour, or
/// drops them where the target is projected on |0⟩.
pub fn rotation_left_open(
    circuit: &mut Circuit,
    angles: &[f64],
    controls: &[usize],
    target: usize,
) -> Vec<usize> {
    open_rotation(circuit, angles, controls, target, [Gate::H, Gate::H])
}

/// [`rotation`] about Y for a target that starts in |0⟩ and is projected on
/// |0⟩ at the end: the closing CZs then do nothing, so 2ᵏ − 1 CX.
///
/// Only the corner is right: the block from |0⟩ to |0⟩ of the target.
pub fn projected_rotation(
    circuit: &mut Circuit,
    angles: &[f64],
    controls: &[usize],
    target: usize,
) {
    let ends = [Gate::Ry(FRAC_PI_2), Gate::Ry(-FRAC_PI_2)];
    open_rotation(circuit, angles, controls, target, ends);
}

/// The rotations of [`rotation_left_open`] between two given gates that act
/// as H: on the left of the circuit and on the right.
fn open_rotation(
    circuit: &mut Circuit,
    angles: &[f64],
    controls: &[usize],
    target: usize,
    [first, last]: [Gate; 2],
) -> Vec<usize> {
    // H turns each CX into a CZ and each angle into its opposite; between
    // two entanglers the pair of H cancels, so only the outer ones remain.
    let terms = gray_angles(angles, controls.len());
    let closing = terms.last().map_or(0, |&(mask, _)| mask);
    if closing == 0 {
        rotation(circuit, Axis::Y, angles, controls, target);
        return Vec::new();
    }
    let mut parity = 0;
    circuit.push(first, &[target]);
    for (mask, angle) in terms {
        entangle(circuit, parity ^ mask, controls, target);
        circuit.push(Gate::Ry(-angle), &[target]);
        parity = mask;
    }
    circuit.push(last, &[target]);
    masked(closing, controls).collect()
}

/// Applies `exp(i phases[j])` where the wires hold `j`: at most 2ⁿ − 2 CX.
///
/// Global phase included. Peels off the last wire by a multiplexed `Rz` and
/// goes on with the means of the pairs.
pub fn diagonal(circuit: &mut Circuit, phases: &[f64], wires: &[usize]) {
    assert_eq!(phases.len(), 1 << wires.len(), "one phase for each basis state");
    let Some((&target, controls)) = wires.split_last() else {
        if phases[0].abs() > NO_ANGLE {
            circuit.push(Gate::Phase(phases[0]), &[]);
        }
        return;
    };
    let differences: Vec<f64> = phases.chunks(2).map(|p| p[1] - p[0]).collect();
    let means: Vec<f64> = phases.chunks(2).map(|p| 0.5 * (p[0] + p[1])).collect();
    rotation(circuit, Axis::Z, &differences, controls, target);
    diagonal(circuit, &means, controls);
}

/// Phases in (−π, π] of diagonal entries, with −1 always taken as +π, so
/// that rounding does not choose the branch.
pub fn phases_of(diagonal: &[C64]) -> Vec<f64> {
    let wrap = |angle: f64| if angle < -PI + BRANCH_MARGIN { angle + 2.0 * PI } else { angle };
    diagonal.iter().map(|z| wrap(z.arg())).collect()
}

/// How near to −π a phase is taken for +π: far above rounding, and harmless
/// when met by chance, since both branches are right.
const BRANCH_MARGIN: f64 = 1e-9;

/// The rotations of a multiplexer in Gray order: the mask of controls whose
/// parity flips the rotation, and its angle. Zero angles are left out.
///
/// `θ_j = Σ_i (−1)^{j·g_i} φ_i` with `g_i` the Gray code of `i`, inverted by
/// a fast Walsh–Hadamard transform.
fn gray_angles(angles: &[f64], controls: usize) -> Vec<(usize, f64)> {
    assert_eq!(angles.len(), 1 << controls, "one angle for each control value");
    let mut transformed = angles.to_vec();
    for bit in 0..controls {
        for low in (0..angles.len()).filter(|i| i & (1 << bit) == 0) {
            let (a, b) = (transformed[low], transformed[low | (1 << bit)]);
            transformed[low] = 0.5 * (a + b);
            transformed[low | (1 << bit)] = 0.5 * (a - b);
        }
    }
    let codes = (0..angles.len()).map(|i| i ^ (i >> 1));
    codes.map(|mask| (mask, transformed[mask])).filter(|t| t.1.abs() > NO_ANGLE).collect()
}

/// A CX from each control in the mask to the target.
fn entangle(circuit: &mut Circuit, mask: usize, controls: &[usize], target: usize) {
    for control in masked(mask, controls) {
        circuit.cx(control, target);
    }
}

/// The controls in a mask; the first control is its most significant bit.
fn masked(mask: usize, controls: &[usize]) -> impl Iterator<Item = usize> + '_ {
    let top = controls.len();
    controls.iter().enumerate().filter(move |(k, _)| mask >> (top - 1 - k) & 1 == 1).map(|c| *c.1)
}

/// Applies the 2×2 unitary `gates[i]` to `target` where the controls hold
/// `i`, up to a diagonal: at most 2ᵏ − 1 CX.
///
/// Returns the diagonal `d` over the index (controls, target), the target
/// the least significant bit: the multiplexed gate is what was appended
/// *followed by* `diag(d)`. The diagonal carries all phases.
pub fn unitaries_up_to_diagonal(
    circuit: &mut Circuit,
    gates: &[Matrix],
    controls: &[usize],
    target: usize,
) -> Vec<C64> {
    assert_eq!(gates.len(), 1 << controls.len(), "one gate for each control value");
    let Some((&control, rest)) = controls.split_first() else {
        let phase = euler::push_up_to_phase(circuit, &gates[0], target);
        return vec![phase; 2];
    };
    let (lower, upper) = gates.split_at(gates.len() / 2);
    let ratios: Vec<Matrix> = lower.iter().zip(upper).map(|(a, b)| a * &b.adjoint()).collect();
    if ratios.iter().all(|x| x[(0, 1)].norm() < NO_ANGLE && x[(1, 0)].norm() < NO_ANGLE) {
        let below = unitaries_up_to_diagonal(circuit, upper, rest, target);
        let turned = below.iter().enumerate().map(|(i, d)| d * ratios[i / 2][(i % 2, i % 2)]);
        return turned.chain(below.iter().copied()).collect();
    }
    let splits: Vec<Split> = ratios.iter().zip(upper).map(|(x, b)| Split::new(x, b)).collect();
    let first: Vec<Matrix> = splits.iter().map(|s| s.first.clone()).collect();
    let carried = unitaries_up_to_diagonal(circuit, &first, rest, target);
    circuit.push(Gate::H, &[target]);
    circuit.cx(control, target);
    let pairs = splits.iter().zip(carried.chunks(2));
    let second: Vec<Matrix> = pairs.map(|(s, d)| s.second_after(d)).collect();
    let left = unitaries_up_to_diagonal(circuit, &second, rest, target);
    let turned = |upper: bool| {
        let entries = left.iter().enumerate();
        entries.map(|(i, d)| d * splits[i / 2].outer(upper)[i % 2]).collect::<Vec<_>>()
    };
    [turned(false), turned(true)].concat()
}

/// A pair `a ⊕ b` as `(R† ⊕ R) (u ⊕ u) (d ⊕ d†) (v ⊕ v)` with `R` diagonal
/// and `d = diag(e^{iπ/4}, e^{−iπ/4})`: Bergholm et al. 2005.
struct Split {
    /// `v`.
    first: Matrix,
    /// `u d`, since `d ⊕ d†` is `d` times CZ times `1 ⊕ (−i)`.
    second: Matrix,
    /// Diagonal of `R`.
    r: [C64; 2],
}

impl Split {
    /// From `x = a b†`: `R` makes the eigenvalues of `R x R` equal to ±i, so
    /// that one fixed entangler serves every pair.
    fn new(x: &Matrix, b: &Matrix) -> Split {
        let det = x[(0, 0)] * x[(1, 1)] - x[(0, 1)] * x[(1, 0)];
        let half = 0.5 * det.arg();
        let turn = x[(0, 0)].arg() - half;
        let r = [
            C64::cis(0.5 * (FRAC_PI_2 - half - turn)),
            C64::cis(0.5 * (FRAC_PI_2 - half + turn + PI)),
        ];
        let diagonal = Matrix::from_diagonal(&r);
        let u = eigenvectors(&(&(&diagonal * x) * &diagonal));
        let d = Matrix::from_diagonal(&[C64::cis(FRAC_PI_4), C64::cis(-FRAC_PI_4)]);
        let first = &(&(&d * &u.adjoint()) * &diagonal.adjoint()) * b;
        Split { first, second: &u * &d, r }
    }

    /// `u d`, preceded by the H that closes the CX into a CZ and by the
    /// diagonal that the gates before the CX have left.
    fn second_after(&self, carried: &[C64]) -> Matrix {
        &(&self.second * &Matrix::from_diagonal(carried)) * &euler::hadamard()
    }

    /// The diagonal that stays outside where the control is 0 or 1.
    fn outer(&self, upper: bool) -> [C64; 2] {
        let minus_i = C64::new(0.0, -1.0);
        self.r.map(|r| if upper { r * minus_i } else { r.conj() })
    }
}

/// Orthonormal eigenvectors of a 2×2 unitary with eigenvalues i, −i, in
/// this order: it is `i n·σ`.
fn eigenvectors(y: &Matrix) -> Matrix {
    let flip = 0.5 * (y[(1, 0)] - y[(0, 1)].conj());
    euler::basis_along([flip.im, -flip.re, 0.5 * (y[(0, 0)] - y[(1, 1)]).im])
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::testing::{cx_count, gap, haar, matrix_of};

    fn block_diagonal(blocks: &[Matrix]) -> Matrix {
        let mut m = Matrix::zeros(2 * blocks.len(), 2 * blocks.len());
        blocks.iter().enumerate().for_each(|(i, b)| m.set_block(2 * i, 2 * i, b));
        m
    }

    fn rotations(axis: Axis, angles: &[f64]) -> Matrix {
        let one = |&angle: &f64| {
            let mut circuit = Circuit::new(1);
            circuit.push(axis.gate(angle), &[0]);
            matrix_of(&circuit)
        };
        block_diagonal(&angles.iter().map(one).collect::<Vec<_>>())
    }

    /// 2ᵏ CX and 2ᵏ rotations: Möttönen et al. 2004, fig. 2.
    #[test]
    fn rotations_are_multiplexed() {
        let mut random = fastrand::Rng::with_seed(1);
        for axis in [Axis::Y, Axis::Z] {
            for k in 0..4 {
                let angles: Vec<f64> = (0..1 << k).map(|_| 6.0 * random.f64() - 3.0).collect();
                let mut circuit = Circuit::new(k + 1);
                rotation(&mut circuit, axis, &angles, &(0..k).collect::<Vec<_>>(), k);
                assert!(gap(&matrix_of(&circuit), &rotations(axis, &angles)) < 1e-14);
                assert_eq!(cx_count(&circuit), if k == 0 { 0 } else { 1 << k });
            }
        }
    }

    #[test]
    fn zero_angles_cost_nothing() {
        let cases: [(&[f64], usize); 5] = [
            (&[0.3; 8], 0),
            (&[0.0; 8], 0),
            (&[0.3, 0.3, 0.3, 0.3, 0.7, 0.7, 0.7, 0.7], 2),
            (&[0.3, 0.7, 0.3, 0.7, 0.3, 0.7, 0.3, 0.7], 2),
            (&[0.5, 0.5, 0.1, 0.1, -0.3, -0.3, 0.9, 0.9], 4),
        ];
        for (angles, cx) in cases {
            let mut circuit = Circuit::new(4);
            rotation(&mut circuit, Axis::Y, angles, &[0, 1, 2], 3);
            assert!(gap(&matrix_of(&circuit), &rotations(Axis::Y, angles)) < 1e-14);
            assert_eq!(cx_count(&circuit), cx, "{angles:?}");
        }
    }

    #[test]
    fn an_open_rotation_misses_its_last_cz() {
        let mut random = fastrand::Rng::with_seed(2);
        for k in 0..4 {
            let angles: Vec<f64> = (0..1 << k).map(|_| 6.0 * random.f64() - 3.0).collect();
            let mut circuit = Circuit::new(k + 1);
            let controls: Vec<usize> = (0..k).collect();
            let open = rotation_left_open(&mut circuit, &angles, &controls, k);
            assert_eq!(cx_count(&circuit), (1 << k) - 1);
            for control in open {
                circuit.push(Gate::H, &[k]);
                circuit.cx(control, k);
                circuit.push(Gate::H, &[k]);
            }
            assert!(gap(&matrix_of(&circuit), &rotations(Axis::Y, &angles)) < 1e-14);
        }
    }

    #[test]
    fn diagonals_take_two_to_the_n_minus_two_cx() {
        let mut random = fastrand::Rng::with_seed(3);
        for n in 0..5 {
            let phases: Vec<f64> = (0..1 << n).map(|_| 6.0 * random.f64() - 3.0).collect();
            let mut circuit = Circuit::new(n);
            diagonal(&mut circuit, &phases, &(0..n).collect::<Vec<_>>());
            let entries: Vec<C64> = phases.iter().map(|&a| C64::cis(a)).collect();
            assert!(gap(&matrix_of(&circuit), &Matrix::from_diagonal(&entries)) < 1e-14);
            assert_eq!(cx_count(&circuit), (1_usize << n).saturating_sub(2));
        }
    }

    /// 2ᵏ − 1 CX: Bergholm et al. 2005, table I.
    #[test]
    fn unitaries_are_multiplexed_up_to_a_diagonal() {
        for k in 0..4 {
            let gates: Vec<Matrix> = (0..1 << k).map(|i| haar(2, 10 + i)).collect();
            check_unitaries(&gates, (1 << k) - 1);
        }
    }

    #[test]
    fn special_unitaries_are_multiplexed_too() {
        let id = Matrix::identity(2);
        let x = Matrix::from_real(2, 2, &[0.0, 1.0, 1.0, 0.0]);
        let z = Matrix::from_real(2, 2, &[1.0, 0.0, 0.0, -1.0]);
        let h = euler::hadamard();
        check_unitaries(&[id.clone(), id.clone()], 0);
        check_unitaries(&[id.clone(), z.clone()], 0);
        check_unitaries(&[id.clone(), x.clone()], 1);
        check_unitaries(&[x.clone(), z.clone(), h.clone(), id.clone()], 3);
        check_unitaries(&[h.clone(), h.clone(), h.clone(), x.clone()], 3);
        check_unitaries(&[h.clone(), x.clone(), h, x], 1);
    }

    fn check_unitaries(gates: &[Matrix], cx: usize) {
        let k = gates.len().trailing_zeros() as usize;
        let mut circuit = Circuit::new(k + 1);
        let controls: Vec<usize> = (0..k).collect();
        let left = unitaries_up_to_diagonal(&mut circuit, gates, &controls, k);
        let whole = &Matrix::from_diagonal(&left) * &matrix_of(&circuit);
        assert!(
            gap(&whole, &block_diagonal(gates)) < 1e-13,
            "{:e}",
            gap(&whole, &block_diagonal(gates))
        );
        assert!(cx_count(&circuit) <= cx, "{}", cx_count(&circuit));
    }
}
