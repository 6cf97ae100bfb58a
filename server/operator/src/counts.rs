//! What a circuit costs: gates, CX after lowering, depths.

mod delay;
mod lower;

use std::collections::HashMap;
use std::sync::Arc;

use crate::gates::whole;
use crate::{Circuit, Definition, Gate, Step};
use delay::Delay;

/// Costs of a circuit. Sums saturate, so that definitions that double at
/// every level stay countable.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub struct Counts {
    /// Gates on one wire, controls included.
    pub one_qubit: usize,
    /// Gates on two wires, controls included.
    pub two_qubit: usize,
    /// Gates on three wires or more.
    pub multi_qubit: usize,
    /// CX after lowering to CX and one-qubit gates without ancillas; `None`
    /// with a stand-in inside, or a root of a gate on several wires.
    pub cx: Option<usize>,
    /// Steps when every gate starts as soon as its wires are free.
    pub depth: usize,
    /// Depth with gates on two wires or more alone.
    pub two_qubit_depth: usize,
    /// Rotations by other angles than multiples of π/4, before lowering.
    pub rotations: usize,
    /// T gates, rotations approximated; `None` where `cx` is.
    pub t_estimate: Option<usize>,
}

/// Counts a circuit with all its definitions expanded, whole powers as
/// repetitions. Each definition is looked at once for each number of controls
/// it is called under.
pub fn counts(circuit: &Circuit) -> Counts {
    let mut counter = Counter::default();
    let start = [(); 2].map(|()| Delay::start(circuit.wires));
    let Cost { mut counts, delays } = counter.walk(circuit, 0, start);
    [counts.depth, counts.two_qubit_depth] = delays.map(|delay| delay.longest());
    counts
}

/// Costs of a piece of a circuit: sums, and how long its outputs lag behind
/// its inputs, in all gates and in gates on several wires.
#[derive(Clone)]
struct Cost {
    counts: Counts,
    delays: [Delay; 2],
}

/// Costs of definitions met so far, by the controls they are called under.
#[derive(Default)]
struct Counter {
    known: HashMap<(*const Definition, usize), Cost>,
}

impl Counter {
    /// Costs of a circuit all of whose steps are under `extra` more controls,
    /// on wires after its own.
    fn walk(&mut self, circuit: &Circuit, extra: usize, mut delays: [Delay; 2]) -> Cost {
        let mut counts = Counts { cx: Some(0), t_estimate: Some(0), ..Counts::default() };
        for step in &circuit.steps {
            let cost = self.step(step, extra);
            counts.add(&cost.counts, 1);
            let controls = step.controls.iter().map(|c| c.wire);
            let own = step.targets.iter().copied().chain(controls);
            let wires: Vec<usize> = own.chain(circuit.wires..circuit.wires + extra).collect();
            for (delay, more) in delays.iter_mut().zip(&cost.delays) {
                delay.then(more, &wires);
            }
        }
        Cost { counts, delays }
    }

    fn step(&mut self, step: &Step, extra: usize) -> Cost {
        self.gate(&step.gate, step.controls.len() + extra)
    }

    /// Costs of a gate under controls: its own wires first, then those.
    fn gate(&mut self, gate: &Gate, controls: usize) -> Cost {
        match gate {
            Gate::Call(definition) => self.definition(definition, controls),
            Gate::Inverse(inner) => {
                let cost = self.gate(inner, controls);
                Cost { delays: cost.delays.map(|delay| delay.reversed()), ..cost }
            }
            Gate::Power(inner, exponent) => match whole(*exponent) {
                Some(times) => self.gate(inner, controls).repeated(times),
                None => plain(gate, controls),
            },
            _ => plain(gate, controls),
        }
    }

    fn definition(&mut self, definition: &Arc<Definition>, controls: usize) -> Cost {
        let key = (Arc::as_ptr(definition), controls);
        if let Some(known) = self.known.get(&key) {
            return known.clone();
        }
        let wires = definition.circuit.wires + controls;
        let idle = [(); 2].map(|()| Delay::none(wires));
        let found = self.walk(&definition.circuit, controls, idle);
        self.known.insert(key, found.clone());
        found
    }
}

impl Cost {
    /// The costs of a whole power.
    fn repeated(self, times: i64) -> Cost {
        let mut counts = Counts { cx: Some(0), t_estimate: Some(0), ..Counts::default() };
        counts.add(&self.counts, times.unsigned_abs() as usize);
        let once = |delay: Delay| if times < 0 { delay.reversed() } else { delay };
        let delays = self.delays.map(|delay| once(delay).repeated(times.unsigned_abs()));
        Cost { counts, delays }
    }
}

impl Counts {
    /// Adds another's sums, many times over.
    fn add(&mut self, other: &Counts, times: usize) {
        let sum = |a: usize, b: usize| a.saturating_add(b.saturating_mul(times));
        self.one_qubit = sum(self.one_qubit, other.one_qubit);
        self.two_qubit = sum(self.two_qubit, other.two_qubit);
        self.multi_qubit = sum(self.multi_qubit, other.multi_qubit);
        self.rotations = sum(self.rotations, other.rotations);
        self.cx = self.cx.zip(other.cx).map(|(a, b)| sum(a, b));
        self.t_estimate = self.t_estimate.zip(other.t_estimate).map(|(a, b)| sum(a, b));
    }
}

/// Costs of a gate that is not taken apart, under some controls.
fn plain(gate: &Gate, controls: usize) -> Cost {
    let wires = controls + gate.wires();
    let known = lower::standard(gate);
    let counts = Counts {
        one_qubit: usize::from(wires == 1),
        two_qubit: usize::from(wires == 2),
        multi_qubit: usize::from(wires > 2),
        cx: known.as_ref().map(|gate| lower::cx(gate, controls)),
        rotations: known.as_ref().map_or(0, lower::rotations),
        t_estimate: known.as_ref().map(|gate| lower::t_gates(gate, controls)),
        ..Counts::default()
    };
    let joint = Delay::joint(wires);
    let two = if wires > 1 { joint.clone() } else { Delay::none(wires) };
    Cost { counts, delays: [joint, two] }
}

#[cfg(test)]
mod tests;
