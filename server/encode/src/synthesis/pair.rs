//! Circuits of two-qubit unitaries from their canonical decomposition.

use std::f64::consts::{FRAC_PI_2, FRAC_PI_4};

use operator::{C64, Circuit, Gate, Matrix};

use super::canonical::Canonical;
use crate::euler;

/// Appends a 4×4 unitary, exact global phase included, with the 0, 1, 2 or
/// 3 CX that its class demands.
pub(crate) fn push(circuit: &mut Circuit, unitary: &Matrix, wires: [usize; 2]) {
    push_canonical(circuit, &Canonical::of(unitary), wires);
}

/// Appends a 4×4 unitary up to a diagonal, with at most 2 CX where that is
/// possible to full precision, which is all but always.
///
/// Returns the diagonal `d`: the unitary is what was appended *followed by*
/// `diag(d)`. The best of a few values of ψ in `d = exp(iψ Z⊗Z)` is taken.
pub(crate) fn push_up_to_diagonal(
    circuit: &mut Circuit,
    unitary: &Matrix,
    wires: [usize; 2],
) -> [C64; 4] {
    let plain = Canonical::of(unitary);
    let angles = angles(unitary, &plain);
    let mut best = (plain.cx(), 0.0, plain);
    for &psi in &angles {
        let found = Canonical::of(&turned(unitary, psi));
        if found.cx() < best.0 {
            best = (found.cx(), psi, found);
        }
    }
    for start in [angles[0], 0.0] {
        if best.0 == 3
            && let Some((psi, found)) = polished(unitary, start)
        {
            best = (found.cx(), psi, found);
        }
    }
    push_canonical(circuit, &best.2, wires);
    diagonal(best.1)
}

/// `exp(iψ Z⊗Z)`.
fn diagonal(psi: f64) -> [C64; 4] {
    [psi, -psi, -psi, psi].map(C64::cis)
}

/// `exp(−iψ Z⊗Z) U`.
fn turned(unitary: &Matrix, psi: f64) -> Matrix {
    &Matrix::from_diagonal(&diagonal(-psi)) * unitary
}

/// tr γ and tr(γ ZZ) of the unitary scaled to determinant 1, with
/// `γ = U (Y⊗Y) Uᵀ (Y⊗Y)`. Under `exp(−iψ ZZ)` tr γ becomes
/// cos 2ψ · tr γ − i sin 2ψ · tr(γ ZZ).
fn invariants(unitary: &Matrix, plain: &Canonical) -> (C64, C64) {
    let yy = Matrix::from_fn(4, 4, |r, c| match (r + c == 3, r == 0 || r == 3) {
        (true, outer) => C64::new(if outer { -1.0 } else { 1.0 }, 0.0),
        (false, _) => C64::ZERO,
    });
    let gamma = &(&(unitary * &yy) * &unitary.transpose()) * &yy;
    let d = gamma.diagonal();
    // U = e^{ig} times local gates and N of determinant 1 but for signs that
    // come squared, so det U = e^{4ig}.
    let root = C64::cis(-2.0 * plain.phase);
    (root * (d[0] + d[1] + d[2] + d[3]), root * (d[0] - d[1] - d[2] + d[3]))
}

/// Angles ψ that may lower the class: two CX where tr γ becomes real
/// (Shende, Bullock, Markov 2004), one where it vanishes, none where the
/// diagonal is all of the entangling part.
fn angles(unitary: &Matrix, plain: &Canonical) -> Vec<f64> {
    let (t0, t1) = invariants(unitary, plain);
    let mut found = vec![0.5 * t0.im.atan2(t1.re), 0.5 * t0.re.atan2(-t1.im)];
    if plain.cx() < 3 {
        found.extend([plain.xyz[0], -plain.xyz[0]]);
    }
    found
}

/// First half-width of the bracket for [`polished`], in radians; it grows
/// tenfold until the coordinate changes sign or [`WIDEST`] is passed.
const NARROWEST: f64 = 1e-15;

/// Past this the sign change belongs to another root than the one near which
/// the search began.
const WIDEST: f64 = 1e-3;

