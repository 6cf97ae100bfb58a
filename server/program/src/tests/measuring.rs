//! Claims that hold, claims that do not, and what is said of each.

use operator::{Budget, Circuit, Gate};

use super::{found, with_library};
use crate::{Measured, Outcome, Replacement, apply_edits};

const MATRICES: &str = "array[float, 2, 2] one = {{1, 0}, {0, 1}};\n\
    array[float, 2, 2] sum = {{1, 1}, {1, 1}};\n\
    array[complex, 2, 2] flip = {{0, 1}, {1, 0}};\n\
    array[complex, 2, 2] turn = {{0, -1im}, {1im, 0}};\n\
    array[float, 2, 2] near = {{0.6, 0.8}, {0.8000001, -0.6}};\n";

/// The first claim of a text behind the matrices, measured.
fn measure(text: &str) -> Measured {
    let program = with_library(&format!("{MATRICES}{text}"));
    assert_eq!(found(&program), Vec::<String>::new(), "{text}");
    program.measure(&program.claims()[0], &Budget::default())
}

#[test]
fn claims_are_measured() {
    let holds = (true, 0.0);
    for (text, (holds, error)) in [
        // cos(π/3) = 1/2 on the ancilla: the corner is half the identity.
        ("@cantle.encodes one ancilla 1 scale 2\ngate g c, a { ry(2*pi/3) c; id a; }", holds),
        ("@cantle.encodes one\ngate g c, a { ry(2*pi/3) c; }", holds),
        ("@cantle.encodes one scale 3\ngate g c, a { ry(2*pi/3) c; }", (false, 0.5)),
        // A sum of two unitaries: ½(I + X).
        ("@cantle.encodes sum ancilla 1 scale 2\ngate g c, a { h c; cx c, a; h c; }", holds),
        ("@cantle.encodes sum ancilla 1 scale 2\ngate g c, a { h c; cx c, a; }", (false, f64::NAN)),
        (
            "@cantle.encodes sum scale 2 within 0.1\ngate g c, a { h c; cx c, a; ry(0.01) c; h c; }",
            holds_at(0.01),
        ),
        ("@cantle.equals flip\ngate g a { x a; }", holds),
        ("@cantle.equals flip\ngate g a { gphase(1); x a; }", holds),
        ("@cantle.equals flip exactphase\ngate g a { rx(pi) a; }", (false, 2_f64.sqrt())),
        ("@cantle.equals turn exactphase\ngate g a { y a; }", holds),
        ("gate f(t) a { rx(t) a; }\n@cantle.equals f\ngate g(t) a { h a; rz(t) a; h a; }", holds),
        (
            "gate f(t) a { rx(t) a; }\n@cantle.equals f\ngate g(t) a { rx(2*t) a; }",
            (false, f64::NAN),
        ),
        ("@cantle.sample t = 0\n@cantle.equals one\ngate g(t) a { rx(t) a; }", holds),
        ("@cantle.clean c\ngate g a, c { cx a, c; z c; cx a, c; }", holds),
        ("@cantle.clean c\ngate g a, c { cx a, c; }", (false, 1.0)),
        ("@cantle.clean a, c\ngate g a, c { ry(0.2) a; }", (false, 0.1_f64.sin())),
        ("qubit[3] q; x q[0];\n@cantle.equals flip\nbox { h q[2]; z q[2]; h q[2]; }", holds),
        ("qubit q;\n@cantle.equals one\nfor int i in [0:1] { x q; }", holds),
        ("qubit q;\n@cantle.equals one\nfor int i in [0:2] { x q; }", (false, f64::NAN)),
        ("@cantle.dense sum\ngate g a {}", holds),
        ("@cantle.budget cx 1, depth 3\ngate g c, a { h c; cx c, a; h c; }", (true, f64::NAN)),
        ("@cantle.budget cx 0\ngate g c, a { cx c, a; }", (false, f64::NAN)),
    ] {
        let measured = measure(text);
        let expected = if holds { Outcome::Holds } else { Outcome::Broken };
        assert_eq!(measured.outcome, expected, "{text}: {measured:?}");
        let found = measured.error.unwrap_or(f64::NAN);
        // A sixteenth of the tolerances in the table is plenty of rounding.
        let close = error.is_nan() || (found - error).abs() < 1e-9 || (holds && found < error);
        assert!(close, "{text}: {found} is not {error}");
    }
}

fn holds_at(error: f64) -> (bool, f64) {
    (true, error)
}

