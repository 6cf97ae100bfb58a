//! Circuits multiplied back against the sums they encode.

use operator::{Budget, C64, Matrix};

use super::*;
use crate::cp::spectral_norm;
use crate::prepare::two_qubit_gates;
use crate::testing::{gap, haar, matrix_of};

/// Error of a corner: rounding of the circuit and of the decomposition.
const ROUNDING: f64 = 1e-12;
/// Most wires of a circuit that is multiplied out here, in full.
const MOST_WIRES: usize = 9;

fn drafts(m: &Matrix) -> Vec<Draft> {
    let budget = Budget::default();
    let target = Target::new(m, 1e-9, &budget).unwrap();
    KroneckerSum.fits(&target).unwrap();
    let mut drafts = KroneckerSum.encode(&target, &Options::default(), &budget).unwrap();
    for draft in &mut drafts {
        assert_eq!(draft.circuit.wires, draft.ancillas + target.wires);
        if draft.circuit.wires <= MOST_WIRES {
            let corner = matrix_of(&draft.circuit).block(0, 0, m.rows(), m.cols());
            let error = gap(&corner.scaled(C64::from(draft.scale)), &target.matrix);
            assert!(error < ROUNDING, "{error:e}: {}", draft.note);
        }
        draft.scale *= 2.0_f64.powi(target.exponent);
    }
    drafts
}

fn xyz(n: usize) -> Matrix {
    let (o, l, i) = (C64::ZERO, C64::ONE, C64::I);
    let letters = [(1.0, [o, l, l, o]), (0.7, [o, -i, i, o]), (0.4, [l, o, o, -l])];
    let mut sum = Matrix::zeros(1 << n, 1 << n);
    for bond in 0..n - 1 {
        for (weight, letter) in letters {
            let pair = Matrix::from_rows(2, 2, &letter);
            let pair = pair.kron(&pair).scaled(C64::from(weight));
            let (before, after) =
                (Matrix::identity(1 << bond), Matrix::identity(1 << (n - 2 - bond)));
            sum = &sum + &before.kron(&pair).kron(&after);
        }
    }
    sum
}

fn laplacian(n: usize) -> Matrix {
    let band = |r: usize, c: usize| [2.0, -1.0].get(r.abs_diff(c)).copied().unwrap_or(0.0);
    Matrix::from_fn(1 << n, 1 << n, |r, c| C64::from(band(r, c)))
}

/// One-hot: 4(L − 1) CX for L flags and one for each letter that is not the
/// identity. Binary: at most the figures that one multiplexer of 2ᵏ − 1 CX a
/// site and nine CX for either state would give, with a tenth added.
#[test]
fn spin_chains_need_an_index_only() {
    for (n, one_hot, binary) in [(3, Some(32), 26), (4, Some(50), 86), (5, None, 102)] {
        let drafts = drafts(&xyz(n));
        let terms = 3 * (n - 1);
        let bits = terms.next_power_of_two().trailing_zeros() as usize;
        assert_eq!(drafts.iter().any(|d| d.ancillas == terms), one_hot.is_some());
        for (ancillas, most) in
            one_hot.map(|most| (terms, most)).into_iter().chain([(bits, binary)])
        {
            let found = drafts.iter().find(|d| d.ancillas == ancillas).unwrap();
            let cx = two_qubit_gates(&found.circuit);
            assert!(cx <= most, "{n} spins, {ancillas} ancillas: {cx} CX");
            // The sum of the magnitudes of the Pauli coefficients.
            let pauli = 2.1 * (n - 1) as f64;
            assert!((found.scale - pauli).abs() < 0.01 * pauli, "{}", found.scale);
        }
    }
}

#[test]
fn differential_operators_have_damped_factors() {
    for (n, terms, most) in [(2, 3, 18), (3, 4, 55)] {
        let shortest = &drafts(&laplacian(n))[0];
        assert!(shortest.note.starts_with(&format!("{terms} Kronecker terms")));
        let cx = two_qubit_gates(&shortest.circuit);
        assert!(shortest.ancillas > 2 && cx <= most, "{n}: {cx} CX");
    }
}

#[test]
fn one_product_needs_no_index() {
    let unitary = haar(2, 3).kron(&haar(2, 4)).kron(&haar(2, 5));
    let damped = Matrix::from_real(2, 2, &[1.0, 2.0, 0.5, 0.3]);
    let norm = spectral_norm(&damped);
    for (m, ancillas, cx, norm) in [
        (damped.clone(), 1, 1, norm),
        (damped.kron(&haar(2, 1)), 1, 1, norm),
        (haar(2, 2).kron(&damped).kron(&damped), 2, 2, norm * norm),
    ] {
        let found = &drafts(&m)[0];
        assert_eq!((found.ancillas, two_qubit_gates(&found.circuit)), (ancillas, cx));
        assert!((found.scale / norm - 1.0).abs() < ROUNDING, "the scale is the norm");
    }
    let target = Target::new(&unitary, 1e-9, &Budget::default()).unwrap();
    assert!(KroneckerSum.fits(&target).unwrap_err().contains("unitary"));
}

/// Weights with phases and factors of every kind.
#[test]
fn sums_of_random_products_are_encoded() {
    for seed in 0..6 {
        let mut rng = fastrand::Rng::with_seed(seed);
        let n = 2 + seed as usize % 2;
        let mut m = Matrix::zeros(1 << n, 1 << n);
        for term in 0..2 + seed % 2 {
            let mut product = Matrix::from_rows(1, 1, &[C64::from_polar(1.0, rng.f64() * 6.0)]);
            for k in 0..n as u64 {
                let factor = haar(2, 100 * seed + 10 * term + k);
                let damp = Matrix::from_diagonal(&[C64::ONE, C64::from(rng.f64())]);
                let plain = (seed + k) % 3 == 0;
                product = product.kron(&if plain { factor } else { &factor * &damp });
            }
            m = &m + &product;
        }
        assert!(!drafts(&m).is_empty());
    }
}
