//! What a claim says and how it fares, in one line each.

use super::grid::{error, number};
use crate::{Claim, ClaimKind, Measured, Outcome, Program, Subject, Success};

/// What a claim says, in words: "encodes `bench`".
pub fn statement(claim: &Claim) -> String {
    match &claim.kind {
        ClaimKind::Dense { matrix, .. } => format!("stands for `{matrix}`"),
        ClaimKind::Encodes { matrix, .. } => format!("encodes `{matrix}`"),
        ClaimKind::Equals { of, exact_phase: true, .. } => {
            format!("equals `{of}`, the global phase included")
        }
        ClaimKind::Equals { of, .. } => format!("equals `{of}` up to a global phase"),
        ClaimKind::Clean { operands } => {
            let names: Vec<String> = operands.iter().map(|name| format!("`{name}`")).collect();
            format!("returns {} to |0⟩", names.join(", "))
        }
        ClaimKind::Property(property) => format!("is {}", property.word()),
        ClaimKind::Budget(_) => "stays within its budget".to_owned(),
    }
}

/// How a claim fares: what it says, whether it holds, and the numbers.
pub fn verdict(claim: &Claim, measured: &Measured) -> String {
    let says = statement(claim);
    let mut line = match &measured.outcome {
        Outcome::Holds => format!("✓ {says}"),
        Outcome::Broken => format!("✗ claimed but not so: {says}"),
        Outcome::Undecided(reason) => return format!("? {says}: not checked, {reason}"),
    };
    if let Some(distance) = measured.error {
        let allowed = error(measured.tolerance);
        line += &format!(": error {} (allowed {allowed})", error(distance));
    }
    if let Some(scale) = measured.scale {
        line += &format!(", scale {}", number(scale));
    }
    if let Some(count) = measured.ancillas {
        line += &format!(", {}", counted(count, "ancilla"));
    }
    if let Some(success) = measured.success {
        line += &format!("; {}", chance(success));
    }
    if let Some(note) = &measured.note {
        line += &format!(". {note}");
    }
    line
}

/// "success 0.5 on average (worst 0.1, best 0.9)".
pub fn chance(success: Success) -> String {
    format!(
        "success {} on average (worst {}, best {})",
        number(success.average),
        number(success.worst),
        number(success.best)
    )
}

/// "1 ancilla", "3 ancillas".
pub fn counted(count: usize, what: &str) -> String {
    let plural = if count == 1 { "" } else { "s" };
    format!("{count} {what}{plural}")
}

/// The claims about the gate at this position of [`Program::gates`].
pub(super) fn about_gate(program: &Program, gate: usize) -> impl Iterator<Item = &Claim> {
    program.claims().iter().filter(move |claim| claim.subject == Subject::Gate(gate))
}

/// The claims about the matrix at this position of [`Program::matrices`].
pub(super) fn about_matrix(program: &Program, matrix: usize) -> impl Iterator<Item = &Claim> {
    program.claims().iter().filter(move |claim| claim.subject == Subject::Matrix(matrix))
}