/// The ψ near `start` at which the least coordinate itself vanishes.
///
/// tr γ is a product of three sines: where two coordinates are small, its
/// reality fixes the least one only to the square root of rounding. Bisection
/// on the coordinate does not suffer from that.
fn polished(unitary: &Matrix, start: f64) -> Option<(f64, Canonical)> {
    let least = |psi: f64| Canonical::of(&turned(unitary, psi));
    let mut width = NARROWEST;
    let (mut low, mut high) = loop {
        let (low, high) = (start - width, start + width);
        if least(low).xyz[1] * least(high).xyz[1] < 0.0 {
            break (low, high);
        }
        width *= 10.0;
        if width > WIDEST {
            return None;
        }
    };
    let rising = least(high).xyz[1] > 0.0;
    loop {
        let middle = 0.5 * (low + high);
        let found = least(middle);
        if found.cx() < 3 {
            return Some((middle, found));
        }
        if middle <= low || middle >= high {
            return None;
        }
        match (found.xyz[1] > 0.0) == rising {
            true => high = middle,
            false => low = middle,
        }
    }
}

/// Appends the circuit of a canonical decomposition.
fn push_canonical(circuit: &mut Circuit, form: &Canonical, wires: [usize; 2]) {
    let ([l0, l1], [r0, r1]) = (&form.left, &form.right);
    let phase = match form.cx() {
        0 => push_local(circuit, [&(l0 * r0), &(l1 * r1)], wires),
        1 => push_one(circuit, form, wires),
        2 => push_two(circuit, form, wires),
        _ => push_three(circuit, form, wires),
    };
    euler::push_phase(circuit, form.phase + phase);
}

/// A gate on each wire; returns the phase still missing.
fn push_local(circuit: &mut Circuit, gates: [&Matrix; 2], wires: [usize; 2]) -> f64 {
    let phases = [0, 1].map(|k| euler::push_up_to_phase(circuit, gates[k], wires[k]).arg());
    phases[0] + phases[1]
}

/// exp(iπ/4 XX) = e^{−iπ/4} (H e^{iπZ/4} ⊗ e^{iπX/4}) CX (H ⊗ I).
fn push_one(circuit: &mut Circuit, form: &Canonical, wires: [usize; 2]) -> f64 {
    let ([l0, l1], [r0, r1]) = (&form.left, &form.right);
    let h = euler::hadamard();
    let turn = Matrix::from_diagonal(&[C64::cis(FRAC_PI_4), C64::cis(-FRAC_PI_4)]);
    let before = push_local(circuit, [&(&h * r0), r1], wires);
    circuit.cx(wires[0], wires[1]);
    let first = &(l0 * &h) * &turn;
    let second = &(&(l1 * &h) * &turn) * &h;
    before + push_local(circuit, [&first, &second], wires) - FRAC_PI_4
}

/// exp(i(x XX + z ZZ)) = CX (e^{ixX} ⊗ e^{izZ}) CX.
fn push_two(circuit: &mut Circuit, form: &Canonical, wires: [usize; 2]) -> f64 {
    let ([l0, l1], [r0, r1], [x, _, z]) = (&form.left, &form.right, form.xyz);
    let [first, second] = wires;
    let before = push_local(circuit, [r0, r1], wires);
    circuit.cx(first, second);
    circuit.push(Gate::Rx(-2.0 * x), &[first]);
    circuit.push(Gate::Rz(-2.0 * z), &[second]);
    circuit.cx(first, second);
    before + push_local(circuit, [l0, l1], wires)
}

