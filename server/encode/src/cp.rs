//! Canonical polyadic decomposition of a matrix: `M = Σ_r y_r A_{r,1} ⊗ … ⊗
//! A_{r,n}` with as few terms as can be found, every factor of norm 1.
//!
//! The number of terms is the tensor rank of the re-indexed matrix. No
//! algorithm finds it for certain; this one brackets it. From below by the
//! ranks of the flattenings, from above by decompositions read off the matrix
//! ([`start`]); in between it fits sums of rank-one terms numerically
//! ([`solve`]), first once at each rank going up, then thoroughly going down
//! from the best rank known until a rank resists. Below the rank the error
//! can creep towards zero while the terms grow without bound and cancel (de
//! Silva and Lim 2008); such fits are refused by their weights.

mod linear;
mod model;
mod polish;
mod scalar;
mod solve;
mod start;
mod tensor;

use operator::{Budget, C64, Matrix};

use model::Factors;
use scalar::Scalar;
use solve::{Effort, FIRST_DAMPING, Fit, fit, gauss_newton};
use tensor::Tensor;
pub use tensor::pauli_coefficients;

/// One term `y · A_1 ⊗ … ⊗ A_n`.
#[derive(Debug, Clone)]
pub struct Term {
    /// The weight `y`.
    pub weight: C64,
    /// The factors, qubit 0 (most significant) first, each of norm 1.
    pub factors: Vec<Matrix>,
}

/// A matrix as a sum of Kronecker products.
#[derive(Debug, Clone)]
pub struct Decomposition {
    /// The terms, largest weight first.
    pub terms: Vec<Term>,
    /// Frobenius norm of the matrix minus the sum, measured in the tensor.
    pub error: f64,
}

impl Decomposition {
    /// Number of terms.
    pub fn rank(&self) -> usize {
        self.terms.len()
    }

    /// `Σ|y_r|`: the scale of the block encoding that the sum gives.
    pub fn scale(&self) -> f64 {
        self.terms.iter().map(|term| term.weight.norm()).sum()
    }

    /// The sum as a `2ⁿ × 2ⁿ` matrix.
    pub fn reconstruct(&self) -> Matrix {
        let product = |term: &Term| {
            let unit = Matrix::from_rows(1, 1, &[term.weight]);
            term.factors.iter().fold(unit, |left, factor| left.kron(factor))
        };
        let products = self.terms.iter().map(product);
        products.reduce(|sum, next| &sum + &next).unwrap_or_else(|| Matrix::zeros(1, 1))
    }
}

/// What the search for a short decomposition found.
#[derive(Debug, Clone)]
pub struct Found {
    /// Decompositions within the tolerance, shortest first. One that is no
    /// better than another in its rank, its scale and the number of qubits
    /// with factors that are not unitary is left out.
    pub solutions: Vec<Decomposition>,
    /// Best relative error (Frobenius) met at each rank tried, by rank.
    pub curve: Vec<(usize, f64)>,
    /// No decomposition can have fewer terms than this.
    pub least: usize,
    /// Whether the allowance of work ended before the search for fewer terms.
    pub cut: bool,
}

/// Allowance of a search.
#[derive(Debug, Clone, Copy)]
pub struct Allowance {
    /// Floating-point operations, roughly, after which no new fit starts.
    pub work: f64,
    /// Random starts at the rank below the best one known.
    pub restarts: u64,
    /// Most terms of a sum that is fitted; longer ones are only read off.
    pub most_terms: usize,
}

impl Default for Allowance {
    /// A few seconds of one core. A quarter of random starts that hold is the
    /// worst seen on the matrices of the tests (the Laplacian on 5 qubits).
    fn default() -> Self {
        Allowance { work: 2e10, restarts: 24, most_terms: 32 }
    }
}

/// Most qubits for which terms are fitted: the tensor has `4ⁿ` entries and a
/// sweep passes over it for each term. Larger matrices are only read.
pub const MOST_FITTED_QUBITS: usize = 6;
/// Sums of term norms (Frobenius) over the tensor's norm above this mean
/// that terms cancel each other, the sign of a border rank: refused.
pub const MOST_WEIGHT: f64 = 50.0;
/// Most Gauss–Newton steps of the single fit at each rank on the way up.
const QUICK_STEPS: usize = 60;
/// Most Gauss–Newton steps of a fit at the rank that decides.
const THOROUGH_STEPS: usize = 200;
/// Random starts at the rank found, in search of a smaller scale.
const RIVALS: u64 = 4;
/// Seeds of the rivals, apart from those that looked for the rank.
const RIVAL_SEEDS: u64 = 1000;
/// Most strides in search of a smaller scale from one decomposition.
const STRIDES: usize = 60;
/// Size of the entries of random starts, for a target of norm 1: starts whose
/// terms are larger than the target end in cancelling terms.
const START_SIZE: f64 = 0.75;
/// Alternating sweeps of every fourth start. They lead quickly to places that
/// Gauss–Newton finishes (Fourier matrices, spin chains), or else does not
/// leave (differential operators), so most starts go without.
const SWEEPS: usize = 2;
/// Pivots below this share of the tensor's norm count as zero when ranks of
/// flattenings are taken: above rounding, below every tolerance that a
/// decomposition can be held to.
const RANK_SHARE: f64 = 1e-9;

