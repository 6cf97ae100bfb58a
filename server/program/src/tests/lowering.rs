//! What gates mean: pairs of bodies that are one operator, phase included.
//!
//! Source of the pairs: OpenQASM 3.1, chapters "Gates" and "Standard library".

use operator::{Budget, Gate};

use super::{analyse, found, with_library};
use crate::{Limits, Outcome, Program};

/// The outcome of `left` being exactly `right`, both on a, b, c.
fn compare(left: &str, right: &str) -> (Outcome, Option<f64>) {
    let text = format!(
        "gate half(t) a {{ rx(t / 2) a; }}\n\
         gate pair(t) a, b {{ half(t) a; cx a, b; gphase(t); half(-t) b; }}\n\
         gate right a, b, c {{ {right} }}\n\
         @cantle.equals right exactphase within 1e-12\n\
         gate left a, b, c {{ {left} }}\n"
    );
    let program = with_library(&text);
    assert_eq!(found(&program), Vec::<String>::new(), "{left} | {right}");
    let measured = program.measure(&program.claims()[0], &Budget::default());
    (measured.outcome, measured.error)
}

#[test]
fn these_are_the_same() {
    for (left, right) in [
        ("ctrl @ x a, b;", "cx a, b;"),
        ("CX a, b;", "cx a, b;"),
        ("ctrl(2) @ x a, b, c;", "ccx a, b, c;"),
        ("negctrl @ x a, b;", "x a; cx a, b; x a;"),
        ("ctrl @ negctrl @ x a, b, c;", "x b; ccx a, b, c; x b;"),
        ("negctrl(2) @ x a, b, c;", "x a; x b; ccx a, b, c; x b; x a;"),
        ("ctrl @ swap b, a, c;", "cswap b, a, c;"),
        ("swap a, c;", "cx a, c; cx c, a; cx a, c;"),
        ("ctrl @ gphase(0.7) b;", "p(0.7) b;"),
        ("ctrl @ ctrl @ gphase(0.7) b, c;", "cp(0.7) b, c;"),
        ("negctrl @ gphase(0.7) b;", "x b; p(0.7) b; x b;"),
        ("ctrl @ rz(0.7) a, b;", "cp(0.7) a, b; p(-0.35) a;"),
        ("inv @ gphase(0.7);", "gphase(-0.7);"),
        ("pow(3) @ gphase(0.7);", "gphase(2.1);"),
        // Fractional powers take eigenphases in (−π, π].
        ("inv @ pow(0.5) @ z a;", "sdg a;"),
        ("pow(0.5) @ inv @ z a;", "s a;"),
        ("pow(0.5) @ rx(3*pi) a;", "gphase(pi); rx(1.5*pi) a;"),
        ("pow(0.5) @ ctrl @ x a, b;", "ctrl @ sx a, b;"),
        ("pow(1/2) @ x a;", "id a;"),
        ("pow(2) @ sx a;", "x a;"),
        ("pow(-1) @ s a;", "sdg a;"),
        ("pow(-3) @ pair(0.3) a, b;", "inv @ pow(3) @ pair(0.3) a, b;"),
        ("inv @ U(1, 2, 3) a;", "U(-1, -3, -2) a;"),
        ("inv @ sx a;", "sx a; x a;"),
        ("crx(3*pi) a, b;", "ctrl @ rx(3*pi) a, b;"),
        ("crx(3*pi) a, b;", "crx(pi) a, b; z a;"),
        ("U(pi, 0, pi) a;", "gphase(pi/2); x a;"),
        ("U(pi/2, 0, pi) a;", "gphase(pi/4); h a;"),
        ("u3(0.3, 0.5, 0.7) a;", "rz(0.7) a; ry(0.3) a; rz(0.5) a;"),
        ("u2(0.5, 0.7) a;", "u3(pi/2, 0.5, 0.7) a;"),
        ("u2(0, pi) a;", "gphase(-pi/2); h a;"),
        ("u1(0.7) a; phase(0.2) b;", "p(0.7) a; p(0.2) b;"),
        ("cu(0.1, 0.2, 0.3, 0.4) a, b;", "ctrl @ gphase(0.4) a; ctrl @ U(0.1, 0.2, 0.3) a, b;"),
        ("ctrl @ u3(0.3, 0.5, 0.7) a, b;", "ctrl @ U(0.3, 0.5, 0.7) a, b; p(-0.75) a;"),
        ("cy a, b; cz b, c; ch a, c;", "ctrl @ y a, b; ctrl @ z b, c; ctrl @ h a, c;"),
        ("pair(0.4) a, b;", "rx(0.2) a; cx a, b; gphase(0.4); rx(-0.2) b;"),
        ("inv @ pair(0.4) a, b;", "rx(0.2) b; gphase(-0.4); cx a, b; rx(-0.2) a;"),
        ("ctrl @ pair(0.4) c, a, b;", "crx(0.2) c, a; ccx c, a, b; p(0.4) c; crx(-0.2) c, b;"),
        ("for int i in [1:3] { rx(0.1 * i) a; }", "rx(0.6) a;"),
        ("for int i in {2, 5} p(i * 0.1) a;", "p(0.7) a;"),
        ("barrier a; delay[10ns] b; nop c; barrier;", "id a;"),
    ] {
        let (outcome, error) = compare(left, right);
        assert_eq!(outcome, Outcome::Holds, "{left} | {right}: {error:?}");
    }
}

