//! Pauli strings and rotations about them, up to a global phase.

use super::{Portrait, phase_between};
use crate::{C64, Matrix};

/// e^{iγ} times a Pauli string.
pub(super) fn string(matrix: &Matrix, wires: usize, tolerance: f64) -> Option<Portrait> {
    // Column 0 of a string has one entry, in the row whose bits are its X
    // and Y letters.
    let flips = (0..matrix.rows()).find(|&r| matrix[(r, 0)].norm() > tolerance)?;
    let letters = letters(matrix, wires, flips, tolerance);
    let phase = phase_between(matrix, &operator(&letters), tolerance)?;
    Some(Portrait::Pauli { phase, letters })
}

/// e^{iγ} exp(−iφP) = e^{iγ} (cos φ − i sin φ P) for a string P of two letters
/// or more; with one it is a gate on one wire.
pub(super) fn rotation(matrix: &Matrix, wires: usize, tolerance: f64) -> Option<Portrait> {
    let flips = (1..matrix.rows()).find(|&r| matrix[(r, 0)].norm() > tolerance).unwrap_or(0);
    let letters = letters(matrix, wires, flips, tolerance);
    if letters.chars().filter(|&letter| letter != 'I').count() < 2 {
        return None;
    }
    let string = operator(&letters);
    let size = matrix.rows() as f64;
    let even = matrix.trace() / size;
    // tr(P†M), entry by entry.
    let pairs = string.as_slice().iter().zip(matrix.as_slice());
    let odd = pairs.map(|(p, m)| p.conj() * m).sum::<C64>() / size;
    // Both coefficients share the phase; a real one of I is given none.
    let lead = if even.norm() > tolerance { even / even.norm() } else { return None };
    let turn = if even.im.abs() <= tolerance { C64::ONE } else { lead };
    let cosine = (even * turn.conj()).re;
    let sine = (C64::I * odd * turn.conj()).re;
    let angle = sine.atan2(cosine);
    let phase = turn.arg();
    let (even, odd) = (turn * angle.cos(), turn * C64::new(0.0, -angle.sin()));
    let expected = &Matrix::identity(matrix.rows()).scaled(even) + &string.scaled(odd);
    let same = (matrix - &expected).max_abs() <= tolerance;
    same.then_some(Portrait::Rotation { phase, angle, letters })
}

/// Letters of the string in a matrix with X and Y at the bits of `flips`, if
/// there is one, told from its columns 0 and `2ᵏ`.
fn letters(matrix: &Matrix, wires: usize, flips: usize, tolerance: f64) -> String {
    let lead = matrix[(flips, 0)];
    let letter = |wire: usize| {
        let bit = 1 << (wires - 1 - wire);
        let other = matrix[(flips ^ bit, bit)];
        // On the diagonal a rotation has its two eigenvalues, elsewhere only
        // the signs of the string.
        let signed = match flips {
            0 => (other - lead).norm() > tolerance,
            _ => (other / lead).re < 0.0,
        };
        match (flips & bit != 0, signed) {
            (false, false) => 'I',
            (false, true) => 'Z',
            (true, false) => 'X',
            (true, true) => 'Y',
        }
    };
    (0..wires).map(letter).collect()
}

/// The operator of a string.
fn operator(letters: &str) -> Matrix {
    let mask = |of: &str| {
        letters.chars().fold(0, |mask, letter| mask << 1 | usize::from(of.contains(letter)))
    };
    let (flips, signs): (usize, usize) = (mask("XY"), mask("ZY"));
    let turn = letters.chars().filter(|&letter| letter == 'Y').fold(C64::ONE, |z, _| z * C64::I);
    let size = 1 << letters.len();
    Matrix::from_fn(size, size, |r, c| {
        let sign = if (c & signs).count_ones().is_multiple_of(2) { 1.0 } else { -1.0 };
        if r == c ^ flips { turn * sign } else { C64::ZERO }
    })
}
