//! The canonical decomposition of a two-qubit unitary: local gates around
//! `N(x, y, z) = exp(i (x XX + y YY + z ZZ))`.
//!
//! In the magic basis local gates are real orthogonal and `N` is diagonal, so
//! the decomposition is one of a symmetric unitary into a real orthogonal
//! matrix and phases. Real and imaginary part are diagonalised together by
//! Jacobi rotations: commuting symmetric matrices, however degenerate, always
//! give an orthogonal matrix to full precision.

use std::f64::consts::{FRAC_1_SQRT_2, FRAC_PI_2, FRAC_PI_4};

use operator::{C64, Matrix};

/// Coordinates this near to a special value take it. A circuit moves by at
/// most three times this, within the 1e-12 promised for two qubits; rounding
/// in a 4×4 decomposition is a hundred times smaller.
pub(crate) const SAME_CLASS: f64 = 1e-13;

/// Sweeps after which the joint diagonalisation gives up improving. Twelve
/// suffice for any 4×4 pair met; convergence is quadratic at the end.
const SWEEPS: usize = 40;

/// Off-diagonal entries below this are rounding of entries of modulus one.
const OFF_DIAGONAL: f64 = 1e-16;

/// `U = e^{i phase} (left₀ ⊗ left₁) N(x, y, z) (right₀ ⊗ right₁)`.
///
/// Coordinates obey π/4 ≥ x ≥ z ≥ |y|: the Weyl chamber with the smallest one
/// on YY.
#[derive(Debug, Clone)]
pub(crate) struct Canonical {
    pub phase: f64,
    pub left: [Matrix; 2],
    pub right: [Matrix; 2],
    pub xyz: [f64; 3],
}

impl Canonical {
    /// Decomposes a 4×4 unitary.
    pub fn of(unitary: &Matrix) -> Canonical {
        let magic = magic();
        let inside = &(&magic.adjoint() * unitary) * &magic;
        let mut right = diagonalise(&(&inside.transpose() * &inside));
        if determinant(&right) < 0.0 {
            right[0] = right[0].map(|entry| -entry);
        }
        let (mut left, mut phases) = real_columns(&inside, &right);
        if determinant(&left) < 0.0 {
            left[0] = left[0].map(|entry| -entry);
            phases[0] += std::f64::consts::PI;
        }
        let [d0, d1, d2, d3] = phases;
        let (left, right) = (local(&left, false), local(&right, true));
        let mut found = Canonical {
            phase: 0.25 * (d0 + d1 + d2 + d3),
            left,
            right,
            xyz: [d0 + d1 - d2 - d3, d1 + d3 - d0 - d2, d0 + d3 - d1 - d2].map(|s| 0.25 * s),
        };
        found.reduce();
        found
    }

    /// CX that the class needs: Shende, Bullock, Markov 2004.
    pub fn cx(&self) -> usize {
        let [x, y, z] = self.xyz;
        let zero = |value: f64| value.abs() < SAME_CLASS;
        match () {
            () if zero(x) && zero(y) && zero(z) => 0,
            () if zero(x - FRAC_PI_4) && zero(y) && zero(z) => 1,
            () if zero(y) => 2,
            () => 3,
        }
    }

    /// Brings the coordinates into the chamber, paying with local gates.
    fn reduce(&mut self) {
        for axis in 0..3 {
            let turns = (self.xyz[axis] / FRAC_PI_2).round();
            self.xyz[axis] -= turns * FRAC_PI_2;
            self.phase += turns * FRAC_PI_2;
            if turns.rem_euclid(2.0) == 1.0 {
                self.left = [0, 1].map(|q| &self.left[q] * &pauli(axis));
            }
        }
        const Y: usize = 1;
        for (big, small) in [(0, 2), (2, Y), (0, 2)] {
            if self.xyz[big].abs() < self.xyz[small].abs() {
                self.exchange(big, small);
            }
        }
        for axis in [0, 2] {
            if self.xyz[axis] < 0.0 {
                self.negate_with_y(axis);
            }
        }
    }

    /// Exchanges two coordinates: (P + Q)/√2 on both wires swaps P and Q.
    fn exchange(&mut self, a: usize, b: usize) {
        let swap = (&pauli(a) + &pauli(b)).scaled(C64::new(FRAC_1_SQRT_2, 0.0));
        self.left = [0, 1].map(|q| &self.left[q] * &swap);
        self.right = [0, 1].map(|q| &swap * &self.right[q]);
        self.xyz.swap(a, b);
    }

    /// Changes the sign of a coordinate and of y: the third Pauli on one wire.
    fn negate_with_y(&mut self, axis: usize) {
        let third = pauli(2 - axis);
        self.left[0] = &self.left[0] * &third;
        self.right[0] = &third * &self.right[0];
        self.xyz[axis] = -self.xyz[axis];
        self.xyz[1] = -self.xyz[1];
    }
}

/// X, Y, Z by number.
fn pauli(axis: usize) -> Matrix {
    let (o, l, i) = (C64::ZERO, C64::ONE, C64::I);
    match axis {
        0 => Matrix::from_rows(2, 2, &[o, l, l, o]),
        1 => Matrix::from_rows(2, 2, &[o, -i, i, o]),
        _ => Matrix::from_rows(2, 2, &[l, o, o, -l]),
    }
}

