//! One table of what is wrong and where.

use super::{Texts, found, with_library};
use crate::{Limits, Program, apply_edits};

#[test]
fn right_programs_have_no_findings() {
    for text in [
        "",
        "qubit[3] q; h q; cx q[0], q[1:2];",
        "qubit[3] q; let a = q[{0, 2}] ++ q[1]; x a[-1];",
        "gate g(θ) a, b { cx a, b; rz(θ/2) b; ctrl @ gphase(θ) a; } qubit[2] q; g(pi/4) q[0], q[1];",
        "qubit[4] q; for int i in [0:2] { cx q[i], q[i + 1]; } for int i in {0, 3} x q[i];",
        "qubit[2] q; bit[2] c; c = measure q; if (c[0]) { x q[0]; } else { h q[1]; }",
        "qubit[2] q; ctrl(1) @ negctrl @ inv @ pow(2) @ x q[0], q[1], $0;",
        "const int n = 2 ** 3 - 6; qubit[n] q; x q[n - 1];",
        "const float f = 2 * sin(pi / 6) + sqrt(2.0); const complex w = 1.5im * f; qubit q; rx(real(w) + f) q;",
        "def f(qubit[2] q, int n) -> bit { x q[0]; bit b; b = measure q[n]; return b; } qubit[2] r; bit c = f(r, 1);",
        "qubit q; barrier q; barrier; delay[10ns] q; box { x q; } box[1us] { nop q; }",
        "input float theta; qubit q; rx(theta) q; while (true) { x q; break; }",
        "array[int[8], 3] a = {1, 2, 3}; array[float, 2, 2] m = {{1, 2}, {pi, 1/2}}; qubit q; x q;",
        "qubit q; int i = 3; i += 2; for int k in [0:i] { rx(k * pi / i) q; } switch (i) { case 1 { x q; } default { y q; } }",
        "angle[4] a = pi; qubit q; rx(a) q; U(0, 0, 0) q;",
        "@cantle.matrix unitary, real\narray[float, 2, 2] m = {{0, 1}, {1, 0}};\n@cantle.dense m within 1e-8\ngate g a {}\nqubit q; g q;",
        "@cantle.matrix pauli XX + 0.5*ZI\narray[complex[float[64]], 4, 4] m;\n@cantle.encodes m ancilla 1\ngate g c, a, b { cx a, b; }",
        "@other.thing with ; strange { content\nqubit q;\n@cantle.allow unknown-name\nx q;",
    ] {
        let program = with_library(text);
        assert_eq!(found(&program), Vec::<String>::new(), "{text}");
    }
}

