//! Unitaries on any number of wires: the cosine–sine recursion (quantum
//! Shannon decomposition: Shende, Bullock, Markov 2006), structure first.

use operator::decompose::{cosine_sine, eigen_unitary};
use operator::structure::{block, equal, factors, flips, is_diagonal, selects};
use operator::{Budget, C64, Gate, Matrix};

use super::plan::Plan;
use super::structure::{self, NOTHING};
use crate::mux::{self, Axis};
use crate::{Result, euler};

/// Appends a unitary, exact global phase included.
///
/// The first factor, wire or block structure found is used; a generic
/// unitary on n ≥ 3 wires is cut in four and its two multiplexers go on
/// with twice two unitaries on one wire less.
pub(crate) fn push(
    plan: &mut Plan,
    unitary: &Matrix,
    wires: &[usize],
    budget: &Budget,
) -> Result<()> {
    budget.poll()?;
    match *wires {
        [] => plan.steps(|c| euler::push_phase(c, unitary[(0, 0)].arg())),
        [wire] => plan.steps(|c| euler::push(c, unitary, wire)),
        _ if is_diagonal(unitary, NOTHING) => {
            let phases = mux::phases_of(&unitary.diagonal());
            plan.steps(|c| mux::diagonal(c, &phases, wires));
        }
        [first, second] => plan.pair(unitary.clone(), [first, second]),
        _ => return push_larger(plan, unitary, wires, budget),
    }
    Ok(())
}

/// Three wires or more, not diagonal.
fn push_larger(plan: &mut Plan, unitary: &Matrix, wires: &[usize], budget: &Budget) -> Result<()> {
    if let Some(found) = factors(unitary, NOTHING) {
        for (places, factor) in &found.parts {
            let wires: Vec<usize> = places.iter().map(|&p| wires[p]).collect();
            push(plan, factor, &wires, budget)?;
        }
        return Ok(());
    }
    let places = 0..wires.len();
    let selecting: Vec<usize> = places.clone().filter(|&p| selects(unitary, p, NOTHING)).collect();
    if selecting.len() + 1 == wires.len() {
        let target = places.clone().find(|p| !selecting.contains(p)).unwrap_or(0);
        push_selected(plan, unitary, wires, target);
        return Ok(());
    }
    if let Some(&place) = selecting.first() {
        let (wire, rest) = taken_out(wires, place);
        let blocks = [false, true].map(|v| block(unitary, place, v, v));
        return push_multiplexer(plan, &blocks, wire, &rest, budget);
    }
    if let Some(place) = places.clone().find(|&p| flips(unitary, p, NOTHING)) {
        let (wire, rest) = taken_out(wires, place);
        let blocks = [false, true].map(|v| block(unitary, place, !v, v));
        push_multiplexer(plan, &blocks, wire, &rest, budget)?;
        plan.steps(|c| c.push(Gate::X, &[wire]));
        return Ok(());
    }
    push_generic(plan, unitary, wires, budget)
}

/// One wire of a list and the others.
fn taken_out(wires: &[usize], place: usize) -> (usize, Vec<usize>) {
    let mut rest = wires.to_vec();
    (rest.remove(place), rest)
}

/// One-qubit gates on one wire, selected by all the others.
fn push_selected(plan: &mut Plan, unitary: &Matrix, wires: &[usize], place: usize) {
    let (target, controls) = taken_out(wires, place);
    let gates = structure::selected_gates(unitary, place);
    let order: Vec<usize> = controls.iter().copied().chain([target]).collect();
    plan.steps(|circuit| match structure::common_basis(&gates) {
        Some(basis) => {
            let inside = |g: &Matrix| (&(&basis.adjoint() * g) * &basis).diagonal();
            let diagonal: Vec<C64> = gates.iter().flat_map(inside).collect();
            euler::push(circuit, &basis.adjoint(), target);
            mux::diagonal(circuit, &mux::phases_of(&diagonal), &order);
            euler::push(circuit, &basis, target);
        }
        None => {
            let left = mux::unitaries_up_to_diagonal(circuit, &gates, &controls, target);
            mux::diagonal(circuit, &mux::phases_of(&left), &order);
        }
    });
}

/// The cosine–sine decomposition over the first wire. The closing CZ of the
/// middle rotation goes into the left multiplexer: the first saving.
fn push_generic(plan: &mut Plan, unitary: &Matrix, wires: &[usize], budget: &Budget) -> Result<()> {
    let (wire, rest) = taken_out(wires, 0);
    let cs = cosine_sine(unitary)?;
    push_multiplexer(plan, &[cs.r0, cs.r1], wire, &rest, budget)?;
    let angles: Vec<f64> = cs.theta.iter().map(|angle| 2.0 * angle).collect();
    let open = plan.steps(|c| mux::rotation_left_open(c, &angles, &rest, wire));
    let signs = signs(&open, &rest);
    push_multiplexer(plan, &[cs.l0, &cs.l1 * &signs], wire, &rest, budget)
}

/// Z on each listed wire, as a matrix on all of `rest`.
fn signs(listed: &[usize], rest: &[usize]) -> Matrix {
    let n = rest.len();
    let sign = |k: usize| {
        let flipped = rest
            .iter()
            .enumerate()
            .filter(|(p, w)| listed.contains(w) && k >> (n - 1 - p) & 1 == 1);
        C64::new(if flipped.count() % 2 == 0 { 1.0 } else { -1.0 }, 0.0)
    };
    Matrix::from_diagonal(&(0..1 << n).map(sign).collect::<Vec<_>>())
}

/// Two unitaries on `rest`, selected by one wire, as
/// `(V ⊕ V)(D ⊕ D†)(W ⊕ W)` with `V D² V†` their quotient.
fn push_multiplexer(
    plan: &mut Plan,
    [zero, one]: &[Matrix; 2],
    wire: usize,
    rest: &[usize],
    budget: &Budget,
) -> Result<()> {
    if equal(zero, one, NOTHING) {
        return push(plan, zero, rest, budget);
    }
    let eigen = eigen_unitary(&(zero * &one.adjoint()))?;
    let squares = mux::phases_of(&eigen.values);
    let angles: Vec<f64> = squares.iter().map(|angle| -angle).collect();
    let roots: Vec<C64> = squares.iter().map(|angle| C64::cis(0.5 * angle)).collect();
    let right = &(&Matrix::from_diagonal(&roots) * &eigen.vectors.adjoint()) * one;
    push(plan, &right, rest, budget)?;
    plan.steps(|c| mux::rotation(c, Axis::Z, &angles, rest, wire));
    push(plan, &eigen.vectors, rest, budget)
}
