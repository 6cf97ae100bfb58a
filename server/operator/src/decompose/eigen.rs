//! Eigenvalues and orthonormal eigenvectors of Hermitian and of unitary
//! matrices.

use nalgebra::Matrix3;

use super::{accept, accept_orthonormal, from_library, normalised, times_power_of_two, to_library};
use crate::{C64, Error, Matrix, Result};

/// `A = V diag(values) V†` of a Hermitian matrix.
#[derive(Debug, Clone)]
pub struct Eigen {
    /// Eigenvalues, ascending.
    pub values: Vec<f64>,
    /// Orthonormal eigenvectors, one a column.
    pub vectors: Matrix,
}

/// `U = V diag(values) V†` of a unitary matrix.
#[derive(Debug, Clone)]
pub struct UnitaryEigen {
    /// Eigenvalues, of modulus 1.
    pub values: Vec<C64>,
    /// Orthonormal eigenvectors, one a column, however degenerate.
    pub vectors: Matrix,
}

/// Eigenvalues and vectors of the Hermitian part of a square matrix.
///
/// # Errors
/// `NotFinite`; `NoConvergence` when the factors do not give it back.
pub fn eigen_hermitian(m: &Matrix) -> Result<Eigen> {
    assert!(m.is_square(), "eigenvalues of a square matrix");
    let (scaled, exponent) = normalised(m)?;
    let hermitian = (&scaled + &scaled.adjoint()).scaled(C64::new(0.5, 0.0));
    let failed = |_| Error::NoConvergence { iterations: 0, residual: f64::INFINITY };
    let found = to_library(&hermitian).self_adjoint_eigen(faer::Side::Lower).map_err(failed)?;
    let values: Vec<f64> = found.S().column_vector().iter().map(|z: &C64| z.re).collect();
    let vectors = from_library(found.U());
    let diagonal: Vec<C64> = values.iter().map(|&x| C64::new(x, 0.0)).collect();
    let back = &(&vectors * &Matrix::from_diagonal(&diagonal)) * &vectors.adjoint();
    accept((&back - &hermitian).frobenius(), hermitian.frobenius().max(1.0))?;
    accept_orthonormal(&vectors)?;
    let values = values.into_iter().map(|x| times_power_of_two(x, exponent)).collect();
    Ok(Eigen { values, vectors })
}

/// The Hermitian combination `e^{iω} U + h.c.` has the eigenvectors of `U`
/// unless two eigenphases lie symmetrically about −ω: a phase that no exact
/// fraction of π meets.
const GENERIC_PHASE: f64 = 0.7321;

/// Most Jacobi sweeps; two or three follow a good start, ten a bad one.
const SWEEPS: usize = 40;

/// Off-diagonal entries below this are rounding of numbers of modulus one.
const ROUNDING: f64 = 1e-16;

/// Off-diagonal Frobenius norm, over √n, that the products of a converged
/// start leave by rounding: sweeping it would remove nothing.
const DONE: f64 = 1e-14;

/// Below this, what is left off the diagonal and no longer halves is the
/// rounding of the sweeps themselves.
const PLATEAU: f64 = 1e-12;

/// Eigenvalues and orthonormal vectors of a unitary matrix.
///
/// Starts from the vectors of one Hermitian combination and finishes with
/// Jacobi rotations on the unitary itself (Cardoso, Souloumiac 1996), which
/// need no notion of which eigenvalues are equal.
///
/// # Errors
/// `NotFinite`; `NoConvergence` when the factors do not give it back, as for
/// a matrix that is not normal.
pub fn eigen_unitary(m: &Matrix) -> Result<UnitaryEigen> {
    m.check_finite()?;
    let turned = m.scaled(C64::cis(GENERIC_PHASE));
    let mut vectors = eigen_hermitian(&turned)?.vectors;
    let mut inside = &(&vectors.adjoint() * m) * &vectors;
    let mut left = off_diagonal(&inside);
    for _ in 0..SWEEPS {
        if left <= DONE * (m.rows() as f64).sqrt() {
            break;
        }
        sweep(&mut inside, &mut vectors);
        let now = off_diagonal(&inside);
        if now >= 0.5 * left && now < PLATEAU {
            break;
        }
        left = now;
    }
    let values: Vec<C64> = inside.diagonal().iter().map(|z| z / z.norm()).collect();
    let back = &(&vectors * &Matrix::from_diagonal(&values)) * &vectors.adjoint();
    accept((&back - m).frobenius(), (m.rows() as f64).sqrt().max(1.0))?;
    Ok(UnitaryEigen { values, vectors })
}

/// Frobenius norm of the part off the diagonal.
fn off_diagonal(m: &Matrix) -> f64 {
    let part = |c: usize| m.column(c).iter().enumerate().filter(move |(r, _)| *r != c);
    (0..m.cols()).flat_map(part).map(|(_, z)| z.norm_sqr()).sum::<f64>().sqrt()
}

/// One rotation in the plane of each pair of columns.
fn sweep(inside: &mut Matrix, vectors: &mut Matrix) {
    let n = inside.rows();
    for p in 0..n {
        for q in p + 1..n {
            if let Some((cosine, sine)) = rotation(inside, p, q) {
                turn_columns(vectors, p, q, cosine, sine);
                turn_columns(inside, p, q, cosine, sine);
                turn_rows(inside, p, q, cosine, sine);
            }
        }
    }
}

/// The rotation that leaves least off the diagonal in rows and columns `p`
/// and `q`: the dominant eigenvector of a real 3×3 form. `None` where there
/// is nothing to remove.
fn rotation(m: &Matrix, p: usize, q: usize) -> Option<(f64, C64)> {
    let (pq, qp) = (m[(p, q)], m[(q, p)]);
    if pq.norm() + qp.norm() < ROUNDING {
        return None;
    }
    let h = [m[(p, p)] - m[(q, q)], pq + qp, C64::I * (qp - pq)];
    let size = h.iter().map(|z| z.norm()).fold(0.0, f64::max);
    let h = h.map(|z| z / size);
    let form = Matrix3::from_fn(|i, j| (h[i].conj() * h[j]).re);
    let eigen = form.symmetric_eigen();
    let axis = eigen.eigenvectors.column(eigen.eigenvalues.imax());
    let sign = if axis[0] < 0.0 { -1.0 } else { 1.0 };
    let cosine = (0.5 * (sign * axis[0] + 1.0)).sqrt();
    Some((cosine, C64::new(axis[1], -axis[2]) * (sign / (2.0 * cosine))))
}

fn turn_columns(m: &mut Matrix, p: usize, q: usize, cosine: f64, sine: C64) {
    for r in 0..m.rows() {
        let (a, b) = (m[(r, p)], m[(r, q)]);
        m[(r, p)] = a * cosine + b * sine;
        m[(r, q)] = b * cosine - a * sine.conj();
    }
}

fn turn_rows(m: &mut Matrix, p: usize, q: usize, cosine: f64, sine: C64) {
    for c in 0..m.cols() {
        let (a, b) = (m[(p, c)], m[(q, c)]);
        m[(p, c)] = a * cosine + b * sine.conj();
        m[(q, c)] = b * cosine - a * sine;
    }
}
