//! Distances between operators of one size, in spectral norm.

use std::f64::consts::TAU;

use crate::decompose::{eigen_hermitian, eigen_unitary, svd};
use crate::norm::{spectral, unitarity_error};
use crate::{C64, Error, Matrix, Result};

/// Largest ‖U†U − I‖ of what is taken for a unitary: rounding of a product of
/// many gates. The formula for unitaries is then off by no more than this.
const UNITARY: f64 = 1e-12;

/// Accuracy of [`up_to_phase`] for other matrices, relative to ‖A‖ + ‖B‖: a
/// thousand times the rounding of their singular values.
const ACCURACY: f64 = 1e-12;

/// Phases tried at most; twenty usually do.
const MOST_PHASES: usize = 64;

/// Accuracy, relative to the distance itself, that is accepted when all phases
/// are used up. That many curves spread over the circle come so near even to
/// a norm that does not depend on the phase, as of `A = 3|0⟩⟨0|` and
/// `B = |0⟩⟨1|`. Distances far below ‖B‖ confine the phase and have the full
/// accuracy.
const COARSE: f64 = 1e-3;

/// ‖A − B‖.
///
/// # Errors
/// `NotFinite`, `NoConvergence`.
pub fn exact(a: &Matrix, b: &Matrix) -> Result<f64> {
    spectral(&(a - b))
}

/// The least ‖A − e^{iφ}B‖ over all phases φ.
///
/// Of two unitaries it is `2 sin(Δ/4)`, Δ being the shortest arc that holds
/// all eigenvalues of `A†B`. For other matrices the phase is searched for
/// until upper and lower bound agree to 1e-12 (‖A‖ + ‖B‖), or to one part in
/// a thousand where the norm hardly depends on the phase; the upper one is
/// returned.
///
/// # Errors
/// `NotFinite`, `NoConvergence`.
pub fn up_to_phase(a: &Matrix, b: &Matrix) -> Result<f64> {
    if a.is_square() && unitarity_error(a)? <= UNITARY && unitarity_error(b)? <= UNITARY {
        let arc = arc(&(&a.adjoint() * b))?;
        return Ok(2.0 * (arc / 4.0).sin());
    }
    least_over_phases(a, b)
}

/// The shortest arc that holds all eigenvalues of a unitary.
fn arc(unitary: &Matrix) -> Result<f64> {
    let trace = unitary.trace();
    let phase = if trace == C64::ZERO { C64::ONE } else { trace.conj() / trace.norm() };
    let turned = unitary.scaled(phase);
    // All eigenvalues within a right angle of 1: they are known from their
    // imaginary parts, the eigenvalues of a Hermitian matrix.
    if (&turned - &Matrix::identity(turned.rows())).frobenius() < 1.0 {
        let imaginary = (&turned - &turned.adjoint()).scaled(C64::new(0.0, -0.5));
        let values = eigen_hermitian(&imaginary)?.values;
        let ends = values.first().zip(values.last());
        return Ok(ends.map_or(0.0, |(low, high)| high.asin() - low.asin()));
    }
    let eigen = eigen_unitary(&turned)?;
    let mut angles: Vec<f64> = eigen.values.iter().map(|z| z.arg()).collect();
    angles.sort_by(f64::total_cmp);
    let between = angles.windows(2).map(|pair| pair[1] - pair[0]);
    let around = match (angles.first(), angles.last()) {
        (Some(first), Some(last)) => first + TAU - last,
        _ => TAU,
    };
    Ok(TAU - between.fold(around, f64::max))
}

