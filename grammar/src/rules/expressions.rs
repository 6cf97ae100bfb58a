//! Expressions by binding power, and what stands in their place.

use super::*;
use crate::event::Completed;
use types::{array, at_scalar, scalar};

/// How tightly the prefix operators bind: looser than a power only, so that
/// `-a**b` is `-(a**b)`.
const PREFIX_POWER: u8 = 11;

/// The binding power of an operator between two values, and the least one of
/// its right side. Those of equal rank group from the left, powers from the
/// right.
fn binary_power(kind: SyntaxKind) -> Option<(u8, u8)> {
    let power = match kind {
        K::PipePipe => 1,
        K::AmpersandAmpersand => 2,
        K::Pipe => 3,
        K::Caret => 4,
        K::Ampersand => 5,
        K::EqualsEquals | K::BangEquals => 6,
        K::Less | K::LessEquals | K::Greater | K::GreaterEquals | K::InKw => 7,
        K::ShiftLeft | K::ShiftRight => 8,
        K::Plus | K::Minus => 9,
        K::Star | K::Slash | K::Percent => 10,
        K::StarStar => return Some((12, 12)),
        _ => return None,
    };
    Some((power, power + 1))
}

/// Whether an expression begins here.
pub(super) fn at_expression(p: &Parser<'_>) -> bool {
    match p.current() {
        K::LeftParen | K::Identifier | K::HardwareQubit | K::DurationofKw | K::ArrayKw => true,
        K::Minus | K::Bang | K::Tilde => true,
        kind => is_literal(kind) || at_scalar(p),
    }
}

fn is_literal(kind: SyntaxKind) -> bool {
    matches!(
        kind,
        K::DecimalInteger
            | K::BinaryInteger
            | K::OctalInteger
            | K::HexInteger
            | K::Float
            | K::Imaginary
            | K::Timing
            | K::BitString
            | K::TrueKw
            | K::FalseKw
    )
}

/// An expression. If there is none, nothing is taken.
pub(super) fn expression(p: &mut Parser<'_>) -> bool {
    p.nested(|p| binary(p, 0)).is_some()
}

/// Terms between `++`.
pub(super) fn concatenation(p: &mut Parser<'_>) -> bool {
    concatenated(p).is_some()
}

fn concatenated(p: &mut Parser<'_>) -> Option<Completed> {
    let first = p.nested(|p| binary(p, 0))?;
    if !p.at(K::PlusPlus) {
        return Some(first);
    }
    let m = first.precede(p);
    while p.eat(K::PlusPlus) {
        expression(p);
    }
    Some(m.complete(p, K::ConcatExpression))
}

/// Operators of at least this power and the values between them. Each operator
/// puts a node around all on its left, which makes that one level deeper.
fn binary(p: &mut Parser<'_>, least: u8) -> Option<Completed> {
    let (left, levels) = p.measure(prefix);
    Some(binary_tail(p, left?, levels, least))
}

/// The rest of an expression whose first part, with so many levels in it, has
/// been read.
pub(super) fn continued(p: &mut Parser<'_>, first: Completed, levels: usize) {
    let (left, levels) = p.measure(|p| {
        p.reach(levels);
        postfix_tail(p, first, levels)
    });
    binary_tail(p, left, levels, 0);
}

fn binary_tail(p: &mut Parser<'_>, mut left: Completed, mut levels: usize, least: u8) -> Completed {
    while let Some((power, right)) = binary_power(p.current())
        && power >= least
    {
        if !p.fits(levels + 1) {
            p.too_deep();
            skip_nested(p);
            break;
        }
        let m = left.precede(p);
        let is_in = p.at(K::InKw);
        p.bump();
        let ((), below) = p.measure(|p| {
            if is_in {
                set_operand(p);
            } else {
                p.nested(|p| binary(p, right));
            }
        });
        levels = below.max(levels + 1);
        p.reach(levels);
        left = m.complete(p, K::BinaryExpression);
    }
    left
}

