//! Quantum statements: gate calls with their modifiers, operands, and the
//! statements of a single word.

use super::*;
use crate::tree::Insertion;
use expressions::{arguments, continued, expression, index_operator, inside_parens, measurement};
use rowan::TextRange;
use types::opt_designator;

/// A gate call or `gphase` with modifiers.
pub(super) fn modified_call(p: &mut Parser<'_>, m: Marker) {
    while p.at_any(&[K::InvKw, K::PowKw, K::CtrlKw, K::NegctrlKw]) {
        modifier(p);
    }
    match p.current() {
        K::GphaseKw => gphase(p, m),
        K::Identifier => gate_call(p, m),
        _ => {
            p.expected("the name of a gate after the modifier");
            end_statement(p, m, K::GateCall, "after this gate call");
        }
    }
}

/// `inv @`, `pow(k) @`, `ctrl(n) @` or `negctrl(n) @`
fn modifier(p: &mut Parser<'_>) {
    let m = p.start();
    let keyword = p.current();
    p.bump();
    if keyword == K::InvKw && p.at(K::LeftParen) {
        p.error("`inv` takes no number");
    }
    if keyword == K::PowKw {
        p.expect(K::LeftParen, "and the exponent after `pow`, as in `pow(2) @`");
        if p.previous() == K::LeftParen {
            inside_parens(p, "after the exponent");
        }
    } else if p.eat(K::LeftParen) {
        inside_parens(p, "after this number");
    }
    if p.at(K::AnnotationName) {
        glued_annotation(p);
    } else {
        p.expect(K::At, "after this modifier");
    }
    m.complete(p, K::Modifier);
}

/// The `@` of a modifier with a name glued to it, which makes the rest of the
/// line an annotation. A space between them mends it.
fn glued_annotation(p: &mut Parser<'_>) {
    let range = p.range();
    let offset = range.start() + rowan::TextSize::of('@');
    let message = "write a space after `@`; without it the rest of the line is an annotation";
    p.report(range, message.to_owned(), vec![Insertion { offset, text: " ".into() }]);
}

/// `name(params)[duration] operands;`, from its name on.
pub(super) fn gate_call(p: &mut Parser<'_>, m: Marker) {
    name_ref(p, "the name of a gate");
    if p.at(K::LeftParen) {
        arguments(p);
    }
    gate_call_tail(p, m);
}

/// Duration, operands and target of a gate call.
fn gate_call_tail(p: &mut Parser<'_>, m: Marker) {
    opt_designator(p);
    operands(p, "after the operands of this gate call");
    opt_target(p);
    end_statement(p, m, K::GateCall, "after this gate call");
}

/// `gphase(angle) operands;`, from its name on.
pub(super) fn gphase(p: &mut Parser<'_>, m: Marker) {
    p.bump();
    if p.at(K::LeftParen) {
        arguments(p);
    } else if p.at(K::Minus) || p.at_any(&[K::DecimalInteger, K::Float]) {
        bare_angle(p);
    }
    opt_designator(p);
    if p.at_any(&[K::Identifier, K::HardwareQubit]) {
        operands(p, "after the operands of this phase");
    }
    end_statement(p, m, K::GphaseCall, "after this phase");
}

/// An angle without its parentheses.
fn bare_angle(p: &mut Parser<'_>) {
    let start = p.range().start();
    let m = p.start();
    p.error("expected `(` before the angle of `gphase`");
    let reported = p.errors.len();
    expression(p);
    let end = p.previous_end();
    m.complete(p, K::ArgumentList);
    if let Some(error) = p.errors.get_mut(reported.wrapping_sub(1)) {
        let insertion = |offset, text: &str| Insertion { offset, text: text.into() };
        error.range = TextRange::new(start, end);
        error.message = "the angle of `gphase` stands in parentheses".into();
        error.fix = vec![insertion(start, "("), insertion(end, ")")];
    }
}

