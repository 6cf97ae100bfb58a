//! All ways to encode a matrix, measured, sorted, the pointless ones dropped.

use std::cmp::Ordering;

use operator::counts::Counts;
use operator::success::Success;
use operator::{Budget, Circuit, Matrix};

use crate::target::scale_by_power_of_two;
use crate::verify::Measured;
use crate::{Draft, Error, METHODS, Method, Options, Prefer, Result, Target, passes, verify};

/// One way to encode a matrix, with its measured costs.
#[derive(Debug, Clone)]
pub struct Candidate {
    /// Name of the method.
    pub method: &'static str,
    /// Ancillas first, then the signal wires, most significant first.
    pub circuit: Circuit,
    /// How many of the first wires are ancillas.
    pub ancillas: usize,
    /// The subnormalisation: `scale · corner` is the matrix.
    pub scale: f64,
    /// Measured ‖M − scale · corner‖ in spectral norm.
    pub error: f64,
    /// Gates and depths.
    pub counts: Counts,
    /// Chance that the ancillas are found in |0…0⟩.
    pub success: Success,
    /// One short phrase for a person: what was found or chosen.
    pub note: String,
}

/// What became of a matrix.
#[derive(Debug, Clone)]
pub struct Outcome {
    /// Best by the preference first; none is worse than another throughout.
    pub candidates: Vec<Candidate>,
    /// Methods that gave nothing, each with its reason.
    pub refused: Vec<(&'static str, String)>,
}

/// Every candidate for a matrix within the tolerance.
///
/// Each circuit was multiplied back; what misses the tolerance is among the
/// refused. A candidate that another equals or beats in CX, scale, ancillas
/// and depth is left out: errors within the tolerance are all alike.
///
/// # Errors
/// [`Error::UnknownMethod`]; [`Error::NotQubits`], `TooLarge`, `NotFinite`
/// for the matrix; `Stopped`. That no method succeeds is no error: the
/// outcome then has reasons only.
pub fn candidates(matrix: &Matrix, options: &Options, budget: &Budget) -> Result<Outcome> {
    let methods = chosen(options)?;
    let target = Target::new(matrix, options.tolerance, budget)?;
    let mut outcome = Outcome { candidates: Vec::new(), refused: Vec::new() };
    for method in methods {
        let name = method.name();
        if let Err(reason) = method.fits(&target) {
            outcome.refused.push((name, reason));
            continue;
        }
        match method.encode(&target, options, budget) {
            Ok(drafts) => {
                for draft in drafts {
                    match finish(name, draft, &target, budget) {
                        Ok(candidate) => outcome.candidates.push(candidate),
                        Err(error) => outcome.refused.push((name, reason(error)?)),
                    }
                }
            }
            Err(error) => outcome.refused.push((name, reason(error)?)),
        }
    }
    drop_dominated(&mut outcome.candidates);
    outcome.candidates.sort_by(|a, b| compare(a, b, options.prefer));
    Ok(outcome)
}

/// The methods that the options ask for.
fn chosen(options: &Options) -> Result<Vec<&'static dyn Method>> {
    let Some(name) = &options.method else { return Ok(METHODS.to_vec()) };
    match METHODS.iter().find(|method| method.name() == name) {
        Some(&method) => Ok(vec![method]),
        None => {
            let known: Vec<&str> = METHODS.iter().map(|m| m.name()).collect();
            Err(Error::UnknownMethod { name: name.clone(), known: known.join(", ") })
        }
    }
}

/// An error as the reason of one refusal; a stop ends everything.
fn reason(error: Error) -> Result<String> {
    match error {
        Error::Operator(operator::Error::Stopped) => Err(error),
        other => Ok(other.to_string()),
    }
}

/// A draft after the rewriting passes, multiplied back and measured.
fn finish(
    method: &'static str,
    draft: Draft,
    target: &Target,
    budget: &Budget,
) -> Result<Candidate> {
    let Draft { circuit, ancillas, scale, note } = draft;
    let circuit = passes::simplified(&circuit, budget)?;
    let Measured { error, success } = verify::measure(&circuit, ancillas, scale, target, budget)?;
    if error.is_nan() || error > target.tolerance {
        let allowed = scale_by_power_of_two(target.tolerance, target.exponent);
        let found = scale_by_power_of_two(error, target.exponent);
        return Err(Error::Unfit(format!(
            "the circuit misses the matrix by {found:.2e}, allowed are {allowed:.1e}"
        )));
    }
    Ok(Candidate {
        method,
        counts: operator::counts::counts(&circuit),
        circuit,
        ancillas,
        scale: scale_by_power_of_two(scale, target.exponent),
        error: scale_by_power_of_two(error, target.exponent),
        success,
        note,
    })
}

/// Scales closer than this, relatively, are the same number computed twice:
/// far above rounding, far below anything that changes a success probability.
const SAME_SCALE: f64 = 1e-9;

/// CX, scale, ancillas and depth of `a` against `b`.
fn figures(a: &Candidate, b: &Candidate) -> [Ordering; 4] {
    let cx = |c: &Candidate| c.counts.cx.unwrap_or(usize::MAX);
    let near = (a.scale - b.scale).abs() <= SAME_SCALE * a.scale.max(b.scale);
    let scale = if near { Ordering::Equal } else { a.scale.total_cmp(&b.scale) };
    [cx(a).cmp(&cx(b)), scale, a.ancillas.cmp(&b.ancillas), a.counts.depth.cmp(&b.counts.depth)]
}

/// Removes each candidate that another one equals or beats on every figure.
/// Among equals the first stays.
fn drop_dominated(candidates: &mut Vec<Candidate>) {
    let beaten: Vec<bool> = (0..candidates.len())
        .map(|k| {
            (0..candidates.len()).filter(|&j| j != k).any(|j| {
                let figures = figures(&candidates[j], &candidates[k]);
                let equal = figures.iter().all(|f| f.is_eq());
                figures.iter().all(|f| f.is_le()) && (!equal || j < k)
            })
        })
        .collect();
    let mut beaten = beaten.into_iter();
    candidates.retain(|_| !beaten.next().unwrap_or(false));
}

/// The preferred figure first, then the others in a fixed order.
fn compare(a: &Candidate, b: &Candidate, prefer: Prefer) -> Ordering {
    let [cx, scale, ancillas, depth] = figures(a, b);
    let first = match prefer {
        Prefer::Cx => cx,
        Prefer::Scale => scale,
        Prefer::Ancilla => ancillas,
        Prefer::Depth => depth,
    };
    first.then(cx).then(scale).then(ancillas).then(depth)
}
