//! What a replacement writes, and what it refuses.

use expect_test::{Expect, expect};
use operator::{Circuit, Gate};

use super::{analyse, found};
use crate::{Edit, Program, Replacement, apply_edits};

/// A made-up circuit of the right shape: what is tested is the text.
fn circuit(ancillas: usize, wires: usize) -> Replacement {
    let mut circuit = Circuit::new(ancillas + wires);
    circuit.push(Gate::Ry(std::f64::consts::FRAC_PI_3), &[0]);
    circuit.cx(0, ancillas + wires - 1);
    let method = "dilation".to_owned();
    Replacement { circuit, ancillas, scale: 2.5, error: 1.25e-15, method }
}

const HEAD: &str = "OPENQASM 3.0;\ninclude \"stdgates.inc\";\n\
    array[float, 2, 2] m = {{1, 2}, {3, 4}};\n\
    // what it is\n\
    @cantle.dense m within 1e-8\n\
    gate step t {}\n";

fn edits(program: &Program, ancillas: usize) -> Result<Vec<Edit>, String> {
    program.replacement("step", &circuit(ancillas, 1)).map_err(|cannot| cannot.reason)
}

/// The text behind the gate after a replacement with two ancillas; the whole
/// must have no findings.
fn check(rest: &str, expected: Expect) {
    let text = format!("{HEAD}{rest}");
    let program = analyse(&text);
    assert_eq!(found(&program), Vec::<String>::new(), "before: {rest}");
    let new = apply_edits(&text, &edits(&program, 2).expect(rest));
    assert_eq!(found(&analyse(&new)), Vec::<String>::new(), "after: {new}");
    no_ancilla_is_shared(&new);
    let gate_end = new.find("}\n").expect("a gate") + 2;
    expected.assert_eq(&new[gate_end..]);
}

/// No two calls that the program makes have an ancilla in common.
fn no_ancilla_is_shared(text: &str) {
    let lowered = analyse(text).program_circuit().expect("a circuit");
    let wires = lowered.circuit.steps.iter().flat_map(|step| &step.targets);
    let mut used: Vec<&String> = wires
        .map(|wire| &lowered.wire_names[*wire])
        .filter(|name| name.starts_with("step_ancilla"))
        .collect();
    let calls = used.len();
    used.sort();
    used.dedup();
    assert_eq!(used.len(), calls, "{text}");
}

