//! `euler`: a one-qubit unitary is one gate.

use operator::{Budget, Circuit};

use crate::{Draft, Method, Options, Result, Target, euler};

/// Euler angles with the exact global phase; no CX, no ancilla.
pub(super) struct Euler;

impl Method for Euler {
    fn name(&self) -> &'static str {
        "euler"
    }

    fn fits(&self, target: &Target) -> std::result::Result<(), String> {
        if target.wires != 1 {
            return Err(format!("for one qubit, not for {}", target.wires));
        }
        target.unitary().map(|_| ())
    }

    fn encode(&self, target: &Target, _: &Options, budget: &Budget) -> Result<Vec<Draft>> {
        budget.poll()?;
        let (scale, unitary) = target.unitary().map_err(crate::Error::Unfit)?;
        let mut circuit = Circuit::new(1);
        euler::push(&mut circuit, unitary, 0);
        Ok(vec![Draft { circuit, ancillas: 0, scale, note: "one gate".into() }])
    }
}
