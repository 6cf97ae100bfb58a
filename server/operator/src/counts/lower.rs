//! What one gate under controls costs in CX, T gates and rotations.
//!
//! # CX, without ancillas
//! - One-qubit gates are diagonal in some basis; under `k` controls they are a
//!   diagonal on `k + 1` wires, `2ᵏ⁺¹ − 2` CX (Bullock and Markov 2004): 2, 6
//!   (Toffoli), 14, … From nine controls on, the recursion of Barenco et al.
//!   1995, Lemma 7.5, is cheaper: two singly controlled roots, two X under
//!   `k − 1` controls with one borrowed wire (Lemmas 7.2 and 7.3, each Toffoli
//!   6 CX), and a root under `k − 1` controls.
//! - X, Y, Z and H under one control are one CX between one-qubit gates.
//! - A phase under `k` controls is a phase gate under `k − 1`.
//! - A swap is three CX; under controls the middle one takes the controls.
//!
//! # T gates
//! An estimate for the usual circuits: rotations approximated one by one, a
//! controlled rotation taken for two of half the angle, a controlled phase for
//! three; further controls collected one by one in clean ancillas by Toffolis
//! that are uncomputed afterwards.

use std::f64::consts::{FRAC_PI_2, FRAC_PI_4, PI};

use crate::Gate;

/// T gates of one rotation approximated to 1e-10: 3 log₂(1/ε), the leading
/// term of Ross and Selinger 2016.
const T_OF_A_ROTATION: usize = 100;

/// T gates of one doubly controlled X.
const T_OF_A_TOFFOLI: usize = 7;

/// CX of one doubly controlled X.
const CX_OF_A_TOFFOLI: usize = 6;

/// Angles this near to a multiple of π/4, in units of it, are one: a dozen
/// digits are more than a rounded angle keeps.
const SAME_ANGLE: f64 = 1e-12;

/// Stands for an angle that is not known: no multiple of π/4.
const SOME_ANGLE: f64 = 1.0;

/// Controls past this cost more CX than can be counted.
const COUNTABLE: usize = 1 << 20;

/// A gate as one whose cost is known: broken powers of one-qubit gates as
/// rotations in some basis. `None` for stand-ins and for broken powers of
/// gates on several wires.
pub(super) fn standard(gate: &Gate) -> Option<Gate> {
    let Gate::Power(inner, exponent) = gate else {
        return (!matches!(gate, Gate::Dense(_))).then(|| gate.clone());
    };
    Some(match **inner {
        Gate::Id => Gate::Id,
        Gate::Phase(angle) => Gate::Phase(angle * exponent),
        Gate::X | Gate::Y | Gate::Z | Gate::H => Gate::P(PI * exponent),
        Gate::S | Gate::Sdg | Gate::Sx => Gate::P(FRAC_PI_2 * exponent),
        Gate::T | Gate::Tdg => Gate::P(FRAC_PI_4 * exponent),
        Gate::P(angle) => Gate::P(angle * exponent),
        Gate::Rx(angle) | Gate::Ry(angle) | Gate::Rz(angle) => Gate::Rz(angle * exponent),
        Gate::Dense(_) => return None,
        ref other if other.wires() == 1 => Gate::U(SOME_ANGLE, SOME_ANGLE, SOME_ANGLE),
        _ => return None,
    })
}

/// CX of a [`standard`] gate under controls.
pub(super) fn cx(gate: &Gate, controls: usize) -> usize {
    match (gate, controls) {
        (Gate::Id, _) => 0,
        (Gate::Phase(_), k) => conjugated(k.saturating_sub(1)),
        (Gate::Swap, 0) => 3,
        (Gate::Swap, k) => conjugated(k + 1).saturating_add(2),
        (Gate::X | Gate::Y | Gate::Z | Gate::H, 1) => 1,
        (_, k) => conjugated(k),
    }
}

/// CX of a one-qubit gate under controls.
fn conjugated(controls: usize) -> usize {
    if controls > COUNTABLE {
        return usize::MAX;
    }
    let mut least = 0_usize;
    for k in 1..=controls {
        let diagonal = 1_usize.checked_shl(k as u32 + 1).map_or(usize::MAX, |n| n - 2);
        let recursive = least.saturating_add(4 + 2 * flips(k - 1));
        least = if k > 1 { diagonal.min(recursive) } else { diagonal };
    }
    least
}

/// CX of an X under controls that may borrow one more wire.
fn flips(controls: usize) -> usize {
    let borrowing_many = |controls: usize| match controls {
        0 | 1 => controls,
        2 => CX_OF_A_TOFFOLI,
        many => 4 * (many - 2) * CX_OF_A_TOFFOLI,
    };
    if controls <= 2 {
        return borrowing_many(controls);
    }
    let half = controls.div_ceil(2);
    2 * (borrowing_many(half) + borrowing_many(controls - half + 1))
}

/// Angles of a [`standard`] gate that are no multiple of π/4.
pub(super) fn rotations(gate: &Gate) -> usize {
    angles(gate).iter().filter(|&&angle| t_of(angle) == T_OF_A_ROTATION).count()
}

/// T gates of a [`standard`] gate under controls.
pub(super) fn t_gates(gate: &Gate, controls: usize) -> usize {
    let collected = |kept: usize| 2 * T_OF_A_TOFFOLI * controls.saturating_sub(kept);
    let turns = |many: usize, part: f64| {
        angles(gate).iter().map(|angle| many * t_of(part * angle)).sum::<usize>()
    };
    match (gate, controls) {
        (Gate::Id, _) => 0,
        (Gate::Phase(_), 0) => 0,
        (Gate::Phase(angle), k) => t_gates(&Gate::P(*angle), k - 1),
        (_, 0) => turns(1, 1.0),
        (Gate::Swap, k) => t_gates(&Gate::X, k + 1),
        (Gate::X | Gate::Y | Gate::Z, 1) => 0,
        (Gate::X | Gate::Y | Gate::Z, _) => T_OF_A_TOFFOLI + collected(2),
        (Gate::H, _) => 2 + collected(1),
        (Gate::Rx(_) | Gate::Ry(_) | Gate::Rz(_) | Gate::U(..), _) => turns(2, 0.5) + collected(1),
        // What is left is a phase gate in some basis.
        _ => turns(3, 0.5) + collected(1),
    }
}

/// The angles of the rotations that a gate is written with.
fn angles(gate: &Gate) -> Vec<f64> {
    match gate {
        Gate::P(a) | Gate::Rx(a) | Gate::Ry(a) | Gate::Rz(a) => vec![*a],
        Gate::U(a, b, c) => vec![*a, *b, *c],
        Gate::T | Gate::Tdg => vec![FRAC_PI_4],
        Gate::S | Gate::Sdg | Gate::Sx => vec![FRAC_PI_2],
        _ => Vec::new(),
    }
}

/// T gates of one rotation: none for multiples of π/2, one for odd multiples
/// of π/4.
fn t_of(angle: f64) -> usize {
    let eighths = angle / FRAC_PI_4;
    let nearest = eighths.round();
    let is_multiple = (eighths - nearest).abs() <= SAME_ANGLE * nearest.abs().max(1.0);
    match (is_multiple, nearest.rem_euclid(2.0) == 0.0) {
        (true, true) => 0,
        (true, false) => 1,
        (false, _) => T_OF_A_ROTATION,
    }
}