/// The set to the right of `in`.
fn set_operand(p: &mut Parser<'_>) {
    if p.at(K::LeftBrace) {
        p.nested(set);
    } else {
        p.expected("a set such as `{0, 3}` after `in`");
    }
}

/// A value with the signs before it.
fn prefix(p: &mut Parser<'_>) -> Option<Completed> {
    if !p.fits(0) {
        p.too_deep();
        skip_nested(p);
        return None;
    }
    if p.at(K::Plus) {
        stray(p, "there is no sign `+`; leave it out");
        return p.nested(prefix);
    }
    if !p.at_any(&[K::Minus, K::Bang, K::Tilde]) {
        return postfix(p);
    }
    let m = p.start();
    p.bump();
    p.nested(|p| binary(p, PREFIX_POWER));
    Some(m.complete(p, K::UnaryExpression))
}

/// A value with the indices behind it.
fn postfix(p: &mut Parser<'_>) -> Option<Completed> {
    let (base, levels) = p.measure(primary);
    Some(postfix_tail(p, base?, levels))
}

fn postfix_tail(p: &mut Parser<'_>, mut base: Completed, mut levels: usize) -> Completed {
    while p.at(K::LeftBracket) {
        if !p.fits(levels + 1) {
            p.too_deep();
            skip_nested(p);
            break;
        }
        let m = base.precede(p);
        let ((), below) = p.measure(|p| p.nested(index_operator));
        levels = below.max(levels + 1);
        p.reach(levels);
        base = m.complete(p, K::IndexExpression);
    }
    base
}

/// A value on its own.
fn primary(p: &mut Parser<'_>) -> Option<Completed> {
    let kind = p.current();
    if is_literal(kind) || kind == K::HardwareQubit {
        let m = p.start();
        p.bump();
        return Some(m.complete(p, K::Literal));
    }
    match kind {
        K::Identifier => Some(name_or_call(p)),
        K::LeftParen => Some(parenthesised(p)),
        K::DurationofKw => Some(duration_of(p)),
        K::ArrayKw => Some(cast(p)),
        _ if at_scalar(p) => Some(cast(p)),
        K::MeasureKw => {
            p.error("`measure` is no part of an expression: it stands alone after `=` or `return`");
            None
        }
        K::LeftBrace => {
            p.error("a list in braces can only be the value of a declared array, or a set");
            None
        }
        _ => {
            p.expected("an expression");
            None
        }
    }
}

fn name_or_call(p: &mut Parser<'_>) -> Completed {
    let m = p.start();
    p.bump();
    let name = m.complete(p, K::NameRef);
    if !p.at(K::LeftParen) {
        return name;
    }
    let m = name.precede(p);
    arguments(p);
    m.complete(p, K::CallExpression)
}

/// `(values)`
pub(super) fn arguments(p: &mut Parser<'_>) {
    let m = p.start();
    p.bump();
    items_closed(p, K::RightParen, "after the arguments", concatenation);
    m.complete(p, K::ArgumentList);
}

fn parenthesised(p: &mut Parser<'_>) -> Completed {
    let m = p.start();
    p.bump();
    inside_parens(p, "after this expression");
    m.complete(p, K::ParenExpression)
}

/// An expression and the parenthesis that closes it.
pub(super) fn inside_parens(p: &mut Parser<'_>, place: &str) {
    if !expression(p) {
        skip_item(p, K::RightParen);
    }
    p.expect(K::RightParen, place);
}

/// `durationof({ … })`
fn duration_of(p: &mut Parser<'_>) -> Completed {
    let m = p.start();
    p.bump();
    if p.expect(K::LeftParen, "after `durationof`, as in `durationof({ … })`") {
        statements::block(p, "after `durationof(`");
        p.expect(K::RightParen, "after the block");
    }
    m.complete(p, K::DurationofExpression)
}