/// Looks for the shortest decomposition of a matrix on `modes` qubits whose
/// error is at most `tolerance` in spectral norm (bounded by Frobenius).
///
/// The same input gives the same decomposition: seeds are fixed.
///
/// # Errors
/// `Stopped` once the budget's flag is up.
pub fn decompose(
    matrix: &Matrix,
    modes: usize,
    tolerance: f64,
    allowance: Allowance,
    budget: &Budget,
) -> operator::Result<Found> {
    budget.poll()?;
    let mut tensor = Tensor::of(matrix, modes);
    let norm = tensor.norm();
    if norm == 0.0 {
        return Ok(Found { solutions: Vec::new(), curve: Vec::new(), least: 0, cut: false });
    }
    tensor.data.iter_mut().for_each(|z| *z /= norm);
    // A coefficient counts 2^{n/2} times in the Frobenius norm of the matrix.
    let frobenius = norm * ((1u64 << modes) as f64).sqrt();
    let mut search = Search::new(tensor, tolerance / frobenius, allowance, budget);
    search.run()?;
    Ok(search.finish(frobenius, norm))
}

/// A fit in complex form with its figures.
#[derive(Debug, Clone)]
struct Solution {
    factors: Factors<C64>,
    error: f64,
    /// `Σ_r Π_k ‖A_{k,r}‖` in spectral norm.
    scale: f64,
    /// Qubits with a factor that is not a multiple of a unitary.
    damped: usize,
}

impl Solution {
    /// Whether `other` is worth nothing beside this one.
    fn covers(&self, other: &Solution) -> bool {
        self.factors.rank <= other.factors.rank
            && self.damped <= other.damped
            && self.scale <= other.scale * (1.0 + SCALE_GAIN)
    }
}

struct Search<'a> {
    tensor: Tensor,
    real: Option<Vec<f64>>,
    /// Allowed error, relative to the tensor's norm.
    goal: f64,
    allowance: Allowance,
    budget: &'a Budget,
    least: usize,
    solutions: Vec<Solution>,
    curve: Vec<(usize, f64)>,
    work: f64,
    cut: bool,
}

impl<'a> Search<'a> {
    fn new(tensor: Tensor, goal: f64, allowance: Allowance, budget: &'a Budget) -> Self {
        let real = tensor.is_real().then(|| tensor.data.iter().map(|z| z.re).collect());
        let small = tensor.modes <= MOST_FITTED_QUBITS;
        let least = if small { tensor.flattening_rank(RANK_SHARE.max(goal)).max(1) } else { 1 };
        let (solutions, curve) = (Vec::new(), Vec::new());
        Search {
            tensor,
            real,
            goal,
            allowance,
            budget,
            least,
            solutions,
            curve,
            work: 0.0,
            cut: false,
        }
    }

    fn run(&mut self) -> operator::Result<()> {
        for factors in start::structured(&self.tensor) {
            let error = model::norm(&factors.residual(&self.tensor.data));
            self.admit(factors, error);
        }
        if self.tensor.modes > MOST_FITTED_QUBITS {
            return Ok(());
        }
        if self.least > self.allowance.most_terms {
            return Ok(());
        }
        self.climb()?;
        while let Some(rank) = self.best_rank().filter(|&best| best > self.least) {
            if !self.press(rank - 1)? {
                break;
            }
        }
        self.lower_scale()
    }

    /// Looks for smaller scales: a few more decompositions of the rank found,
    /// then a walk downhill from every decomposition.
    fn lower_scale(&mut self) -> operator::Result<()> {
        let Some(rank) = self.best_rank().filter(|&r| r <= self.allowance.most_terms) else {
            return Ok(());
        };
        for seed in RIVAL_SEEDS..RIVAL_SEEDS + RIVALS {
            if rank > 1 && !self.exhausted() {
                self.attempt(rank, seed, THOROUGH_STEPS)?;
            }
        }
        for at in 0..self.solutions.len() {
            let factors = self.solutions[at].factors.clone();
            if factors.rank > self.allowance.most_terms || self.exhausted() {
                continue;
            }
            let rank = factors.rank;
            let (data, basis) = (&self.tensor.data, self.tensor.basis);
            let (better, solved) = polish::polish(factors, data, basis, STRIDES, self.budget)?;
            self.work += solved as f64 * self.step_cost::<C64>(rank);
            let error = model::norm(&better.residual(&self.tensor.data));
            self.admit(better, error);
        }
        Ok(())
    }