#[test]
fn properties_are_measured() {
    for (array, property, holds) in [
        ("{{0, 1}, {1, 0}}", "unitary", true),
        ("{{0, 1}, {1, 1}}", "unitary", false),
        ("{{0.6, 0.8}, {0.8, -0.6}}", "unitary", true),
        ("{{0.6, 0.8}, {0.8000001, -0.6}}", "unitary", false),
        ("{{1, 1im}, {-1im, 1}}", "hermitian", true),
        ("{{1, 1im}, {1im, 1}}", "hermitian", false),
        ("{{1, 1im}, {1im, 1}}", "symmetric", true),
        ("{{1, 0}, {0, 1im}}", "diagonal", true),
        ("{{1, 0}, {0, 1im}}", "real", false),
        ("{{2, 1}, {1, 2}}", "positive", true),
        ("{{1, 2}, {2, 1}}", "positive", false),
    ] {
        let text = format!("@cantle.matrix {property}\narray[complex, 2, 2] it = {array};");
        let measured = measure(&text);
        let expected = if holds { Outcome::Holds } else { Outcome::Broken };
        assert_eq!(measured.outcome, expected, "{text}: {measured:?}");
    }
}

#[test]
fn what_is_found_is_told() {
    let measured = measure("@cantle.encodes one\ngate g c, a { ry(2*pi/3) c; }");
    assert_eq!(measured.ancillas, Some(1));
    assert!(measured.scale.is_some_and(|scale| (scale - 2.0).abs() < 1e-12));
    assert!(measured.success.is_some_and(|success| (success.worst - 0.25).abs() < 1e-12));
    let small = measure("@cantle.encodes one scale 0.5\ngate g c, a { ry(2*pi/3) c; }");
    assert!(small.note.is_some_and(|note| note.contains("no unitary has a corner")));
    let phase = measure("@cantle.equals flip\ngate g a { rx(pi) a; }");
    assert!(phase.note.is_some_and(|note| note.contains("global phase only")));
    let dirty = measure("@cantle.clean c, d\ngate g a, c, d { cx a, d; }");
    assert!(dirty.note.is_some_and(|note| note.contains("`d`") && !note.contains("`c`")));
    let points = measure("@cantle.equals one\ngate g(t) a { rx(t) a; rx(-t) a; }");
    assert_eq!(points.samples.len(), 3);
    let stated = measure("@cantle.sample t = 0.5\n@cantle.equals one\ngate g(t) a { id a; }");
    assert_eq!(stated.samples, [[0.5]]);
}

#[test]
fn what_cannot_be_decided_says_why() {
    let wide = (0..13).map(|k| format!("q{k}")).collect::<Vec<_>>().join(", ");
    for (text, words) in [
        (format!("@cantle.clean q0\ngate g {wide} {{ x q1; }}"), "13 qubits are past the limit"),
        ("gate f a, b { id a; }\n@cantle.equals f\ngate g a { x a; }".to_owned(), "another number"),
        (
            "qubit q; reset q;\n@cantle.equals one\nbox { id q; }".to_owned(),
            "no single operator up to this block",
        ),
        ("@cantle.equals one\ndef f(qubit q) { x q; }".to_owned(), "subroutines are not lowered"),
        ("@cantle.budget error 1e-3\ngate g a { x a; }".to_owned(), "not known here: error"),
    ] {
        let outcome = measure(&text).outcome;
        let Outcome::Undecided(reason) = outcome else { panic!("{text}: {outcome:?}") };
        assert!(reason.contains(words), "{text}: {reason}");
    }
}

/// ½(I + X) by a sum of two unitaries, written, read again and measured.
#[test]
fn a_written_encoding_is_what_it_claims() {
    let text = "OPENQASM 3.0;\ninclude \"stdgates.inc\";\n\
                array[float, 2, 2] sum = {{1, 1}, {1, 1}};\n\
                @cantle.dense sum within 1e-12\ngate step a {}\n\
                gate twice a { step a; step a; }\nqubit q; twice q;";
    let mut circuit = Circuit::new(2);
    circuit.push(Gate::H, &[0]);
    circuit.cx(0, 1);
    circuit.push(Gate::H, &[0]);
    let program = super::analyse(text);
    let method = "pauli-sum".to_owned();
    let with = Replacement { circuit, ancillas: 1, scale: 2.0, error: 0.0, method };
    let new = apply_edits(text, &program.replacement("step", &with).expect("edits"));
    let new = new.replacen("gate twice", "@cantle.encodes square ancilla 2 scale 4\ngate twice", 1);
    let new = new.replacen("qubit", "array[float, 2, 2] square = {{2, 2}, {2, 2}};\nqubit", 1);
    let program = super::analyse(&new);
    assert_eq!(found(&program), Vec::<String>::new(), "{new}");
    for claim in program.claims() {
        let measured = program.measure(claim, &Budget::default());
        assert_eq!(measured.outcome, Outcome::Holds, "{claim:?}: {measured:?}");
    }
}
