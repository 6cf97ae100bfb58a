//! Matrices and checks that the tests of this crate share.

use operator::{C64, Circuit, Gate, Matrix};

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

/// The matrix of a circuit made of one-qubit gates, CX and phases.
pub(crate) fn matrix_of(circuit: &Circuit) -> Matrix {
    let n = 1 << circuit.wires;
    let mut m = Matrix::identity(n);
    for step in &circuit.steps {
        if let Gate::Phase(a) = step.gate {
            m = m.scaled(C64::cis(a));
            continue;
        }
        let g = one(&step.gate);
        let bit = |w: usize| n >> (w + 1);
        let t = bit(step.targets[0]);
        for c in 0..n {
            for r in (0..n).filter(|r| r & t == 0) {
                if step.controls.iter().any(|k| (r & bit(k.wire) != 0) != k.on) {
                    continue;
                }
                let (a, b) = (m[(r, c)], m[(r | t, c)]);
                m[(r, c)] = g[(0, 0)] * a + g[(0, 1)] * b;
                m[(r | t, c)] = g[(1, 0)] * a + g[(1, 1)] * b;
            }
        }
    }
    m
}

fn one(gate: &Gate) -> Matrix {
    let (o, l) = (C64::ZERO, C64::ONE);
    let u = |t: f64, p: f64, q: f64, d: f64| {
        let (s, c) = (t / 2.0).sin_cos();
        let e = C64::cis;
        Matrix::from_rows(2, 2, &[e(d) * c, -e(d + q) * s, e(d + p) * s, e(d + p + q) * c])
    };
    use std::f64::consts::*;
    match *gate {
        Gate::Id => Matrix::identity(2),
        Gate::X => Matrix::from_rows(2, 2, &[o, l, l, o]),
        Gate::Y => Matrix::from_rows(2, 2, &[o, -C64::I, C64::I, o]),
        Gate::Z => u(0.0, 0.0, PI, 0.0),
        Gate::H => u(FRAC_PI_2, 0.0, PI, 0.0),
        Gate::S => u(0.0, 0.0, FRAC_PI_2, 0.0),
        Gate::Sdg => u(0.0, 0.0, -FRAC_PI_2, 0.0),
        Gate::T => u(0.0, 0.0, FRAC_PI_4, 0.0),
        Gate::Tdg => u(0.0, 0.0, -FRAC_PI_4, 0.0),
        Gate::Sx => u(FRAC_PI_2, -FRAC_PI_2, FRAC_PI_2, FRAC_PI_4),
        Gate::P(a) => u(0.0, 0.0, a, 0.0),
        Gate::Rx(a) => u(a, -FRAC_PI_2, FRAC_PI_2, 0.0),
        Gate::Ry(a) => u(a, 0.0, 0.0, 0.0),
        Gate::Rz(a) => u(0.0, 0.0, a, -a / 2.0),
        Gate::U(a, b, c) => u(a, b, c, a / 2.0),
        _ => panic!("{gate:?}"),
    }
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
