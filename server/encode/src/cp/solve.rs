//! Fitting a sum of rank-one tensors: alternating least squares to get near,
//! a damped Gauss–Newton iteration to finish at machine precision.

use operator::Budget;

use super::model::{Factors, norm};
use super::scalar::Scalar;

/// How much work one fit may do.
#[derive(Debug, Clone, Copy)]
pub struct Effort {
    /// Alternating least-squares sweeps before the first Gauss–Newton step.
    pub sweeps: usize,
    /// Most Gauss–Newton steps, rejected ones included.
    pub steps: usize,
}

/// A fit: the factors and how far their sum is from the target.
#[derive(Debug, Clone)]
pub struct Fit<S> {
    /// The factors, each term's norm spread evenly over its modes.
    pub factors: Factors<S>,
    /// Euclidean norm of what is left of the target (which has norm 1).
    pub error: f64,
    /// Gauss–Newton steps done.
    pub steps: usize,
}

/// A target has norm 1 and rounding alone leaves about this: a few units in
/// the last place for each of the up to a few hundred terms of an entry.
const FLOOR: f64 = 2e-15;
/// Ridge of the alternating sweeps: damps the swamps they fall into when two
/// terms nearly cancel, too small to matter for the starting point.
const RIDGE: f64 = 1e-3;
/// Damping of the first step from a start that is not near: of the order of
/// the squared norm of the start, so that the first steps follow the gradient.
pub const FIRST_DAMPING: f64 = 1.0;
/// Least damping: keeps the normal matrix definite along the directions that
/// rescale factors against each other, where it is singular by nature.
const LEAST_DAMPING: f64 = 1e-13;
/// Weight of the penalty on the factors' norms, as a share of the squared
/// error: large weights cost something while the fit is coarse and nothing
/// when it is fine, so the last digits are not disturbed.
const PENALTY: f64 = 1e-2;
/// A fit that in [`STALL_STEPS`] steps keeps more than this share of its
/// error is not going to arrive.
const STALL_SHARE: f64 = 0.9;
/// See [`STALL_SHARE`].
const STALL_STEPS: usize = 12;

/// Fits `start` to `target`, a tensor of norm 1.
pub fn fit<S: Scalar>(
    mut start: Factors<S>,
    target: &[S],
    effort: Effort,
    budget: &Budget,
) -> operator::Result<Fit<S>> {
    start.balance();
    for _ in 0..effort.sweeps {
        budget.poll()?;
        if !start.sweep(target, RIDGE) {
            break;
        }
    }
    gauss_newton(start, target, FIRST_DAMPING, effort.steps, budget)
}

/// Levenberg–Marquardt on `‖T − Σ…‖² + μ‖factors‖²` with the gain-ratio rule
/// of Nielsen 1999 for the damping. The residual is holomorphic in complex
/// factors, so the complex normal equations are those of the real problem.
/// At most `most` steps are taken, rejected ones included; `damping` is that
/// of the first.
pub fn gauss_newton<S: Scalar>(
    mut factors: Factors<S>,
    target: &[S],
    mut damping: f64,
    most: usize,
    budget: &Budget,
) -> operator::Result<Fit<S>> {
    let mut residual = factors.residual(target);
    let mut error = norm(&residual);
    let mut growth = 2.0;
    let mut history = vec![error];
    let mut steps = 0;
    while steps < most && error > FLOOR && !stalled(&history) {
        budget.poll()?;
        steps += 1;
        let penalty = PENALTY * error * error;
        let Some(step) = step(&factors, &residual, penalty, damping) else {
            damping *= 10.0;
            continue;
        };
        let mut moved = factors.clone();
        moved.data.iter_mut().zip(&step.delta).for_each(|(x, &d)| *x += d);
        let left = moved.residual(target);
        let cost = |error: f64, f: &Factors<S>| error * error + penalty * norm(&f.data).powi(2);
        let now = norm(&left);
        let gain = (cost(error, &factors) - cost(now, &moved)) / step.predicted;
        if gain > 0.0 {
            (factors, residual, error) = (moved, left, now);
            factors.balance();
            let keep = 1.0 - (2.0 * gain.min(1.0) - 1.0).powi(3);
            damping = (damping * keep.max(1.0 / 3.0)).max(LEAST_DAMPING);
            growth = 2.0;
        } else if damping > 1e6 {
            break;
        } else {
            damping *= growth;
            growth *= 2.0;
        }
        history.push(error);
    }
    Ok(Fit { factors, error, steps })
}

struct Step<S> {
    delta: Vec<S>,
    /// Decrease of the cost that the linear model promises.
    predicted: f64,
}

fn step<S: Scalar>(f: &Factors<S>, residual: &[S], penalty: f64, damping: f64) -> Option<Step<S>> {
    let mut normal = f.normal();
    normal.shift(penalty + damping);
    let mut gradient = f.contract(residual);
    gradient.iter_mut().zip(&f.data).for_each(|(g, a)| *g -= a.times(penalty));
    if !normal.factor() {
        return None;
    }
    let mut delta = gradient.clone();
    normal.solve_factored(&mut delta);
    let slope: f64 = delta.iter().zip(&gradient).map(|(d, &g)| (d.conj() * g).re()).sum();
    let predicted = slope + damping * norm(&delta).powi(2);
    (predicted > 0.0).then_some(Step { delta, predicted })
}

/// Whether the last steps got nowhere: judged by share while the fit is
/// coarse, and near rounding by whether it still moves at all.
fn stalled(history: &[f64]) -> bool {
    let Some(&now) = history.last() else { return false };
    let back = |steps: usize| history.len().checked_sub(steps + 1).map(|at| history[at]);
    let coarse = back(STALL_STEPS).is_some_and(|then| now > STALL_SHARE * then);
    let fine = now < 1e-12 && back(3).is_some_and(|then| now > 0.5 * then);
    coarse || fine
}
