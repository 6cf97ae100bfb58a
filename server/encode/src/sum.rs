//! Circuits of sums of Kronecker products: linear combinations of unitaries
//! (Childs and Wiebe 2012), with factors that need not be unitary.
//!
//! With a *binary* index, a register holds `Σ_r √(|y_r|/α) |r⟩`; every qubit
//! gets its factor under the index, as it is where all its factors are
//! unitary, through one ancilla of its own where they are not; the register
//! is taken back to |0…0⟩ by a state that carries the phases of the weights
//! and all diagonals that the multiplexed gates were cheap up to, so that the
//! two states need not be each other's adjoint.
//!
//! With a *one-hot* index every term has a flag, and each factor is a gate
//! under a single control: fewest CX, most ancillas.

use operator::{Budget, C64, Circuit, Gate, Matrix};

use crate::cp::{Decomposition, Term};
use crate::prepare::{self, FILLINGS, Fill};
use crate::{Draft, euler, mux};

/// Most terms a sum may have: the index register stays within five qubits.
pub(crate) const MOST_TERMS: usize = 32;
/// Most wires of a one-hot circuit, signal wires counted twice: measuring it
/// takes its columns, `2^(flags + 2n)` amplitudes in all, and should be done
/// in a fraction of a second.
const MOST_FLAGGED: usize = 20;
/// Multiplexed factors (index values times qubits) that are looked at while
/// placings of the terms on the index are tried, where all factors are
/// unitary: a good placing takes a third fewer CX.
const PLACED_FACTORS: usize = 30_000;
/// The same where they are not: hardly any multiplexed gate is simple then.
const PLACED_DAMPED: usize = 4_000;
/// CX that a placing may cost more than the one before, at first.
const HEAT: f64 = 2.0;
/// ‖M†M − c‖ below this share of c: the matrix is unitary up to a factor.
const UNITARY_MATRIX: f64 = 1e-12;
/// A singular value this near to the largest counts as equal to it: the
/// factor is then unitary up to rounding.
const UNITARY: f64 = 1e-13;

/// Whether a matrix is anything that a sum is good for; if not, why.
pub(crate) fn fits(matrix: &Matrix) -> Result<(), String> {
    if matrix.max_abs() == 0.0 {
        return Err("the zero matrix has no terms".into());
    }
    if is_unitary_up_to_norm(matrix) {
        return Err("a multiple of a unitary needs no sum".into());
    }
    Ok(())
}

fn is_unitary_up_to_norm(matrix: &Matrix) -> bool {
    let gram = &matrix.adjoint() * matrix;
    let mean = gram.trace() / gram.rows() as f64;
    let rest = &gram - &Matrix::identity(gram.rows()).scaled(mean);
    rest.max_abs() <= UNITARY_MATRIX * mean.norm()
}

/// A 2×2 matrix of norm 1 as `W diag(c₀, c₁) V†`, `0 ≤ c ≤ 1`.
#[derive(Debug, Clone)]
struct Factor {
    left: Matrix,
    cosines: [f64; 2],
    right: Matrix,
}

impl Factor {
    fn of(a: &Matrix) -> Factor {
        let column = |c: usize| a[(0, c)].norm().hypot(a[(1, c)].norm());
        let q = a[(0, 0)].conj() * a[(0, 1)] + a[(1, 0)].conj() * a[(1, 1)];
        let half = 0.5 * (column(0).powi(2) - column(1).powi(2));
        let radius = half.hypot(q.norm());
        // Orthogonal columns need no turn on the right: unitary, diagonal
        // and anti-diagonal factors and their products with unitaries.
        let right = if q.norm() <= UNITARY {
            Matrix::identity(2)
        } else {
            let (x, y) = if half >= 0.0 {
                (C64::from(half + radius), q.conj())
            } else {
                (q, C64::from(radius - half))
            };
            let norm = x.norm().hypot(y.norm());
            let (x, y) = (x / norm, y / norm);
            Matrix::from_rows(2, 2, &[x, -y.conj(), y, x.conj()])
        };
        let (left, cosines) = orthogonal_columns(&(a * &right));
        Factor { left, cosines, right }
    }

    fn is_unitary(&self) -> bool {
        self.cosines.iter().all(|&c| c >= 1.0 - UNITARY)
    }

    /// The factor itself where it is unitary.
    fn unitary(&self) -> Matrix {
        &self.left * &self.right.adjoint()
    }
}

