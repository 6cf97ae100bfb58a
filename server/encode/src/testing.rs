//! Matrices and checks that the tests of this crate share.

use operator::{Budget, C64, Circuit, Matrix};

/// A Haar-random unitary: Gram–Schmidt of complex Gaussian columns.
pub(crate) fn haar(n: usize, seed: u64) -> Matrix {
    let mut random = fastrand::Rng::with_seed(seed);
    let mut gauss = || {
        let radius = (-2.0 * (1.0 - random.f64()).ln()).sqrt();
        C64::from_polar(radius, std::f64::consts::TAU * random.f64())
    };
    let mut columns: Vec<Vec<C64>> = Vec::new();
    while columns.len() < n {
        let mut column: Vec<C64> = (0..n).map(|_| gauss()).collect();
        for _ in 0..2 {
            for other in &columns {
                let overlap: C64 = other.iter().zip(&column).map(|(a, b)| a.conj() * b).sum();
                column.iter_mut().zip(other).for_each(|(z, o)| *z -= overlap * o);
            }
        }
        let norm = column.iter().map(|z| z.norm_sqr()).sum::<f64>().sqrt();
        columns.push(column.into_iter().map(|z| z / norm).collect());
    }
    Matrix::from_fn(n, n, |r, c| columns[c][r])
}

/// The operator of a circuit.
pub(crate) fn matrix_of(circuit: &Circuit) -> Matrix {
    operator::evaluate(circuit, &Budget::default()).unwrap()
}

/// Largest entry of the difference.
pub(crate) fn gap(a: &Matrix, b: &Matrix) -> f64 {
    (a - b).max_abs()
}

/// CX in a circuit.
pub(crate) fn cx_count(circuit: &Circuit) -> usize {
    circuit.steps.iter().filter(|s| !s.controls.is_empty()).count()
}

/// The discrete Fourier transform, entries e^{2πi jk/N}/√N.
pub(crate) fn dft(n: usize) -> Matrix {
    let root = |k: usize| C64::cis(std::f64::consts::TAU * (k % n) as f64 / n as f64);
    Matrix::from_fn(n, n, |r, c| root(r * c) / (n as f64).sqrt())
}

/// The permutation matrix that sends basis state `c` to `image(c)`.
pub(crate) fn permutation(n: usize, image: impl Fn(usize) -> usize) -> Matrix {
    Matrix::from_fn(n, n, |r, c| if image(c) == r { C64::ONE } else { C64::ZERO })
}
