//! What a program does: which statement begins here, blocks, control flow,
//! assignments.

use super::*;
use crate::nodes::ASSIGNMENT_SIGNS;
use crate::tree::Insertion;
use expressions::{expression, inside_parens, value};
use types::opt_designator;

/// One statement with the annotations before it. Takes at least one token.
pub(super) fn statement(p: &mut Parser<'_>) {
    let m = p.start();
    let annotated = annotations(p);
    if annotated && !takes_annotations(p.current()) {
        p.error("expected the statement that the annotation above is for");
        m.complete(p, K::ErrorNode);
        return;
    }
    match p.current() {
        K::OpenqasmKw => items::late_version(p, m),
        K::IncludeKw => items::include(p, m),
        K::DefcalgrammarKw => items::calibration_grammar(p, m),
        K::PragmaKw | K::HashPragmaKw => items::pragma(p, m),
        K::QubitKw => items::qubits(p, m),
        K::QregKw | K::CregKw => items::old_register(p, m),
        K::ConstKw => items::constant(p, m),
        K::InputKw | K::OutputKw => items::input_output(p, m),
        K::LetKw => items::alias(p, m),
        K::GateKw => items::gate(p, m),
        K::DefKw => items::subroutine(p, m),
        K::ExternKw => items::external(p, m),
        K::CalKw => items::cal(p, m),
        K::DefcalKw => items::defcal(p, m),
        K::ArrayKw => items::variable(p, m),
        _ if types::at_scalar(p) => items::variable(p, m),
        K::BoxKw => box_statement(p, m),
        K::IfKw => if_statement(p, m),
        K::ForKw => for_statement(p, m),
        K::WhileKw => while_statement(p, m),
        K::SwitchKw => switch_statement(p, m),
        K::LeftBrace => bare_block(p, m),
        K::ReturnKw => return_statement(p, m),
        K::BreakKw => word(p, m, K::BreakStatement, "after `break`"),
        K::ContinueKw => word(p, m, K::ContinueStatement, "after `continue`"),
        K::EndKw => word(p, m, K::EndStatement, "after `end`"),
        _ => quantum_or_other(p, m),
    }
}

/// Statements without a body of their own.
fn quantum_or_other(p: &mut Parser<'_>, m: Marker) {
    match p.current() {
        K::InvKw | K::PowKw | K::CtrlKw | K::NegctrlKw => quantum::modified_call(p, m),
        K::GphaseKw => quantum::gphase(p, m),
        K::BarrierKw => quantum::listed(p, m, K::BarrierStatement, "after this barrier"),
        K::NopKw => quantum::listed(p, m, K::NopStatement, "after this statement"),
        K::DelayKw => quantum::delay(p, m),
        K::ResetKw => quantum::reset(p, m),
        K::MeasureKw => quantum::measure(p, m),
        K::Identifier => named(p, m),
        K::Semicolon => {
            p.error("there is no empty statement; leave this `;` out");
            p.bump();
            m.complete(p, K::ErrorNode);
        }
        _ if expressions::at_expression(p) => expression_statement(p, m),
        _ => unknown(p, m),
    }
}

/// Text that begins no statement.
fn unknown(p: &mut Parser<'_>, m: Marker) {
    match p.current() {
        K::ElseKw => p.error("this `else` belongs to no `if`"),
        K::CaseKw | K::DefaultKw => p.error("this can only stand in a `switch`"),
        kind if kind.is_keyword() => {
            p.error(format!("`{}` cannot begin a statement", p.text()));
        }
        _ => p.expected("a statement"),
    }
    p.bump();
    skip_statement(p);
    m.complete(p, K::ErrorNode);
}

/// Annotations, each with the rest of its line.
fn annotations(p: &mut Parser<'_>) -> bool {
    let found = p.at(K::AnnotationName);
    while p.at(K::AnnotationName) {
        let m = p.start();
        p.bump();
        p.eat(K::RestOfLine);
        m.complete(p, K::Annotation);
    }
    found
}

