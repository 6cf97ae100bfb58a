//! Types, and the brackets that carry sizes.

use super::*;
use crate::nodes::SCALAR_KEYWORDS;
use expressions::expression;

/// Whether a scalar type begins here.
pub(super) fn at_scalar(p: &Parser<'_>) -> bool {
    p.at_any(SCALAR_KEYWORDS)
}

/// A scalar or array type.
pub(super) fn scalar_or_array(p: &mut Parser<'_>) -> bool {
    if p.at(K::ArrayKw) { array(p) } else { scalar(p) }
}

/// A scalar type with its width.
pub(super) fn scalar(p: &mut Parser<'_>) -> bool {
    if !at_scalar(p) {
        p.expected("a type such as `int`, `float[64]` or `bit[4]`");
        return false;
    }
    if !p.fits(0) {
        p.too_deep();
        return false;
    }
    let m = p.start();
    let keyword = p.current();
    p.bump();
    match keyword {
        K::BoolKw | K::DurationKw | K::StretchKw => {}
        K::ComplexKw if p.eat(K::LeftBracket) => {
            if !p.nested(scalar) {
                skip_item(p, K::RightBracket);
            }
            p.expect(K::RightBracket, "after the type of the two parts");
        }
        K::ComplexKw => {}
        _ => opt_designator(p),
    }
    m.complete(p, K::ScalarType);
    true
}

/// `array[TYPE, sizes]`
pub(super) fn array(p: &mut Parser<'_>) -> bool {
    let m = p.start();
    p.bump();
    if p.expect(K::LeftBracket, "after `array`, as in `array[float[64], 2, 2]`") {
        element_type(p);
        sizes(p);
    }
    m.complete(p, K::ArrayType);
    true
}

/// `readonly array[TYPE, …]` or `mutable array[TYPE, …]`
pub(super) fn array_reference(p: &mut Parser<'_>) -> bool {
    let m = p.start();
    p.bump();
    if p.expect(K::ArrayKw, "after this word")
        && p.expect(K::LeftBracket, "after `array`, as in `array[float[64], 2, 2]`")
    {
        element_type(p);
        if p.eat(K::HashDimKw) {
            p.expect(K::Equals, "after `#dim`");
            expression(p);
            p.expect(K::RightBracket, "after the number of dimensions");
        } else {
            sizes(p);
        }
    }
    m.complete(p, K::ArrayReferenceType);
    true
}

/// The type of the entries and the comma behind it.
fn element_type(p: &mut Parser<'_>) {
    if !scalar(p) {
        skip_item(p, K::RightBracket);
    }
    p.expect(K::Comma, "and the sizes after the type of the entries");
}

/// The sizes and the closing bracket.
fn sizes(p: &mut Parser<'_>) {
    if p.at(K::RightBracket) {
        p.expected("the size of at least one dimension");
    }
    items_closed(p, K::RightBracket, "after the sizes of the array", expression);
}

/// `qubit` or `qubit[n]`
pub(super) fn qubit(p: &mut Parser<'_>) -> bool {
    let m = p.start();
    p.bump();
    opt_designator(p);
    m.complete(p, K::QubitType);
    true
}

/// `[value]`
pub(super) fn opt_designator(p: &mut Parser<'_>) {
    if p.at(K::LeftBracket) {
        let m = p.start();
        p.bump();
        if !expression(p) {
            skip_item(p, K::RightBracket);
        }
        p.expect(K::RightBracket, "after this value");
        m.complete(p, K::Designator);
    }
}

/// `-> TYPE`
pub(super) fn opt_return_signature(p: &mut Parser<'_>) {
    if p.at(K::Arrow) {
        let m = p.start();
        p.bump();
        scalar(p);
        m.complete(p, K::ReturnSignature);
    }
}