/// Three CX, the outer two pointing up; after Vatan, Williams 2004.
fn push_three(circuit: &mut Circuit, form: &Canonical, wires: [usize; 2]) -> f64 {
    let ([l0, l1], [r0, r1], [x, y, z]) = (&form.left, &form.right, form.xyz);
    let [first, second] = wires;
    let s = Matrix::from_diagonal(&[C64::ONE, C64::I]);
    let before = push_local(circuit, [r0, &(&s.adjoint() * r1)], wires);
    circuit.cx(second, first);
    circuit.push(Gate::Rz(FRAC_PI_2 - 2.0 * z), &[first]);
    circuit.push(Gate::Ry(2.0 * x - FRAC_PI_2), &[second]);
    circuit.cx(first, second);
    circuit.push(Gate::Ry(FRAC_PI_2 - 2.0 * y), &[second]);
    circuit.cx(second, first);
    before + push_local(circuit, [&(l0 * &s), l1], wires) + FRAC_PI_4
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::testing::{cx_count, dft, gap, haar, matrix_of, permutation};

    /// Error promised for two qubits.
    const EXACT: f64 = 1e-12;

    fn canonical(x: f64, y: f64, z: f64) -> Matrix {
        let signs = [[1., -1., 1.], [1., 1., -1.], [-1., -1., -1.], [-1., 1., 1.]];
        let s = std::f64::consts::FRAC_1_SQRT_2;
        let i = C64::new(0.0, s);
        let (o, l) = (C64::ZERO, C64::new(s, 0.0));
        let magic = Matrix::from_rows(4, 4, &[l, o, o, i, o, i, l, o, o, i, -l, o, l, o, o, -i]);
        let d = signs.map(|[a, b, c]| C64::cis(a * x + b * y + c * z));
        &(&magic * &Matrix::from_diagonal(&d)) * &magic.adjoint()
    }

    fn dressed(core: &Matrix, seed: u64) -> Matrix {
        let local = |s| haar(2, s).kron(&haar(2, s + 1));
        &(&local(100 + seed) * core) * &local(200 + seed)
    }

    fn check(unitary: &Matrix, cx: usize, name: &str) {
        let mut circuit = Circuit::new(2);
        push(&mut circuit, unitary, [0, 1]);
        let error = gap(&matrix_of(&circuit), unitary);
        assert!(error < EXACT, "{name}: {error:e}");
        assert_eq!(cx_count(&circuit), cx, "{name}");
        let mut circuit = Circuit::new(2);
        let d = push_up_to_diagonal(&mut circuit, unitary, [0, 1]);
        let error = gap(&(&Matrix::from_diagonal(&d) * &matrix_of(&circuit)), unitary);
        assert!(error < EXACT, "{name} up to a diagonal: {error:e}");
        assert!(cx_count(&circuit) <= cx.min(2), "{name} up to a diagonal: {}", cx_count(&circuit));
    }

    /// Classes from Shende, Bullock, Markov 2004.
    #[test]
    fn each_class_takes_the_cx_it_demands() {
        const Q: f64 = FRAC_PI_4;
        let table: &[(&str, Matrix, usize)] = &[
            ("identity", Matrix::identity(4), 0),
            ("SWAP", permutation(4, |c| [0, 2, 1, 3][c]), 3),
            ("CX", permutation(4, |c| [0, 1, 3, 2][c]), 1),
            ("CX upwards", permutation(4, |c| [0, 3, 2, 1][c]), 1),
            ("two CX", permutation(4, |c| [0, 3, 1, 2][c]), 2),
            ("increment", permutation(4, |c| (c + 1) % 4), 1),
            ("DFT", dft(4), 3),
            ("iSWAP", canonical(Q, Q, 0.0), 2),
            ("half iSWAP", canonical(Q / 2.0, Q / 2.0, 0.0), 2),
            ("half SWAP", canonical(Q / 2.0, Q / 2.0, Q / 2.0), 3),
            ("other half SWAP", canonical(Q / 2.0, Q / 2.0, -Q / 2.0), 3),
            ("edge", canonical(Q, 0.2, -0.1), 3),
            ("face", canonical(0.3, 0.3, 0.1), 3),
        ];
        for (name, unitary, cx) in table {
            check(unitary, *cx, name);
            for seed in 0..10 {
                check(&dressed(unitary, seed), *cx, &format!("{name} dressed {seed}"));
            }
        }
    }

    #[test]
    fn controlled_phases_take_two() {
        for theta in [1e-9, 1e-3, 0.5, 3.0, -2.0] {
            let cp = Matrix::from_diagonal(&[C64::ONE, C64::ONE, C64::ONE, C64::cis(theta)]);
            check(&cp, 2, &format!("CP({theta})"));
            check(&dressed(&cp, 7), 2, &format!("CP({theta}) dressed"));
        }
    }

    #[test]
    fn haar_unitaries_take_three() {
        for seed in 0..300 {
            check(&haar(4, seed), 3, &format!("seed {seed}"));
        }
    }

    #[test]
    fn nearly_degenerate_unitaries_are_exact() {
        for (k, e) in [1e-4, 1e-6, 1e-7, 1e-8, 1e-9, 1e-10, 1e-12].into_iter().enumerate() {
            for (x, y, z) in [(e, e, e), (0.3, e, e), (0.3, 0.3 + e, 0.3), (0.3, e, -2.0 * e)] {
                let core = canonical(x, y, z);
                check(&dressed(&core, k as u64), 3, &format!("{x} {y} {z}"));
            }
        }
    }
}