/// Whether an annotation may stand before a statement that begins like this.
fn takes_annotations(kind: SyntaxKind) -> bool {
    !matches!(
        kind,
        K::LeftBrace
            | K::RightBrace
            | K::CaseKw
            | K::DefaultKw
            | K::ElseKw
            | K::PragmaKw
            | K::HashPragmaKw
            | K::OpenqasmKw
            | K::EndOfFile
    )
}

/// `{ … }`; `place` says where a missing one is expected.
pub(super) fn block(p: &mut Parser<'_>, place: &str) {
    if !p.at(K::LeftBrace) {
        p.expect(K::LeftBrace, place);
        skip_statement(p);
        // The braces may follow what was wrong before them.
        if !p.at(K::LeftBrace) || p.previous() == K::Semicolon {
            return;
        }
    }
    if !p.fits(1) {
        p.too_deep();
        skip_block(p);
        return;
    }
    let m = p.start();
    p.bump();
    p.nested(block_statements);
    if !p.eat(K::RightBrace) {
        p.expect(K::RightBrace, "to close this block");
        p.brace_was_missing();
    }
    m.complete(p, K::Block);
}

fn block_statements(p: &mut Parser<'_>) {
    while !p.at(K::RightBrace) && !p.at_end() {
        if p.brace_is_missing() && p.at_any(&[K::GateKw, K::DefKw, K::IncludeKw, K::OpenqasmKw]) {
            break;
        }
        statement(p);
    }
}

fn bare_block(p: &mut Parser<'_>, m: Marker) {
    m.abandon(p);
    block(p, "here");
}

/// A block or a single statement.
fn body(p: &mut Parser<'_>, place: &str) {
    match p.current() {
        K::LeftBrace => block(p, place),
        K::RightBrace | K::EndOfFile => p.expected(&format!("a block or a statement {place}")),
        _ if !p.fits(1) => {
            p.too_deep();
            skip_body(p);
        }
        _ => p.nested(statement),
    }
}

/// `box { … }` or `box[duration] { … }`
fn box_statement(p: &mut Parser<'_>, m: Marker) {
    p.bump();
    opt_designator(p);
    block(p, "and the body after `box`");
    m.complete(p, K::BoxStatement);
}

/// `if (condition) … else …`
fn if_statement(p: &mut Parser<'_>, m: Marker) {
    p.bump();
    condition(p, "and a condition after `if`", "after this condition");
    body(p, "after the condition");
    if p.at(K::ElseKw) {
        let m = p.start();
        p.bump();
        body(p, "after `else`");
        m.complete(p, K::ElseBranch);
    }
    m.complete(p, K::IfStatement);
}

/// A value in parentheses, which are missed but not needed to go on.
fn condition(p: &mut Parser<'_>, open: &str, close: &str) {
    if p.expect(K::LeftParen, open) {
        inside_parens(p, close);
    } else if expressions::at_expression(p) {
        expression(p);
    }
}

/// `for TYPE name in … body`
fn for_statement(p: &mut Parser<'_>, m: Marker) {
    p.bump();
    if p.at(K::Identifier) && p.nth(1) == K::InKw {
        let range = p.range();
        let fix = Insertion { offset: range.start(), text: "int ".into() };
        let message = "expected the type of the loop variable, as in `for int i in [0:7]`";
        p.report(range, message.to_owned(), vec![fix]);
    } else {
        types::scalar(p);
    }
    name(p, "a name for the loop variable");
    if p.expect(K::InKw, "after the loop variable") {
        iterated(p);
    }
    body(p, "after the head of this loop");
    m.complete(p, K::ForStatement);
}

/// What the loop variable runs over.
fn iterated(p: &mut Parser<'_>) {
    match p.current() {
        K::LeftBrace => expressions::set(p),
        K::LeftBracket => {
            p.bump();
            expressions::range(p);
            p.expect(K::RightBracket, "after this range");
        }
        _ => {
            expression(p);
        }
    }
}

