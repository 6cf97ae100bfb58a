//! The matrices of gates.

use std::f64::consts::{FRAC_PI_2, FRAC_PI_4, PI};
use std::sync::Arc;

use crate::decompose::eigen_unitary;
use crate::{Budget, C64, Definition, Error, Gate, Matrix, Result, evaluate, norm};

/// Largest ‖M†M − I‖ of what a broken power is taken of: roots are found by
/// eigenphases, which only a unitary has.
const UNITARY: f64 = 1e-9;

/// Eigenphases this near to −π are taken for +π, so that rounding does not
/// choose the branch of a root of −1.
const BRANCH_MARGIN: f64 = 1e-9;

/// The matrix of a gate without its controls, `2ᵏ × 2ᵏ` for `k` operands.
///
/// A definition is evaluated once and kept.
///
/// # Errors
/// `TooLarge`, `Stopped`; `NotUnitary` for a broken power of a stand-in.
pub fn gate_matrix(gate: &Gate, budget: &Budget) -> Result<Arc<Matrix>> {
    budget.admit(gate.wires())?;
    match gate {
        Gate::Dense(matrix) => Ok(matrix.clone()),
        Gate::Call(definition) => definition_matrix(definition, budget),
        Gate::Inverse(inner) => Ok(Arc::new(gate_matrix(inner, budget)?.adjoint())),
        Gate::Power(inner, exponent) => {
            Ok(Arc::new(power(&*gate_matrix(inner, budget)?, *exponent, budget)?))
        }
        plain => Ok(Arc::new(plain_matrix(plain))),
    }
}

/// The matrix of a definition, from its cache if it is there. What depends
/// on the budget is not kept.
fn definition_matrix(definition: &Definition, budget: &Budget) -> Result<Arc<Matrix>> {
    if let Some(kept) = definition.operator.get() {
        return kept.clone();
    }
    let found = evaluate(&definition.circuit, budget).map(Arc::new);
    if !matches!(found, Err(Error::Stopped | Error::TooLarge { .. })) {
        let _ = definition.operator.set(found.clone());
    }
    found
}

/// A whole power by squaring, any other by eigenphases in (−π, π].
fn power(base: &Matrix, exponent: f64, budget: &Budget) -> Result<Matrix> {
    if exponent.fract() == 0.0 && exponent.abs() < u64::MAX as f64 {
        let mut square = if exponent < 0.0 { base.adjoint() } else { base.clone() };
        let mut product = Matrix::identity(base.rows());
        let mut left = exponent.abs() as u64;
        while left > 0 {
            budget.poll()?;
            if left & 1 == 1 {
                product = &product * &square;
            }
            square = &square * &square;
            left >>= 1;
        }
        return Ok(product);
    }
    let residual = norm::unitarity_error(base)?;
    if residual > UNITARY {
        return Err(Error::NotUnitary { residual, tolerance: UNITARY });
    }
    let eigen = eigen_unitary(base)?;
    let root = |z: &C64| {
        let phase = z.arg();
        let phase = if phase < -PI + BRANCH_MARGIN { phase + 2.0 * PI } else { phase };
        C64::cis(exponent * phase)
    };
    let roots: Vec<C64> = eigen.values.iter().map(root).collect();
    Ok(&(&eigen.vectors * &Matrix::from_diagonal(&roots)) * &eigen.vectors.adjoint())
}

/// Gates with a matrix of their own; identity for what has no wires.
fn plain_matrix(gate: &Gate) -> Matrix {
    let (o, l, i) = (C64::ZERO, C64::ONE, C64::I);
    match *gate {
        Gate::Phase(angle) => Matrix::from_diagonal(&[C64::cis(angle)]),
        Gate::X => Matrix::from_rows(2, 2, &[o, l, l, o]),
        Gate::Y => Matrix::from_rows(2, 2, &[o, -i, i, o]),
        Gate::Z => Matrix::from_diagonal(&[l, -l]),
        Gate::H => {
            let s = C64::new(std::f64::consts::FRAC_1_SQRT_2, 0.0);
            Matrix::from_rows(2, 2, &[s, s, s, -s])
        }
        Gate::S => Matrix::from_diagonal(&[l, i]),
        Gate::Sdg => Matrix::from_diagonal(&[l, -i]),
        Gate::T => Matrix::from_diagonal(&[l, C64::cis(FRAC_PI_4)]),
        Gate::Tdg => Matrix::from_diagonal(&[l, C64::cis(-FRAC_PI_4)]),
        Gate::Sx => {
            let (a, b) = (C64::new(0.5, 0.5), C64::new(0.5, -0.5));
            Matrix::from_rows(2, 2, &[a, b, b, a])
        }
        Gate::P(angle) => Matrix::from_diagonal(&[l, C64::cis(angle)]),
        Gate::Rx(angle) => turn(angle, -FRAC_PI_2, FRAC_PI_2, 0.0),
        Gate::Ry(angle) => turn(angle, 0.0, 0.0, 0.0),
        Gate::Rz(angle) => Matrix::from_diagonal(&[C64::cis(-0.5 * angle), C64::cis(0.5 * angle)]),
        Gate::U(theta, phi, lambda) => turn(theta, phi, lambda, 0.5 * theta),
        Gate::Swap => Matrix::from_rows(4, 4, &[l, o, o, o, o, o, l, o, o, l, o, o, o, o, o, l]),
        _ => Matrix::identity(1 << gate.wires()),
    }
}

/// `e^{iδ} [[cos θ/2, −e^{iλ} sin θ/2], [e^{iφ} sin θ/2, e^{i(φ+λ)} cos θ/2]]`.
fn turn(theta: f64, phi: f64, lambda: f64, delta: f64) -> Matrix {
    let (s, c) = (0.5 * theta).sin_cos();
    let e = |angle: f64| C64::cis(angle + delta);
    Matrix::from_rows(2, 2, &[e(0.0) * c, -e(lambda) * s, e(phi) * s, e(phi + lambda) * c])
}