#[test]
fn the_gate_is_rewritten_in_place() {
    let program = analyse(HEAD);
    for (ancillas, scale, expected) in [
        (
            1,
            2.5,
            expect![[r#"
                // what it is
                // dilation: 1 ancilla, 1 CX, depth 2, measured error 1.2e-15
                @cantle.encodes m ancilla 1 scale 2.5 within 1e-8
                gate step a0, t {
                    ry(pi/3) a0;
                    cx a0, t;
                }
            "#]],
        ),
        (
            0,
            1.0,
            expect![[r#"
                // what it is
                // dilation: no ancilla, 1 CX, depth 2, measured error 1.2e-15
                @cantle.equals m within 1e-8
                gate step t {
                    ry(pi/3) t;
                    cx t, t;
                }
            "#]],
        ),
    ] {
        let with = Replacement { scale, ..circuit(ancillas, 1) };
        let edits = program.replacement("step", &with).expect("edits");
        let new = apply_edits(HEAD, &edits);
        expected.assert_eq(&new[new.find("// what").expect("comment")..]);
    }
}

#[test]
fn line_endings_indentation_and_comments_are_kept() {
    let text = "@cantle.dense m\r\n\tgate step a0 { /* soon */ }\r\n\
                array[float, 2, 2] m = {{1, 2}, {3, 4}};\r\n";
    let new = apply_edits(text, &edits(&analyse(text), 1).expect("edits"));
    expect![[r#"
        include "stdgates.inc";\r
        // dilation: 1 ancilla, 1 CX, depth 2, measured error 1.2e-15\r
        @cantle.encodes m ancilla 1 scale 2.5 within 1e-8\r
        	gate step a_0, a0 { /* soon */\r
        		ry(pi/3) a_0;\r
        		cx a_0, a0;\r
        	}\r
        array[float, 2, 2] m = {{1, 2}, {3, 4}};\r
    "#]]
    .assert_eq(&new.replace('\r', "\\r"));
    assert_eq!(found(&analyse(&new)), Vec::<String>::new());
}

#[test]
fn every_caller_passes_ancillas() {
    check(
        "qubit[3] q;\nh q;\nstep q[0];\nctrl @ step q[0], q[1];\ninv @ step q[2];\n",
        expect![[r#"
            qubit[3] q;
            h q;
            // Ancillas of step, in |0> at first: every call has its own, as factors of a product must.
            qubit[6] step_ancilla;
            step step_ancilla[0], step_ancilla[1], q[0];
            ctrl @ step q[0], step_ancilla[2], step_ancilla[3], q[1];
            inv @ step step_ancilla[4], step_ancilla[5], q[2];
        "#]],
    );
}

#[test]
fn gates_that_call_it_pass_them_on() {
    check(
        "gate twice(x) u, v { rx(x) u; step u; negctrl @ step u, v; }\n\
         gate outer u, v { twice(1) u, v; step v; }\n\
         qubit[2] q;\n@other.note\nouter q[0], q[1];\n",
        expect![[r#"
            gate twice(x) step_a0, step_a1, step_a2, step_a3, u, v { rx(x) u; step step_a0, step_a1, u; negctrl @ step u, step_a2, step_a3, v; }
            gate outer step_a0, step_a1, step_a2, step_a3, step_a4, step_a5, u, v { twice(1) step_a0, step_a1, step_a2, step_a3, u, v; step step_a4, step_a5, v; }
            qubit[2] q;
            // Ancillas of step, in |0> at first: every call has its own, as factors of a product must.
            qubit[6] step_ancilla;
            @other.note
            outer step_ancilla[0], step_ancilla[1], step_ancilla[2], step_ancilla[3], step_ancilla[4], step_ancilla[5], q[0], q[1];
        "#]],
    );
}

#[test]
fn loops_and_registers_take_as_many_as_they_need() {
    check(
        "qubit[3] q;\nqubit step_ancilla;\nstep q;\n\
         for int i in [0:2] { step q[i]; for uint k in [4:-2:0] { box { step q[i]; } } }\n\
         for int i in {1, 2} if (i == 1) step q[0];\n",
        expect![[r#"
            qubit[3] q;
            qubit step_ancilla;
            // Ancillas of step, in |0> at first: every call has its own, as factors of a product must.
            qubit[34] step_ancilla2;
            step step_ancilla2[0:2], step_ancilla2[3:5], q;
            for int i in [0:2] { step step_ancilla2[2*i + 6], step_ancilla2[2*i + 7], q[i]; for uint k in [4:-2:0] { box { step step_ancilla2[6*i + 2*((k - 4)/(-2)) + 12], step_ancilla2[6*i + 2*((k - 4)/(-2)) + 13], q[i]; } } }
            for int i in {1, 2} if (i == 1) step step_ancilla2[2*i + 28], step_ancilla2[2*i + 29], q[0];
        "#]],
    );
}

#[test]
fn claims_of_callers_count_the_new_ancillas() {
    check(
        "array[float, 4, 4] w = {{1,0,0,0},{0,1,0,0},{0,0,1,0},{0,0,0,1}};\n\
         @cantle.encodes m ancilla 1 within 1e-3\ngate one a, b { step b; }\n\
         @cantle.equals w\ngate two a, b { step b; }\n",
        expect![[r#"
            array[float, 4, 4] w = {{1,0,0,0},{0,1,0,0},{0,0,1,0},{0,0,0,1}};
            @cantle.encodes m ancilla 3 within 1e-3
            gate one step_a0, step_a1, a, b { step step_a0, step_a1, b; }
            @cantle.encodes w ancilla 2
            gate two step_a0, step_a1, a, b { step step_a0, step_a1, b; }
        "#]],
    );
}

#[test]
fn what_cannot_be_written_is_refused() {
    for (rest, words) in [
        ("qubit q; pow(2) @ step q;", "power of a block encoding"),
        ("gate g a { pow(0.5) @ step a; }", "power of a block encoding"),
        ("gate g a { for int i in [0:1] { step a; } }", "loop inside a gate"),
        ("def f(qubit q) { step q; } qubit r; f(r);", "subroutine"),
        ("qubit q; while (true) { step q; }", "at run time"),
        ("qubit q; for int j in [0:1] for int i in [0:j] { step q; }", "is not constant"),
        ("qubit q; for int i in {0, 1, 5} { step q; }", "cannot be counted"),
        ("qubit q; for int i in [0:10000] { step q; }", "past the limit of 4096"),
    ] {
        let program = analyse(&format!("{HEAD}{rest}"));
        assert_eq!(found(&program), Vec::<String>::new(), "{rest}");
        let reason = edits(&program, 2).expect_err(rest);
        assert!(reason.contains(words), "{rest}: {reason}");
        assert!(edits(&program, 0).is_ok(), "without ancillas: {rest}");
    }
    for (text, words) in [
        (HEAD.replace("step t", "step ry"), "hides the gate"),
        (HEAD.replace("3.0", "2.0"), "version 2"),
        (HEAD.replace("step t {}", "other t {}"), "no stand-in"),
        (HEAD.replace("include \"stdgates.inc\";", "gate cx a, b {}"), "a gate `cx` of its own"),
    ] {
        let reason = edits(&analyse(&text), 1).expect_err(words);
        assert!(reason.contains(words), "{reason}");
    }
}
