//! `pauli-sum`: a matrix as a linear combination of Pauli strings.
//!
//! Coefficients by the fast transform of [`cp::pauli_coefficients`]; the
//! smallest are left out while their sum stays within the error that is
//! allowed. All factors are unitary, so only the index has ancillas.
//! `α = Σ|c_P|`.

use operator::{Budget, C64, Matrix};

use crate::cp::{self, Decomposition, Term};
use crate::sum::{self, MOST_TERMS};
use crate::{Draft, Error, Method, Options, Result, Target};

/// The method's entry in the table.
pub(super) struct PauliSum;

/// Share of the allowed error that may be spent on terms left out: the rest
/// is for the angles of the circuit.
const DROPPED_SHARE: f64 = 0.5;
/// Coefficients below this share of the largest are rounding of the
/// transform, whatever error is allowed.
const ZERO_SHARE: f64 = 1e-15;

impl Method for PauliSum {
    fn name(&self) -> &'static str {
        "pauli-sum"
    }

    fn fits(&self, target: &Target) -> std::result::Result<(), String> {
        sum::fits(&target.matrix)
    }

    fn encode(&self, target: &Target, _: &Options, budget: &Budget) -> Result<Vec<Draft>> {
        budget.poll()?;
        let wires = target.wires;
        let coefficients = cp::pauli_coefficients(&target.matrix, wires);
        let (kept, error) = largest(&coefficients, DROPPED_SHARE * target.tolerance);
        if kept.len() > most_terms(wires) {
            return Err(Error::Unfit(format!(
                "{} Pauli strings are too many for {wires} qubits: more than {} cost more than a dense encoding",
                kept.len(),
                most_terms(wires)
            )));
        }
        let terms = kept.iter().map(|&at| string(at, coefficients[at], wires)).collect();
        let solution = Decomposition { terms, error };
        let note = match kept.len() {
            1 => "1 Pauli string".to_owned(),
            count => format!("{count} Pauli strings"),
        };
        let mut drafts = vec![sum::binary(&solution, wires, &note, budget)?];
        drafts.extend(sum::one_hot(&solution, wires, &note));
        Ok(drafts)
    }
}

/// Half of all Pauli strings, up to what the index register is allowed.
fn most_terms(wires: usize) -> usize {
    if wires <= 2 { 2 << wires } else { MOST_TERMS }
}

/// Indices of the coefficients that stay, largest first, and the sum of the
/// magnitudes of the others, which bounds the error in spectral norm.
fn largest(coefficients: &[C64], allowed: f64) -> (Vec<usize>, f64) {
    let mut order: Vec<usize> = (0..coefficients.len()).collect();
    order.sort_by(|&a, &b| coefficients[b].norm().total_cmp(&coefficients[a].norm()));
    let most = order.first().map_or(0.0, |&at| coefficients[at].norm());
    let mut error = 0.0;
    // One term always stays, however large the error that is allowed.
    while let [_, .., last] = order[..] {
        let size = coefficients[last].norm();
        if error + size > allowed && size > ZERO_SHARE * most {
            break;
        }
        error += size;
        order.pop();
    }
    (order, error)
}

/// The Pauli string with this base-4 index, qubit 0 the leading digit.
fn string(at: usize, weight: C64, wires: usize) -> Term {
    let letter = |k: usize| letter(at >> (2 * (wires - 1 - k)) & 3);
    Term { weight, factors: (0..wires).map(letter).collect() }
}

