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

#[test]
fn triangular_factors_of_any_shape() {
    for (rows, cols) in [(1, 1), (4, 4), (5, 3), (3, 5), (16, 16), (20, 7)] {
        let whole = random(rows.max(cols), 11);
        for m in [whole.block(0, 0, rows, cols), Matrix::zeros(rows, cols)] {
            let (q, r) = qr(&m).unwrap();
            assert!(is_unitary(&q) && (q.rows(), r.rows(), r.cols()) == (rows, rows, cols));
            assert!((&(&q * &r) - &m).max_abs() < CLOSE);
            for at in (0..cols).flat_map(|c| (0..rows).map(move |r| (r, c))) {
                assert!(at.0 < at.1 || (r[at].im == 0.0 && r[at].re >= 0.0));
                assert!(at.0 <= at.1 || r[at] == C64::ZERO);
            }
        }
    }
}

#[test]
fn hermitian_systems_are_solved_or_refused() {
    for n in [1, 2, 8, 32] {
        for scale in [1.0, 1e-200, 1e200] {
            let half = random(n, 21);
            let a = (&half + &half.adjoint()).scaled(C64::new(scale, 0.0));
            let x = random(n, 22);
            let found = solve_hermitian(&a, &(&a * &x)).unwrap();
            // The error of a solution grows with the condition number, about n² here.
            assert!((&found - &x).max_abs() < 1e-10, "{n} {scale}");
        }
    }
    let singular = Matrix::from_real(2, 2, &[1.0, 1.0, 1.0, 1.0]);
    let b = Matrix::from_real(2, 1, &[1.0, 2.0]);
    assert!(matches!(solve_hermitian(&singular, &b), Err(Error::NoConvergence { .. })));
    assert!(matches!(solve_hermitian(&singular, &random(3, 1)), Err(Error::BadDimension { .. })));
}

#[test]
fn singular_values_alone_are_those_of_the_decomposition() {
    for (rows, cols, seed) in [(1, 1, 1), (4, 4, 2), (6, 3, 3), (3, 6, 4), (32, 32, 5)] {
        let m = random(rows.max(cols), seed).block(0, 0, rows, cols);
        let (alone, whole) = (singular_values(&m).unwrap(), svd(&m).unwrap().sigma);
        assert_eq!(alone.len(), whole.len());
        assert!(alone.iter().zip(&whole).all(|(a, b)| (a - b).abs() < CLOSE));
    }
}

/// Matrices on which iterations are known to stumble: exact zeros, rank one,
/// repeated and graded values, tiny couplings.
#[test]
fn nasty_matrices_keep_orthonormal_factors() {
    let graded = |base: f64| move |r: usize, c: usize| base.powi((r * c) as i32 % 300);
    let real =
        |f: &dyn Fn(usize, usize) -> f64| Matrix::from_fn(8, 8, |r, c| C64::new(f(r, c), 0.0));
    let list = [
        Matrix::zeros(8, 8),
        real(&|_, _| 1.0),
        real(&|r, c| if r == 0 && c == 7 { 1.0 } else { 0.0 }),
        real(&|r, c| if c == r + 1 { 1.0 } else { 0.0 }),
        real(&|r, c| if r == c { 1.0 } else { 1e-17 }),
        real(&graded(1e-5)),
        real(&graded(1e5)),
        real(&|r, c| 1.0 / (r + c + 1) as f64),
        real(&|r, c| if r < 2 { f64::MIN_POSITIVE } else { (c as f64) * 1e300 }),
        Matrix::from_fn(8, 8, |r, c| C64::new(0.0, if (r / 2) == (c / 2) { 1.0 } else { 0.0 })),
    ];
    for m in &list {
        let found = svd(m).unwrap();
        let size = m.max_abs().max(f64::MIN_POSITIVE);
        assert!(is_unitary(&found.u) && is_unitary(&found.v), "{m:?}");
        let back = &found.reconstruct() - m;
        assert!(back.as_slice().iter().all(|z| z.norm() / size < CLOSE), "{m:?}");
    }
}

/// The unitaries that circuits are made of: transforms and Hadamard powers.
#[test]
fn cosine_sine_of_transforms() {
    for n in 1..=6 {
        let size = 1_usize << n;
        let root = (size as f64).sqrt().recip();
        let fourier = Matrix::from_fn(size, size, |r, c| {
            C64::from_polar(root, std::f64::consts::TAU * (r * c % size) as f64 / size as f64)
        });
        let hadamard = Matrix::from_fn(size, size, |r, c| {
            C64::new(if (r & c).count_ones() % 2 == 0 { root } else { -root }, 0.0)
        });
        let noise = random(size, n as u64).scaled(C64::new(1e-9, 0.0));
        let noisy = norm::nearest_unitary(&(&hadamard + &noise)).unwrap();
        let blocks = norm::nearest_unitary(&(&Matrix::identity(size) + &noise)).unwrap();
        for unitary in [fourier, hadamard, noisy, blocks] {
            let cs = cosine_sine(&unitary).unwrap();
            assert!([&cs.l0, &cs.l1, &cs.r0, &cs.r1].into_iter().all(is_unitary));
            assert!((&cs.reconstruct() - &unitary).max_abs() < CLOSE);
            assert!(cs.theta.iter().all(|t| (0.0..=std::f64::consts::FRAC_PI_2).contains(t)));
        }
    }
}