#[test]
fn these_are_not() {
    for (left, right) in [
        ("crx(3*pi) a, b;", "crx(pi) a, b;"),
        ("cx a, b;", "cx b, a;"),
        ("u3(pi, 0, pi) a;", "x a;"),
        ("x a; gphase(1e-6);", "x a;"),
        ("rz(0.7) a;", "p(0.7) a;"),
    ] {
        let (outcome, error) = compare(left, right);
        assert_eq!(outcome, Outcome::Broken, "{left} | {right}");
        assert!(error.is_some_and(|error| error > 1e-7), "{left}: {error:?}");
    }
}

/// Each step as gate name and wires, in short.
fn steps(program: &Program) -> Vec<String> {
    let lowered = program.program_circuit().expect("a circuit");
    assert_eq!(lowered.origins.len(), lowered.circuit.steps.len());
    let name = |wire: &usize| lowered.wire_names[*wire].clone();
    let steps = lowered.circuit.steps.iter().map(|step| {
        let wires: Vec<String> =
            step.controls.iter().map(|c| &c.wire).chain(&step.targets).map(name).collect();
        let gate = match &step.gate {
            Gate::Call(definition) => definition.name.clone(),
            Gate::Dense(matrix) => format!("dense{}", matrix.rows()),
            other => format!("{other:?}"),
        };
        format!("{gate} {}", wires.join(","))
    });
    let mut steps: Vec<String> = steps.collect();
    if let Some(cut) = lowered.cut {
        steps.push(format!("cut: {}", cut.reason));
    }
    steps
}

