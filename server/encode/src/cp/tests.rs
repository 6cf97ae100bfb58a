//! Ranks of known matrices, found numerically.

use operator::{Budget, C64, Matrix};

use super::*;
use crate::testing::{dft, permutation};

fn pauli(letter: char) -> Matrix {
    let (o, l, i) = (C64::ZERO, C64::ONE, C64::I);
    let entries = match letter {
        'X' => [o, l, l, o],
        'Y' => [o, -i, i, o],
        'Z' => [l, o, o, -l],
        _ => [l, o, o, l],
    };
    Matrix::from_rows(2, 2, &entries)
}

/// Sum of Pauli letters at the stated places.
fn spins(n: usize, terms: &[(f64, Vec<(usize, char)>)]) -> Matrix {
    let mut sum = Matrix::zeros(1 << n, 1 << n);
    for (weight, letters) in terms {
        let at = |k| letters.iter().find(|(place, _)| *place == k).map_or('I', |(_, l)| *l);
        let unit = Matrix::from_real(1, 1, &[*weight]);
        sum = &sum + &(0..n).fold(unit, |left, k| left.kron(&pauli(at(k))));
    }
    sum
}

fn xyz(n: usize, ring: bool) -> Matrix {
    let bonds = if ring { n } else { n - 1 };
    let mut terms = Vec::new();
    for b in 0..bonds {
        for (weight, l) in [(1.0, 'X'), (0.7, 'Y'), (0.4, 'Z')] {
            terms.push((weight, vec![(b, l), ((b + 1) % n, l)]));
        }
    }
    spins(n, &terms)
}

fn ising(n: usize, field: f64) -> Matrix {
    let bonds = (0..n - 1).map(|b| (1.0, vec![(b, 'Z'), (b + 1, 'Z')]));
    let fields = (0..n).filter(|_| field != 0.0).map(|k| (field, vec![(k, 'X')]));
    spins(n, &bonds.chain(fields).collect::<Vec<_>>())
}

fn from_real(n: usize, f: impl Fn(usize, usize) -> f64) -> Matrix {
    Matrix::from_fn(1 << n, 1 << n, |r, c| C64::from(f(r, c)))
}

fn laplacian(n: usize) -> Matrix {
    from_real(n, |r, c| match r.abs_diff(c) {
        0 => 2.0,
        1 => -1.0,
        _ => 0.0,
    })
}

fn bit_reversed_dft(n: usize) -> Matrix {
    let size = 1usize << n;
    let reversed = |r: usize| r.reverse_bits() >> (usize::BITS as usize - n);
    let plain = dft(size);
    Matrix::from_fn(size, size, |r, c| plain[(reversed(r), c)])
}

/// What a search in a test may cost: a fraction of a second of one core.
const ALLOWANCE: Allowance = Allowance { work: 3e9, restarts: 16, most_terms: 24 };
/// What is asked of a decomposition.
const TOLERANCE: f64 = 1e-8;
/// What it reaches: rounding of sums of up to 15 products of 6 factors.
const ROUNDING: f64 = 1e-13;

fn search(m: &Matrix) -> Found {
    let n = m.qubits().unwrap();
    decompose(m, n, TOLERANCE, ALLOWANCE, &Budget::default()).unwrap()
}

/// Every decomposition listed is one, and the shortest has `rank` terms.
fn check(name: &str, m: &Matrix, rank: usize) {
    let found = search(m);
    assert_eq!(found.solutions[0].rank(), rank, "{name}: {:?}", found.curve);
    assert!(found.least <= rank, "{name}: lower bound {}", found.least);
    for solution in &found.solutions {
        let gap = (&solution.reconstruct() - m).frobenius() / m.frobenius();
        assert!(gap < ROUNDING, "{name}: {gap:e}");
        assert!(solution.error <= ROUNDING * m.frobenius(), "{name}: {:e}", solution.error);
        for term in &solution.terms {
            let norms = term.factors.iter().map(spectral_norm);
            assert!(norms.clone().all(|norm| (norm - 1.0).abs() < ROUNDING), "{name}");
        }
    }
}

/// Ranks found numerically, by damped Gauss–Newton from many random starts:
/// no start at one rank less arrived. They are the ranks of these matrices as
/// far as anyone can say who has not proved them.
#[test]
fn spin_chains_have_the_ranks_that_are_known() {
    for n in 3..=6 {
        check(&format!("open XYZ chain, {n}"), &xyz(n, false), 3 * (n - 1));
    }
    check("XYZ ring, 3", &xyz(3, true), 6);
    check("XYZ ring, 4", &xyz(4, true), 12);
    for n in 2..=5 {
        check(&format!("ZZ chain, {n}"), &ising(n, 0.0), n - 1);
        check(&format!("transverse-field Ising, {n}"), &ising(n, 0.5), 2 * n - 1);
    }
}

