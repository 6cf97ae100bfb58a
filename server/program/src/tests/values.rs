//! Constant expressions: what they are worth, and what has no value.

use super::{analyse, found};

/// The value of a constant as it is shown, or the findings.
fn value(ty: &str, expression: &str) -> Result<String, Vec<String>> {
    let program = analyse(&format!("const int three = 3;\nconst {ty} it = {expression};"));
    let findings = found(&program);
    if !findings.is_empty() {
        return Err(findings);
    }
    let symbol = program.symbols().iter().position(|symbol| symbol.name == "it");
    Ok(program.facts.values[symbol.expect("a symbol")].to_string())
}

#[test]
fn expressions_are_worth_what_the_standard_says() {
    for (ty, expression, expected) in [
        // Precedence: power binds tighter than a sign and to the right.
        ("int", "-2 ** 2", "-4"),
        ("int", "2 ** 3 ** 2", "512"),
        ("float", "2.0 ** -1 ** 2 * 3", "1.5"),
        ("int", "1 + 2 * three - 4 / 2", "5"),
        ("int", "1 << 2 + 1", "8"),
        ("bool", "1 < 2 == true", "true"),
        ("int", "6 & 3 | 8 ^ 1", "11"),
        ("bool", "false || true && !false", "true"),
        // Integers as in C99.
        ("int", "-7 / 2", "-3"),
        ("int", "-7 % 2", "-1"),
        ("int", "mod(7, -2)", "1"),
        ("int", "9223372036854775807 + 1", "-9223372036854775808"),
        ("int[8]", "200", "-56"),
        ("uint[8]", "-1", "255"),
        ("uint[4]", "uint[4](15) + uint[4](1)", "0"),
        ("int", "0x1F + 0b11 + 0o17 + 1_000", "1049"),
        ("int", "int(2.9) + int(-2.9)", "0"),
        ("float", "1 / 2", "0.0"),
        ("float", "1 / 2.0", "0.5"),
        // Functions and constants.
        ("float", "sqrt(16) + floor(2.7) + ceiling(2.1)", "9.0"),
        ("float", "cos(π) + sin(tau) * 0", "-1.0"),
        ("float", "log(euler)", "1.0"),
        ("float", "arctan(1) * 4 / pi", "1.0"),
        ("float", "sqrt(-1)", "NaN"),
        ("int", "popcount(\"10110\")", "3"),
        ("bit[4]", "rotl(\"0011\", 1)", "\"0110\""),
        ("bit[4]", "rotr(\"0011\", 1)", "\"1001\""),
        ("uint[8]", "rotl(uint[8](129), 1)", "3"),
        // Complex numbers.
        ("complex", "2im * 2im", "-4.0+0.0im"),
        ("complex", "(1 + 1 im) / 2", "0.5+0.5im"),
        ("float", "real(3 - 2im) + imag(3 - 2im)", "1.0"),
        // Bit strings: the rightmost character is bit 0.
        ("int[2]", "\"10\"", "-2"),
        ("bit", "\"10\"[1]", "true"),
        ("bit", "\"10\"[-1]", "true"),
        ("bit[4]", "\"01\" ++ \"10\"", "\"0110\""),
        ("bit[3]", "~\"101\" | \"001\"", "\"011\""),
        ("bit[3]", "\"101\" << 1", "\"010\""),
        ("bool", "\"101\" == 5", "true"),
        // Angles are whole fractions of a turn.
        ("bit[4]", "bit[4](angle[4](pi / 2))", "\"0100\""),
        ("angle[4]", "angle[4](3 * pi / 2) + angle[4](pi)", "1.5707963267948966"),
        ("angle[4]", "tau - 0.001", "0.0"),
        ("float", "float(angle[8](pi) / 2) / pi", "0.5"),
        ("uint[4]", "angle[4](pi) / angle[4](pi / 4)", "4"),
        ("duration", "2 * 50ns + 1us", "1.1e-6s"),
    ] {
        assert_eq!(value(ty, expression), Ok(expected.to_owned()), "{ty} {expression}");
    }
}

#[test]
fn expressions_without_a_value_are_told() {
    for (ty, expression, expected) in [
        ("int", "1 / 0", "type-mismatch: 1 / 0"),
        ("int", "2 ** -1", "type-mismatch: 2 ** -1"),
        ("int", "\"101\"[3]", "index-out-of-range: \"101\"[3]"),
        ("int", "nothing + 1", "unknown-name: nothing"),
        ("int", "sin(1, 2)", "parameter-count: sin(1, 2)"),
        ("float", "1ns + 1", "type-mismatch: 1ns + 1"),
        ("int", "340282366920938463463374607431768211455", "limit-reached"),
        ("bit[2]", "\"011\"", "type-mismatch: \"011\""),
        ("int[65]", "1", "limit-reached: int[65]"),
        ("complex", "1im < 2", "type-mismatch: 1im < 2"),
    ] {
        let findings = value(ty, expression).expect_err(expression);
        assert_eq!(findings.len(), 1, "{expression}: {findings:?}");
        assert!(findings[0].starts_with(expected), "{expression}: {findings:?}");
    }
}