/// `TYPE(value)`
fn cast(p: &mut Parser<'_>) -> Completed {
    let m = p.start();
    if p.at(K::ArrayKw) {
        array(p);
    } else {
        scalar(p);
    }
    if p.expect(K::LeftParen, "and a value after this type, as in `int[8](x)`") {
        inside_parens(p, "after the value that is cast");
    }
    m.complete(p, K::CastExpression)
}

/// `[…]` after what is indexed.
pub(super) fn index_operator(p: &mut Parser<'_>) {
    let m = p.start();
    p.bump();
    if p.at(K::LeftBrace) {
        set(p);
        p.expect(K::RightBracket, "after a set, which must be the only index");
    } else {
        if p.at(K::RightBracket) {
            p.expected("an index");
        }
        items_closed(p, K::RightBracket, "after the index", expression_or_range);
    }
    m.complete(p, K::IndexOperator);
}

/// `{a, b, c}`
pub(super) fn set(p: &mut Parser<'_>) {
    let m = p.start();
    p.bump();
    if p.at(K::RightBrace) {
        p.expected("a value: a set must not be empty");
    }
    items_closed(p, K::RightBrace, "after the values of the set", expression);
    m.complete(p, K::SetExpression);
}

/// A single index or a range of them.
fn expression_or_range(p: &mut Parser<'_>) -> bool {
    let first = if p.at(K::Colon) { None } else { p.nested(|p| binary(p, 0)) };
    if !p.at(K::Colon) {
        return first.is_some();
    }
    let m = match first {
        Some(first) => first.precede(p),
        None => p.start(),
    };
    range_tail(p);
    m.complete(p, K::RangeExpression);
    true
}

/// A range that nothing but a range can stand for.
pub(super) fn range(p: &mut Parser<'_>) {
    let m = p.start();
    if !p.at(K::Colon) {
        expression(p);
    }
    if p.at(K::Colon) {
        range_tail(p);
    } else {
        p.expect(K::Colon, "and the end of the range, as in `[0:7]`");
        skip_item(p, K::RightBracket);
    }
    m.complete(p, K::RangeExpression);
}

/// What stands in a range from its first colon on. Behind a second one there
/// must be an end.
fn range_tail(p: &mut Parser<'_>) {
    p.bump();
    if at_expression(p) {
        expression(p);
    }
    if p.eat(K::Colon) && !expression(p) {
        skip_item(p, K::RightBracket);
    }
}

/// What a declaration gives its variable.
pub(super) fn initialiser(p: &mut Parser<'_>) {
    if p.at(K::LeftBrace) {
        array_literal(p);
    } else {
        value(p);
    }
}

/// What may stand after `=` and `return`: an expression or a measurement.
pub(super) fn value(p: &mut Parser<'_>) {
    if p.at(K::MeasureKw) {
        measurement(p);
        return;
    }
    let Some(first) = concatenated(p) else { return };
    let is_call = matches!(first.kind(p), Some(K::NameRef | K::CallExpression));
    if is_call && p.at_any(&[K::Identifier, K::HardwareQubit]) && !p.starts_line() {
        let m = first.precede(p);
        quantum::operands(p, "after the operands of this measurement");
        m.complete(p, K::MeasureCall);
    }
}

/// `measure operand`
pub(super) fn measurement(p: &mut Parser<'_>) {
    let m = p.start();
    p.bump();
    if p.at(K::LeftParen) {
        p.error("`measure` takes its operand without parentheses");
    } else {
        quantum::operand(p);
    }
    m.complete(p, K::MeasureExpression);
}

/// `{…}` as the value of an array.
fn array_literal(p: &mut Parser<'_>) -> bool {
    if !p.fits(0) {
        p.too_deep();
        skip_block(p);
        return true;
    }
    let m = p.start();
    p.bump();
    items_closed(p, K::RightBrace, "after the entries of this row", element);
    m.complete(p, K::ArrayLiteral);
    true
}

/// A row or an entry of an array literal.
fn element(p: &mut Parser<'_>) -> bool {
    if p.at(K::LeftBrace) { p.nested(array_literal) } else { expression(p) }
}
