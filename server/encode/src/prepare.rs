//! Preparing a state of `2ᵏ` amplitudes, and the way back.
//!
//! A wire is freed by one multiplexed one-qubit gate that turns every pair of
//! amplitudes into one; the diagonal up to which that gate is cheap becomes
//! part of the amplitudes that remain (Möttönen, Vartiainen, Bergholm and
//! Salomaa 2004; Bergholm, Vartiainen, Möttönen and Salomaa 2005): `2ᵏ − k − 1`
//! CX for complex and for real amplitudes, the latter with `Ry` alone.

use std::f64::consts::{FRAC_PI_2, FRAC_PI_4, PI};

use operator::{C64, Circuit, Gate, Matrix, Step};

use crate::{euler, mux};

/// Amplitudes with imaginary parts below this are taken as real: one unit of
/// rounding in a vector of norm 1.
const REAL: f64 = 1e-15;
/// Pairs of amplitudes smaller than this may be turned in any way: less than
/// rounding is left in the wire that is freed.
const NOTHING: f64 = 1e-17;

/// Appends a circuit that takes |0…0⟩ of `wires` to `Σ_j a_j |j⟩`, the first
/// wire the most significant bit of `j`, with its exact phase.
///
/// `amplitudes` has norm 1 and `2ᵏ` entries. At most `2ᵏ − k − 1` CX.
pub fn prepare(circuit: &mut Circuit, amplitudes: &[C64], wires: &[usize]) {
    let mut back = Circuit::new(circuit.wires);
    disentangle(&mut back, amplitudes, wires);
    let mut phase = 0.0;
    for mut step in back.inverse().steps {
        phase += name_inverse(&mut step);
        circuit.steps.push(step);
    }
    euler::push_phase(circuit, phase);
}

/// The inverse of `Sx` as a plain gate, `e^{−iπ/4} Rx(−π/2)`; returns the
/// angle of the phase to be added.
fn name_inverse(step: &mut Step) -> f64 {
    match &step.gate {
        Gate::Inverse(gate) if matches!(**gate, Gate::Sx) => {
            step.gate = Gate::Rx(-FRAC_PI_2);
            -FRAC_PI_4
        }
        _ => 0.0,
    }
}

/// Appends the adjoint of [`prepare`]: takes `Σ_j a_j |j⟩` to |0…0⟩.
pub fn disentangle(circuit: &mut Circuit, amplitudes: &[C64], wires: &[usize]) {
    assert_eq!(amplitudes.len(), 1 << wires.len(), "one amplitude for each basis state");
    if amplitudes.iter().all(|a| a.im.abs() <= REAL) {
        let real: Vec<f64> = amplitudes.iter().map(|a| a.re).collect();
        let steps = shorter(circuit.wires, |out, fill| disentangle_real(out, &real, wires, fill));
        circuit.steps.extend(steps.steps);
        return;
    }
    let steps =
        shorter(circuit.wires, |out, fill| disentangle_complex(out, amplitudes, wires, fill));
    circuit.steps.extend(steps.steps);
}

/// What a multiplexer does where nothing is asked of it.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) enum Fill {
    /// Nothing.
    Rest,
    /// What it does at the nearest value before, or else after.
    Repeat,
    /// What it does at the value that differs in the lowest bits.
    Mirror,
}

/// All fillings, to be tried in this order.
pub(crate) const FILLINGS: [Fill; 3] = [Fill::Rest, Fill::Repeat, Fill::Mirror];

impl Fill {
    /// Replaces what is missing; the length is a power of two.
    pub(crate) fn complete<T: Clone>(self, asked: &[Option<T>], rest: &T) -> Vec<T> {
        let size = asked.len();
        let find = |at: usize| match self {
            Fill::Rest => None,
            Fill::Repeat => (0..=at).rev().chain(at..size).find_map(|i| asked[i].as_ref()),
            Fill::Mirror => (0..size).find_map(|mask| asked[at ^ mask].as_ref()),
        };
        let entry = |at: usize| asked[at].as_ref().or_else(|| find(at)).unwrap_or(rest).clone();
        (0..size).map(entry).collect()
    }
}

/// The filling that takes fewest CX.
fn shorter(wires: usize, build: impl Fn(&mut Circuit, Fill)) -> Circuit {
    let trial = |fill: &Fill| {
        let mut out = Circuit::new(wires);
        build(&mut out, *fill);
        out
    };
    FILLINGS.iter().map(trial).min_by_key(two_qubit_gates).unwrap_or_else(|| Circuit::new(wires))
}

