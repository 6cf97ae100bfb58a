//! Norms of matrices whose norms are known, at scales from tiny to huge.

use super::*;

/// Rounding of a singular value of order one.
const CLOSE: f64 = 1e-14;

fn real(n: usize, entries: &[f64]) -> Matrix {
    Matrix::from_real(n, entries.len() / n, entries)
}

#[test]
fn spectral_norms_at_any_scale() {
    // [[3, 0], [4, 5]] has singular values √45 and √5.
    let m = real(2, &[3.0, 0.0, 4.0, 5.0]);
    for scale in [1.0, 1e-200, 1e200, 1e-300, 1e300, -1e-12] {
        let found = spectral(&m.scaled(C64::new(scale, 0.0))).unwrap();
        assert!((found / scale.abs() / 45.0_f64.sqrt() - 1.0).abs() < CLOSE, "{scale}: {found}");
    }
    assert_eq!(spectral(&Matrix::zeros(3, 2)).unwrap(), 0.0);
    assert_eq!(spectral(&Matrix::zeros(0, 2)).unwrap(), 0.0);
}

/// Open chains Σ XX + YY + ZZ of Pauli matrices. Two spins: the singlet's 3;
/// four: 3 + 2√3; six: diagonalised by an independent program.
#[test]
fn norms_of_spin_chains() {
    let (x, z) = (real(2, &[0.0, 1.0, 1.0, 0.0]), real(2, &[1.0, 0.0, 0.0, -1.0]));
    let y = Matrix::from_rows(2, 2, &[C64::ZERO, -C64::I, C64::I, C64::ZERO]);
    for (n, norm) in [(2, 3.0), (3, 4.0), (4, 6.464102), (6, 9.974309)] {
        let mut chain = Matrix::zeros(1 << n, 1 << n);
        for bond in 0..n - 1 {
            for letter in [&x, &y, &z] {
                let sides = Matrix::identity(1 << bond).kron(letter).kron(letter);
                chain = &chain + &sides.kron(&Matrix::identity(1 << (n - 2 - bond)));
            }
        }
        assert!((spectral(&chain).unwrap() - norm).abs() < 5e-7);
        assert!(hermiticity_error(&chain).unwrap() < CLOSE);
    }
}

#[test]
fn unitarity_errors_and_distances() {
    let shear = real(2, &[1.0, 1.0, 0.0, 1.0]);
    // Singular values of the unit shear: the golden ratio and its inverse.
    let golden = 0.5 * (1.0 + 5.0_f64.sqrt());
    let cases = [
        (Matrix::identity(4), 0.0, 0.0),
        (Matrix::zeros(2, 2), 1.0, 1.0),
        (real(2, &[1.5, 0.0, 0.0, 1.0]), 1.25, 0.5),
        (shear, golden, golden - 1.0),
    ];
    for (m, error, distance) in cases {
        assert!((unitarity_error(&m).unwrap() - error).abs() < CLOSE);
        assert!((distance_to_unitary(&m).unwrap() - distance).abs() < CLOSE);
        let nearest = nearest_unitary(&m).unwrap();
        assert!(unitarity_error(&nearest).unwrap() < CLOSE);
        assert!((spectral(&(&nearest - &m)).unwrap() - distance).abs() < CLOSE);
    }
    assert_eq!(unitarity_error(&Matrix::identity(2).block(0, 0, 1, 2)).unwrap(), 1.0);
    assert_eq!(unitarity_error(&Matrix::identity(2).block(0, 0, 2, 1)).unwrap(), 0.0);
    let huge = Matrix::identity(2).scaled(C64::new(1e200, 0.0));
    assert_eq!(unitarity_error(&huge).unwrap(), f64::INFINITY);
}

#[test]
fn the_worst_column_is_the_one_that_was_changed() {
    for factor in [1.1, 0.9, 1e-200, 1e100, 1e200] {
        let mut m = Matrix::identity(4);
        m[(2, 2)] = C64::new(0.0, factor);
        let (column, size) = worst_column(&m);
        assert_eq!(column, 2, "{factor}");
        assert!((size - (factor * factor - 1.0).abs()).abs() < CLOSE || size == f64::INFINITY);
    }
}

#[test]
fn what_is_not_square_or_not_finite_is_refused() {
    let wide = Matrix::zeros(2, 4);
    let refused = Error::BadDimension { rows: 2, cols: 4 };
    assert_eq!(nearest_unitary(&wide).unwrap_err(), refused);
    assert_eq!(hermiticity_error(&wide).unwrap_err(), refused);
    let bad = real(2, &[1.0, 0.0, f64::NAN, 1.0]);
    let refused = Error::NotFinite { row: 1, col: 0 };
    assert_eq!(spectral(&bad).unwrap_err(), refused);
    assert_eq!(unitarity_error(&bad).unwrap_err(), refused);
}
