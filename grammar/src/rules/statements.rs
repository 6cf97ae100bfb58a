//! What a program does: gate calls and other quantum statements, control flow,
//! assignments.

use super::*;
use crate::nodes::ASSIGNMENT_SIGNS;
use crate::tree::Insertion;
use expressions::{arguments, expression, index_operator, inside_parens, measurement, value};
use rowan::TextRange;
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
        K::InvKw | K::PowKw | K::CtrlKw | K::NegctrlKw => modified_call(p, m),
        K::GphaseKw => gphase(p, m),
        K::BarrierKw => listed(p, m, K::BarrierStatement, "after this barrier"),
        K::NopKw => listed(p, m, K::NopStatement, "after this statement"),
        K::DelayKw => delay(p, m),
        K::ResetKw => reset(p, m),
        K::MeasureKw => measure(p, m),
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

/// A gate call or `gphase` with modifiers.
fn modified_call(p: &mut Parser<'_>, m: Marker) {
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
fn gate_call(p: &mut Parser<'_>, m: Marker) {
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
fn gphase(p: &mut Parser<'_>, m: Marker) {
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
fn listed(p: &mut Parser<'_>, m: Marker, kind: SyntaxKind, place: &str) {
    p.bump();
    opt_operands(p);
    end_statement(p, m, kind, place);
}

/// `delay[duration] operands;`
fn delay(p: &mut Parser<'_>, m: Marker) {
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
fn reset(p: &mut Parser<'_>, m: Marker) {
    p.bump();
    operand(p);
    one_operand(p, "`reset`");
    end_statement(p, m, K::ResetStatement, "after this reset");
}

/// `measure operand;` or `measure operand -> target;`
fn measure(p: &mut Parser<'_>, m: Marker) {
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
fn is_next_line(p: &Parser<'_>, n: usize) -> bool {
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

/// A statement that begins with a name: a gate call, an assignment or an
/// expression.
fn named(p: &mut Parser<'_>, m: Marker) {
    if p.version_two && p.text() == "opaque" && p.nth(1) == K::Identifier {
        return items::opaque(p, m);
    }
    match p.nth(1) {
        K::Identifier | K::HardwareQubit if !is_next_line(p, 1) => gate_call(p, m),
        K::LeftBracket => indexed(p, m),
        K::LeftParen => called(p, m),
        kind if ASSIGNMENT_SIGNS.contains(&kind) => assignment(p, m),
        _ => expression_statement(p, m),
    }
}

/// `name[…]`: a gate call with a duration, an assignment to an element, or an
/// expression.
fn indexed(p: &mut Parser<'_>, m: Marker) {
    match p.behind_brackets(1) {
        K::Identifier | K::HardwareQubit => gate_call(p, m),
        kind if ASSIGNMENT_SIGNS.contains(&kind) => assignment(p, m),
        _ => expression_statement(p, m),
    }
}

/// `name(…)`: a gate call, or an expression.
fn called(p: &mut Parser<'_>, m: Marker) {
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
    expressions::continued(p, call, levels);
    end_statement(p, m, K::ExpressionStatement, "after this expression");
}

/// `target = value;` and the compound assignments.
fn assignment(p: &mut Parser<'_>, m: Marker) {
    operand(p);
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
