//! Properties of matrices.

use operator::{C64, Matrix, decompose, norm};

use super::{Decided, Measured, Reason};
use crate::model::{MatrixDef, Outcome, Property};

/// How far a literal may be from a property, relative to its norm where that
/// exceeds one. Entries written with all digits of a double lose 1e-15; what
/// is rounded by hand to nine digits or fewer is worth telling.
pub(super) const TOLERANCE: f64 = 1e-10;

/// The distance of a matrix from a property, in spectral norm.
pub(super) fn measure(def: &MatrixDef, property: Property) -> Decided {
    let name = &def.name;
    let matrix = def.matrix.as_deref();
    let matrix = matrix.ok_or_else(|| Reason(format!("the entries of `{name}` are not known")))?;
    if !matrix.is_square() && property != Property::Real {
        return Err("the matrix is not square".into());
    }
    let size = norm::spectral(matrix)?;
    let error = match property {
        Property::Unitary => norm::unitarity_error(matrix)?,
        Property::Hermitian => norm::hermiticity_error(matrix)?,
        Property::Symmetric => norm::spectral(&(matrix - &matrix.transpose()))?,
        Property::Diagonal => {
            norm::spectral(&(matrix - &Matrix::from_diagonal(&matrix.diagonal())))?
        }
        Property::Real => {
            let imaginary = |r: usize, c: usize| C64::new(matrix[(r, c)].im, 0.0);
            norm::spectral(&Matrix::from_fn(matrix.rows(), matrix.cols(), imaginary))?
        }
        Property::Positive => {
            let least = decompose::eigen_hermitian(matrix)?.values;
            let least = least.into_iter().fold(f64::INFINITY, f64::min);
            norm::hermiticity_error(matrix)?.max(-least)
        }
    };
    let tolerance = TOLERANCE * size.max(1.0);
    let mut measured = Measured::decided(error.max(0.0), tolerance);
    measured.norm = Some(size);
    if property == Property::Unitary && measured.outcome == Outcome::Broken {
        let (column, _) = norm::worst_column(matrix);
        let distance = norm::distance_to_unitary(matrix)?;
        measured.note =
            Some(format!("column {column} is worst; the nearest unitary is {distance:.3e} away"));
    }
    Ok(measured)
}
