//! What a file declares: version, includes, gates, subroutines, variables.
//!
//! Each rule gets the marker of its statement, which the annotations before it
//! are in already.

use super::*;
use crate::tree::Insertion;
use expressions::{at_expression, expression, initialiser};
use rowan::TextRange;
use types::{array_reference, at_scalar, opt_designator, opt_return_signature, qubit, scalar};

/// The version line at the start of the file.
pub(super) fn opt_version(p: &mut Parser<'_>) {
    if p.at(K::OpenqasmKw) {
        let m = p.start();
        version(p, m);
    }
}

fn version(p: &mut Parser<'_>, m: Marker) {
    p.bump();
    p.version_two = p.at(K::VersionNumber) && p.text().trim_start_matches('0').starts_with('2');
    if !p.eat(K::VersionNumber) {
        p.expected("a version such as `3.0` after `OPENQASM`");
    }
    end_statement(p, m, K::VersionStatement, "after the version");
}

/// A version line that is not the first statement.
pub(super) fn late_version(p: &mut Parser<'_>, m: Marker) {
    p.error("the version line must be the first statement of the file");
    let inner = p.start();
    version(p, inner);
    m.complete(p, K::ErrorNode);
}

/// `include "path";`
pub(super) fn include(p: &mut Parser<'_>, m: Marker) {
    p.bump();
    quoted(p, "the path of a file in quotes after `include`");
    end_statement(p, m, K::IncludeStatement, "after this path");
}

/// `defcalgrammar "name";`
pub(super) fn calibration_grammar(p: &mut Parser<'_>, m: Marker) {
    p.bump();
    quoted(p, "the name of a grammar in quotes after `defcalgrammar`");
    end_statement(p, m, K::CalibrationGrammar, "after this name");
}

fn quoted(p: &mut Parser<'_>, what: &str) {
    if p.at_any(&[K::StringLiteral, K::BrokenString]) {
        if p.after_comment() {
            p.error("a comment cannot stand between this word and the text in quotes");
        }
        p.bump();
    } else {
        p.expected(what);
    }
}

/// `pragma` and the rest of its line.
pub(super) fn pragma(p: &mut Parser<'_>, m: Marker) {
    p.bump();
    if !p.eat(K::RestOfLine) {
        p.error("expected the content of the pragma on its line");
    }
    m.complete(p, K::Pragma);
}

/// `qubit[n] name;`
pub(super) fn qubits(p: &mut Parser<'_>, m: Marker) {
    qubit(p);
    let named = name(p, "a name for these qubits");
    if named && p.at(K::LeftBracket) {
        p.error("the size stands before the name: `qubit[2] q;`");
    }
    end_statement(p, m, K::QubitDeclaration, "after this declaration");
}

/// `qreg name[n];` or `creg name[n];`
pub(super) fn old_register(p: &mut Parser<'_>, m: Marker) {
    p.bump();
    name(p, "a name for this register");
    opt_designator(p);
    end_statement(p, m, K::OldDeclaration, "after this declaration");
}

/// A scalar or array variable; or an expression that begins with a cast.
pub(super) fn variable(p: &mut Parser<'_>, m: Marker) {
    if casts(p) {
        return statements::expression_statement(p, m);
    }
    types::scalar_or_array(p);
    name(p, "a name for this variable");
    if p.eat(K::Equals) {
        initialiser(p);
    } else if p.at(K::LeftBracket) {
        p.error("the size stands in the type, before the name: `bit[2] c;`");
    }
    end_statement(p, m, K::ClassicalDeclaration, "after this declaration");
}

/// Whether the type here is followed by a parenthesis instead of a name.
fn casts(p: &Parser<'_>) -> bool {
    let behind = match p.nth(1) {
        K::LeftBracket => p.behind_brackets(1),
        other => other,
    };
    behind == K::LeftParen
}

/// `const TYPE name = value;`
pub(super) fn constant(p: &mut Parser<'_>, m: Marker) {
    p.bump();
    if p.at(K::Identifier) && p.nth(1) == K::Equals {
        missing_type(p);
    } else if p.at(K::ArrayKw) {
        p.error("a constant has a scalar type; an array cannot be `const`");
        types::array(p);
    } else {
        scalar(p);
    }
    name(p, "a name for this constant");
    if p.expect(K::Equals, "and a value after the name of a constant") {
        initialiser(p);
    }
    end_statement(p, m, K::ConstDeclaration, "after this constant");
}