/// `I, X, Y, Z` for 0, 1, 2, 3.
fn letter(digit: usize) -> Matrix {
    let (o, l, i) = (C64::ZERO, C64::ONE, C64::I);
    let entries = match digit {
        0 => [l, o, o, l],
        1 => [o, l, l, o],
        2 => [o, -i, i, o],
        _ => [l, o, o, -l],
    };
    Matrix::from_rows(2, 2, &entries)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::prepare::two_qubit_gates;
    use crate::testing::{gap, matrix_of};

    /// Rounding of a circuit of a few hundred gates.
    const ROUNDING: f64 = 1e-12;
    /// Most wires of a circuit that is multiplied out here, in full.
    const MOST_WIRES: usize = 9;

    fn drafts(m: &Matrix, tolerance: f64) -> Result<Vec<Draft>> {
        let budget = Budget::default();
        let target = Target::new(m, tolerance, &budget)?;
        let drafts = PauliSum.encode(&target, &Options::default(), &budget)?;
        for draft in drafts.iter().filter(|d| d.circuit.wires <= MOST_WIRES) {
            let corner = matrix_of(&draft.circuit).block(0, 0, m.rows(), m.cols());
            let error = gap(&corner.scaled(C64::from(draft.scale)), &target.matrix);
            assert!(error <= target.tolerance + ROUNDING, "{error:e}");
        }
        Ok(drafts)
    }

    fn sum(wires: usize, terms: &[(C64, usize)]) -> Matrix {
        let solution = Decomposition {
            terms: terms.iter().map(|&(weight, at)| string(at, weight, wires)).collect(),
            error: 0.0,
        };
        solution.reconstruct()
    }

    /// Digits of the strings: I X Y Z = 0 1 2 3.
    #[test]
    fn sums_of_strings_are_encoded() {
        let c = |re: f64, im: f64| C64::new(re, im);
        let cases: Vec<(usize, Vec<(C64, usize)>)> = vec![
            (1, vec![(c(0.5, 0.0), 0), (c(0.25, 0.0), 3)]),
            (1, vec![(c(0.5, 0.1), 0), (c(0.0, 0.25), 1), (c(0.3, 0.0), 2), (c(-0.7, 0.0), 3)]),
            (2, vec![(c(1.0, 0.0), 0b0101), (c(0.7, 0.0), 0b1010), (c(-0.4, 0.2), 0b1111)]),
            (3, vec![(c(1.0, 0.0), 0b01_10_11), (c(0.0, -0.5), 0b00_11_00)]),
            (3, (0..11).map(|k| (c(1.0 + k as f64, 0.3 - k as f64 * 0.1), 5 * k + 2)).collect()),
        ];
        for (wires, terms) in cases {
            let found = drafts(&sum(wires, &terms), 1e-9).unwrap();
            let bits = terms.len().next_power_of_two().trailing_zeros() as usize;
            assert_eq!(found[0].ancillas, bits);
            assert!(found.iter().skip(1).all(|d| d.ancillas == terms.len()));
        }
    }

    /// Dirichlet Laplacian of 4 points: 2 II − IX − ½ XX − ½ YY, sum 4.
    #[test]
    fn the_scale_is_the_sum_of_the_magnitudes() {
        let m = Matrix::from_fn(4, 4, |r: usize, c: usize| {
            C64::from([2.0, -1.0].get(r.abs_diff(c)).copied().unwrap_or(0.0))
        });
        for draft in drafts(&m, 1e-9).unwrap() {
            // The matrix was halved by its power of two.
            assert!((draft.scale - 2.0).abs() < ROUNDING);
        }
    }

    #[test]
    fn small_terms_are_left_out_within_the_tolerance() {
        let c = |re: f64| C64::from(re);
        let m = sum(2, &[(c(1.0), 3), (c(0.5), 12), (c(2e-7), 5), (c(1e-7), 10)]);
        assert_eq!(drafts(&m, 1e-6).unwrap()[0].ancillas, 1);
        assert_eq!(drafts(&m, 1e-9).unwrap()[0].ancillas, 2);
    }

    #[test]
    fn one_string_stays_whatever_is_allowed() {
        let m = sum(2, &[(C64::from(1e-3), 3), (C64::from(2e-3), 12)]);
        let [draft, ..] = &drafts(&m, 1.0).unwrap()[..] else { panic!("no draft") };
        assert_eq!(draft.ancillas, 0);
    }

    #[test]
    fn dense_matrices_are_refused_with_the_count() {
        let mut rng = fastrand::Rng::with_seed(6);
        let m = Matrix::from_fn(8, 8, |_, _| C64::new(rng.f64(), rng.f64()));
        let error = drafts(&m, 1e-9).unwrap_err();
        assert!(matches!(error, Error::Unfit(reason) if reason.contains("64 Pauli strings")));
    }

    #[test]
    fn two_terms_cost_two_controlled_letters_each() {
        let m = sum(2, &[(C64::from(1.0), 0), (C64::from(0.5), 15)]);
        let least = drafts(&m, 1e-9).unwrap().iter().map(|d| two_qubit_gates(&d.circuit)).min();
        assert!(least <= Some(4), "{least:?}");
    }
}
