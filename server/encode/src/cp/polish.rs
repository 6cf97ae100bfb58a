//! Lowering the scale of a decomposition without changing its rank.
//!
//! Decompositions of one rank often form whole families, and their scale
//! `Σ_r Π_k ‖A_{k,r}‖` differs a lot within one. This walks downhill inside the
//! family: the gradient of a smooth stand-in for the scale, projected on the
//! directions that leave the sum unchanged to first order, then a few
//! Gauss–Newton steps back to the exact sum.

use operator::{Budget, C64, Matrix};

use super::model::{Factors, norm};
use super::solve::gauss_newton;
use super::spectral_norm;
use super::tensor::Basis;

/// Order `2q` of the Schatten norm that stands in for the spectral norm,
/// which has no gradient at unitary matrices. At `q = 8` it is at most
/// `2^{1/16}`, 4 %, above.
const SCHATTEN_HALF: i32 = 8;
/// Directions in which the sum changes by less than the square root of this
/// count as leaving it unchanged.
const FLAT: f64 = 1e-6;
/// Error, relative to the target, that the way back has to reach.
const EXACT: f64 = 1e-13;
/// Most Gauss–Newton steps of one way back.
const BACK_STEPS: usize = 8;
/// Walks end when a step gains less than this share of the scale.
const LEAST_GAIN: f64 = 1e-5;
/// Shortest stride tried, as a share of the factors' norm.
const LEAST_STRIDE: f64 = 1e-4;
/// Longest stride: half the norm of all factors.
const MOST_STRIDE: f64 = 0.5;

/// Walks for at most `strides` strides; the sum stays within [`EXACT`].
/// Returns the number of linear systems solved as well.
pub fn polish(
    mut factors: Factors<C64>,
    target: &[C64],
    basis: Basis,
    strides: usize,
    budget: &Budget,
) -> operator::Result<(Factors<C64>, usize)> {
    factors.balance();
    let (mut scale, mut gradient) = smooth_scale(&factors, basis);
    let (mut stride, mut solved) = (0.1, 0);
    for _ in 0..strides {
        budget.poll()?;
        let Some(direction) = flat_part(&factors, &gradient) else { break };
        let length = norm(&direction);
        if length * MOST_STRIDE * norm(&factors.data) < LEAST_GAIN * scale {
            break;
        }
        let reach = stride * norm(&factors.data) / length;
        let mut moved = factors.clone();
        moved.data.iter_mut().zip(&direction).for_each(|(x, d)| *x -= d * reach);
        let back = gauss_newton(moved, target, FLAT, BACK_STEPS, budget)?;
        solved += back.steps + 1;
        let (now, slope) = smooth_scale(&back.factors, basis);
        if back.error <= EXACT && now < scale {
            let gain = (scale - now) / scale;
            (factors, scale, gradient) = (back.factors, now, slope);
            stride = (1.5 * stride).min(MOST_STRIDE);
            if gain < LEAST_GAIN {
                break;
            }
        } else {
            stride *= 0.4;
            if stride < LEAST_STRIDE {
                break;
            }
        }
    }
    Ok((factors, solved))
}

/// The part of a vector in the (nearly) null space of the Jacobian.
fn flat_part(factors: &Factors<C64>, vector: &[C64]) -> Option<Vec<C64>> {
    let mut normal = factors.normal();
    normal.shift(FLAT);
    if !normal.factor() {
        return None;
    }
    let mut out: Vec<C64> = vector.iter().map(|z| z * FLAT).collect();
    normal.solve_factored(&mut out);
    Some(out)
}

/// `Σ_r Π_k s(A_{k,r})` with `s` the Schatten norm, and its gradient.
fn smooth_scale(factors: &Factors<C64>, basis: Basis) -> (f64, Vec<C64>) {
    let mut gradient = vec![C64::ZERO; factors.data.len()];
    let mut total = 0.0;
    for r in 0..factors.rank {
        let parts: Vec<(f64, Matrix)> =
            (0..factors.modes).map(|k| schatten(&basis.matrix(factors.vector(k, r)))).collect();
        let term: f64 = parts.iter().map(|(s, _)| s).product();
        total += term;
        for (k, (s, slope)) in parts.iter().enumerate() {
            let share = if *s > 0.0 { 2.0 * term / s } else { 0.0 };
            let at = factors.at(k, r);
            let coefficients = basis.coefficients(slope);
            gradient[at..].iter_mut().zip(coefficients).for_each(|(g, c)| *g = c * share);
        }
    }
    (total, gradient)
}

/// The Schatten norm `(tr (A†A)^q)^{1/2q}` and its gradient
/// `A (A†A)^{q−1} (tr (A†A)^q)^{1/2q − 1}`.
fn schatten(a: &Matrix) -> (f64, Matrix) {
    let size = spectral_norm(a);
    if size == 0.0 {
        return (0.0, Matrix::zeros(2, 2));
    }
    let unit = a.scaled(C64::from(1.0 / size));
    let gram = &unit.adjoint() * &unit;
    let power = (1..SCHATTEN_HALF - 1).fold(gram.clone(), |power, _| &power * &gram);
    let trace = (&power * &gram).trace().re;
    let norm = trace.powf(0.5 / f64::from(SCHATTEN_HALF));
    (size * norm, (&unit * &power).scaled(C64::from(norm / trace)))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_gradient_is_that_of_the_scale() {
        let mut rng = fastrand::Rng::with_seed(8);
        for basis in [Basis::Hermitian, Basis::Real] {
            let factors = Factors::<C64>::random(3, 2, 1.0, &mut rng);
            let way = Factors::<C64>::random(3, 2, 1.0, &mut rng);
            let along = |t: f64| {
                let mut moved = factors.clone();
                moved.data.iter_mut().zip(&way.data).for_each(|(x, d)| *x += d * t);
                smooth_scale(&moved, basis).0
            };
            let (_, gradient) = smooth_scale(&factors, basis);
            let slope: f64 = gradient.iter().zip(&way.data).map(|(g, d)| (g.conj() * d).re).sum();
            // Central difference: error of order step², rounding over step.
            let step = 1e-5;
            let measured = (along(step) - along(-step)) / (2.0 * step);
            assert!((slope - measured).abs() < 1e-7, "{slope} {measured}");
        }
    }
}
