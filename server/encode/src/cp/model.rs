//! Sums of rank-one tensors: values, contractions, normal equations.
//!
//! A tensor of order `n` and mode size 4 is a slice of `4ⁿ` entries, mode 0
//! the most significant base-4 digit of the index. Everything the solvers
//! need is obtained from the factors' Gram matrices and from contractions of
//! the tensor; the `4ⁿ × 4nR` Jacobian is never formed (Tomasi and Bro 2006,
//! Phan, Tichavský and Cichocki 2013).

use operator::C64;

use super::linear::{Square, dot};
use super::scalar::Scalar;

/// Mode size: the row and the column bit of one qubit.
pub const MODE: usize = 4;

/// The factors of `Σ_r a_{0,r} ⊗ … ⊗ a_{n−1,r}`, weights included.
#[derive(Debug, Clone)]
pub struct Factors<S> {
    /// Order of the tensor.
    pub modes: usize,
    /// Number of terms.
    pub rank: usize,
    /// Entry `i` of `a_{k,r}` at `(k·rank + r)·4 + i`.
    pub data: Vec<S>,
}

impl<S: Scalar> Factors<S> {
    /// Random factors with entries up to `size`.
    pub fn random(modes: usize, rank: usize, size: f64, rng: &mut fastrand::Rng) -> Self {
        let data = (0..modes * rank * MODE).map(|_| S::random(rng).times(size)).collect();
        Factors { modes, rank, data }
    }

    /// Where `a_{k,r}` begins in [`Factors::data`].
    pub fn at(&self, k: usize, r: usize) -> usize {
        (k * self.rank + r) * MODE
    }

    /// The vector `a_{k,r}`.
    pub fn vector(&self, k: usize, r: usize) -> &[S] {
        let at = self.at(k, r);
        &self.data[at..at + MODE]
    }

    fn vector_mut(&mut self, k: usize, r: usize) -> &mut [S] {
        let at = self.at(k, r);
        &mut self.data[at..at + MODE]
    }

    /// The same factors in complex form.
    pub fn complex(&self) -> Factors<C64> {
        let data = self.data.iter().map(|&x| x.complex()).collect();
        Factors { modes: self.modes, rank: self.rank, data }
    }

    /// The sum without term `r`.
    pub fn without(&self, r: usize) -> Factors<S> {
        let keep = (0..self.data.len()).filter(|at| at / MODE % self.rank != r);
        let data = keep.map(|at| self.data[at]).collect();
        Factors { modes: self.modes, rank: self.rank - 1, data }
    }

    /// Frobenius norm of term `r`.
    pub fn weight(&self, r: usize) -> f64 {
        (0..self.modes).map(|k| norm(self.vector(k, r))).product()
    }

    /// `Σ_r` of the Frobenius norms of the terms.
    pub fn total_weight(&self) -> f64 {
        (0..self.rank).map(|r| self.weight(r)).sum()
    }

    /// Spreads the norm of every term evenly over its factors: the tensor is
    /// the same, the normal equations are better conditioned.
    pub fn balance(&mut self) {
        for r in 0..self.rank {
            let each = self.weight(r).powf(1.0 / self.modes as f64);
            for k in 0..self.modes {
                let vector = self.vector_mut(k, r);
                let size = norm(vector);
                if size > 0.0 {
                    vector.iter_mut().for_each(|z| *z = z.times(each / size));
                }
            }
        }
    }

    /// `target − Σ_r a_{0,r} ⊗ …`, entry by entry.
    pub fn residual(&self, target: &[S]) -> Vec<S> {
        let mut out = target.to_vec();
        let (mut left, mut next) = (Vec::new(), Vec::new());
        for r in 0..self.rank {
            left.clear();
            left.push(S::ONE);
            for k in 0..self.modes - 1 {
                next.clear();
                let vector = self.vector(k, r);
                next.extend(left.iter().flat_map(|&x| vector.iter().map(move |&a| x * a)));
                std::mem::swap(&mut left, &mut next);
            }
            let last = self.vector(self.modes - 1, r);
            for (block, &x) in out.chunks_exact_mut(MODE).zip(&left) {
                for (value, &a) in block.iter_mut().zip(last) {
                    *value -= x * a;
                }
            }
        }
        out
    }

    /// For every mode `k` and term `r` the vector that is left of `tensor`
    /// when all other modes are contracted with `conj(a_{m,r})`, in the
    /// layout of [`Factors::data`]. Applied to the residual this is `J† r`.
    pub fn contract(&self, tensor: &[S]) -> Vec<S> {
        let mut out = vec![S::ZERO; self.data.len()];
        for r in 0..self.rank {
            let mut left = tensor.to_vec();
            for k in 0..self.modes {
                let mut right = left.clone();
                for m in (k + 1..self.modes).rev() {
                    let vector = self.vector(m, r);
                    right = right.chunks_exact(MODE).map(|block| dot(vector, block)).collect();
                }
                let at = self.at(k, r);
                out[at..at + MODE].copy_from_slice(&right);
                left = contract_first(&left, self.vector(k, r));
            }
        }
        out
    }