/// A 2×2 matrix with orthogonal columns as a unitary times their norms.
fn orthogonal_columns(b: &Matrix) -> (Matrix, [f64; 2]) {
    let norms = [0, 1].map(|c| b[(0, c)].norm().hypot(b[(1, c)].norm()));
    let large = usize::from(norms[1] > norms[0]);
    let (x, y) = (b[(0, large)] / norms[large], b[(1, large)] / norms[large]);
    // The other column is orthogonal; only its phase is left to find.
    let other = [-y.conj(), x.conj()];
    let along = other[0].conj() * b[(0, 1 - large)] + other[1].conj() * b[(1, 1 - large)];
    let phase = if along.norm() > UNITARY { along / along.norm() } else { C64::ONE };
    let other = other.map(|z| z * phase);
    let columns = if large == 0 { [[x, y], other] } else { [other, [x, y]] };
    let left = Matrix::from_fn(2, 2, |r, c| columns[c][r]);
    (left, norms.map(|c| c.min(1.0)))
}

/// The circuit with a binary index register, the terms placed on the values
/// of the index in the cheapest way that a bounded search finds.
pub(crate) fn binary(
    solution: &Decomposition,
    wires: usize,
    note: &str,
    budget: &Budget,
) -> operator::Result<Draft> {
    let sum = Sum::new(solution, wires);
    let mut slots: Vec<Option<usize>> =
        (0..sum.size()).map(|r| (r < sum.rank()).then_some(r)).collect();
    let mut best = sum.circuit(&slots);
    let mut least = prepare::two_qubit_gates(&best);
    let mut cost = least;
    let mut rng = fastrand::Rng::with_seed(sum.size() as u64);
    let factors = if sum.damped.is_empty() { PLACED_FACTORS } else { PLACED_DAMPED };
    let placings = factors / (sum.size() * wires.max(1));
    for step in 0..placings {
        budget.poll()?;
        let (i, j) = (rng.usize(0..slots.len()), rng.usize(0..slots.len()));
        if slots[i] == slots[j] {
            continue;
        }
        slots.swap(i, j);
        let trial = sum.circuit(&slots);
        let now = prepare::two_qubit_gates(&trial);
        let warmth = HEAT * (1.0 - step as f64 / placings as f64).powi(2);
        if now as f64 > cost as f64 - warmth * (1.0 - rng.f64()).ln() {
            slots.swap(i, j);
            continue;
        }
        cost = now;
        if now < least {
            (best, least) = (trial, now);
        }
    }
    let ancillas = sum.ancillas();
    Ok(Draft { circuit: best, ancillas, scale: solution.scale(), note: note.to_owned() })
}

/// A decomposition made ready for circuits.
struct Sum<'a> {
    terms: &'a [Term],
    scale: f64,
    /// Factors by qubit, then by term.
    factors: Vec<Vec<Factor>>,
    /// Qubits with a factor that is not unitary.
    damped: Vec<usize>,
    index: Vec<usize>,
}

impl<'a> Sum<'a> {
    fn new(solution: &'a Decomposition, wires: usize) -> Self {
        let terms = &solution.terms;
        let column = |k: usize| terms.iter().map(|term| Factor::of(&term.factors[k])).collect();
        let factors: Vec<Vec<Factor>> = (0..wires).map(column).collect();
        let damped = (0..wires).filter(|&k| !factors[k].iter().all(Factor::is_unitary)).collect();
        let index_wires = terms.len().next_power_of_two().trailing_zeros() as usize;
        let index = (0..index_wires).collect();
        Sum { terms, scale: solution.scale(), factors, damped, index }
    }

    fn rank(&self) -> usize {
        self.terms.len()
    }

    /// Number of values of the index.
    fn size(&self) -> usize {
        1 << self.index.len()
    }

    fn ancillas(&self) -> usize {
        self.index.len() + self.damped.len()
    }

    /// The whole circuit with term `slots[i]` at index value `i`.
    fn circuit(&self, slots: &[Option<usize>]) -> Circuit {
        let ancillas = self.ancillas();
        let mut circuit = Circuit::new(ancillas + self.factors.len());
        let magnitudes: Vec<C64> =
            slots.iter().map(|&slot| C64::from(self.amplitude(slot))).collect();
        prepare::prepare(&mut circuit, &magnitudes, &self.index);
        let mut phases = vec![C64::ONE; slots.len()];
        for (k, factors) in self.factors.iter().enumerate() {
            let damped = self.damped.iter().position(|&d| d == k);
            let ancilla = damped.map(|at| self.index.len() + at);
            let site = Site { index: &self.index, ancilla, wire: ancillas + k };
            let placed: Vec<Option<Factor>> =
                slots.iter().map(|slot| slot.map(|r| factors[r].clone())).collect();
            let left = site.append_shortest(&mut circuit, &placed);
            phases.iter_mut().zip(&left).for_each(|(p, d)| *p *= d);
        }
        let turned = |(&slot, phase): (&Option<usize>, &C64)| {
            let weight = slot.map_or(C64::ONE, |r| self.terms[r].weight);
            self.amplitude(slot) * (weight / weight.norm() * phase).conj()
        };
        let back: Vec<C64> = slots.iter().zip(&phases).map(turned).collect();
        prepare::disentangle(&mut circuit, &back, &self.index);
        circuit
    }

