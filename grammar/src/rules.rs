//! The rules of the grammar: which tokens make which node.
//!
//! A rule is named after what it reads. One whose name begins with `opt_` may
//! read nothing; any other reads something or reports what is missing. After
//! an error the rest of the statement becomes an error node, and the next
//! statement is read as if nothing had happened.

mod expressions;
mod items;
mod quantum;
mod statements;
mod types;

use crate::event::Marker;
use crate::kind::SyntaxKind;
use crate::parser::Parser;
use SyntaxKind as K;

/// The whole file.
pub(crate) fn root(p: &mut Parser<'_>) {
    items::opt_version(p);
    while !p.at_end() {
        if p.at(K::RightBrace) {
            stray(p, "this `}` closes nothing");
        } else {
            statements::statement(p);
        }
    }
    if p.is_stuck() {
        p.error("this cannot be read");
        let m = p.start();
        while p.is_stuck() {
            p.bump();
        }
        m.complete(p, K::ErrorNode);
    }
}

/// Reports the next token and puts it into an error node.
fn stray(p: &mut Parser<'_>, message: &str) {
    p.error(message);
    let m = p.start();
    p.bump();
    m.complete(p, K::ErrorNode);
}

/// The `;` at the end of a statement, and the end of its node; `place` says
/// behind what it is expected.
fn end_statement(p: &mut Parser<'_>, m: Marker, kind: SyntaxKind, place: &str) {
    if !p.expect(K::Semicolon, place) {
        skip_statement(p);
    }
    m.complete(p, kind);
}

/// The name that a declaration gives.
fn name(p: &mut Parser<'_>, what: &str) -> bool {
    opt_wrapped(p, K::Identifier, K::Name) || {
        missing_name(p, what);
        false
    }
}

/// A name that is used.
fn name_ref(p: &mut Parser<'_>, what: &str) -> bool {
    opt_wrapped(p, K::Identifier, K::NameRef) || {
        missing_name(p, what);
        false
    }
}

fn missing_name(p: &mut Parser<'_>, what: &str) {
    if p.current().is_keyword() && !p.starts_line() {
        let word = p.text();
        p.error(format!("`{word}` is a reserved word and cannot be {what}"));
        let m = p.start();
        p.bump();
        m.complete(p, K::ErrorNode);
    } else {
        p.expected(what);
    }
}

/// A token in a node of its own.
fn opt_wrapped(p: &mut Parser<'_>, token: SyntaxKind, node: SyntaxKind) -> bool {
    let found = p.at(token);
    if found {
        let m = p.start();
        p.bump();
        m.complete(p, node);
    }
    found
}

/// Items between commas, one more comma allowed at the end, up to `close`,
/// which is not taken. `item` reads one or reports. Broken items are skipped
/// up to the next comma.
fn items(p: &mut Parser<'_>, close: SyntaxKind, mut item: impl FnMut(&mut Parser<'_>) -> bool) {
    while !p.at(close) && !p.at_end() {
        if !item(p) {
            skip_item(p, close);
        }
        if !p.eat(K::Comma) {
            break;
        }
    }
}