    /// The Gram matrix `G_k[r, s] = ⟨a_{k,r}, a_{k,s}⟩` of each mode, by rows.
    pub fn grams(&self) -> Vec<Vec<S>> {
        let pairs = |k| {
            let row =
                move |r| (0..self.rank).map(move |s| dot(self.vector(k, r), self.vector(k, s)));
            (0..self.rank).flat_map(row).collect()
        };
        (0..self.modes).map(pairs).collect()
    }

    /// `J†J`, order `4nR`, where `J` is the derivative of the sum by the
    /// factors (holomorphic, so one complex Jacobian says all).
    pub fn normal(&self) -> Square<S> {
        let grams = self.grams();
        let (n, rank) = (self.modes, self.rank);
        let mut out = Square::zeros(self.data.len());
        for k in 0..n {
            for l in k..n {
                let others = hadamard(&grams, &[k, l], rank);
                for r in 0..rank {
                    for s in 0..rank {
                        self.fill_block((k, r), (l, s), others[r * rank + s], &mut out);
                    }
                }
            }
        }
        out
    }

    /// Writes the 4×4 block of `J†J` for one pair of factors and its mirror.
    fn fill_block(
        &self,
        (k, r): (usize, usize),
        (l, s): (usize, usize),
        c: S,
        out: &mut Square<S>,
    ) {
        let (row, col) = (self.at(k, r), self.at(l, s));
        let order = out.order;
        if k == l {
            for i in 0..MODE {
                out.data[(row + i) * order + col + i] = c;
            }
            return;
        }
        let (a, b) = (self.vector(k, s), self.vector(l, r));
        for (i, &x) in a.iter().enumerate() {
            for (j, &y) in b.iter().enumerate() {
                let value = x * y.conj() * c;
                out.data[(row + i) * order + col + j] = value;
                out.data[(col + j) * order + row + i] = value.conj();
            }
        }
    }

    /// One alternating least-squares sweep: each mode in turn is replaced by
    /// the least-squares solution for the others, with a small ridge.
    pub fn sweep(&mut self, target: &[S], ridge: f64) -> bool {
        for k in 0..self.modes {
            let mut gram =
                Square { order: self.rank, data: hadamard(&self.grams(), &[k], self.rank) };
            gram.shift(ridge);
            if !gram.factor() {
                return false;
            }
            let rhs = self.contract_mode(target, k);
            for i in 0..MODE {
                let mut column: Vec<S> = (0..self.rank).map(|r| rhs[r * MODE + i]).collect();
                gram.solve_factored(&mut column);
                for (r, &value) in column.iter().enumerate() {
                    self.vector_mut(k, r)[i] = value;
                }
            }
        }
        self.balance();
        true
    }

    /// [`Factors::contract`] for one mode: `rank × 4`, by rows.
    fn contract_mode(&self, tensor: &[S], k: usize) -> Vec<S> {
        let mut out = Vec::with_capacity(self.rank * MODE);
        for r in 0..self.rank {
            let mut rest = tensor.to_vec();
            for m in (k + 1..self.modes).rev() {
                let vector = self.vector(m, r);
                rest = rest.chunks_exact(MODE).map(|block| dot(vector, block)).collect();
            }
            for m in 0..k {
                rest = contract_first(&rest, self.vector(m, r));
            }
            out.extend(rest);
        }
        out
    }
}

/// Contraction of the first mode with `conj(vector)`.
fn contract_first<S: Scalar>(tensor: &[S], vector: &[S]) -> Vec<S> {
    let size = tensor.len() / MODE;
    let mut out = vec![S::ZERO; size];
    for (block, a) in tensor.chunks_exact(size.max(1)).zip(vector) {
        for (sum, &x) in out.iter_mut().zip(block) {
            *sum += a.conj() * x;
        }
    }
    out
}

/// Entrywise product of all Gram matrices except those of modes `skip`.
fn hadamard<S: Scalar>(grams: &[Vec<S>], skip: &[usize], rank: usize) -> Vec<S> {
    let mut out = vec![S::ONE; rank * rank];
    for (k, gram) in grams.iter().enumerate() {
        if !skip.contains(&k) {
            out.iter_mut().zip(gram).for_each(|(x, &g)| *x = *x * g);
        }
    }
    out
}

/// Euclidean norm.
pub fn norm<S: Scalar>(vector: &[S]) -> f64 {
    vector.iter().map(|z| z.abs2()).sum::<f64>().sqrt()
}
