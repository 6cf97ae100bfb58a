//! Puts a circuit in the place of a stand-in: the composition of encoding,
//! raising to source text, and the check of that text.
//!
//! Nothing is offered that has not been read back: the new text is parsed
//! and its claim measured before anybody sees it.

use std::sync::Arc;

use encode::{Candidate, Options, Outcome, Prefer};
use operator::{Budget, Matrix};
use program::{
    ClaimKind, Edit, FileId, Files, Finding, Limits, Measured, Program, Replacement, Severity,
    Subject, apply_edits,
};

use crate::error::Fail;

/// A replacement that has been written, read back and measured.
#[derive(Debug, Clone)]
pub struct Plan {
    /// The circuit and what it costs.
    pub candidate: Candidate,
    /// The edits of the main file.
    pub edits: Vec<Edit>,
    /// The main file after the edits.
    pub new_text: Arc<str>,
    /// The `encodes` claim that the edits leave behind, measured on the new
    /// text; it holds.
    pub measured: Measured,
}

/// What to encode: a stand-in's matrix and the error it allows.
pub fn target(program: &Program, gate: &str) -> Result<(Arc<Matrix>, f64), Fail> {
    let refuse = |why: String| Fail::Refused(why);
    let definition =
        program.gate(gate).ok_or_else(|| refuse(format!("there is no gate `{gate}`")))?;
    let stand_in = definition.stand_in.as_ref();
    let stand_in = stand_in.ok_or_else(|| refuse(format!("`{gate}` is not a stand-in")))?;
    let name = &stand_in.matrix;
    let matrix = stand_in.matrix_index.and_then(|index| program.matrices().get(index));
    let matrix = matrix.ok_or_else(|| refuse(format!("there is no matrix `{name}`")))?;
    let entries = matrix.matrix.clone();
    let entries =
        entries.ok_or_else(|| refuse(format!("the entries of `{name}` are not all known")))?;
    Ok((entries, stand_in.tolerance))
}

/// The ways to encode a stand-in's matrix, the preferred first, and the
/// methods that refused it, with their reasons.
pub fn candidates(
    matrix: &Matrix,
    tolerance: f64,
    method: Option<&str>,
    prefer: Prefer,
    budget: &Budget,
) -> Result<Outcome, Fail> {
    let options = Options { tolerance, method: method.map(str::to_owned), prefer };
    encode::candidates(matrix, &options, budget).map_err(|error| match error {
        encode::Error::Operator(operator::Error::Stopped) => Fail::Stale,
        error => Fail::Refused(error.to_string()),
    })
}

/// Writes a candidate in the place of the stand-in `gate`, reads the text
/// back and measures the claim it now makes.
///
/// # Errors
/// `Refused` if the file cannot take the circuit, or if the text that would
/// be written does not hold what it claims; `Stale` if `budget` stopped.
pub fn write(
    program: &Program,
    gate: &str,
    candidate: Candidate,
    files: &dyn Files,
    budget: &Budget,
) -> Result<Plan, Fail> {
    let main = program.file(FileId::MAIN).ok_or(Fail::Internal)?;
    let replacement = Replacement {
        circuit: candidate.circuit.clone(),
        ancillas: candidate.ancillas,
        scale: candidate.scale,
        error: candidate.error,
        method: candidate.method.to_owned(),
    };
    let edits = program.replacement(gate, &replacement).map_err(|cannot| {
        Fail::Refused(format!("`{gate}` cannot be replaced: {}", cannot.reason))
    })?;
    let new_text: Arc<str> = apply_edits(&main.text, &edits).into();
    let written = Program::analyse(&main.path, new_text.clone(), files, &Limits::default());
    if let Some(finding) = first_new_error(program, &written) {
        let why = &finding.message;
        return Err(Fail::Refused(format!("the new text would be in error: {why}")));
    }
    let measured = measured(&written, gate, budget)?;
    if measured.outcome != program::Outcome::Holds {
        return Err(Fail::Refused(format!(
            "the new text was measured and does not hold its claim (error {:?}, allowed {:.1e})",
            measured.error, measured.tolerance
        )));
    }
    Ok(Plan { candidate, edits, new_text, measured })
}

/// Every candidate for a stand-in, written and measured; the ones whose text
/// fails the measurement are left out.
///
/// # Errors
/// If there is nothing to encode, or every candidate failed.
pub fn plan(
    program: &Program,
    gate: &str,
    options: &Options,
    files: &dyn Files,
    budget: &Budget,
) -> Result<Vec<Plan>, Fail> {
    let (matrix, tolerance) = target(program, gate)?;
    let found = candidates(&matrix, tolerance, options.method.as_deref(), options.prefer, budget)?;
    let mut last = None;
    let mut plans = Vec::new();
    for candidate in found.candidates {
        match write(program, gate, candidate, files, budget) {
            Ok(plan) => plans.push(plan),
            Err(fail) => last = Some(fail),
        }
    }
    match last {
        Some(fail) if plans.is_empty() => Err(fail),
        _ if budget.is_stopped() => Err(Fail::Stale),
        _ => Ok(plans),
    }
}

/// The first error of the new text that the old one did not have.
fn first_new_error<'a>(old: &Program, new: &'a Program) -> Option<&'a Finding> {
    let known = |finding: &Finding| {
        let same = |f: &Finding| f.code == finding.code && f.message == finding.message;
        old.findings().iter().any(same)
    };
    new.findings().iter().find(|f| f.severity == Severity::Error && !known(f))
}

/// Measures the claim that `gate` encodes a matrix.
fn measured(program: &Program, gate: &str, budget: &Budget) -> Result<Measured, Fail> {
    let index = program.gates().iter().position(|definition| definition.name == gate);
    let claim = program.claims().iter().find(|claim| {
        matches!(claim.kind, ClaimKind::Encodes { .. })
            && index.is_some_and(|index| claim.subject == Subject::Gate(index))
    });
    let claim = claim
        .ok_or_else(|| Fail::Refused(format!("the new text makes no claim about `{gate}`")))?;
    let measured = program.measure(claim, budget);
    if budget.is_stopped() { Err(Fail::Stale) } else { Ok(measured) }
}
