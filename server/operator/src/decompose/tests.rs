//! Reconstruction and structure on matrices that are easy to get wrong.

use super::*;
use crate::norm;

/// Rounding allowed to factors of matrices of order one and size up to 32.
const CLOSE: f64 = 1e-13;

fn random(n: usize, seed: u64) -> Matrix {
    let mut source = fastrand::Rng::with_seed(seed);
    Matrix::from_fn(n, n, |_, _| C64::new(source.f64() - 0.5, source.f64() - 0.5))
}

fn random_unitary(n: usize, seed: u64) -> Matrix {
    norm::nearest_unitary(&random(n, seed)).unwrap()
}

fn is_unitary(m: &Matrix) -> bool {
    (&(&m.adjoint() * m) - &Matrix::identity(m.cols())).max_abs() < CLOSE
}

fn permutation(n: usize, image: impl Fn(usize) -> usize) -> Matrix {
    Matrix::from_fn(n, n, |r, c| if image(c) == r { C64::ONE } else { C64::ZERO })
}

/// Unitaries with all kinds of degeneracy.
fn unitaries() -> Vec<Matrix> {
    let mut list = Vec::new();
    for n in [2, 4, 8, 16, 32] {
        let v = random_unitary(n, n as u64);
        let turned = |phase: &dyn Fn(usize) -> f64| {
            let d: Vec<C64> = (0..n).map(|k| C64::cis(phase(k))).collect();
            &(&v * &Matrix::from_diagonal(&d)) * &v.adjoint()
        };
        list.extend([
            Matrix::identity(n),
            v.clone(),
            permutation(n, |c| (c + 1) % n),
            permutation(n, |c| n - 1 - c),
            permutation(n, |c| c ^ 1),
            turned(&|k| if k == 0 { 1.0 } else { 0.0 }),
            turned(&|k| 1e-9 * k as f64),
            turned(&|k| [0.5, -0.5 - 2.0 * 0.7321][k % 2]),
            turned(&|k| [std::f64::consts::PI, -1.0][k % 2]),
            turned(&|k| (k as f64).exp2() * 1e-12),
        ]);
    }
    list
}

#[test]
fn eigenvectors_of_unitaries_are_orthonormal_however_degenerate() {
    for unitary in unitaries() {
        let eigen = eigen_unitary(&unitary).unwrap();
        assert!(is_unitary(&eigen.vectors));
        let d = Matrix::from_diagonal(&eigen.values);
        let back = &(&eigen.vectors * &d) * &eigen.vectors.adjoint();
        assert!((&back - &unitary).max_abs() < CLOSE);
        assert!(eigen.values.iter().all(|z| (z.norm() - 1.0).abs() < CLOSE));
    }
}

#[test]
fn cosine_sine_gives_every_unitary_back() {
    for unitary in unitaries() {
        let cs = cosine_sine(&unitary).unwrap();
        assert!([&cs.l0, &cs.l1, &cs.r0, &cs.r1].into_iter().all(is_unitary));
        assert!((&cs.reconstruct() - &unitary).max_abs() < CLOSE);
    }
}

#[test]
fn small_sines_and_small_cosines_are_kept_apart() {
    for seed in 0..5 {
        let [a, b, c, d] = [0, 1, 2, 3].map(|k| random_unitary(8, 10 * seed + k));
        let spread = [1.0, 1e-3, 1e-6, 1e-8, 1e-9, 1e-12, 1e-15, 0.0];
        let theta: Vec<f64> = (0..8)
            .map(
                |k| if seed % 2 == 0 { spread[k] } else { std::f64::consts::FRAC_PI_2 - spread[k] },
            )
            .collect();
        let given = CosineSine { l0: a, l1: b, theta, r0: c, r1: d };
        let unitary = given.reconstruct();
        let found = cosine_sine(&unitary).unwrap();
        assert!((&found.reconstruct() - &unitary).max_abs() < CLOSE);
        assert!([&found.l0, &found.l1, &found.r0, &found.r1].into_iter().all(is_unitary));
    }
}

#[test]
fn singular_values_survive_any_scale_and_rank() {
    for rank in 0..=6 {
        for exponent in [-1000, -600, 0, 600, 1000] {
            let (u, v) = (random_unitary(8, 3), random_unitary(8, 4));
            let sigma: Vec<f64> =
                (0..8).map(|k| if k < rank { 1.5 - 0.2 * k as f64 } else { 0.0 }).collect();
            let d: Vec<C64> = sigma.iter().map(|&s| C64::new(s, 0.0)).collect();
            let plain = &(&u * &Matrix::from_diagonal(&d)) * &v.adjoint();
            let scale = 2.0_f64.powi(exponent);
            let found = svd(&plain.scaled(C64::new(scale, 0.0))).unwrap();
            assert!(is_unitary(&found.u) && is_unitary(&found.v));
            let pairs = found.sigma.iter().zip(&sigma);
            assert!(pairs.clone().all(|(a, b)| (a / scale - b).abs() < CLOSE), "{:?}", found.sigma);
            assert!(found.sigma.is_sorted_by(|a, b| a >= b));
        }
    }
}

#[test]
fn hermitian_eigenvalues_ascend() {
    let half = random(16, 5);
    let hermitian = &half + &half.adjoint();
    let eigen = eigen_hermitian(&hermitian).unwrap();
    assert!(is_unitary(&eigen.vectors));
    assert!(eigen.values.is_sorted());
    let d: Vec<C64> = eigen.values.iter().map(|&x| C64::new(x, 0.0)).collect();
    let back = &(&eigen.vectors * &Matrix::from_diagonal(&d)) * &eigen.vectors.adjoint();
    assert!((&back - &hermitian).max_abs() < CLOSE);
}

#[test]
fn what_is_not_finite_or_not_unitary_is_refused() {
    let mut bad = Matrix::identity(4);
    bad[(2, 1)] = C64::new(0.0, f64::INFINITY);
    let expected = Error::NotFinite { row: 2, col: 1 };
    assert_eq!(svd(&bad).unwrap_err(), expected);
    assert_eq!(eigen_hermitian(&bad).unwrap_err(), expected);
    assert_eq!(eigen_unitary(&bad).unwrap_err(), expected);
    assert_eq!(cosine_sine(&bad).unwrap_err(), expected);
    let mut jordan = Matrix::identity(4);
    jordan[(0, 1)] = C64::ONE;
    assert!(matches!(eigen_unitary(&jordan), Err(Error::NoConvergence { .. })));
    assert!(matches!(cosine_sine(&jordan), Err(Error::NoConvergence { .. })));
}
