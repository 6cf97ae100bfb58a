//! `cosine-sine`: a unitary on three qubits or more by recursion.

use operator::Budget;

use crate::{Draft, Method, Options, Result, Target, synthesise};

/// The cosine–sine recursion, structure first; no ancilla.
pub(super) struct CosineSine;

impl Method for CosineSine {
    fn name(&self) -> &'static str {
        "cosine-sine"
    }

    fn fits(&self, target: &Target) -> std::result::Result<(), String> {
        if target.wires < 3 {
            return Err(format!("for three qubits or more, not for {}", target.wires));
        }
        target.unitary().map(|_| ())
    }

    fn encode(&self, target: &Target, _: &Options, budget: &Budget) -> Result<Vec<Draft>> {
        let (scale, unitary) = target.unitary().map_err(crate::Error::Unfit)?;
        let circuit = synthesise(unitary, budget)?;
        let note = "exact unitary, no ancilla".into();
        Ok(vec![Draft { circuit, ancillas: 0, scale, note }])
    }
}