    /// `√(|y_r|/α)`, zero for no term.
    fn amplitude(&self, slot: Option<usize>) -> f64 {
        slot.map_or(0.0, |r| (self.terms[r].weight.norm() / self.scale).sqrt())
    }
}

/// Where the factors of one qubit act.
struct Site<'a> {
    index: &'a [usize],
    ancilla: Option<usize>,
    wire: usize,
}

impl Site<'_> {
    /// Appends the multiplexed factors; index values without a term are filled
    /// in the way that takes fewest CX. Returns the phases on the index that
    /// are still missing.
    fn append_shortest(&self, circuit: &mut Circuit, placed: &[Option<Factor>]) -> Vec<C64> {
        let unity = Factor::of(&Matrix::identity(2));
        let trial = |fill: &Fill| {
            let mut trial = Circuit::new(circuit.wires);
            let phases = self.append(&mut trial, &fill.complete(placed, &unity));
            (trial, phases)
        };
        let trials = FILLINGS.iter().map(trial);
        let Some((best, phases)) = trials.min_by_key(|t| prepare::two_qubit_gates(&t.0)) else {
            return vec![C64::ONE; placed.len()];
        };
        circuit.steps.extend(best.steps);
        phases
    }

    fn append(&self, circuit: &mut Circuit, factors: &[Factor]) -> Vec<C64> {
        let Some(ancilla) = self.ancilla else {
            let gates: Vec<Matrix> = factors.iter().map(Factor::unitary).collect();
            return self.append_exact(circuit, &gates);
        };
        let right: Vec<Matrix> = factors.iter().map(|f| f.right.adjoint()).collect();
        let left_open = mux::unitaries_up_to_diagonal(circuit, &right, self.index, self.wire);
        let angles: Vec<f64> =
            factors.iter().flat_map(|f| f.cosines.map(|c| 2.0 * c.acos())).collect();
        let controls: Vec<usize> = self.index.iter().copied().chain([self.wire]).collect();
        // The ancilla is looked at in |0⟩ only, where the open CZs do nothing.
        mux::rotation_left_open(circuit, &angles, &controls, ancilla);
        let left = factors.iter().zip(left_open.chunks_exact(2));
        let gates: Vec<Matrix> = left.map(|(f, d)| &f.left * &Matrix::from_diagonal(d)).collect();
        self.append_exact(circuit, &gates)
    }

    /// Multiplexed unitaries up to a diagonal on the index alone.
    fn append_exact(&self, circuit: &mut Circuit, gates: &[Matrix]) -> Vec<C64> {
        let diagonal = mux::unitaries_up_to_diagonal(circuit, gates, self.index, self.wire);
        let turn = |d: &[C64]| (d[1] * d[0].conj()).arg();
        let angles: Vec<f64> = diagonal.chunks_exact(2).map(turn).collect();
        mux::rotation(circuit, mux::Axis::Z, &angles, self.index, self.wire);
        let rest = diagonal.chunks_exact(2).zip(&angles);
        rest.map(|(d, angle)| d[0] * C64::cis(0.5 * angle)).collect()
    }
}

/// The circuit with one flag for each term, if all factors are unitary:
/// 4(L − 1) CX for the flags and at most two for each factor that is not a
/// multiple of the identity, one if it is a reflection.
pub(crate) fn one_hot(solution: &Decomposition, wires: usize, note: &str) -> Option<Draft> {
    let flags = solution.rank();
    if flags < 2 || flags + 2 * wires > MOST_FLAGGED {
        return None;
    }
    let scale = solution.scale();
    let weights: Vec<f64> = solution.terms.iter().map(|t| t.weight.norm() / scale).collect();
    let mut circuit = Circuit::new(flags + wires);
    let spread = spread_flag(&weights, circuit.wires);
    circuit.steps.extend(spread.steps.iter().cloned());
    for (flag, term) in solution.terms.iter().enumerate() {
        let mut phase = term.weight / term.weight.norm();
        let mut global = C64::ONE;
        for (k, factor) in term.factors.iter().enumerate() {
            let factor = Factor::of(factor);
            if !factor.is_unitary() {
                return None;
            }
            let place = (flag, flags + k);
            phase *= controlled(&mut circuit, &factor.unitary(), place, &mut global);
        }
        push_flag_phase(&mut circuit, phase, flag);
        euler::push_phase(&mut circuit, global.arg());
    }
    circuit.steps.extend(spread.inverse().steps);
    let note = format!("{note}; one flag a term");
    Some(Draft { circuit, ancillas: flags, scale, note })
}