/// Columns are Bell states with phases that make `A ⊗ B` real. XX, YY, ZZ
/// are + − +, + + −, − − −, − + + on them.
fn magic() -> Matrix {
    let (o, l, i) = (C64::ZERO, C64::new(FRAC_1_SQRT_2, 0.0), C64::new(0.0, FRAC_1_SQRT_2));
    Matrix::from_rows(4, 4, &[l, o, o, i, o, i, l, o, o, i, -l, o, l, o, o, -i])
}

/// Columns of a real 4×4 matrix.
type Columns = [[f64; 4]; 4];

/// Orthonormal columns that diagonalise a symmetric unitary 4×4 matrix.
fn diagonalise(symmetric: &Matrix) -> Columns {
    let entry = |r: usize, c: usize| 0.5 * (symmetric[(r, c)] + symmetric[(c, r)]);
    let part = |f: fn(C64) -> f64| -> Columns {
        std::array::from_fn(|c| std::array::from_fn(|r| f(entry(r, c))))
    };
    let mut parts = [part(|z| z.re), part(|z| z.im)];
    let mut basis: Columns =
        std::array::from_fn(|c| std::array::from_fn(|r| f64::from(u8::from(r == c))));
    for _ in 0..SWEEPS {
        let mut still = true;
        for (p, q) in [(0, 1), (2, 3), (0, 2), (1, 3), (0, 3), (1, 2)] {
            still &= !rotate(&mut parts, &mut basis, p, q);
        }
        if still {
            break;
        }
    }
    basis
}

/// One joint Jacobi rotation in the plane of `p` and `q`; false where there
/// is nothing to remove. The angle minimises both off-diagonal entries
/// together (Cardoso, Souloumiac 1996).
fn rotate(parts: &mut [Columns; 2], basis: &mut Columns, p: usize, q: usize) -> bool {
    if parts.iter().all(|m| m[p][q].abs() < OFF_DIAGONAL) {
        return false;
    }
    let (mut on, mut off) = (0.0, 0.0);
    for m in parts.iter() {
        let (difference, twice) = (m[p][p] - m[q][q], 2.0 * m[p][q]);
        on += difference * difference - twice * twice;
        off += 2.0 * difference * twice;
    }
    let (sine, cosine) = (0.25 * f64::atan2(off, on)).sin_cos();
    let turn = |a: f64, b: f64| (cosine * a + sine * b, cosine * b - sine * a);
    let turn_columns = |m: &mut Columns| {
        let (left, right) = m.split_at_mut(q);
        left[p].iter_mut().zip(&mut right[0]).for_each(|(a, b)| (*a, *b) = turn(*a, *b));
    };
    for m in parts.iter_mut() {
        turn_columns(m);
        for column in m.iter_mut() {
            (column[p], column[q]) = turn(column[p], column[q]);
        }
    }
    turn_columns(basis);
    sine != 0.0
}

/// `inside · right`, each column as a real one times a phase.
fn real_columns(inside: &Matrix, right: &Columns) -> (Columns, [f64; 4]) {
    let mut phases = [0.0; 4];
    let columns = std::array::from_fn(|c| {
        let image: [C64; 4] =
            std::array::from_fn(|r| (0..4).map(|k| inside[(r, k)] * right[c][k]).sum());
        phases[c] = 0.5 * image.iter().map(|z| z * z).sum::<C64>().arg();
        image.map(|z| (z * C64::cis(-phases[c])).re)
    });
    (columns, phases)
}

/// Determinant by cofactors of 2×2 minors.
fn determinant(m: &Columns) -> f64 {
    let minor = |a: usize, b: usize, i: usize, j: usize| m[a][i] * m[b][j] - m[a][j] * m[b][i];
    let terms = [
        (0, 1, 2, 3, 1.0),
        (0, 2, 1, 3, -1.0),
        (0, 3, 1, 2, 1.0),
        (1, 2, 0, 3, 1.0),
        (1, 3, 0, 2, -1.0),
        (2, 3, 0, 1, 1.0),
    ];
    terms.iter().map(|&(i, j, k, l, sign)| sign * minor(0, 1, i, j) * minor(2, 3, k, l)).sum()
}

/// A special orthogonal matrix of the magic basis as `A ⊗ B`.
fn local(columns: &Columns, transposed: bool) -> [Matrix; 2] {
    let real = Matrix::from_fn(4, 4, |r, c| {
        C64::new(if transposed { columns[r][c] } else { columns[c][r] }, 0.0)
    });
    let magic = magic();
    factor(&(&(&magic * &real) * &magic.adjoint()))
}

/// Splits a 4×4 tensor product of unitaries; `B` gets determinant 1.
fn factor(product: &Matrix) -> [Matrix; 2] {
    let block = |k: usize| product.block(2 * (k / 2), 2 * (k % 2), 2, 2);
    let norms: [f64; 4] = std::array::from_fn(|k| block(k).frobenius());
    let best = if norms[0] >= norms[1] { 0 } else { 1 };
    let mut b = block(best);
    let root = (b[(0, 0)] * b[(1, 1)] - b[(0, 1)] * b[(1, 0)]).sqrt();
    b = b.scaled(C64::ONE / root);
    let a = Matrix::from_fn(2, 2, |r, c| 0.5 * (&b.adjoint() * &block(2 * r + c)).trace());
    [a, b]
}