#[test]
fn programs_become_steps() {
    for (text, expected) in [
        ("qubit[2] q; qubit r; h q; x r;", &["H q[0]", "H q[1]", "X r"][..]),
        ("qubit[2] q; qubit[2] r; cx q, r;", &["X q[0],r[0]", "X q[1],r[1]"]),
        ("qubit[2] q; qubit r; cx q, r;", &["X q[0],r", "X q[1],r"]),
        ("qubit[1] q; qubit r; cx r, q;", &["X r,q[0]"]),
        (
            "qubit[4] q; x q[-1]; x q[1:2]; x q[3:-3:0];",
            &["X q[3]", "X q[1]", "X q[2]", "X q[3]", "X q[0]"],
        ),
        (
            "qubit[3] q; let a = q[{2, 0}] ++ q[1]; x a[0]; let b = a[1:2]; x b;",
            &["X q[2]", "X q[0]", "X q[1]"],
        ),
        ("x $3; x $1; x $3;", &["X $3", "X $1", "X $3"]),
        ("qubit[0] q; x q;", &[]),
        (
            "qubit[3] q; for int i in [2:-1:1] { if (i == 2) { x q[i]; } else { h q[i]; } }",
            &["X q[2]", "H q[1]"],
        ),
        (
            "qubit q; int n = 0; for int i in [1:9] { n += i; if (n > 5) { break; } x q; }",
            &["X q", "X q"],
        ),
        ("qubit q; for bit b in \"10\" { rx(b) q; }", &["Rx(0.0) q", "Rx(1.0) q"]),
        ("qubit q; box { x q; box { y q; } } { z q; }", &["X q", "Y q", "Z q"]),
        ("qubit q; x q; reset q; x q;", &["X q", "cut: qubits are reset here"]),
        ("qubit q; x q; bit c = measure q; y q;", &["X q", "cut: qubits are measured here"]),
        (
            "bit c; qubit q; if (c) { x q; }",
            &["cut: the condition depends on a variable without a value"],
        ),
        ("input int n; qubit[4] q; x q[n];", &["cut: it depends on an `input`"]),
        ("input float v; qubit q; x q; rx(v) q;", &["X q", "cut: it depends on an `input`"]),
        (
            "qubit q; while (false) { x q; }",
            &["cut: how often this loop turns is known only at run time"],
        ),
        ("def f(qubit q) { x q; } qubit q; f(q);", &["cut: a subroutine is called here"]),
        (
            "gate g(t) a { rx(t) a; } qubit q; g(1) q; g(1) q; g(2) q; end; x q;",
            &["g q", "g q", "g q"],
        ),
        (
            "array[float, 2, 2] m = {{1, 2}, {3, 4}};\n@cantle.dense m\ngate g a {} qubit[2] q; ctrl @ g q[1], q[0];",
            &["dense2 q[1],q[0]"],
        ),
    ] {
        let program = with_library(text);
        assert_eq!(found(&program), Vec::<String>::new(), "{text}");
        assert_eq!(steps(&program), expected, "{text}");
    }
}

#[test]
fn definitions_are_shared_by_parameter_values() {
    let program = with_library("gate g(t) a { rx(t) a; } qubit q; g(1) q; g(1.0) q; g(2) q;");
    let lowered = program.program_circuit().expect("a circuit");
    let definition = |k: usize| match &lowered.circuit.steps[k].gate {
        Gate::Call(definition) => std::sync::Arc::as_ptr(definition),
        other => panic!("{other:?}"),
    };
    assert_eq!(definition(0), definition(1));
    assert_ne!(definition(0), definition(2));
}

#[test]
fn limits_refuse_in_words() {
    let tree: String = (1..30)
        .map(|k| format!("gate g{k}(t) a {{ g{0}(2*t + 0.1) a; g{0}(3*t + 0.7) a; }}\n", k - 1))
        .collect();
    let chain: String = (1..500).map(|k| format!("gate g{k} a {{ g{} a; }}\n", k - 1)).collect();
    for (text, words) in [
        (format!("gate g0(t) a {{ rx(t) a; }}\n{tree}qubit q; g29(1) q;"), "parameter values"),
        (format!("gate g0 a {{ x a; }}\n{chain}qubit q; g499 q;"), "call each other deeper"),
    ] {
        let circuit = with_library(&text).program_circuit();
        let reason = circuit.map(|_| ()).expect_err(words).reason;
        assert!(reason.contains(words), "{reason}");
    }
    let limits = Limits { qubits: 3, ..Limits::default() };
    let text = "qubit[2] a; qubit[2] b;";
    let program = Program::analyse("m", text.into(), &crate::NoFiles, &limits);
    assert_eq!(found(&program), ["limit-reached: qubit[2] b;"]);
}

#[test]
fn version_2_files_keep_their_own_u_and_cx() {
    let text = "OPENQASM 2.0;\nqreg q[2];\ncreg c[2];\ngate g a { U(0.1, 0.2, 0.3) a; }\n\
                CX q[0], q[1];\nmeasure q -> c;";
    let program = analyse(text);
    assert_eq!(found(&program), Vec::<String>::new());
    let circuit = program.gate_circuit("g", &[]).expect("a circuit").circuit;
    let own = operator::evaluate(&circuit, &Budget::default()).expect("an operator");
    let determinant = own[(0, 0)] * own[(1, 1)] - own[(0, 1)] * own[(1, 0)];
    assert!((determinant.re - 1.0).abs() < 1e-12, "Rz Ry Rz has determinant 1");
}
