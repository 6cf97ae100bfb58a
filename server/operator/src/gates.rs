//! The matrices of gates.

use std::f64::consts::{FRAC_1_SQRT_2, FRAC_PI_2, FRAC_PI_4, PI};
use std::sync::Arc;

use crate::decompose::eigen_unitary;
use crate::{Budget, C64, Definition, Error, Gate, Matrix, Result, evaluate, norm};

/// Largest ‖M†M − I‖ of what a broken power is taken of: roots are found by
/// eigenphases, which only a unitary has.
const UNITARY: f64 = 1e-9;

/// Eigenphases this near to −π are taken for +π, so that rounding does not
/// choose the branch of a root of −1.
const BRANCH_MARGIN: f64 = 1e-9;

/// Most wires of an operator that a broken power is taken of: its eigenvectors
/// take some `8ⁿ` operations, a few tenths of a second at this size, which
/// nothing can interrupt.
const BROKEN_WIRES: usize = 8;

/// Operators of definitions on at most this many wires are kept: one MiB each.
const KEPT_WIRES: usize = 8;

/// The matrix of a gate without its controls, `2ᵏ × 2ᵏ` for `k` operands.
///
/// A definition is evaluated once and kept.
///
/// # Errors
/// `TooLarge`, `Stopped`; `BadDimension` for a stand-in of no number of
/// qubits; `NotUnitary` for a broken power of a stand-in.
pub fn gate_matrix(gate: &Gate, budget: &Budget) -> Result<Arc<Matrix>> {
    budget.admit(gate.wires())?;
    match gate {
        Gate::Dense(matrix) => match matrix.qubits() {
            Some(_) => Ok(matrix.clone()),
            None => Err(Error::BadDimension { rows: matrix.rows(), cols: matrix.cols() }),
        },
        Gate::Call(definition) => definition_matrix(definition, budget),
        Gate::Inverse(inner) => Ok(Arc::new(gate_matrix(inner, budget)?.adjoint())),
        Gate::Power(inner, exponent) => power(&*gate_matrix(inner, budget)?, *exponent, budget),
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
    let passing = matches!(found, Err(Error::Stopped | Error::TooLarge { .. }));
    if !passing && definition.circuit.wires <= KEPT_WIRES {
        let _ = definition.operator.set(found.clone());
    }
    found
}

/// The exponent as a whole number, if it is one.
pub(crate) fn whole(exponent: f64) -> Option<i64> {
    /// Past this, neighbouring numbers are more than 1 apart.
    const EXACT: f64 = 9_007_199_254_740_992.0;
    (exponent.fract() == 0.0 && exponent.abs() <= EXACT).then_some(exponent as i64)
}

/// A whole power by squaring, any other by eigenphases in (−π, π].
fn power(base: &Matrix, exponent: f64, budget: &Budget) -> Result<Arc<Matrix>> {
    match whole(exponent) {
        Some(times) => repeated(base, times, budget).map(Arc::new),
        None => broken_power(base, exponent).map(Arc::new),
    }
}

/// A matrix many times over, or its adjoint for negative numbers.
fn repeated(base: &Matrix, times: i64, budget: &Budget) -> Result<Matrix> {
    let mut square = if times < 0 { base.adjoint() } else { base.clone() };
    let mut product = Matrix::identity(base.rows());
    let mut left = times.unsigned_abs();
    while left > 0 {
        budget.poll()?;
        if left & 1 == 1 {
            product = &product * &square;
        }
        left >>= 1;
        if left > 0 {
            square = &square * &square;
        }
    }
    Ok(product)
}

fn broken_power(base: &Matrix, exponent: f64) -> Result<Matrix> {
    let wires = base.qubits().unwrap_or_default();
    if wires > BROKEN_WIRES {
        return Err(Error::TooLarge { wires, limit: BROKEN_WIRES });
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
    let (o, l) = (C64::ZERO, C64::ONE);
    match *gate {
        Gate::Phase(angle) => Matrix::from_diagonal(&[C64::cis(angle)]),
        Gate::Swap => Matrix::from_rows(4, 4, &[l, o, o, o, o, o, l, o, o, l, o, o, o, o, o, l]),
        _ => match one_qubit(gate) {
            Some(rows) => Matrix::from_rows(2, 2, rows.as_flattened()),
            None => Matrix::identity(1 << gate.wires()),
        },
    }
}

/// The rows of a gate of the standard on one qubit, exact phase included;
/// `None` for all others.
///
/// These are the operators that the standard's text defines, `U` of version
/// 3.1 with its factor `e^{iθ/2}`.
pub fn one_qubit(gate: &Gate) -> Option<[[C64; 2]; 2]> {
    let (o, l, i) = (C64::ZERO, C64::ONE, C64::I);
    let diagonal = |a: C64, d: C64| [[a, o], [o, d]];
    Some(match *gate {
        Gate::Id => diagonal(l, l),
        Gate::X => [[o, l], [l, o]],
        Gate::Y => [[o, -i], [i, o]],
        Gate::Z => diagonal(l, -l),
        Gate::H => {
            let s = C64::new(FRAC_1_SQRT_2, 0.0);
            [[s, s], [s, -s]]
        }
        Gate::S => diagonal(l, i),
        Gate::Sdg => diagonal(l, -i),
        Gate::T => diagonal(l, C64::cis(FRAC_PI_4)),
        Gate::Tdg => diagonal(l, C64::cis(-FRAC_PI_4)),
        Gate::Sx => {
            let (a, b) = (C64::new(0.5, 0.5), C64::new(0.5, -0.5));
            [[a, b], [b, a]]
        }
        Gate::P(angle) => diagonal(l, C64::cis(angle)),
        Gate::Rx(angle) => turn(angle, -FRAC_PI_2, FRAC_PI_2, 0.0),
        Gate::Ry(angle) => turn(angle, 0.0, 0.0, 0.0),
        Gate::Rz(angle) => diagonal(C64::cis(-0.5 * angle), C64::cis(0.5 * angle)),
        Gate::U(theta, phi, lambda) => turn(theta, phi, lambda, 0.5 * theta),
        _ => return None,
    })
}

/// `e^{iδ} [[cos θ/2, −e^{iλ} sin θ/2], [e^{iφ} sin θ/2, e^{i(φ+λ)} cos θ/2]]`.
fn turn(theta: f64, phi: f64, lambda: f64, delta: f64) -> [[C64; 2]; 2] {
    let (s, c) = (0.5 * theta).sin_cos();
    let e = |angle: f64| C64::cis(angle + delta);
    [[e(0.0) * c, -e(lambda) * s], [e(phi) * s, e(phi + lambda) * c]]
}
