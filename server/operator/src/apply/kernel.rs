//! Small matrices on some wires of long columns.

use crate::{C64, Control, Matrix};

/// Where a gate acts, as bits of a column's index.
pub(super) struct Place {
    /// Number of amplitudes of a column.
    size: usize,
    /// Bits of the controls.
    watched: usize,
    /// Values of those bits at which the gate acts.
    wanted: usize,
    /// Bits of the gate's own wires.
    moved: usize,
    /// What each value of the gate's own wires adds to an index.
    offsets: Vec<usize>,
}

impl Place {
    /// The place of a gate on `targets`, the first the most significant,
    /// where `controls` hold.
    pub(super) fn new(controls: &[Control], targets: &[usize], wires: usize) -> Self {
        let bit = |wire: usize| 1_usize << (wires - 1 - wire);
        let offset = |k: usize| {
            let bits = targets.iter().rev().enumerate().filter(|(at, _)| k >> at & 1 == 1);
            bits.map(|(_, &wire)| bit(wire)).sum()
        };
        Place {
            size: 1 << wires,
            watched: controls.iter().map(|c| bit(c.wire)).sum(),
            wanted: controls.iter().filter(|c| c.on).map(|c| bit(c.wire)).sum(),
            moved: targets.iter().map(|&t| bit(t)).sum(),
            offsets: (0..1 << targets.len()).map(offset).collect(),
        }
    }

    /// Multiplies each column by the matrix, in place.
    pub(super) fn apply(&self, matrix: &Matrix, columns: &mut Matrix) {
        assert_eq!(matrix.rows(), self.offsets.len(), "a gate's matrix and its wires");
        let kernel = Kernel::new(matrix, &self.offsets);
        if let (Kernel::Pair(entries), 0) = (&kernel, self.watched) {
            (0..columns.cols())
                .for_each(|c| everywhere(entries, self.moved, columns.column_mut(c)));
            return;
        }
        let bases = self.bases();
        for c in 0..columns.cols() {
            kernel.apply(&bases, &self.offsets, columns.column_mut(c));
        }
    }

    /// The indices that the controls admit, with the gate's own wires at 0.
    fn bases(&self) -> Vec<usize> {
        let admitted =
            |index: &usize| index & self.moved == 0 && index & self.watched == self.wanted;
        (0..self.size).filter(admitted).collect()
    }
}

/// Where an amplitude comes from and goes to, and its factor.
type Move = (usize, usize, C64);

/// A matrix in the form in which it is cheapest to apply. Only exact zeros
/// and ones are made use of, so that no form changes the result.
enum Kernel {
    /// One entry in each row and column: the moves that do something.
    Monomial(Vec<Move>),
    /// A full 2×2 matrix by rows.
    Pair([C64; 4]),
    /// Any other, by rows.
    Full(Vec<C64>),
}

impl Kernel {
    fn new(matrix: &Matrix, offsets: &[usize]) -> Self {
        if let Some(moves) = monomial(matrix) {
            let works = |&(from, to, factor): &Move| from != to || factor != C64::ONE;
            let placed = |(from, to, factor)| (offsets[from], offsets[to], factor);
            return Kernel::Monomial(moves.into_iter().filter(works).map(placed).collect());
        }
        if matrix.rows() == 2 {
            return Kernel::Pair([(0, 0), (0, 1), (1, 0), (1, 1)].map(|at| matrix[at]));
        }
        Kernel::Full(matrix.transpose().as_slice().to_vec())
    }

    fn apply(&self, bases: &[usize], offsets: &[usize], column: &mut [C64]) {
        match self {
            Kernel::Monomial(moves) => move_amplitudes(moves, bases, column),
            Kernel::Full(rows) => multiply(rows, bases, offsets, column),
            Kernel::Pair(entries) => {
                for &base in bases {
                    let at = base + offsets[1];
                    (column[base], column[at]) = turned(entries, column[base], column[at]);
                }
            }
        }
    }
}

/// The moves of a matrix with exactly one entry in each row and column.
fn monomial(matrix: &Matrix) -> Option<Vec<Move>> {
    let mut taken = vec![false; matrix.rows()];
    let mut moves = Vec::with_capacity(matrix.cols());
    for c in 0..matrix.cols() {
        let mut entries = matrix.column(c).iter().enumerate().filter(|(_, z)| **z != C64::ZERO);
        let ((row, &entry), None) = (entries.next()?, entries.next()) else { return None };
        if std::mem::replace(&mut taken[row], true) {
            return None;
        }
        moves.push((c, row, entry));
    }
    Some(moves)
}

fn turned([a, b, c, d]: &[C64; 4], x: C64, y: C64) -> (C64, C64) {
    (a * x + b * y, c * x + d * y)
}

/// A 2×2 matrix on all pairs that differ in one bit, in runs of neighbours.
fn everywhere(entries: &[C64; 4], bit: usize, column: &mut [C64]) {
    for chunk in column.chunks_exact_mut(2 * bit) {
        let (low, high) = chunk.split_at_mut(bit);
        for (x, y) in low.iter_mut().zip(high) {
            (*x, *y) = turned(entries, *x, *y);
        }
    }
}

fn move_amplitudes(moves: &[Move], bases: &[usize], column: &mut [C64]) {
    match *moves {
        [] => {}
        [(from, to, factor)] if from == to => {
            bases.iter().for_each(|base| column[base + from] *= factor);
        }
        [(a, b, x), (c, d, y)] if a == d && b == c && x == C64::ONE && y == C64::ONE => {
            bases.iter().for_each(|base| column.swap(base + a, base + b));
        }
        _ => {
            let mut before = vec![C64::ZERO; moves.len()];
            for base in bases {
                for (kept, &(from, _, factor)) in before.iter_mut().zip(moves) {
                    *kept = factor * column[base + from];
                }
                for (kept, &(_, to, _)) in before.iter().zip(moves) {
                    column[base + to] = *kept;
                }
            }
        }
    }
}

fn multiply(rows: &[C64], bases: &[usize], offsets: &[usize], column: &mut [C64]) {
    let mut before = vec![C64::ZERO; offsets.len()];
    for base in bases {
        before.iter_mut().zip(offsets).for_each(|(to, at)| *to = column[base + at]);
        for (row, at) in rows.chunks_exact(offsets.len()).zip(offsets) {
            column[base + at] = row.iter().zip(&before).map(|(a, b)| a * b).sum();
        }
    }
}