/// The least ‖A − e^{iφ}B‖, bounded from both sides.
///
/// For unit vectors u, v the norm is at least |u†(A − e^{iφ}B)v| at every φ,
/// and equal to it where they are its singular vectors. So each φ that is
/// tried gives a curve below the norm; the next φ is where the highest of all
/// curves so far is lowest.
fn least_over_phases(a: &Matrix, b: &Matrix) -> Result<f64> {
    let size = spectral(a)? + spectral(b)?;
    let overlap: C64 = b.as_slice().iter().zip(a.as_slice()).map(|(b, a)| b.conj() * a).sum();
    let mut phase = overlap.arg();
    let mut curves: Vec<Curve> = Vec::new();
    let mut least = f64::INFINITY;
    let mut bound = 0.0;
    for _ in 0..MOST_PHASES {
        let found = svd(&(a - &b.scaled(C64::cis(phase))))?;
        least = least.min(found.sigma.first().copied().unwrap_or(0.0));
        curves.push(Curve::new(a, b, &found.u, &found.v));
        (phase, bound) = lowest(&curves);
        if least - bound <= ACCURACY * size {
            return Ok(least);
        }
    }
    if least - bound <= COARSE * least {
        return Ok(least);
    }
    Err(Error::NoConvergence { iterations: MOST_PHASES, residual: (least - bound) / size })
}

/// |α − e^{iφ}β| as a function of φ.
#[derive(Clone, Copy)]
struct Curve {
    alpha: C64,
    beta: C64,
}

impl Curve {
    /// With α = u†Av and β = u†Bv for the first columns of two matrices.
    fn new(a: &Matrix, b: &Matrix, left: &Matrix, right: &Matrix) -> Self {
        let column = |m: &Matrix| m.block(0, 0, m.rows(), 1);
        let (u, v) = (column(left).adjoint(), column(right));
        let form = |m: &Matrix| (&(&u * m) * &v)[(0, 0)];
        Curve { alpha: form(a), beta: form(b) }
    }

    fn at(&self, phase: f64) -> f64 {
        (self.alpha - C64::cis(phase) * self.beta).norm()
    }

    /// Where the curve is lowest.
    fn bottom(&self) -> f64 {
        (self.alpha * self.beta.conj()).arg()
    }

    fn slope(&self, phase: f64) -> f64 {
        let height = self.at(phase).max(f64::MIN_POSITIVE);
        self.alpha.norm() * self.beta.norm() * (phase - self.bottom()).sin() / height
    }

    /// Phases at which two curves meet: their squares differ by a sine wave.
    fn crossings(&self, other: &Curve) -> Option<[f64; 2]> {
        let level = |c: &Curve| c.alpha.norm_sqr() + c.beta.norm_sqr();
        let wave = |c: &Curve| 2.0 * c.alpha * c.beta.conj();
        let (step, wave) = (level(self) - level(other), wave(self) - wave(other));
        let ratio = step / wave.norm();
        let half = (ratio.abs() <= 1.0).then(|| ratio.acos())?;
        Some([wave.arg() + half, wave.arg() - half].map(|phase| self.meeting(other, phase)))
    }

    /// A crossing from one in rounding of squares: Newton steps on the
    /// difference of the curves themselves.
    fn meeting(&self, other: &Curve, mut phase: f64) -> f64 {
        for _ in 0..3 {
            let gap = |phase: f64| self.at(phase) - other.at(phase);
            let next = phase - gap(phase) / (self.slope(phase) - other.slope(phase));
            if gap(next).abs() < gap(phase).abs() {
                phase = next;
            }
        }
        phase
    }
}

/// Where the highest of the curves is lowest, and how high it is there.
fn lowest(curves: &[Curve]) -> (f64, f64) {
    let bottoms = curves.iter().map(Curve::bottom);
    let pairs = curves
        .iter()
        .enumerate()
        .flat_map(|(k, a)| curves[..k].iter().filter_map(move |b| a.crossings(b)).flatten());
    let highest = |phase: f64| curves.iter().map(|c| c.at(phase)).fold(0.0, f64::max);
    let candidates = bottoms.chain(pairs).map(|phase| (phase, highest(phase)));
    candidates.min_by(|a, b| a.1.total_cmp(&b.1)).unwrap_or((0.0, 0.0))
}

#[cfg(test)]
mod tests;