/// Reports a constant without a type. A literal value tells the type.
fn missing_type(p: &mut Parser<'_>) {
    let sign = usize::from(p.nth(2) == K::Minus);
    let word = match (p.nth(2 + sign), p.nth(3 + sign)) {
        (K::DecimalInteger, K::Semicolon) => Some("int "),
        (K::Float, K::Semicolon) => Some("float "),
        _ => None,
    };
    let range = p.range();
    let insertion = |text: &str| Insertion { offset: range.start(), text: text.into() };
    let message = "expected a type after `const`, as in `const int n = 8;`".to_owned();
    p.report(range, message, word.map(insertion).into_iter().collect());
}

/// `input TYPE name;` or `output TYPE name;`
pub(super) fn input_output(p: &mut Parser<'_>, m: Marker) {
    p.bump();
    types::scalar_or_array(p);
    name(p, "a name for this variable");
    if p.at(K::Equals) {
        p.error("an input or output has no initial value");
    }
    end_statement(p, m, K::IoDeclaration, "after this declaration");
}

/// `let name = value;`
pub(super) fn alias(p: &mut Parser<'_>, m: Marker) {
    p.bump();
    name(p, "a name for this alias");
    if p.expect(K::Equals, "after the name of an alias") {
        expressions::concatenation(p);
    }
    end_statement(p, m, K::AliasDeclaration, "after this alias");
}

/// `gate name(params) operands { … }`
pub(super) fn gate(p: &mut Parser<'_>, m: Marker) {
    p.bump();
    gate_head(p);
    statements::block(p, "and the body after the head of this gate");
    m.complete(p, K::GateDefinition);
}

/// `opaque name(params) operands;`, whose first word is no keyword.
pub(super) fn opaque(p: &mut Parser<'_>, m: Marker) {
    p.bump();
    gate_head(p);
    end_statement(p, m, K::OpaqueDeclaration, "after this declaration");
}

/// Name, parameters and operands of a gate.
fn gate_head(p: &mut Parser<'_>) {
    name(p, "a name for this gate");
    if p.at(K::LeftParen) {
        let m = p.start();
        p.bump();
        items_closed(p, K::RightParen, "after the parameters", |p| name(p, "a parameter name"));
        m.complete(p, K::ParameterList);
    }
    let m = p.start();
    if !p.at(K::Identifier) {
        p.expected("the operands of this gate");
    }
    items(p, K::LeftBrace, |p| name(p, "an operand name"));
    if p.at(K::LeftBracket) {
        p.error("the operands of a gate are single qubits, without a size");
    }
    if !p.at_any(&[K::LeftBrace, K::Semicolon, K::EndOfFile]) && !starts_statement(p) {
        p.expected("`,` or `{` after this operand");
        skip_item(p, K::LeftParen);
    }
    m.complete(p, K::OperandNames);
}

/// `def name(parameters) -> TYPE { … }`
pub(super) fn subroutine(p: &mut Parser<'_>, m: Marker) {
    p.bump();
    name(p, "a name for this subroutine");
    if p.at(K::LeftParen) {
        signature(p, def_parameter);
    } else {
        p.expect(K::LeftParen, "after the name of a subroutine");
    }
    opt_return_signature(p);
    statements::block(p, "and the body after the head of this subroutine");
    m.complete(p, K::SubroutineDefinition);
}

/// `extern name(types) -> TYPE;`, the parentheses being optional as in the
/// text of the standard.
pub(super) fn external(p: &mut Parser<'_>, m: Marker) {
    p.bump();
    name(p, "a name for this function");
    if p.at(K::LeftParen) {
        signature(p, extern_parameter);
    }
    opt_return_signature(p);
    end_statement(p, m, K::ExternDeclaration, "after this function");
}

fn signature(p: &mut Parser<'_>, parameter: impl FnMut(&mut Parser<'_>) -> bool) {
    let m = p.start();
    p.bump();
    items_closed(p, K::RightParen, "after the parameters", parameter);
    m.complete(p, K::SignatureList);
}