/// `while (condition) body`
fn while_statement(p: &mut Parser<'_>, m: Marker) {
    p.bump();
    condition(p, "and a condition after `while`", "after this condition");
    body(p, "after the condition");
    m.complete(p, K::WhileStatement);
}

/// `switch (selector) { … }`
fn switch_statement(p: &mut Parser<'_>, m: Marker) {
    p.bump();
    condition(p, "and a value after `switch`", "after this value");
    if p.expect(K::LeftBrace, "and the cases after the value") {
        while !p.at(K::RightBrace) && !p.at_end() {
            switch_item(p);
        }
        p.expect(K::RightBrace, "to close this `switch`");
    } else {
        skip_statement(p);
    }
    m.complete(p, K::SwitchStatement);
}

/// One case. Anything else in its place is reported and becomes a statement in
/// an error node, so that it stays visible.
fn switch_item(p: &mut Parser<'_>) {
    let m = p.start();
    match p.current() {
        K::CaseKw => {
            p.bump();
            if p.at(K::LeftBrace) {
                p.expected("a value after `case`");
            }
            items(p, K::LeftBrace, expression);
            block(p, "and the body after the values of this case");
            m.complete(p, K::SwitchCase);
        }
        K::DefaultKw => {
            p.bump();
            block(p, "and the body after `default`");
            m.complete(p, K::SwitchDefault);
        }
        _ => {
            p.expected("`case` or `default`");
            if p.fits(1) {
                p.nested(statement);
            } else {
                skip_body(p);
            }
            m.complete(p, K::ErrorNode);
        }
    }
}

/// A statement of a single word.
fn word(p: &mut Parser<'_>, m: Marker, kind: SyntaxKind, place: &str) {
    p.bump();
    end_statement(p, m, kind, place);
}

/// `return;` or `return value;`
fn return_statement(p: &mut Parser<'_>, m: Marker) {
    p.bump();
    if p.at(K::MeasureKw) || expressions::at_expression(p) {
        value(p);
    }
    end_statement(p, m, K::ReturnStatement, "after this `return`");
}

/// A statement that begins with a name: a gate call, an assignment or an
/// expression.
fn named(p: &mut Parser<'_>, m: Marker) {
    if p.version_two && p.text() == "opaque" && p.nth(1) == K::Identifier {
        return items::opaque(p, m);
    }
    match p.nth(1) {
        K::Identifier | K::HardwareQubit if !quantum::is_next_line(p, 1) => {
            quantum::gate_call(p, m)
        }
        K::LeftBracket => indexed(p, m),
        K::LeftParen => quantum::called(p, m),
        kind if ASSIGNMENT_SIGNS.contains(&kind) => assignment(p, m),
        _ => expression_statement(p, m),
    }
}

/// `name[…]`: a gate call with a duration, an assignment to an element, or an
/// expression.
fn indexed(p: &mut Parser<'_>, m: Marker) {
    match p.behind_brackets(1) {
        K::Identifier | K::HardwareQubit => quantum::gate_call(p, m),
        kind if ASSIGNMENT_SIGNS.contains(&kind) => assignment(p, m),
        _ => expression_statement(p, m),
    }
}

/// `target = value;` and the compound assignments.
fn assignment(p: &mut Parser<'_>, m: Marker) {
    quantum::operand(p);
    p.bump();
    if p.at(K::LeftBrace) {
        p.error("a list in braces can only be the first value of a declared array");
    } else {
        value(p);
    }
    end_statement(p, m, K::AssignmentStatement, "after this assignment");
}

/// An expression as a statement.
pub(super) fn expression_statement(p: &mut Parser<'_>, m: Marker) {
    expression(p);
    end_statement(p, m, K::ExpressionStatement, "after this expression");
}
