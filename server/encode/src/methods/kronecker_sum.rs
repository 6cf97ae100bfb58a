//! `kronecker-sum`: a matrix of low tensor rank as a linear combination of
//! tensor products of 2×2 matrices.
//!
//! `M = Σ_r y_r A_{r,1} ⊗ … ⊗ A_{r,n}` from [`crate::cp`], as circuits by
//! [`crate::sum`]. `α = Σ_r |y_r|`.

use operator::Budget;

use crate::cp::{self, Allowance, Decomposition, Found};
use crate::sum::{self, MOST_TERMS};
use crate::{Draft, Error, Method, Options, Result, Target};

/// The method's entry in the table.
pub(super) struct KroneckerSum;

/// Floating-point operations that the search may take: about a second, so
/// that an editor's list of candidates does not keep a person waiting.
const WORK: f64 = 5e9;
/// Random starts at the rank that decides.
const RESTARTS: u64 = 16;
/// Decompositions of one matrix that are made into circuits, shortest first.
const MOST_DRAFTED: usize = 4;
impl Method for KroneckerSum {
    fn name(&self) -> &'static str {
        "kronecker-sum"
    }

    fn fits(&self, target: &Target) -> std::result::Result<(), String> {
        sum::fits(&target.matrix)
    }

    fn encode(&self, target: &Target, _: &Options, budget: &Budget) -> Result<Vec<Draft>> {
        let most_terms = fitted_terms(target.wires);
        let allowance = Allowance { work: WORK, restarts: RESTARTS, most_terms };
        let found =
            cp::decompose(&target.matrix, target.wires, target.tolerance, allowance, budget)?;
        let mut drafts = Vec::new();
        let short = found.solutions.iter().filter(|s| s.rank() <= MOST_TERMS);
        for solution in short.take(MOST_DRAFTED) {
            budget.poll()?;
            let note = describe(solution, &found);
            drafts.push(sum::binary(solution, target.wires, &note, budget)?);
            drafts.extend(sum::one_hot(solution, target.wires, &note));
        }
        if drafts.is_empty() { Err(Error::Unfit(refusal(&found))) } else { Ok(drafts) }
    }
}

/// Most terms worth fitting on this many qubits. With more, the multiplexed
/// factors of the sum cost more CX than a dense encoding at a better scale,
/// unless the terms are as simple as those that are read off the matrix.
fn fitted_terms(wires: usize) -> usize {
    match wires {
        0..=2 => 4,
        3 => 8,
        4 => 12,
        _ => 16,
    }
}

/// Why nothing was found, with the best figures met.
fn refusal(found: &Found) -> String {
    match found.curve.iter().min_by(|a, b| a.1.total_cmp(&b.1)) {
        Some((rank, error)) => format!(
            "no short sum of Kronecker products was found ({rank} leave {error:.1e} of the norm)"
        ),
        None => format!("no fewer than {} Kronecker products add up to the matrix", found.least),
    }
}

fn describe(solution: &Decomposition, found: &Found) -> String {
    let rank = solution.rank();
    let fewest = found.solutions.iter().map(Decomposition::rank).min().unwrap_or(rank);
    let below = found.curve.iter().rfind(|(tried, _)| *tried < rank);
    let mut note = format!("{rank} Kronecker terms");
    match below {
        _ if rank > fewest => note.push_str(&format!("; {fewest} suffice at a larger scale")),
        _ if rank == found.least => note.push_str(", no fewer are possible"),
        Some((tried, error)) => {
            note.push_str(&format!("; {tried} left {error:.1e} of the norm"));
        }
        None => {}
    }
    if found.cut {
        note.push_str(" (search cut short)");
    }
    note
}

#[cfg(test)]
mod tests;
