//! Line breaks and indentation.

use super::{Piece, Shape, spacing};
use crate::kind::{SyntaxElement, SyntaxKind as K, SyntaxNode, SyntaxToken};
use crate::nodes::{AstNode, Statement, VersionStatement};
use rowan::TextRange;

/// One level of indentation.
const INDENT: &str = "    ";

/// The space between a token and a comment behind it.
const COMMENT_GAP: &str = "  ";

/// The longest block that may stay on one line, in bytes.
const LONGEST_BLOCK: u32 = 100;

/// The white space before a token, with `\n` as its line break.
pub(super) fn gap(before: Option<&SyntaxToken>, piece: &Piece, shape: &Shape) -> String {
    let next = &piece.token;
    let Some(before) = before else { return String::new() };
    if keeps(before, next, shape) {
        return piece.old.replace("\r\n", "\n").replace('\r', "\n");
    }
    match lines(before, next, &piece.old, shape) {
        Lines::Keep(gap) => gap.to_owned(),
        Lines::Joined => spacing::between(before, next).to_owned(),
        Lines::Broken(count) => "\n".repeat(count) + &INDENT.repeat(level(next)),
    }
}

/// What becomes of the line breaks between two tokens.
enum Lines {
    Keep(&'static str),
    Joined,
    Broken(usize),
}

/// Whether the white space here must stay: in text that is not understood, and
/// where it is part of a raw text.
fn keeps(before: &SyntaxToken, next: &SyntaxToken, shape: &Shape) -> bool {
    let raw = |token: &SyntaxToken| {
        let in_error = token.parent().is_some_and(|node| node.kind() == K::ErrorNode);
        let kinds = [K::UnknownText, K::UnclosedComment, K::BrokenString, K::CalibrationBody];
        in_error || kinds.contains(&token.kind())
    };
    let place = TextRange::new(before.text_range().end(), next.text_range().start());
    raw(before) || raw(next) || before.text() == "\u{feff}" || shape.is_broken(place)
}

fn lines(before: &SyntaxToken, next: &SyntaxToken, old: &str, shape: &Shape) -> Lines {
    let breaks = count_breaks(old);
    let at_brace = is_block_brace(before, K::LeftBrace) || is_block_brace(next, K::RightBrace);
    let most = if at_brace { 1 } else { 2 };
    if before.kind() == K::LineComment || ends_line(before, next) {
        let annotated = before.parent_ancestors().any(|node| node.kind() == K::Annotation);
        return Lines::Broken(if annotated { 1 } else { breaks.clamp(1, most) });
    }
    if is_comment(before) || is_comment(next) {
        return match (breaks, next.kind()) {
            (0, K::LineComment) => Lines::Keep(COMMENT_GAP),
            (0, _) if old.is_empty() => Lines::Keep(""),
            (0, _) => Lines::Keep(" "),
            _ => Lines::Broken(breaks.min(most)),
        };
    }
    match structure(before, next, shape) {
        Structure::Statements => Lines::Broken(breaks.clamp(1, most)),
        Structure::Row => Lines::Broken(1),
        Structure::Empty => Lines::Keep(""),
        Structure::OneLine => Lines::Keep(" "),
        Structure::Inside if breaks == 0 || always_joined(before, next) => Lines::Joined,
        Structure::Inside => Lines::Broken(1),
    }
}

/// Where two neighbouring tokens meet.
enum Structure {
    /// Between statements, or between a brace and a statement.
    Statements,
    /// Between the rows of an array that stand below each other.
    Row,
    /// In an empty block.
    Empty,
    /// Between the statements of a block that is written on one line.
    OneLine,
    /// Inside a statement.
    Inside,
}

fn structure(before: &SyntaxToken, next: &SyntaxToken, shape: &Shape) -> Structure {
    let Some(node) = common_node(before, next) else { return Structure::Inside };
    let opens = before.kind() == K::LeftBrace && before.parent().as_ref() == Some(&node);
    let closes = next.kind() == K::RightBrace && next.parent().as_ref() == Some(&node);
    let is_case = || {
        let parents = next.parent_ancestors().take_while(|parent| *parent != node);
        parents.last().is_some_and(|last| matches!(last.kind(), K::SwitchCase | K::SwitchDefault))
    };
    match node.kind() {
        K::Root => Structure::Statements,
        K::Block if opens && closes => Structure::Empty,
        K::Block if is_one_line(&node) => Structure::OneLine,
        K::Block => Structure::Statements,
        K::SwitchStatement if opens && closes => Structure::Empty,
        K::SwitchStatement if opens || closes || is_case() => Structure::Statements,
        K::ArrayLiteral if shape.is_vertical(&node) => {
            let between = opens || closes || before.kind() == K::Comma;
            if between { Structure::Row } else { Structure::Inside }
        }
        _ => Structure::Inside,
    }
}

/// Pairs that are never on two lines.
fn always_joined(before: &SyntaxToken, next: &SyntaxToken) -> bool {
    let closes = before.kind() == K::RightBrace && next.kind() == K::ElseKw;
    let opens = is_block_brace(next, K::LeftBrace)
        && next
            .parent()
            .and_then(|block| block.parent())
            .is_some_and(|owner| !matches!(owner.kind(), K::Root | K::Block));
    closes || opens || matches!(next.kind(), K::Semicolon | K::Comma)
}

/// Whether the line must end between these two: behind an annotation or a
/// pragma.
fn ends_line(before: &SyntaxToken, next: &SyntaxToken) -> bool {
    match before.kind() {
        K::RestOfLine => true,
        K::AnnotationName | K::PragmaKw | K::HashPragmaKw => next.kind() != K::RestOfLine,
        _ => false,
    }
}

fn is_comment(token: &SyntaxToken) -> bool {
    matches!(token.kind(), K::LineComment | K::BlockComment)
}

fn is_block_brace(token: &SyntaxToken, brace: K) -> bool {
    let owner = token.parent().map(|node| node.kind());
    token.kind() == brace && matches!(owner, Some(K::Block | K::SwitchStatement))
}

/// Whether a block is written on one line, is short, and has nothing in it
/// that needs more: other blocks, raw lines, line comments.
fn is_one_line(block: &SyntaxNode) -> bool {
    if block.text_range().len() > LONGEST_BLOCK.into() {
        return false;
    }
    let single = |element: SyntaxElement| match element {
        SyntaxElement::Node(node) => node.kind() != K::Block,
        SyntaxElement::Token(token) => {
            let breaks = token.text().contains(['\r', '\n']);
            !breaks && !matches!(token.kind(), K::LineComment | K::AnnotationName)
        }
    };
    let pragma = |node: SyntaxNode| matches!(node.kind(), K::Pragma | K::ErrorNode);
    block.descendants_with_tokens().skip(1).all(single) && !block.descendants().any(pragma)
}

fn common_node(before: &SyntaxToken, next: &SyntaxToken) -> Option<SyntaxNode> {
    let range = before.text_range();
    next.parent_ancestors().find(|node| node.text_range().contains_range(range))
}

/// How far a line that begins with this token is indented.
fn level(token: &SyntaxToken) -> usize {
    let mut level = 0;
    let mut brackets = 0;
    let mut in_statement = true;
    for node in token.parent_ancestors() {
        let own = token.parent().as_ref() == Some(&node) && is_bracket(token.kind());
        match node.kind() {
            K::Block | K::SwitchStatement if !own && holds(&node, token) => level += 1,
            kind if is_bracketed(kind) && !own => brackets += usize::from(in_statement),
            _ => {}
        }
        if is_statement(&node) {
            level += usize::from(is_indented_body(&node));
            if in_statement && brackets == 0 && !begins(&node, token) {
                brackets =
                    usize::from(node.kind() != K::Block && node.kind() != K::SwitchStatement);
            }
            level += std::mem::take(&mut brackets);
            in_statement = false;
        }
    }
    level + brackets
}

fn is_statement(node: &SyntaxNode) -> bool {
    Statement::can_cast(node.kind()) || VersionStatement::can_cast(node.kind())
}

/// Whether a token stands between the braces of a node.
fn holds(node: &SyntaxNode, token: &SyntaxToken) -> bool {
    let brace = rowan::ast::support::token::<crate::OpenQasm>(node, K::LeftBrace);
    brace.is_some_and(|brace| brace.text_range().end() <= token.text_range().start())
}

/// Whether a token begins a statement, one of its parts that belong on a line
/// of their own, or closes it.
fn begins(statement: &SyntaxNode, token: &SyntaxToken) -> bool {
    let behind_annotations = statement
        .children_with_tokens()
        .find(|child| child.kind() != K::Annotation && !child.kind().is_trivia());
    let first = behind_annotations.map(|child| child.text_range().start());
    let is_first = first.is_none_or(|first| token.text_range().start() <= first);
    is_first || matches!(token.kind(), K::ElseKw | K::RightBrace | K::LeftBrace)
}

/// Whether this is the body of a loop or a branch, without braces and on a
/// line of its own.
fn is_indented_body(statement: &SyntaxNode) -> bool {
    let owner = statement.parent().map(|node| node.kind());
    let is_body =
        matches!(owner, Some(K::IfStatement | K::ElseBranch | K::ForStatement | K::WhileStatement));
    let before = statement.prev_sibling_or_token();
    let breaks = before
        .and_then(|before| before.into_token())
        .is_some_and(|token| token.text().contains(['\r', '\n']) || token.kind() == K::LineComment);
    is_body && statement.kind() != K::Block && breaks
}

fn is_bracket(kind: K) -> bool {
    matches!(
        kind,
        K::LeftParen
            | K::RightParen
            | K::LeftBracket
            | K::RightBracket
            | K::LeftBrace
            | K::RightBrace
    )
}

/// The nodes that begin and end with a bracket.
fn is_bracketed(kind: K) -> bool {
    matches!(
        kind,
        K::ParameterList
            | K::SignatureList
            | K::ArgumentList
            | K::Designator
            | K::IndexOperator
            | K::ParenExpression
            | K::SetExpression
            | K::ArrayLiteral
    )
}

/// The line breaks in a white space; CRLF is one.
fn count_breaks(white: &str) -> usize {
    let lone = white.replace("\r\n", "\n");
    lone.chars().filter(|letter| matches!(letter, '\r' | '\n')).count()
}
