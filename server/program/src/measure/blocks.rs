//! Claims about a `box` or a `for` of the program.

use grammar::TextRange;
use operator::counts::counts;
use operator::{Circuit, Step};

use super::{Decided, Test};
use crate::model::ClaimKind;

impl Test<'_> {
    /// The steps of a block as a circuit on the qubits it touches, in the
    /// order of their declaration.
    pub(super) fn block(&self, range: TextRange) -> Decided {
        let (lowered, blocks) = self.program.lowering().program()?;
        let here = |block: &&crate::lower::BlockSteps| {
            block.file == self.claim.file && block.range == range
        };
        let block = blocks.iter().find(here);
        let block = block.ok_or("the program has no single operator up to this block")?;
        let circuit = compact(&lowered.circuit.steps[block.steps.clone()]);
        match &self.claim.kind {
            ClaimKind::Equals { of, .. } => self.equals(&circuit, of, &[]),
            ClaimKind::Budget(bounds) => self.bounds(bounds, &counts(&circuit), None),
            _ => Err("this cannot be claimed of a block".into()),
        }
    }
}

/// The steps on as few wires as they touch, in the same order.
fn compact(steps: &[Step]) -> Circuit {
    let touched = |step: &Step| {
        let controls = step.controls.iter().map(|control| control.wire);
        controls.chain(step.targets.iter().copied()).collect::<Vec<_>>()
    };
    let mut wires: Vec<usize> = steps.iter().flat_map(touched).collect();
    wires.sort_unstable();
    wires.dedup();
    let place = |wire: usize| wires.binary_search(&wire).unwrap_or(0);
    let steps = steps.iter().map(|step| step.mapped(place)).collect();
    Circuit { wires: wires.len(), steps }
}
