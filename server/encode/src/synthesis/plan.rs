//! A circuit in the making: finished steps, and two-qubit unitaries whose
//! circuits are chosen at the end, when their neighbours are known.

use operator::{Budget, Circuit, Matrix, Step};

use super::pair;
use crate::Result;
use crate::passes::is_diagonal;

/// A step, or a two-qubit unitary still to be decomposed.
#[derive(Debug, Clone)]
enum Item {
    Step(Step),
    Pair { wires: [usize; 2], matrix: Matrix },
}

/// Steps and open two-qubit unitaries in time order.
#[derive(Debug, Clone)]
pub(crate) struct Plan {
    wires: usize,
    items: Vec<Item>,
}

impl Plan {
    /// Nothing yet, on this many wires.
    pub fn new(wires: usize) -> Plan {
        Plan { wires, items: Vec::new() }
    }

    /// Appends what a function appends to a circuit.
    pub fn steps<T>(&mut self, push: impl FnOnce(&mut Circuit) -> T) -> T {
        let mut circuit = Circuit::new(self.wires);
        let result = push(&mut circuit);
        self.items.extend(circuit.steps.into_iter().map(Item::Step));
        result
    }

    /// Appends a 4×4 unitary.
    pub fn pair(&mut self, matrix: Matrix, wires: [usize; 2]) {
        self.items.push(Item::Pair { wires, matrix });
    }

    /// The circuit. A two-qubit unitary that has a later one on the same
    /// wires, with nothing in between that minds a diagonal on them, is made
    /// up to a diagonal with 2 CX and the later one takes the diagonal: the
    /// second saving of Shende, Bullock, Markov 2006.
    ///
    /// # Errors
    /// `Stopped`.
    pub fn lower(mut self, budget: &Budget) -> Result<Circuit> {
        let mut circuit = Circuit::new(self.wires);
        for at in 0..self.items.len() {
            budget.poll()?;
            let (before, after) = self.items.split_at_mut(at + 1);
            match &before[at] {
                Item::Step(step) => circuit.steps.push(step.clone()),
                Item::Pair { wires, matrix } => match heir(after, *wires) {
                    Some(heir) => {
                        let left = pair::push_up_to_diagonal(&mut circuit, matrix, *wires);
                        *heir = &*heir * &Matrix::from_diagonal(&left);
                    }
                    None => pair::push(&mut circuit, matrix, *wires),
                },
            }
        }
        Ok(circuit)
    }
}

/// The next two-qubit unitary on these wires that a diagonal can reach.
fn heir(items: &mut [Item], wires: [usize; 2]) -> Option<&mut Matrix> {
    for item in items {
        match item {
            Item::Pair { wires: other, matrix } if *other == wires => return Some(matrix),
            Item::Pair { wires: other, .. } if other.iter().any(|w| wires.contains(w)) => {
                return None;
            }
            Item::Step(step) if !is_diagonal_on(step, wires) => return None,
            _ => {}
        }
    }
    None
}

/// Whether a step commutes with every diagonal on the two wires: it may be
/// controlled by them, and be diagonal where it acts on them.
fn is_diagonal_on(step: &Step, wires: [usize; 2]) -> bool {
    !step.targets.iter().any(|w| wires.contains(w)) || is_diagonal(&step.gate)
}