/// Number of steps under a control.
pub(crate) fn two_qubit_gates(circuit: &Circuit) -> usize {
    circuit.steps.iter().filter(|step| !step.controls.is_empty()).count()
}

fn disentangle_real(circuit: &mut Circuit, amplitudes: &[f64], wires: &[usize], fill: Fill) {
    let Some((&target, controls)) = wires.split_last() else {
        if amplitudes[0] < 0.0 {
            euler::push_phase(circuit, PI);
        }
        return;
    };
    let angle =
        |pair: &[f64]| (pair[0].hypot(pair[1]) >= NOTHING).then(|| -2.0 * pair[1].atan2(pair[0]));
    let asked: Vec<Option<f64>> = amplitudes.chunks_exact(2).map(angle).collect();
    let angles = fill.complete(&asked, &0.0);
    // The CZs left open act on a wire that is now |0⟩.
    mux::rotation_left_open(circuit, &angles, controls, target);
    let left: Vec<f64> = amplitudes.chunks_exact(2).map(|pair| pair[0].hypot(pair[1])).collect();
    disentangle_real(circuit, &left, controls, fill);
}

fn disentangle_complex(circuit: &mut Circuit, amplitudes: &[C64], wires: &[usize], fill: Fill) {
    let Some((&target, controls)) = wires.split_last() else {
        euler::push_phase(circuit, -amplitudes[0].arg());
        return;
    };
    let gate = |pair: &[C64]| {
        let norm = pair[0].norm().hypot(pair[1].norm());
        let (x, y) = (pair[0] / norm, pair[1] / norm);
        (norm >= NOTHING).then(|| Matrix::from_rows(2, 2, &[x.conj(), y.conj(), -y, x]))
    };
    let asked: Vec<Option<Matrix>> = amplitudes.chunks_exact(2).map(gate).collect();
    let gates = fill.complete(&asked, &Matrix::identity(2));
    let diagonal = mux::unitaries_up_to_diagonal(circuit, &gates, controls, target);
    let pairs = amplitudes.chunks_exact(2).zip(diagonal.chunks_exact(2));
    let left = |(pair, d): (&[C64], &[C64])| d[0].conj() * pair[0].norm().hypot(pair[1].norm());
    let left: Vec<C64> = pairs.map(left).collect();
    disentangle_complex(circuit, &left, controls, fill);
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::testing::{cx_count, matrix_of};

    fn random_state(k: usize, real: bool, rng: &mut fastrand::Rng) -> Vec<C64> {
        let part = |rng: &mut fastrand::Rng| rng.f64() - 0.5;
        let entry = |_| C64::new(part(rng), if real { 0.0 } else { part(rng) });
        let state: Vec<C64> = (0..1 << k).map(entry).collect();
        let norm = state.iter().map(|z| z.norm_sqr()).sum::<f64>().sqrt();
        state.iter().map(|z| z / norm).collect()
    }

    fn check(state: &[C64], most: usize) {
        let k = state.len().trailing_zeros() as usize;
        let wires: Vec<usize> = (0..k).collect();
        let mut forth = Circuit::new(k);
        prepare(&mut forth, state, &wires);
        let column = matrix_of(&forth);
        let gap =
            column.column(0).iter().zip(state).map(|(a, b)| (a - b).norm()).fold(0.0, f64::max);
        assert!(gap < 1e-14, "{gap:e} for {state:?}");
        assert!(cx_count(&forth) <= most, "{} CX for {state:?}", cx_count(&forth));
    }

    /// 2ᵏ − k − 1 CX: Bergholm et al. 2005, table I.
    #[test]
    fn random_states_are_prepared_with_their_phase() {
        let mut rng = fastrand::Rng::with_seed(3);
        for k in 0..=5 {
            for real in [true, false] {
                for _ in 0..4 {
                    check(&random_state(k, real, &mut rng), (1 << k) - k - 1);
                }
            }
        }
    }

    #[test]
    fn sparse_and_product_states_cost_less() {
        let s = |n: usize| C64::from((n as f64).powf(-0.5));
        let basis =
            |at: usize, z: C64| (0..8).map(|j| if j == at { z } else { C64::ZERO }).collect();
        let cases: [(Vec<C64>, usize); 5] = [
            (vec![s(8); 8], 0),
            (basis(0, C64::ONE), 0),
            (basis(5, -C64::I), 0),
            ((0..8).map(|j| if j % 7 == 0 { s(2) } else { C64::ZERO }).collect(), 4),
            ((0..8).map(|j| if j < 5 { s(5) } else { C64::ZERO }).collect(), 4),
        ];
        for (state, most) in cases {
            check(&state, most);
        }
    }
}