/// A word and any number of operands.
pub(super) fn listed(p: &mut Parser<'_>, m: Marker, kind: SyntaxKind, place: &str) {
    p.bump();
    opt_operands(p);
    end_statement(p, m, kind, place);
}

/// `delay[duration] operands;`
pub(super) fn delay(p: &mut Parser<'_>, m: Marker) {
    p.bump();
    if p.at(K::LeftBracket) {
        opt_designator(p);
    } else {
        p.expect(K::LeftBracket, "and the duration after `delay`, as in `delay[10ns] q;`");
    }
    opt_operands(p);
    end_statement(p, m, K::DelayStatement, "after this delay");
}

/// `reset operand;`
pub(super) fn reset(p: &mut Parser<'_>, m: Marker) {
    p.bump();
    operand(p);
    one_operand(p, "`reset`");
    end_statement(p, m, K::ResetStatement, "after this reset");
}

/// `measure operand;` or `measure operand -> target;`
pub(super) fn measure(p: &mut Parser<'_>, m: Marker) {
    measurement(p);
    one_operand(p, "`measure`");
    opt_target(p);
    end_statement(p, m, K::MeasureStatement, "after this measurement");
}

/// `-> target`
fn opt_target(p: &mut Parser<'_>) {
    if p.eat(K::Arrow) {
        if p.at(K::HardwareQubit) {
            p.error("the result of a measurement goes into bits");
        }
        operand(p);
    }
}

fn one_operand(p: &mut Parser<'_>, word: &str) {
    if p.at(K::Comma) {
        p.error(format!("{word} takes one operand; write one statement for each"));
    }
}

fn opt_operands(p: &mut Parser<'_>) {
    if p.at_any(&[K::Identifier, K::HardwareQubit]) && !is_next_line(p, 0) {
        operands(p, "after these operands");
    }
}

/// Whether the name `n` tokens on begins the next statement although the `;` before it
/// is missing: it stands on a new line and is followed by an operand.
pub(super) fn is_next_line(p: &Parser<'_>, n: usize) -> bool {
    p.nth_starts_line(n) && matches!(p.nth(n + 1), K::Identifier | K::HardwareQubit)
}

/// Operands between commas.
pub(super) fn operands(p: &mut Parser<'_>, place: &str) {
    let m = p.start();
    loop {
        operand(p);
        if !p.eat(K::Comma) || !p.at_any(&[K::Identifier, K::HardwareQubit]) {
            break;
        }
    }
    let ends = p.at_any(&[K::Semicolon, K::Arrow, K::RightBrace, K::EndOfFile]) || p.starts_line();
    if !ends && !p.has_error_here() {
        p.expected(&format!("`,` or `;` {place}"));
    }
    m.complete(p, K::OperandList);
}

/// A hardware qubit, or a name with its indices.
pub(super) fn operand(p: &mut Parser<'_>) {
    let m = p.start();
    if p.at(K::HardwareQubit) {
        p.bump();
        if p.at(K::LeftBracket) {
            p.error("a hardware qubit has no index");
        }
    } else if name_ref(p, "a qubit or a register") {
        indices(p);
    }
    m.complete(p, K::Operand);
}

fn indices(p: &mut Parser<'_>) {
    while p.at(K::LeftBracket) {
        p.nested(index_operator);
    }
}

/// `name(…)`: a gate call, or an expression.
pub(super) fn called(p: &mut Parser<'_>, m: Marker) {
    let name = p.start();
    p.bump();
    let name = name.complete(p, K::NameRef);
    let ((), levels) = p.measure(|p| p.nested(arguments));
    let behind = match p.current() {
        K::LeftBracket => p.behind_brackets(0),
        K::Identifier if is_next_line(p, 0) => K::Semicolon,
        kind => kind,
    };
    if matches!(behind, K::Identifier | K::HardwareQubit) {
        return gate_call_tail(p, m);
    }
    let call = name.precede(p).complete(p, K::CallExpression);
    continued(p, call, levels);
    end_statement(p, m, K::ExpressionStatement, "after this expression");
}
