//! Decompositions read off the matrix: non-zero coefficients in a product
//! basis, with terms that differ on one qubit only merged into one.

use operator::C64;

use super::model::{Factors, MODE, norm};
use super::tensor::{Basis, Tensor};

/// More terms than this are not worth merging pair by pair.
const MOST_TERMS: usize = 160;
/// Coefficients below this share of the largest are rounding.
const ZERO_SHARE: f64 = 1e-14;
/// Two factors are parallel when the sine of their angle is below the square
/// root of this: far above rounding, far below any difference that is meant.
const PARALLEL: f64 = 1e-20;

/// One term: a vector of Pauli coefficients for each qubit.
type Term = Vec<[C64; MODE]>;

/// The decompositions over all product bases in which the matrix is short
/// enough to look at. Coefficients are those of `tensor`.
pub fn structured(tensor: &Tensor) -> Vec<Factors<C64>> {
    let sparse = |basis: &[[C64; MODE]; MODE]| sparse_terms(tensor, basis);
    let found: Vec<Vec<Term>> = product_bases(tensor.basis).iter().filter_map(sparse).collect();
    found.into_iter().map(|terms| factors_of(tensor.modes, merge(terms))).collect()
}

fn factors_of(modes: usize, terms: Vec<Term>) -> Factors<C64> {
    let of_mode = |k: usize| terms.iter().flat_map(move |term| term[k]);
    Factors { modes, rank: terms.len(), data: (0..modes).flat_map(of_mode).collect() }
}

/// Bases of 2×2 matrices, each row the Pauli coefficients of one element.
fn product_bases(basis: Basis) -> [[[C64; MODE]; MODE]; 3] {
    let (o, l, h) = (C64::ZERO, C64::ONE, C64::from(0.5));
    // |0⟩⟨1| = (X + iY)/2, written over the third basis matrix in use.
    let y = if basis == Basis::Real { h } else { h * C64::I };
    let (raise, lower) = ([o, h, y, o], [o, h, -y, o]);
    let pauli = [[l, o, o, o], [o, l, o, o], [o, o, l, o], [o, o, o, l]];
    let units = [[h, o, o, h], raise, lower, [h, o, o, -h]];
    let ladder = [[l, o, o, o], raise, lower, [o, o, o, l]];
    [pauli, units, ladder]
}

/// The non-zero coefficients over one basis as terms; `None` if too many.
fn sparse_terms(tensor: &Tensor, basis: &[[C64; MODE]; MODE]) -> Option<Vec<Term>> {
    let data = change_basis(tensor, basis);
    let most = data.iter().fold(0.0_f64, |most, z| most.max(z.norm()));
    let mut terms = Vec::new();
    for (at, &z) in data.iter().enumerate().filter(|(_, z)| z.norm() > ZERO_SHARE * most) {
        if terms.len() == MOST_TERMS {
            return None;
        }
        let digit = |k: usize| at >> (2 * (tensor.modes - 1 - k)) & 3;
        let mut term: Term = (0..tensor.modes).map(|k| basis[digit(k)]).collect();
        term[0].iter_mut().for_each(|x| *x *= z);
        terms.push(term);
    }
    Some(terms)
}

/// Coefficients over a basis whose rows are orthogonal (not normalised).
fn change_basis(tensor: &Tensor, basis: &[[C64; MODE]; MODE]) -> Vec<C64> {
    let mut data = tensor.data.clone();
    for k in 0..tensor.modes {
        let stride = 1 << (2 * k);
        for block in data.chunks_exact_mut(MODE * stride) {
            for at in 0..stride {
                let old = [0, 1, 2, 3].map(|digit| block[digit * stride + at]);
                for (digit, row) in basis.iter().enumerate() {
                    block[digit * stride + at] = project(row, &old);
                }
            }
        }
    }
    data
}

/// `⟨row, old⟩ / ⟨row, row⟩`.
fn project(row: &[C64; MODE], old: &[C64; MODE]) -> C64 {
    let size: f64 = row.iter().map(|z| z.norm_sqr()).sum();
    row.iter().zip(old).map(|(r, x)| r.conj() * x).sum::<C64>() / size
}

/// Merges pairs that are parallel in all modes but one until none is left.
fn merge(mut terms: Vec<Term>) -> Vec<Term> {
    let mut first = 0;
    while first < terms.len() {
        let found = (first + 1..terms.len())
            .find_map(|second| joined(&terms[first], &terms[second]).map(|term| (second, term)));
        match found {
            Some((second, term)) => {
                terms.remove(second);
                terms[first] = term;
                // The new term may fit one that was passed over before.
                first = 0;
            }
            None => first += 1,
        }
    }
    terms.retain(|term| term.iter().all(|vector| norm(vector) > 0.0));
    terms
}

/// The sum of two terms as one, if they differ on one qubit at most.
fn joined(a: &Term, b: &Term) -> Option<Term> {
    let mut ratio = C64::ONE;
    let mut differs = None;
    for (k, (x, y)) in a.iter().zip(b).enumerate() {
        match multiple(x, y) {
            Some(factor) => ratio *= factor,
            None if differs.is_none() => differs = Some(k),
            None => return None,
        }
    }
    let mut out = a.clone();
    match differs {
        Some(k) => out[k].iter_mut().zip(&b[k]).for_each(|(x, y)| *x += ratio * y),
        None => out[0].iter_mut().for_each(|x| *x *= C64::ONE + ratio),
    }
    Some(out)
}

/// `c` with `y = c·x`, if the two are parallel.
fn multiple(x: &[C64; MODE], y: &[C64; MODE]) -> Option<C64> {
    let c = project(x, y);
    let left: f64 = x.iter().zip(y).map(|(x, y)| (y - c * x).norm_sqr()).sum();
    (left <= PARALLEL * norm(y).powi(2)).then_some(c)
}