/// Takes |0…0⟩ to `Σ_j √w_j |1 on flag j⟩`: two CX a flag.
fn spread_flag(weights: &[f64], wires: usize) -> Circuit {
    let mut circuit = Circuit::new(wires);
    circuit.push(Gate::X, &[0]);
    let mut rest: f64 = weights.iter().sum();
    for (flag, &weight) in weights.iter().enumerate().take(weights.len() - 1) {
        let next = flag + 1;
        // The flag stays with √(w/rest) and hands the rest on. A rotation
        // under the flag needs a single CZ, since the next wire holds 0.
        let quarter = 0.5 * (weight / rest).clamp(0.0, 1.0).sqrt().acos();
        rest -= weight;
        circuit.push(Gate::Ry(-2.0 * quarter), &[next]);
        circuit.push(Gate::H, &[next]);
        circuit.cx(flag, next);
        circuit.push(Gate::H, &[next]);
        circuit.push(Gate::Ry(2.0 * quarter), &[next]);
        circuit.cx(next, flag);
    }
    circuit
}

/// Applies a one-qubit unitary under a flag, up to a phase of the flag that
/// is returned: none, one or two CX. Phases that the gates drop whether the
/// flag is up or not are multiplied into `global`.
fn controlled(
    circuit: &mut Circuit,
    gate: &Matrix,
    (flag, wire): (usize, usize),
    global: &mut C64,
) -> C64 {
    // gate = phase · V Rz(angle) V†.
    let det = gate[(0, 0)] * gate[(1, 1)] - gate[(0, 1)] * gate[(1, 0)];
    let phase = C64::cis(0.5 * det.arg());
    let special = gate.scaled(phase.conj());
    let axis = [
        -0.5 * (special[(0, 1)] + special[(1, 0)]).im,
        0.5 * (special[(1, 0)] - special[(0, 1)]).re,
        0.5 * (special[(1, 1)] - special[(0, 0)]).im,
    ];
    let sine = axis.iter().map(|x| x * x).sum::<f64>().sqrt();
    let cosine = 0.5 * (special[(0, 0)] + special[(1, 1)]).re;
    if sine < mux::NO_ANGLE {
        return phase * cosine.signum();
    }
    let turn = axis_to_z(axis.map(|x| x / sine));
    if cosine.abs() < mux::NO_ANGLE {
        // Rz(π) = −i Z, and a controlled Z is H CX H.
        let frame = &turn * &euler::hadamard();
        *global *= euler::push_up_to_phase(circuit, &frame.adjoint(), wire);
        circuit.cx(flag, wire);
        *global *= euler::push_up_to_phase(circuit, &frame, wire);
        return phase * -C64::I;
    }
    let half = sine.atan2(cosine);
    *global *= euler::push_up_to_phase(circuit, &turn.adjoint(), wire);
    circuit.cx(flag, wire);
    circuit.push(Gate::Rz(-half), &[wire]);
    circuit.cx(flag, wire);
    circuit.push(Gate::Rz(half), &[wire]);
    *global *= euler::push_up_to_phase(circuit, &turn, wire);
    phase
}

/// A unitary whose columns are the eigenvectors +1 and −1 of `n·σ`.
fn axis_to_z([x, y, z]: [f64; 3]) -> Matrix {
    let (a, b) = if z >= 0.0 {
        (C64::from(1.0 + z), C64::new(x, y))
    } else {
        (C64::new(x, -y), C64::from(1.0 - z))
    };
    let norm = a.norm().hypot(b.norm());
    let (a, b) = (a / norm, b / norm);
    Matrix::from_rows(2, 2, &[a, -b.conj(), b, a.conj()])
}

/// A phase where the flag holds 1.
fn push_flag_phase(circuit: &mut Circuit, phase: C64, flag: usize) {
    let gate = Matrix::from_diagonal(&[C64::ONE, phase]);
    let rest = euler::push_up_to_phase(circuit, &gate, flag);
    euler::push_phase(circuit, rest.arg());
}

#[cfg(test)]
mod tests;
