//! One short line beside each gate: what it is.

use grammar::{TextRange, TextSize};
use operator::{Budget, portrait};

use super::claims::{about_gate, counted, statement};
use super::grid::{error, number};
use super::view::view;
use crate::{Claim, ClaimKind, FileId, Outcome, Program};

/// Most operands of a gate whose operator is worked out for a hint: hints
/// are asked for after every edit, for all gates in sight.
const MAX_OPERANDS: usize = 8;

/// A line to show in the text.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Hint {
    /// Where: the end of a gate's head.
    pub offset: TextSize,
    /// What to show.
    pub label: String,
}

/// The hints of the main file that lie in `range`, in the order of the text.
/// Gates of which nothing short can be said have none.
pub fn hints(program: &Program, range: TextRange, budget: &Budget) -> Vec<Hint> {
    let in_sight = |index: &usize| {
        let gate = &program.gates()[*index];
        gate.file == FileId::MAIN && !gate.builtin && range.contains_inclusive(gate.head_end)
    };
    (0..program.gates().len())
        .filter(in_sight)
        .filter_map(|index| {
            let label = label(program, index, budget)?;
            Some(Hint { offset: program.gates()[index].head_end, label })
        })
        .collect()
}

fn label(program: &Program, index: usize, budget: &Budget) -> Option<String> {
    let gate = program.gates().get(index)?;
    if let Some(stand_in) = &gate.stand_in {
        return Some(format!("stand-in for {}", stand_in.matrix));
    }
    let claimed: Vec<String> =
        about_gate(program, index).filter_map(|claim| fares(program, claim, budget)).collect();
    if !claimed.is_empty() {
        return Some(claimed.join("; "));
    }
    if gate.operands.len() > MAX_OPERANDS {
        return None;
    }
    let view = view(program, index, budget).ok()?;
    let operator = view.operator.ok().filter(|_| !view.chosen)?;
    let at: Vec<String> =
        view.at.iter().map(|(name, value)| format!(" at {name} = {}", number(*value))).collect();
    Some(format!("{}{}", portrait::portrait(&operator), at.join(",")))
}

/// How a claim about a gate fares: "≈ bench, error 3.1e-15, scale 4, 3 ancillas".
fn fares(program: &Program, claim: &Claim, budget: &Budget) -> Option<String> {
    let of = match &claim.kind {
        ClaimKind::Encodes { matrix, .. } => matrix.clone(),
        ClaimKind::Equals { of, .. } => of.clone(),
        _ => return None,
    };
    let measured = program.measure(claim, budget);
    let sign = match measured.outcome {
        Outcome::Holds => "≈",
        Outcome::Broken => "≠",
        Outcome::Undecided(_) => return Some(format!("not checked: {}", statement(claim))),
    };
    let mut label = format!("{sign} {of}");
    if let Some(distance) = measured.error {
        label += &format!(", error {}", error(distance));
    }
    if let Some(scale) = measured.scale {
        label += &format!(", scale {}", number(scale));
    }
    if let Some(count) = measured.ancillas.filter(|&count| count > 0) {
        label += &format!(", {}", counted(count, "ancilla"));
    }
    Some(label)
}
