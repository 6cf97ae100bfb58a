//! The columns of matrices whose rows stand below each other.

use super::{Piece, Shape};
use crate::kind::{SyntaxKind as K, SyntaxNode};
use rowan::TextRange;

/// Whether the elements of an array literal stand on lines of their own: they
/// are rows, and the author broke the line between two of them.
pub(super) fn is_vertical(literal: &SyntaxNode) -> bool {
    let mut children = literal.children_with_tokens();
    let breaks = children
        .any(|child| child.as_token().is_some_and(|token| token.text().contains(['\r', '\n'])));
    breaks && literal.children().all(|row| row.kind() == K::ArrayLiteral)
}

/// Pads the entries of each matrix from the left, so that its columns end
/// below each other. Those in broken statements stay as they are.
pub(super) fn align(shape: &Shape, pieces: &mut [Piece]) {
    for literal in shape.vertical.iter().filter(|node| !shape.is_broken(node.text_range())) {
        let rows: Vec<_> = literal.children().collect();
        if rows.iter().all(is_plain_row) {
            align_rows(&rows, pieces);
        }
    }
}

/// Whether a row is written on one line and has neither comments nor rows of
/// its own.
fn is_plain_row(row: &SyntaxNode) -> bool {
    let plain = |node: SyntaxNode| !matches!(node.kind(), K::ArrayLiteral | K::ErrorNode);
    let comment = |kind| matches!(kind, K::LineComment | K::BlockComment);
    let breaks = row.text().contains_char('\n') || row.text().contains_char('\r');
    let commented = row.descendants_with_tokens().any(|child| comment(child.kind()));
    !breaks && !commented && row.descendants().skip(1).all(plain)
}

/// An entry: its first piece, and its width in characters.
struct Entry {
    first: usize,
    width: usize,
}

fn align_rows(rows: &[SyntaxNode], pieces: &mut [Piece]) {
    let table: Vec<Vec<Entry>> = rows
        .iter()
        .map(|row| row.children().map(|entry| measure(entry.text_range(), pieces)).collect())
        .collect();
    let columns = table.iter().map(Vec::len).max().unwrap_or(0);
    for column in 0..columns {
        let entries = || table.iter().filter_map(|row| row.get(column));
        let widest = entries().map(|entry| entry.width).max().unwrap_or(0);
        for entry in entries() {
            if let Some(piece) = pieces.get_mut(entry.first) {
                piece.gap.push_str(&" ".repeat(widest - entry.width));
            }
        }
    }
}

/// The width of an entry as it will be written.
fn measure(range: TextRange, pieces: &[Piece]) -> Entry {
    let start = |piece: &Piece| piece.token.text_range().start();
    let first = pieces.partition_point(|piece| start(piece) < range.start());
    let end = pieces.partition_point(|piece| start(piece) < range.end());
    let letters = |text: &str| text.chars().count();
    let inner = pieces.get(first..end).unwrap_or_default();
    let tokens: usize = inner.iter().map(|piece| letters(piece.token.text())).sum();
    let gaps: usize = inner.iter().skip(1).map(|piece| letters(&piece.gap)).sum();
    Entry { first, width: tokens + gaps }
}
