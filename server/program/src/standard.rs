//! The gates of the language and of its standard library, as operators.
//!
//! Each gate is what the standard's mathematics says, global phase included:
//! `cu` is C(e^{iγ}U), `CX` is C(X), `u3` is Rz(φ)Ry(θ)Rz(λ) and `u2(φ, λ)` is
//! `u3(π/2, φ, λ)`. (Source: OpenQASM 3.1, "Gates" and "Standard library".)

use operator::{Circuit, Control, Gate};

/// A built-in gate.
pub(crate) struct StandardGate {
    pub(crate) name: &'static str,
    pub(crate) params: &'static [&'static str],
    pub(crate) operands: &'static [&'static str],
    /// Appends its steps for these parameter values to a circuit that has
    /// one wire an operand.
    steps: fn(&[f64], &mut Circuit),
}

/// The name of the file that brings the standard gates into scope.
pub(crate) const LIBRARY: &str = "stdgates.inc";

/// The only gate that is always in scope.
pub(crate) static U: StandardGate = StandardGate {
    name: "U",
    params: &["theta", "phi", "lambda"],
    operands: &["q"],
    steps: |p, c| c.push(Gate::U(p[0], p[1], p[2]), &[0]),
};

/// `U` of a version 2 file, which is `u3` without version 3's phase.
pub(crate) static OLD_U: StandardGate =
    StandardGate { name: "U", params: &["theta", "phi", "lambda"], operands: &["q"], steps: u3 };

/// The controlled NOT that is always in scope in a version 2 file.
pub(crate) static OLD_CX: StandardGate = StandardGate {
    name: "CX",
    params: &[],
    operands: &["c", "t"],
    steps: |_, c| controlled(c, Gate::X),
};

impl StandardGate {
    /// The gate's circuit; `params` has as many values as the gate has
    /// parameters.
    pub(crate) fn circuit(&self, params: &[f64]) -> Circuit {
        let mut circuit = Circuit::new(self.operands.len());
        (self.steps)(params, &mut circuit);
        circuit
    }
}

fn controlled(circuit: &mut Circuit, gate: Gate) {
    circuit.push_controlled(gate, &[Control::one(0)], &[1]);
}

/// Rz(φ)Ry(θ)Rz(λ) = e^{−i(θ+φ+λ)/2} U(θ, φ, λ).
fn u3(p: &[f64], circuit: &mut Circuit) {
    circuit.push(Gate::Phase(-(p[0] + p[1] + p[2]) / 2.0), &[]);
    circuit.push(Gate::U(p[0], p[1], p[2]), &[0]);
}

/// C(e^{iγ}U).
fn cu(p: &[f64], circuit: &mut Circuit) {
    circuit.push(Gate::P(p[3]), &[0]);
    controlled(circuit, Gate::U(p[0], p[1], p[2]));
}

macro_rules! gates {
    ($($name:literal ($($param:literal),*) $($operand:literal)+ => $steps:expr;)*) => {
        &[$(StandardGate {
            name: $name,
            params: &[$($param),*],
            operands: &[$($operand),+],
            steps: $steps,
        }),*]
    };
}

/// The gates of `stdgates.inc`.
pub(crate) static STANDARD_GATES: &[StandardGate] = gates! {
    "p" ("lambda") "a" => |p, c| c.push(Gate::P(p[0]), &[0]);
    "x" () "a" => |_, c| c.push(Gate::X, &[0]);
    "y" () "a" => |_, c| c.push(Gate::Y, &[0]);
    "z" () "a" => |_, c| c.push(Gate::Z, &[0]);
    "h" () "a" => |_, c| c.push(Gate::H, &[0]);
    "s" () "a" => |_, c| c.push(Gate::S, &[0]);
    "sdg" () "a" => |_, c| c.push(Gate::Sdg, &[0]);
    "t" () "a" => |_, c| c.push(Gate::T, &[0]);
    "tdg" () "a" => |_, c| c.push(Gate::Tdg, &[0]);
    "sx" () "a" => |_, c| c.push(Gate::Sx, &[0]);
    "rx" ("theta") "a" => |p, c| c.push(Gate::Rx(p[0]), &[0]);
    "ry" ("theta") "a" => |p, c| c.push(Gate::Ry(p[0]), &[0]);
    "rz" ("lambda") "a" => |p, c| c.push(Gate::Rz(p[0]), &[0]);
    "cx" () "a" "b" => |_, c| controlled(c, Gate::X);
    "cy" () "a" "b" => |_, c| controlled(c, Gate::Y);
    "cz" () "a" "b" => |_, c| controlled(c, Gate::Z);
    "cp" ("lambda") "a" "b" => |p, c| controlled(c, Gate::P(p[0]));
    "crx" ("theta") "a" "b" => |p, c| controlled(c, Gate::Rx(p[0]));
    "cry" ("theta") "a" "b" => |p, c| controlled(c, Gate::Ry(p[0]));
    "crz" ("theta") "a" "b" => |p, c| controlled(c, Gate::Rz(p[0]));
    "ch" () "a" "b" => |_, c| controlled(c, Gate::H);
    "swap" () "a" "b" => |_, c| c.push(Gate::Swap, &[0, 1]);
    "ccx" () "a" "b" "c" => |_, c| {
        c.push_controlled(Gate::X, &[Control::one(0), Control::one(1)], &[2]);
    };
    "cswap" () "a" "b" "c" => |_, c| c.push_controlled(Gate::Swap, &[Control::one(0)], &[1, 2]);
    "cu" ("theta", "phi", "lambda", "gamma") "c" "t" => cu;
    "CX" () "c" "t" => |_, c| controlled(c, Gate::X);
    "phase" ("lambda") "q" => |p, c| c.push(Gate::P(p[0]), &[0]);
    "cphase" ("lambda") "a" "b" => |p, c| controlled(c, Gate::P(p[0]));
    "id" () "a" => |_, c| c.push(Gate::Id, &[0]);
    "u1" ("lambda") "q" => |p, c| c.push(Gate::P(p[0]), &[0]);
    "u2" ("phi", "lambda") "q" => |p, c| u3(&[std::f64::consts::FRAC_PI_2, p[0], p[1]], c);
    "u3" ("theta", "phi", "lambda") "q" => u3;
};

/// The standard gate of this name.
pub(crate) fn standard_gate(name: &str) -> Option<&'static StandardGate> {
    STANDARD_GATES.iter().find(|gate| gate.name == name)
}