    /// One quick fit at each rank, from the lower bound up, until one holds.
    fn climb(&mut self) -> operator::Result<()> {
        let mut rank = self.least;
        while rank < self.best_rank().unwrap_or(usize::MAX) {
            self.cut = self.exhausted();
            if rank > self.allowance.most_terms || self.cut {
                break;
            }
            if self.attempt(rank, 0, QUICK_STEPS)? {
                break;
            }
            rank += 1;
        }
        Ok(())
    }

    /// All the starts there are at one rank, until one holds.
    fn press(&mut self, rank: usize) -> operator::Result<bool> {
        if rank > self.allowance.most_terms {
            return Ok(false);
        }
        if self.shortened(rank)? {
            return Ok(true);
        }
        for seed in 1..=self.allowance.restarts {
            self.cut = self.exhausted();
            if self.cut {
                return Ok(false);
            }
            if self.attempt(rank, seed, THOROUGH_STEPS)? {
                return Ok(true);
            }
        }
        Ok(false)
    }

    /// A fit that starts at the best known decomposition without one term.
    fn shortened(&mut self, rank: usize) -> operator::Result<bool> {
        let Some(best) = self.solutions.iter().find(|s| s.factors.rank == rank + 1) else {
            return Ok(false);
        };
        let least =
            (0..=rank).min_by(|&a, &b| best.factors.weight(a).total_cmp(&best.factors.weight(b)));
        let start = best.factors.without(least.unwrap_or(rank));
        let target = self.tensor.data.clone();
        let fitted = gauss_newton(start, &target, FIRST_DAMPING, QUICK_STEPS, self.budget)?;
        Ok(self.take(fitted))
    }

    /// One random start: every fourth one real if the tensor is (a real fit is
    /// four times cheaper, but fewer real starts arrive), every fourth one
    /// brought nearer by alternating sweeps.
    fn attempt(&mut self, rank: usize, seed: u64, steps: usize) -> operator::Result<bool> {
        let modes = self.tensor.modes;
        let mut rng = fastrand::Rng::with_seed(seed << 16 | rank as u64);
        let sweeps = if seed % 4 == 3 { SWEEPS } else { 0 };
        match self.real.as_ref().filter(|_| seed % 4 == 1) {
            Some(target) => {
                let start = Factors::<f64>::random(modes, rank, START_SIZE, &mut rng);
                let effort = Effort { sweeps, steps: self.steps_left::<f64>(rank, steps) };
                let fitted = fit(start, target, effort, self.budget)?;
                Ok(self.take(fitted))
            }
            None => {
                let start = Factors::<C64>::random(modes, rank, START_SIZE, &mut rng);
                let effort = Effort { sweeps, steps: self.steps_left::<C64>(rank, steps) };
                let fitted = fit(start, &self.tensor.data, effort, self.budget)?;
                Ok(self.take(fitted))
            }
        }
    }

    /// Books the work of a fit and keeps it if it is good.
    fn take<S: Scalar>(&mut self, fitted: Fit<S>) -> bool {
        self.work += fitted.steps as f64 * self.step_cost::<S>(fitted.factors.rank);
        let error = fitted.error;
        self.admit(fitted.factors.complex(), error)
    }

    /// Floating-point operations of one Gauss–Newton step, roughly: a
    /// Cholesky factorisation and some passes over the tensor for each term.
    fn step_cost<S: Scalar>(&self, rank: usize) -> f64 {
        let order = (model::MODE * self.tensor.modes * rank) as f64;
        let passes = 8.0 * (self.tensor.data.len() * rank) as f64;
        let field = if size_of::<S>() == size_of::<f64>() { 1.0 } else { 4.0 };
        field * (order.powi(3) / 3.0 + passes)
    }

    /// Steps that the allowance still covers, at most `most`.
    fn steps_left<S: Scalar>(&self, rank: usize, most: usize) -> usize {
        let left = (self.allowance.work - self.work).max(0.0);
        most.min((left / self.step_cost::<S>(rank)) as usize + 1)
    }

    fn admit(&mut self, mut factors: Factors<C64>, error: f64) -> bool {
        factors.balance();
        let heavy = factors.total_weight() > MOST_WEIGHT;
        if !heavy || error > self.goal {
            self.note_error(factors.rank, error);
        }
        let good = error <= self.goal && !heavy;
        if good {
            let (scale, damped) = (self.scale(&factors), self.damped(&factors));
            self.solutions.push(Solution { factors, error, scale, damped });
        }
        good
    }