fn def_parameter(p: &mut Parser<'_>) -> bool {
    let m = p.start();
    let is_old = p.at_any(&[K::QregKw, K::CregKw]);
    let typed = parameter_type(p) && name(p, "a name for this parameter");
    if typed && is_old {
        opt_designator(p);
    }
    m.complete(p, K::SignatureParameter);
    typed
}

fn extern_parameter(p: &mut Parser<'_>) -> bool {
    let m = p.start();
    let is_old = p.at(K::CregKw);
    if p.at_any(&[K::QubitKw, K::QregKw]) {
        p.error("an external function takes classical values only");
    }
    let typed = parameter_type(p);
    if typed && is_old {
        opt_designator(p);
    }
    m.complete(p, K::SignatureParameter);
    typed
}

fn parameter_type(p: &mut Parser<'_>) -> bool {
    match p.current() {
        K::QubitKw => qubit(p),
        K::ReadonlyKw | K::MutableKw => array_reference(p),
        K::QregKw | K::CregKw => {
            let m = p.start();
            p.bump();
            m.complete(p, K::OldType);
            true
        }
        K::ArrayKw => {
            p.error("an array parameter begins with `readonly` or `mutable`");
            types::array(p)
        }
        _ => scalar(p),
    }
}

/// `cal { … }`
pub(super) fn cal(p: &mut Parser<'_>, m: Marker) {
    p.bump();
    calibration_body(p, "after `cal`");
    m.complete(p, K::CalStatement);
}

fn calibration_body(p: &mut Parser<'_>, place: &str) {
    if p.expect(K::LeftBrace, place) {
        p.eat(K::CalibrationBody);
        p.expect(K::RightBrace, "after this calibration body");
    } else {
        skip_statement(p);
    }
}

/// `defcal name(…) operands -> TYPE { … }`
pub(super) fn defcal(p: &mut Parser<'_>, m: Marker) {
    p.bump();
    let start = p.position();
    if p.at_any(&[K::MeasureKw, K::ResetKw, K::DelayKw]) {
        opt_wrapped(p, p.current(), K::Name);
    } else {
        name(p, "the name of what is calibrated");
    }
    if p.at(K::LeftParen) {
        signature(p, defcal_parameter);
    }
    let operands = p.start();
    if p.at_any(&[K::LeftBrace, K::Arrow]) {
        p.expected("the operands of this calibration");
    }
    items(p, K::LeftBrace, |p| p.eat(K::HardwareQubit) || name(p, "an operand"));
    operands_without_comma(p);
    operands.complete(p, K::DefcalOperands);
    opt_return_signature(p);
    forbidden_in_head(p, start);
    calibration_body(p, "and the body after the head of this calibration");
    m.complete(p, K::DefcalStatement);
}

fn defcal_parameter(p: &mut Parser<'_>) -> bool {
    let typed = at_scalar(p) || p.at_any(&[K::QubitKw, K::QregKw, K::CregKw]);
    if !typed || casts(p) {
        return at_expression(p) && expression(p) || {
            p.expected("a parameter or a value");
            false
        };
    }
    def_parameter(p)
}

/// Operands that follow each other without the comma between them.
fn operands_without_comma(p: &mut Parser<'_>) {
    while p.at_any(&[K::HardwareQubit, K::Identifier]) && !p.starts_line() {
        let offset = p.previous_end();
        let fix = Insertion { offset, text: ",".into() };
        let message = "expected `,` between the operands of a calibration".to_owned();
        p.report(TextRange::empty(offset), message, vec![fix]);
        p.bump();
        p.eat(K::Comma);
    }
}

/// Reports what the small set of tokens of a calibration head does not have.
fn forbidden_in_head(p: &mut Parser<'_>, start: usize) {
    for (kind, range) in p.taken_since(start) {
        let allowed = match kind {
            K::Minus | K::Plus | K::Star | K::Slash | K::ShiftLeft | K::ShiftRight => true,
            K::LeftBracket | K::RightBracket | K::LeftParen | K::RightParen => true,
            K::Comma | K::Arrow | K::Identifier | K::HardwareQubit => true,
            K::DecimalInteger | K::BinaryInteger | K::OctalInteger | K::HexInteger => true,
            K::Float | K::BitString => true,
            kind => kind.is_keyword(),
        };
        if !allowed {
            let message = "this cannot stand in the head of a calibration".to_owned();
            return p.report(range, message, Vec::new());
        }
    }
}