/// Found numerically, as above.
#[test]
fn operators_and_gates_have_the_ranks_that_are_known() {
    for (n, rank) in [(2, 3), (3, 4), (4, 5), (5, 7)] {
        check(&format!("Dirichlet Laplacian, {n}"), &laplacian(n), rank);
    }
    for n in 2..=5 {
        check(&format!("increment, {n}"), &permutation(1 << n, |c| (c + 1) % (1 << n)), n);
    }
    check("Toffoli", &permutation(8, |c| if c >= 6 { c ^ 1 } else { c }), 2);
    let fredkin = |c: usize| if c == 5 || c == 6 { 11 - c } else { c };
    check("Fredkin", &permutation(8, fredkin), 4);
    check("bit-reversed DFT of 8", &bit_reversed_dft(3), 4);
    check("bit-reversed DFT of 16", &bit_reversed_dft(4), 8);
}

/// A random sum of `rank` products: below the rank that is generic for its
/// format the decomposition is unique, so the rank is the one put in.
#[test]
fn sums_of_random_products_are_found_again() {
    let mut rng = fastrand::Rng::with_seed(21);
    for (n, rank) in [(1, 1), (2, 2), (3, 3), (4, 3), (5, 2)] {
        for real in [true, false] {
            let factors = match real {
                true => Factors::<f64>::random(n, rank, 1.0, &mut rng).complex(),
                false => Factors::<C64>::random(n, rank, 1.0, &mut rng),
            };
            let zero = vec![C64::ZERO; 1 << (2 * n)];
            let sum = factors.residual(&zero);
            let unit = Tensor { modes: n, basis: tensor::Basis::Hermitian, data: sum };
            check(&format!("{rank} products on {n} qubits"), &unit.matrix(), rank);
        }
    }
}

/// `Σ|y_r|` of the smallest decompositions after the walk downhill. The sum
/// of the magnitudes of the Pauli coefficients is 5 for the Laplacian on
/// three qubits and 6.3 for the ring of three spins, at more terms.
#[test]
fn scales_are_lowered_within_a_rank() {
    for (m, rank, most) in [(laplacian(3), 4, 5.05), (xyz(3, true), 6, 8.4)] {
        let shortest = &search(&m).solutions[0];
        assert_eq!(shortest.rank(), rank);
        assert!(shortest.scale() < most, "{}", shortest.scale());
    }
}

/// Just below the rank of an Ising chain errors creep down while terms grow
/// and cancel: such sums are never listed.
#[test]
fn cancelling_terms_are_refused() {
    let m = ising(3, 0.5);
    let found = decompose(&m, 3, 1e-3, ALLOWANCE, &Budget::default()).unwrap();
    for solution in &found.solutions {
        assert!(solution.scale() <= MOST_WEIGHT * m.frobenius());
    }
    assert!(found.curve.iter().any(|&(rank, error)| rank < 5 && error > 1e-5));
}

#[test]
fn the_curve_falls_to_the_rank() {
    let found = search(&laplacian(3));
    let ranks: Vec<usize> = found.curve.iter().map(|c| c.0).collect();
    assert!(ranks.is_sorted() && ranks.contains(&3) && ranks.contains(&4), "{ranks:?}");
    let error = |rank| found.curve.iter().find(|c| c.0 == rank).unwrap().1;
    assert!(error(3) > 1e-2 && error(4) < ROUNDING);
}

#[test]
fn the_same_matrix_gives_the_same_terms() {
    let m = laplacian(3);
    assert_eq!(format!("{:?}", search(&m)), format!("{:?}", search(&m)));
}

#[test]
fn a_raised_flag_stops_the_search() {
    let budget = Budget::default();
    budget.stop();
    for n in 1..4 {
        let stopped = decompose(&laplacian(n), n, TOLERANCE, ALLOWANCE, &budget);
        assert_eq!(stopped.unwrap_err(), operator::Error::Stopped);
    }
}

#[test]
fn a_tolerance_above_the_matrix_is_no_trouble() {
    let found = decompose(&laplacian(3), 3, 1e9, ALLOWANCE, &Budget::default()).unwrap();
    assert_eq!((found.least, found.solutions[0].rank()), (1, 1));
}

#[test]
fn zero_has_no_terms_and_dense_matrices_are_left_alone() {
    assert!(search(&Matrix::zeros(4, 4)).solutions.is_empty());
    let mut rng = fastrand::Rng::with_seed(2);
    let dense = Matrix::from_fn(32, 32, |_, _| C64::new(rng.f64() - 0.5, rng.f64() - 0.5));
    let few = Allowance { most_terms: 12, ..ALLOWANCE };
    let found = decompose(&dense, 5, TOLERANCE, few, &Budget::default()).unwrap();
    assert!(found.solutions.is_empty() && found.curve.is_empty());
    assert_eq!(found.least, 16);
}