#[test]
fn wrong_programs_are_told_where() {
    for (text, expected) in [
        ("qubit[2] q; hh q[0];", &["unknown-name: hh"][..]),
        ("x r;", &["unknown-name: r"]),
        ("qubit q; qubit q;", &["duplicate-name: q"]),
        ("gate x a {}", &["duplicate-name: x"]),
        ("const int pi = 3;", &["duplicate-name: pi"]),
        ("qubit q; rx q;", &["parameter-count: rx"]),
        ("qubit q; x(1) q;", &["parameter-count: 1"]),
        ("qubit q; cx q;", &["operand-count: q"]),
        ("qubit[3] q; ctrl @ x q[0], q[1], q[2];", &["operand-count: q[0], q[1], q[2]"]),
        ("qubit[2] q; qubit[3] r; cx q, r;", &["register-size: r"]),
        ("qubit[2] q; cx q[1], q[1];", &["repeated-operand: q[1]"]),
        ("qubit[2] q; let a = q[1]; cx q[1], a;", &["repeated-operand: a"]),
        ("qubit[2] q; cx q, q[1];", &["repeated-operand: q[1]"]),
        ("qubit[4] q; for int i in [0:3] { cx q[i], q[2]; }", &["repeated-operand: q[2]"]),
        ("gate g a, b { cx a, a; }", &["repeated-operand: a"]),
        ("qubit[2] q; x q[2];", &["index-out-of-range: 2"]),
        ("qubit[2] q; x q[-3];", &["index-out-of-range: -3"]),
        ("qubit[2] q; x q[0:5];", &["index-out-of-range: 0:5"]),
        ("qubit[3] q; x q[2:1];", &["index-out-of-range: 2:1"]),
        ("qubit q; x q[0];", &["type-mismatch: q[0]"]),
        ("qubit[4] q; for int i in [0:4] x q[i];", &["index-out-of-range: i"]),
        ("int n = 3; qubit[n] q;", &["not-constant: n"]),
        ("gate g(t) a { ctrl(t) @ gphase(1) a; }", &["not-constant: t"]),
        ("const int n = 1 / 0;", &["type-mismatch: 1 / 0"]),
        ("const int n = 2.5;", &["type-mismatch: 2.5"]),
        ("qubit q; rx(q) q;", &["type-mismatch: q"]),
        ("qubit q; pow(1im) @ x q;", &["type-mismatch: 1im"]),
        ("qubit q; bit b; x b;", &["type-mismatch: b"]),
        ("qubit q; gate g a { x q; }", &["not-allowed-in-gate: q"]),
        ("gate g a { bit b; }", &["not-allowed-in-gate: bit b;"]),
        ("gate g a { measure a; }", &["not-allowed-in-gate: measure a;"]),
        ("gate g a { x a[0]; }", &["not-allowed-in-gate: a[0]", "type-mismatch: a[0]"]),
        ("gate g a { g a; }", &["unknown-name: g"]),
        ("if (true) { qubit q; }", &["syntax: qubit q;"]),
        ("break;", &["syntax: break;"]),
        ("qubit[1000000000] q;", &["limit-reached: [1000000000]"]),
        ("for int i in [0:1000000000000] {}", &["limit-reached: 0:1000000000000"]),
        ("qubit[2] q; ctrl(1000) @ x q;", &["limit-reached: 1000"]),
        ("qubit[2] q; ctrl(0) @ x q;", &["type-mismatch: 0"]),
        ("qubit q; x;", &["operand-count: x;"]),
        ("include \"no.inc\"; qubit q; later q;", &["include-not-found: include \"no.inc\";"]),
        ("array[float, 2, 2] m = {{1, 2}, {3}};", &["matrix-ragged: {3}"]),
        ("array[float, 2, 2] m = {{1, 2}, {3, 1.0/0}};", &["matrix-not-finite: 1.0/0"]),
        ("array[float, 2, 2] m = {{1, 2}, {3, log(-1)}};", &["matrix-not-finite: log(-1)"]),
        ("array[float, 3, 2] m = {{1, 2}, {3, 4}};", &["type-mismatch: {{1, 2}, {3, 4}}"]),
        ("array[complex, 65536, 65536] m;", &["matrix-too-large: array[complex, 65536, 65536]"]),
        (
            "array[float, 3, 3] m = {{1,0,0},{0,1,0},{0,0,1}};\n@cantle.dense m\ngate g a, b {}",
            &["matrix-not-power-of-two: m"],
        ),
        (
            "array[float, 1, 2] m = {{1,0}};\n@cantle.dense m\ngate g a {}",
            &["matrix-not-square: m"],
        ),
        (
            "array[float, 2, 2] m = {{1,0},{0,1}};\n@cantle.dense m\ngate g a, b {}",
            &["operand-count: g a, b"],
        ),
        ("@cantle.dense m\ngate g a {}", &["unknown-name: m"]),
        ("@cantle.dens m\ngate g a {}", &["malformed-annotation: @cantle.dens"]),
        ("@cantle.dense m\nqubit q;", &["malformed-annotation: @cantle.dense m"]),
        ("@cantle.clean b\ngate g a {}", &["unknown-name: b"]),
        ("@cantle.sample t = 1\ngate g a {}", &["unknown-name: t"]),
    ] {
        assert_eq!(found(&with_library(text)), expected, "{text}");
    }
}

#[test]
fn fixes_mend_what_they_are_for() {
    for (text, mended) in [
        ("qubit q; h q;", "include \"stdgates.inc\";\nqubit q; h q;"),
        ("OPENQASM 3;\nqubit q; h q;", "OPENQASM 3;\ninclude \"stdgates.inc\";\nqubit q; h q;"),
        (
            "include \"stdgates.inc\"; qubit tray; x trya;",
            "include \"stdgates.inc\"; qubit tray; x tray;",
        ),
        (
            "include \"stdgates.inc\"; qubit tray; swpa tray, $0;",
            "include \"stdgates.inc\"; qubit tray; swap tray, $0;",
        ),
    ] {
        let program = super::analyse(text);
        let fix = program.findings()[0].fixes.first().expect(text);
        let fixed = apply_edits(text, &fix.edits);
        assert_eq!(fixed, mended);
        assert_eq!(found(&super::analyse(&fixed)), Vec::<String>::new());
    }
}

#[test]
fn includes_are_read_and_cycles_stop() {
    let files = Texts([("a.inc", "gate g a {}\n"), ("loop.inc", "include \"loop.inc\";")].into());
    for (text, expected) in [
        ("include \"a.inc\"; qubit q; g q;", &[][..]),
        ("include \"a.inc\"; include \"a.inc\";", &["duplicate-name: include \"a.inc\";"]),
        ("include \"loop.inc\";", &["include-not-found: include \"loop.inc\";"]),
    ] {
        let program = Program::analyse("m", text.into(), &files, &Limits::default());
        assert_eq!(found(&program), expected, "{text}");
    }
}

#[test]
fn strange_texts_end_soon() {
    let deep = |open: &str, close: &str| {
        format!("const float x = {}1{};", open.repeat(100_000), close.repeat(100_000))
    };
    let doubling: String =
        (1..40).map(|k| format!("gate g{k} a {{ g{0} a; g{0} a; }}\n", k - 1)).collect();
    for text in [
        deep("(", ")"),
        deep("-", ""),
        format!("const float x = 1{};", "+1".repeat(100_000)),
        format!("gate g0 a {{ x a; }}\n{doubling}qubit q; g39 q;"),
        "qubit[60000] q; ".to_owned() + &"h q;".repeat(100),
        "{".repeat(10_000),
        "if (true) ".repeat(10_000),
        "for int i in [0:100000] for int j in [0:100000] gphase(i*j);".to_owned(),
    ] {
        let program = with_library(&text);
        let _circuit = program.program_circuit();
    }
}
