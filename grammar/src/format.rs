//! The formatter: changes white space between tokens, and nothing else.
//!
//! Statements go on lines of their own, blocks are indented, signs are spaced
//! evenly, the columns of a matrix are aligned. Line breaks inside a statement
//! stay where the author put them; comments stay where they are. A statement
//! with a syntax error keeps its inside as it is, and a file so broken that new
//! line breaks would change its meaning is left alone. Formatting twice
//! changes nothing more.

mod layout;
mod matrix;
mod spacing;

use crate::kind::{SyntaxKind as K, SyntaxNode, SyntaxToken};
use crate::nodes::{AstNode, Statement};
use crate::tree::Parse;
use rowan::{TextRange, TextSize};

/// New white space for the gap between two tokens.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct Respacing {
    /// The gap in the old text: white space only, or empty.
    pub range: TextRange,
    /// The new white space.
    pub text: String,
}

/// The gaps that formatting changes, in the order of the text. Each is
/// independent of the others, so those in a part of the file can be taken
/// alone.
pub fn format(parse: &Parse) -> Vec<Respacing> {
    let changes = respacings(parse);
    if is_safe(parse, &apply(parse, &changes)) { changes } else { Vec::new() }
}

/// What the rules say about each gap.
fn respacings(parse: &Parse) -> Vec<Respacing> {
    let mut pieces = pieces(parse);
    let shape = Shape::new(parse, &pieces);
    let line_break = line_break(parse);
    for index in 0..pieces.len() {
        let before = index.checked_sub(1).and_then(|index| pieces.get(index));
        let gap = layout::gap(before.map(|piece| &piece.token), &pieces[index], &shape);
        pieces[index].gap = gap.replace('\n', line_break);
    }
    matrix::align(&shape, &mut pieces);
    changes(parse, &pieces, line_break)
}

/// Whether the new text has the tokens of the old one and, where errors make
/// the parser guess by line breaks, whether it would be formatted the same
/// way again.
fn is_safe(parse: &Parse, new: &str) -> bool {
    let stable = || parse.errors().is_empty() || respacings(&crate::parse(new)).is_empty();
    same_tokens(parse, new) && stable()
}

/// The text after formatting.
pub fn formatted(parse: &Parse) -> String {
    apply(parse, &format(parse))
}

/// A token or a comment, and the white space before it.
struct Piece {
    token: SyntaxToken,
    old: String,
    gap: String,
}

fn pieces(parse: &Parse) -> Vec<Piece> {
    let mut pieces = Vec::new();
    let mut old = String::new();
    let tokens = parse.syntax().descendants_with_tokens().filter_map(|child| child.into_token());
    for token in tokens {
        // A byte order mark is white space to the parser, but stays.
        if token.kind() == K::Whitespace && !token.text().starts_with('\u{feff}') {
            old.push_str(token.text());
        } else {
            pieces.push(Piece { token, old: std::mem::take(&mut old), gap: String::new() });
        }
    }
    pieces
}

/// What the rules must know of the whole file, found once.
struct Shape {
    /// The statements that errors lie in or beside, none inside another, in
    /// the order of the text.
    broken: Vec<TextRange>,
    /// The array literals whose rows stand below each other, in the order of
    /// the text.
    vertical: Vec<SyntaxNode>,
}

impl Shape {
    fn new(parse: &Parse, pieces: &[Piece]) -> Self {
        let literals = parse.syntax().descendants().filter(|node| node.kind() == K::ArrayLiteral);
        let vertical = literals.filter(matrix::is_vertical).collect();
        Self { broken: broken_statements(parse, pieces), vertical }
    }

    /// Whether a place is inside a broken statement, its ends left out.
    fn is_broken(&self, place: TextRange) -> bool {
        let behind = self.broken.partition_point(|range| range.start() < place.start());
        let before = behind.checked_sub(1).and_then(|index| self.broken.get(index));
        before.is_some_and(|range| place.end() < range.end())
    }

    fn is_vertical(&self, literal: &SyntaxNode) -> bool {
        let range = |node: &SyntaxNode| (node.text_range().start(), node.text_range().end());
        let key = |node: &SyntaxNode| (range(node).0, std::cmp::Reverse(range(node).1));
        self.vertical.binary_search_by_key(&key(literal), key).is_ok()
    }
}

/// The innermost statements that errors lie in or beside, without those that
/// are inside another one of them.
fn broken_statements(parse: &Parse, pieces: &[Piece]) -> Vec<TextRange> {
    let mut ranges = Vec::new();
    for error in parse.errors() {
        let place = error.range.start();
        let first = pieces.partition_point(|piece| piece.token.text_range().end() < place);
        let beside = pieces.get(first..).unwrap_or_default().iter().map(|piece| &piece.token);
        for token in beside.take_while(|token| token.text_range().start() <= place) {
            let statement = token.parent_ancestors().find(|node| Statement::can_cast(node.kind()));
            ranges.extend(statement.map(|node| node.text_range()));
        }
    }
    ranges.sort_by_key(|range| (range.start(), std::cmp::Reverse(range.end())));
    ranges.dedup_by(|inner, outer| outer.contains_range(*inner));
    ranges
}

/// The line break of the file: that of its first line.
fn line_break(parse: &Parse) -> &'static str {
    let text = parse.syntax().text().to_string();
    let rest = text.find(['\r', '\n']).and_then(|first| text.get(first..)).unwrap_or("\n");
    if rest.starts_with("\r\n") {
        "\r\n"
    } else if rest.starts_with('\r') {
        "\r"
    } else {
        "\n"
    }
}

fn changes(parse: &Parse, pieces: &[Piece], line_break: &str) -> Vec<Respacing> {
    let mut changes = Vec::new();
    for piece in pieces.iter().filter(|piece| piece.old != piece.gap) {
        let end = piece.token.text_range().start();
        let range = TextRange::new(end - TextSize::of(piece.old.as_str()), end);
        changes.push(Respacing { range, text: piece.gap.clone() });
    }
    changes.extend(last_gap(parse, pieces, line_break));
    changes
}

/// The white space at the end of the file: one line break.
fn last_gap(parse: &Parse, pieces: &[Piece], line_break: &str) -> Option<Respacing> {
    let last = pieces.last()?;
    let open = matches!(last.token.kind(), K::UnclosedComment | K::CalibrationBody);
    let range = TextRange::new(last.token.text_range().end(), parse.syntax().text_range().end());
    let is_new = parse.syntax().text().slice(range) != line_break;
    (is_new && !open).then(|| Respacing { range, text: line_break.to_owned() })
}

fn apply(parse: &Parse, changes: &[Respacing]) -> String {
    let old = parse.syntax().text().to_string();
    let mut new = String::with_capacity(old.len());
    let mut taken = 0usize;
    for change in changes {
        new.push_str(old.get(taken..change.range.start().into()).unwrap_or(""));
        new.push_str(&change.text);
        taken = change.range.end().into();
    }
    new + old.get(taken..).unwrap_or("")
}

fn same_tokens(parse: &Parse, new: &str) -> bool {
    let old = parse.syntax().text().to_string();
    let tokens = |text: &str| {
        let tokens = crate::lexer::lex(text).tokens;
        let solid = tokens.into_iter().filter(|token| token.kind != K::Whitespace);
        solid.map(|token| (token.kind, text[token.range].to_owned())).collect::<Vec<_>>()
    };
    tokens(&old) == tokens(new)
}
