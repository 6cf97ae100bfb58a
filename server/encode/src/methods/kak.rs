//! `kak`: a two-qubit unitary with the fewest CX that its class allows.

use operator::Budget;

use crate::{Draft, Method, Options, Result, Target, synthesise};

/// The canonical decomposition: 0 to 3 CX, no ancilla.
pub(super) struct Kak;

impl Method for Kak {
    fn name(&self) -> &'static str {
        "kak"
    }

    fn fits(&self, target: &Target) -> std::result::Result<(), String> {
        if target.wires != 2 {
            return Err(format!("for two qubits, not for {}", target.wires));
        }
        target.unitary().map(|_| ())
    }

    fn encode(&self, target: &Target, _: &Options, budget: &Budget) -> Result<Vec<Draft>> {
        let (scale, unitary) = target.unitary().map_err(crate::Error::Unfit)?;
        let circuit = synthesise(unitary, budget)?;
        let note = "fewest CX of its class".into();
        Ok(vec![Draft { circuit, ancillas: 0, scale, note }])
    }
}
