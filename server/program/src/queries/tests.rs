//! What an editor is told, as text.

use std::sync::Arc;

use expect_test::{Expect, expect};
use grammar::TextSize;
use operator::Budget;

use super::*;
use crate::{Limits, NoFiles, Program};

const HEAD: &str = "OPENQASM 3.0;\ninclude \"stdgates.inc\";\n";

fn analysed(text: &str) -> Program {
    Program::analyse("test.qasm", Arc::from(text), &NoFiles, &Limits::default())
}

fn place(text: &str, piece: &str) -> TextSize {
    let at = text.find(piece).expect("the piece is in the text");
    TextSize::new(u32::try_from(at).expect("small"))
}

/// The hover at the first place of `piece`, as plain text.
fn check(text: &str, piece: &str, expected: Expect) {
    let text = format!("{HEAD}{text}");
    let program = analysed(&text);
    let found = hover(&program, place(&text, piece), &Budget::default());
    let blocks = found.map(|hover| hover.blocks).unwrap_or_default();
    let parts: Vec<String> = blocks
        .into_iter()
        .map(|block| match block {
            Block::Source(text) | Block::Text(text) | Block::Grid(text) => text,
        })
        .collect();
    expected.assert_eq(&parts.join("\n"));
}

#[test]
fn a_call_is_shown_at_its_own_values() {
    check(
        "qubit[2] tray;\nrx(pi/2) tray[1];\n",
        "rx(",
        expect![[r#"
            gate rx(theta) a
            Operator at `theta` = 3.8832 (`@cantle.sample` sets other values): rx(3.883222)
            -0.3624  -0.932i
            -0.932i  -0.3624
            Rows and columns in operand order: `a` is the most significant bit
            Cost: CX 0 · one-qubit 1 · two-qubit 0 · larger 0 · depth 1 (two-qubit 0)
            This call: rx(π/2)
              0.7071  -0.7071i
            -0.7071i    0.7071
            Rows and columns in the order `tray[1]`"#]],
    );
}

#[test]
fn modifiers_and_loops_are_part_of_a_call() {
    check(
        "qubit[2] tray;\nfor int i in [0:3] { negctrl @ x tray[1], tray[0]; }\n",
        "x tray",
        expect![[r#"
            gate x a
            Operator: Pauli X
            0  1
            1  0
            Rows and columns in operand order: `a` is the most significant bit
            Cost: CX 0 · one-qubit 1 · two-qubit 0 · larger 0 · depth 1 (two-qubit 0)
            The first of the 4 calls made here: negctrl[0] @ Pauli X
            0  1  0  0
            1  0  0  0
            0  0  1  0
            0  0  0  1
            Rows and columns in the order `tray[1]`, `tray[0]`"#]],
    );
}

#[test]
fn a_call_in_a_gate_body_names_the_operands() {
    check(
        "gate warm(by) a, b { ctrl @ ry(by) b, a; }\n",
        "ry(",
        expect![[r#"
            gate ry(theta) a
            Operator at `theta` = 3.8832 (`@cantle.sample` sets other values): ry(3.883222)
            -0.3624   -0.932
              0.932  -0.3624
            Rows and columns in operand order: `a` is the most significant bit
            Cost: CX 0 · one-qubit 1 · two-qubit 0 · larger 0 · depth 1 (two-qubit 0)
            This call at `by` = 3.8832: cry(3.883222)
            1  0        0        0
            0  1        0        0
            0  0  -0.3624   -0.932
            0  0    0.932  -0.3624
            Rows and columns in the order `b`, `a`"#]],
    );
}

#[test]
fn a_broken_claim_says_by_how_much() {
    check(
        "array[float[64], 2, 2] dry = {{1, 0}, {0, -1}};\n\
         @cantle.equals dry within 1e-9\ngate turn a { s a; }\n",
        "turn",
        expect![[r#"
            gate turn a
            ✗ claimed but not so: equals `dry` up to a global phase: error 7.7e-1 (allowed 1.0e-9)
            Operator: s
            1  0
            0  i
            Rows and columns in operand order: `a` is the most significant bit
            Cost: CX 0 · one-qubit 1 · two-qubit 0 · larger 0 · depth 1 (two-qubit 0)"#]],
    );
}

#[test]
fn a_claim_that_cannot_be_checked_says_why() {
    check(
        "@cantle.equals nothing\ngate turn a { s a; }\n",
        "turn",
        expect![[r#"
        gate turn a
        ? equals `nothing` up to a global phase: not checked, there is no gate or matrix `nothing`
        Operator: s
        1  0
        0  i
        Rows and columns in operand order: `a` is the most significant bit
        Cost: CX 0 · one-qubit 1 · two-qubit 0 · larger 0 · depth 1 (two-qubit 0)"#]],
    );
}

#[test]
fn an_encoding_shows_what_it_encodes() {
    check(
        "array[float[64], 2, 2] half = {{0.5, 0}, {0, 1}};\n\
         @cantle.encodes half ancilla 1 scale 1 within 1e-9\n\
         gate damp flag, a { x a; cry(2 * arccos(0.5)) a, flag; x a; }\n",
        "damp",
        expect![[r#"
            gate damp flag, a
            ✓ encodes `half`: error 1.1e-16 (allowed 1.0e-9), scale 1, 1 ancilla; success 0.625 on average (worst 0.25, best 1)
            Encoded matrix (scale 1 × corner, 2×2)
            0.5  0
              0  1
            Rows and columns in operand order: `a` is the most significant bit
            Cost: CX 2 · one-qubit 2 · two-qubit 1 · larger 0 · depth 3 (two-qubit 1)"#]],
    );
}

#[test]
fn names_of_other_kinds_show_their_declaration() {
    check("const int[32] n = 3;\nqubit[n] tray;\n", "n]", expect!["const int[32] n = 3"]);
    check(
        "qubit one;\nqubit[3] tray;\nh tray;\n",
        "tray;",
        expect![[r#"
        qubit[3] tray
        qubits 1 to 3 of the program's 4, in the order of declaration; qubit 0 is the most significant bit of the program's operator"#]],
    );
    check("qubit[3] tray;\n", "qubit", expect![""]);
}

#[test]
fn a_matrix_of_unknown_entries_is_no_trouble() {
    check(
        "array[float[64], 2, 2] odd = {{1, 0}, {0, nowhere}};\n",
        "odd",
        expect!["`odd`, a 2×2 matrix"],
    );
}

#[test]
fn hints_are_one_line_each() {
    let text = format!(
        "{HEAD}array[float[64], 2, 2] odd = {{{{1, 0}}, {{0, 2}}}};\n\
         @cantle.dense odd\ngate stand a {{}}\n\
         gate flip a {{ x a; }}\n\
         gate turn(by) a {{ rx(by) a; }}\n\
         @cantle.sample by = 0.3\ngate shown(by) a {{ rx(by) a; }}\n\
         @cantle.equals x\ngate wrong a {{ z a; }}\n\
         @cantle.equals x\ngate right a {{ h a; z a; h a; }}\n\
         @cantle.equals nothing\ngate lost a {{ h a; }}\n\
         gate nested a, b {{ flip a; h b; }}\n"
    );
    let program = analysed(&text);
    let whole = crate::TextRange::up_to(TextSize::of(text.as_str()));
    let found = hints(&program, whole, &Budget::default());
    let lines: Vec<String> = found
        .iter()
        .map(|hint| {
            let before = &text[..usize::from(hint.offset)];
            format!("{}  {}", before.lines().last().unwrap_or_default(), hint.label)
        })
        .collect();
    expect![[r#"
        gate stand a  stand-in for odd
        gate flip a  Pauli X
        gate shown(by) a  rx(0.3) at by = 0.3
        gate wrong a  ≠ x, error 1.4e0
        gate right a  ≈ x, error 0
        gate lost a  not checked: equals `nothing` up to a global phase
        gate nested a, b  Pauli X[0] ⊗ h[1]"#]]
    .assert_eq(&lines.join("\n"));
    let first = crate::TextRange::up_to(place(&text, "gate flip"));
    assert_eq!(hints(&program, first, &Budget::default()).len(), 1);
}

#[test]
fn a_stopped_budget_shows_no_operator_and_invents_none() {
    let text = format!("{HEAD}gate flip a {{ x a; }}\n");
    let program = analysed(&text);
    let budget = Budget::default();
    budget.stop();
    let whole = crate::TextRange::up_to(TextSize::of(text.as_str()));
    assert_eq!(hints(&program, whole, &budget), []);
}

#[test]
fn completions_know_where_they_are() {
    let offered = |text: &str, piece: &str| {
        let text = format!("{HEAD}{text}");
        let found = complete(&analysed(&text), place(&text, piece) + TextSize::of(piece));
        found.into_iter().map(|completion| completion.text).collect::<Vec<_>>()
    };
    let text = "array[float[64], 2, 2] odd = {{1, 0}, {0, 2}};\n\
                @cantle.dense od\ngate stand a {}\ngate other(by) b { rx(by) b; }\nqubit q;\n";
    assert_eq!(offered(text, "@cantle.dense od"), ["odd", "other", "stand"]);
    assert!(offered(text, "@can").contains(&"cantle.encodes".to_owned()));
    let inside = offered(text, "rx(by) b;");
    let outside = offered(text, "qubit q;");
    for name in ["by", "b"] {
        assert!(inside.iter().any(|known| known == name), "{inside:?}");
        assert!(!outside.iter().any(|known| known == name), "{outside:?}");
    }
    assert!(outside.iter().any(|known| known == "h") && !outside.iter().any(|known| known == "a"));
}

#[test]
fn stand_ins_are_found_from_their_calls() {
    let text = "array[float[64], 2, 2] odd = {{1, 0}, {0, 2}};\n\
                @cantle.dense odd\ngate stand a {}\ngate plain a { stand a; x a; }\n";
    let program = analysed(text);
    for (piece, found) in
        [("@cantle", true), ("stand a {", true), ("stand a;", true), ("x a", false), ("odd", false)]
    {
        let at = crate::TextRange::empty(place(text, piece));
        assert_eq!(stand_in_at(&program, at).is_some(), found, "{piece}");
    }
}