/// Items as in [`items`] with the bracket that closes them.
fn items_closed(
    p: &mut Parser<'_>,
    close: SyntaxKind,
    place: &str,
    item: impl FnMut(&mut Parser<'_>) -> bool,
) {
    items(p, close, item);
    if p.at(close) {
        p.bump();
        return;
    }
    if !matches!(p.current(), K::EndOfFile | K::Semicolon | K::LeftBrace | K::RightBrace)
        && !p.starts_line()
        && !p.has_error_here()
    {
        p.expected(&format!("`,` or {} {place}", close.noun()));
    } else {
        p.expect(close, place);
    }
    skip_item(p, close);
    while p.at(K::Comma) {
        bump_as_error(p);
        skip_item(p, close);
    }
    p.eat(close);
}

fn bump_as_error(p: &mut Parser<'_>) {
    let m = p.start();
    p.bump();
    m.complete(p, K::ErrorNode);
}

/// Skips what is left of a list item: up to a comma, a closing bracket, or
/// what ends the statement. Brackets inside are skipped as wholes.
fn skip_item(p: &mut Parser<'_>, close: SyntaxKind) {
    skip(p, |p, depth| {
        depth == 0 && (p.at(K::Comma) || p.at(close) || is_closing(p.current()))
            || p.at(K::Semicolon)
            || (close != K::RightBrace && p.at(K::LeftBrace) && depth == 0)
            || starts_statement(p)
    });
}

/// Skips the rest of a broken statement with its `;`, and stops early before
/// what looks like the next statement.
fn skip_statement(p: &mut Parser<'_>) {
    skip(p, |p, depth| {
        let line = depth == 0 && p.starts_line() && p.at_any(&[K::Identifier, K::LeftBrace]);
        p.at(K::Semicolon)
            || (depth == 0 && p.at(K::RightBrace))
            || (depth == 0 && p.at(K::LeftBrace) && !expects_value(p.previous()))
            || line
            || starts_statement(p)
    });
    if p.at(K::Semicolon) {
        bump_as_error(p);
    }
}

/// Skips what is nested too deep: up to the bracket that closes something
/// outside of it, or the end of the statement.
fn skip_nested(p: &mut Parser<'_>) {
    skip(p, |p, depth| {
        p.at(K::Semicolon) || (depth == 0 && (is_closing(p.current()) || p.at(K::LeftBrace)))
    });
}

/// Skips a whole block, its braces included.
fn skip_block(p: &mut Parser<'_>) {
    let m = p.start();
    let mut depth = 0usize;
    loop {
        match p.current() {
            K::LeftBrace => depth += 1,
            K::RightBrace => depth = depth.saturating_sub(1),
            K::EndOfFile => break,
            _ => {}
        }
        p.bump();
        if depth == 0 {
            break;
        }
    }
    m.complete(p, K::ErrorNode);
}

/// Skips a statement that is nested too deep, with its blocks and with every
/// `else` that belongs to it.
fn skip_body(p: &mut Parser<'_>) {
    loop {
        bump_as_error(p);
        if p.previous() != K::Semicolon {
            skip_statement(p);
        }
        while p.at(K::LeftBrace) {
            skip_block(p);
        }
        if !p.at(K::ElseKw) {
            break;
        }
    }
}

/// Puts tokens into an error node until `stop` says so, which is told how many
/// brackets are open; no node if it stops at once.
fn skip(p: &mut Parser<'_>, stop: impl Fn(&Parser<'_>, usize) -> bool) {
    let mut depth = 0usize;
    if p.at_end() || stop(p, depth) {
        return;
    }
    let m = p.start();
    while !p.at_end() && !stop(p, depth) {
        match p.current() {
            K::LeftParen | K::LeftBracket | K::LeftBrace => depth += 1,
            kind if is_closing(kind) => depth = depth.saturating_sub(1),
            _ => {}
        }
        p.bump();
    }
    m.complete(p, K::ErrorNode);
}

fn is_closing(kind: SyntaxKind) -> bool {
    matches!(kind, K::RightParen | K::RightBracket | K::RightBrace)
}

/// Whether a brace behind this token is an array or a set.
fn expects_value(previous: SyntaxKind) -> bool {
    matches!(
        previous,
        K::Equals | K::Comma | K::LeftBrace | K::LeftBracket | K::LeftParen | K::InKw
    )
}

/// Whether a new statement is certain here: a line that begins with a word
/// that only begins statements.
fn starts_statement(p: &Parser<'_>) -> bool {
    p.starts_line() && is_statement_word(p.current())
}

/// The words that begin a statement and cannot go on with one.
fn is_statement_word(kind: SyntaxKind) -> bool {
    match kind {
        K::InKw | K::ReadonlyKw | K::MutableKw | K::VoidKw | K::HashDimKw => false,
        K::DurationofKw | K::TrueKw | K::FalseKw | K::ImKw => false,
        K::AnnotationName => true,
        kind => kind.is_keyword(),
    }
}