    fn note_error(&mut self, rank: usize, error: f64) {
        match self.curve.iter_mut().find(|(r, _)| *r == rank) {
            Some((_, best)) => *best = best.min(error),
            None => self.curve.push((rank, error)),
        }
    }

    fn scale(&self, factors: &Factors<C64>) -> f64 {
        let norm = |k, r| spectral_norm(&self.tensor.basis.matrix(factors.vector(k, r)));
        let term = |r| (0..factors.modes).map(|k| norm(k, r)).product::<f64>();
        (0..factors.rank).map(term).sum()
    }

    fn damped(&self, factors: &Factors<C64>) -> usize {
        let unitary = |k, r| is_unitary_up_to_norm(&self.tensor.basis.matrix(factors.vector(k, r)));
        (0..factors.modes).filter(|&k| !(0..factors.rank).all(|r| unitary(k, r))).count()
    }

    fn best_rank(&self) -> Option<usize> {
        self.solutions.iter().map(|s| s.factors.rank).min()
    }

    fn exhausted(&self) -> bool {
        self.work > self.allowance.work
    }

    fn finish(mut self, frobenius: f64, norm: f64) -> Found {
        self.curve.sort_by_key(|&(rank, _)| rank);
        self.solutions
            .sort_by(|a, b| a.factors.rank.cmp(&b.factors.rank).then(a.scale.total_cmp(&b.scale)));
        let mut kept: Vec<&Solution> = Vec::new();
        for solution in &self.solutions {
            if !kept.iter().any(|better| better.covers(solution)) {
                kept.push(solution);
            }
        }
        let solutions = kept.iter().map(|s| self.describe(s, frobenius, norm)).collect();
        Found { solutions, curve: self.curve, least: self.least, cut: self.cut }
    }

    fn describe(&self, solution: &Solution, frobenius: f64, norm: f64) -> Decomposition {
        let factors = &solution.factors;
        let term = |r| {
            let mut weight = C64::from(norm);
            let unit = |k| {
                let (unit, size) = normalised(&self.tensor.basis.matrix(factors.vector(k, r)));
                weight *= size;
                unit
            };
            let factors = (0..factors.modes).map(unit).collect();
            Term { weight, factors }
        };
        let mut terms: Vec<Term> = (0..factors.rank).map(term).collect();
        terms.sort_by(|a, b| b.weight.norm().total_cmp(&a.weight.norm()));
        Decomposition { terms, error: solution.error * frobenius }
    }
}

/// A longer decomposition is worth listing if it lowers the scale by this
/// share: the walks downhill end a little above the minimum.
const SCALE_GAIN: f64 = 1e-2;
/// Squared singular values of a factor this near to each other count as
/// equal: the factor is unitary up to its norm.
const SAME_SINGULAR: f64 = 1e-12;

/// A 2×2 matrix as `size · unit` with `‖unit‖ = 1` and the largest entry of
/// the unit real and positive.
fn normalised(matrix: &Matrix) -> (Matrix, C64) {
    let mut most = C64::ZERO;
    for &z in matrix.as_slice() {
        // A later entry has to be clearly larger, so that rounding between
        // entries of equal magnitude never decides.
        if z.norm() > most.norm() * (1.0 + 1e-9) {
            most = z;
        }
    }
    let norm = spectral_norm(matrix);
    if norm == 0.0 {
        return (Matrix::identity(2), C64::ZERO);
    }
    let size = most / most.norm() * norm;
    (matrix.scaled(size.inv()), size)
}

/// Mean and half difference of the eigenvalues of `A†A`.
fn squared_singular_values(a: &Matrix) -> (f64, f64) {
    let p = a[(0, 0)].norm_sqr() + a[(1, 0)].norm_sqr();
    let s = a[(0, 1)].norm_sqr() + a[(1, 1)].norm_sqr();
    let q = a[(0, 0)].conj() * a[(0, 1)] + a[(1, 0)].conj() * a[(1, 1)];
    (0.5 * (p + s), (0.5 * (p - s)).hypot(q.norm()))
}

/// Largest singular value of a 2×2 matrix.
pub(crate) fn spectral_norm(a: &Matrix) -> f64 {
    let (mean, half) = squared_singular_values(a);
    (mean + half).sqrt()
}

fn is_unitary_up_to_norm(a: &Matrix) -> bool {
    let (mean, half) = squared_singular_values(a);
    half <= SAME_SINGULAR * mean
}

#[cfg(test)]
mod tests;
