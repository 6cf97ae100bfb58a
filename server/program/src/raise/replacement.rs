//! The edits that put a circuit in the place of a stand-in.

use std::fmt::Write as _;

use grammar::nodes::NodeExt;
use grammar::{TextRange, TextSize};

use super::plan::{Caller, OuterCall, Plan, Turns, plan};
use super::text::{Statement, statements};
use super::{library_edit, newline};
use crate::build::DEFAULT_TOLERANCE;
use crate::facts::Facts;
use crate::finding::{Edit, FileId};
use crate::hir::{Body, Call};
use crate::model::{Cannot, ClaimKind, GateDef, Replacement, StandIn};
use crate::standard::standard_gate;

/// See [`crate::Program::replacement`].
pub(crate) fn replacement(
    facts: &Facts,
    name: &str,
    with: &Replacement,
) -> Result<Vec<Edit>, Cannot> {
    let gate = facts.gates.iter().position(|gate| gate.name == name && gate.stand_in.is_some());
    let gate = gate.ok_or_else(|| Cannot::new(format!("there is no stand-in `{name}`")))?;
    let raiser = Raiser { facts, text: &facts.files[0].text, with };
    raiser.check(gate)?;
    let mut edits = Vec::new();
    if !library_included(facts) {
        edits.push(library_edit(&facts.files[0]));
    }
    raiser.gate(gate, &mut edits)?;
    if with.ancillas > 0 {
        let plan = plan(facts, gate, with.ancillas)?;
        raiser.callers(gate, &plan, &mut edits);
        raiser.program(gate, &plan, &mut edits);
    }
    Ok(edits)
}

fn library_included(facts: &Facts) -> bool {
    facts.gates.iter().any(|gate| gate.builtin && gate.name == "cx")
}

struct Raiser<'a> {
    facts: &'a Facts,
    text: &'a str,
    with: &'a Replacement,
}

impl Raiser<'_> {
    /// Refuses what cannot be written at all.
    fn check(&self, gate: usize) -> Result<(), Cannot> {
        let def = &self.facts.gates[gate];
        let refuse = |reason: String| Err(Cannot::at(def.file, def.name_range, reason));
        if def.file != FileId::MAIN {
            return refuse(format!("`{}` is in an included file, which is not edited", def.name));
        }
        if self.with.circuit.wires != self.with.ancillas + def.operands.len() {
            return refuse("the circuit has another number of qubits than the gate".to_owned());
        }
        let version = self.facts.files[0].parse.root().version().and_then(|v| v.number());
        if version.is_some_and(|number| number.text().starts_with('2')) {
            return refuse(
                "the file is in version 2 of the language, which lacks the gates and \
                           the phase that an encoding is written in"
                    .to_owned(),
            );
        }
        let own = |other: &&GateDef| !other.builtin && standard_gate(&other.name).is_some();
        if let Some(own) = self.facts.gates.iter().find(own) {
            return refuse(format!("the file has a gate `{}` of its own", own.name));
        }
        let library = self.facts.gates.iter().position(|gate| gate.builtin && gate.name == "cx");
        if library.is_some_and(|library| library > gate) {
            return refuse("the standard library is included after the gate".to_owned());
        }
        Ok(())
    }

    fn slice(&self, range: TextRange) -> &str {
        self.text.get(usize::from(range.start())..usize::from(range.end())).unwrap_or("")
    }

    /// White space between the start of a line and a place on it.
    fn indent(&self, at: TextSize) -> &str {
        let before = self.text.get(..usize::from(at)).unwrap_or("");
        let line = before.rfind(['\n', '\r']).map_or(before, |start| &before[start + 1..]);
        let blank = line.len() - line.trim_start().len();
        &line[..blank]
    }

    /// What one more level of blocks is indented by: as the first indented
    /// line of the file has it, else as the formatter does.
    fn indentation(&self) -> &str {
        /// The formatter's own.
        const FORMATTED: &str = "    ";
        let mut lines = self.text.lines();
        let blank = |line: &str| line.len() - line.trim_start_matches([' ', '\t']).len();
        let first = lines.find(|line| blank(line) > 0 && !line.trim().is_empty());
        match first.map(|line| &line[..blank(line)]) {
            Some(blanks) if blanks.starts_with('\t') => "\t",
            Some(blanks) if blanks.len() <= 8 => blanks,
            _ => FORMATTED,
        }
    }

    /// The gate itself: its claim, its ancillas, its body.
    fn gate(&self, gate: usize, edits: &mut Vec<Edit>) -> Result<(), Cannot> {
        let def = &self.facts.gates[gate];
        let (Some(stand_in), Some(body)) = (&def.stand_in, def.body_range) else {
            return Err(Cannot::new("the gate is no stand-in"));
        };
        let braces = self.slice(body);
        if !(braces.starts_with('{') && braces.ends_with('}')) {
            return Err(Cannot::at(def.file, body, "the body of the gate has no end"));
        }
        let newline = newline(self.text);
        let indent = self.indent(stand_in.range.start());
        let head = format!("{}{newline}{indent}{}", self.comment(), self.claim(stand_in));
        edits.push(Edit::replace(stand_in.range, head));
        let ancillas = self.gate_ancillas(def);
        if let Some(first) = self.first_operand(gate) {
            edits.push(Edit::insert(first, list(&ancillas)));
        }
        let names: Vec<String> = ancillas.into_iter().chain(def.operands.iter().cloned()).collect();
        let indent = self.indent(def.head_end);
        let step = self.indentation();
        let mut lines = String::new();
        let statements = statements(&self.with.circuit, &names)?;
        self.nothing_hidden(def, &statements)?;
        for statement in &statements {
            let _ = write!(lines, "{newline}{indent}{step}{}", statement.line());
        }
        let inside =
            TextRange::new(body.start() + TextSize::from(1), body.end() - TextSize::from(1));
        let kept = self.slice(inside).trim_end().to_owned();
        edits.push(Edit::replace(inside, format!("{kept}{lines}{newline}{indent}")));
        Ok(())
    }

    /// A parameter or operand must not have the name of what the body uses.
    fn nothing_hidden(&self, def: &GateDef, body: &[Statement]) -> Result<(), Cannot> {
        let hides = |name: &&String| body.iter().any(|statement| statement.uses(name));
        match def.params.iter().chain(&def.operands).find(hides) {
            Some(hidden) => {
                let reason = format!(
                    "`{hidden}` of `{}` hides the gate or constant of that name, which the \
                     circuit uses; rename it first",
                    def.name
                );
                Err(Cannot::at(def.file, def.name_range, reason))
            }
            None => Ok(()),
        }
    }

    /// One line with the method, the costs and the measured error.
    fn comment(&self) -> String {
        let with = self.with;
        let ancillas = match with.ancillas {
            0 => "no ancilla".to_owned(),
            1 => "1 ancilla".to_owned(),
            more => format!("{more} ancillas"),
        };
        format!(
            "// {}: {ancillas}, {}, measured error {:.1e}",
            with.method,
            super::costs(&with.circuit),
            with.error
        )
    }

    /// The claim that takes the place of `@cantle.dense`.
    fn claim(&self, stand_in: &StandIn) -> String {
        let with = self.with;
        let written = stand_in.tolerance_text.clone();
        let within = written.unwrap_or_else(|| format!("{DEFAULT_TOLERANCE:e}"));
        let matrix = &stand_in.matrix;
        if with.ancillas == 0 && with.scale == 1.0 {
            return format!("@cantle.equals {matrix} within {within}");
        }
        let (ancillas, scale) = (with.ancillas, with.scale);
        format!("@cantle.encodes {matrix} ancilla {ancillas} scale {scale:?} within {within}")
    }

    /// Names of the gate's own ancillas.
    fn gate_ancillas(&self, def: &GateDef) -> Vec<String> {
        let taken = |name: &str| def.params.iter().chain(&def.operands).any(|used| used == name);
        numbered("a", self.with.ancillas, taken)
    }

    /// Names of the ancillas that a caller passes on.
    fn caller_ancillas(&self, gate: &str, caller: &Caller<'_>) -> Vec<String> {
        numbered(&format!("{gate}_a"), caller.count, |name| self.is_taken(name))
    }

    fn is_taken(&self, name: &str) -> bool {
        self.facts.symbols.iter().any(|symbol| symbol.name == name)
    }

    /// The start of the first operand in a gate's definition.
    fn first_operand(&self, gate: usize) -> Option<TextSize> {
        let Body::Defined(body) = &self.facts.bodies[gate] else { return None };
        let first = body.operands.first()?;
        Some(self.facts.symbols[first.index()].name_range.start())
    }

    fn callers(&self, gate: usize, plan: &Plan<'_>, edits: &mut Vec<Edit>) {
        for caller in &plan.callers {
            let names = self.caller_ancillas(&self.facts.gates[gate].name, caller);
            if let Some(first) = self.first_operand(caller.gate) {
                edits.push(Edit::insert(first, list(&names)));
            }
            for inner in &caller.calls {
                let passed = &names[inner.first..inner.first + inner.count];
                insert_operands(inner.call, passed, edits);
            }
            self.caller_claims(caller, edits);
        }
    }

    /// A caller's claims count its ancillas too.
    fn caller_claims(&self, caller: &Caller<'_>, edits: &mut Vec<Edit>) {
        for claim in self.facts.gates[caller.gate].claims.iter().map(|k| &self.facts.claims[*k]) {
            let text = self.slice(claim.range);
            let count = caller.count;
            match &claim.kind {
                ClaimKind::Encodes { ancilla: Some(own), .. } => {
                    let before = format!("ancilla {own}");
                    let after = format!("ancilla {}", own + count);
                    edits.push(Edit::replace(claim.range, text.replacen(&before, &after, 1)));
                }
                ClaimKind::Equals { of, .. }
                    if self.facts.matrices.iter().any(|m| m.name == *of) =>
                {
                    let text = text.replacen("equals", "encodes", 1).replacen(" exactphase", "", 1);
                    let text = text.replacen(of, &format!("{of} ancilla {count}"), 1);
                    edits.push(Edit::replace(claim.range, text));
                }
                _ => {}
            }
        }
    }

    /// The register and the calls that take from it.
    fn program(&self, gate: usize, plan: &Plan<'_>, edits: &mut Vec<Edit>) {
        let Some(first) = plan.calls.iter().map(|call| call.range.start()).min() else { return };
        let name = &self.facts.gates[gate].name;
        let register = self.fresh(&format!("{name}_ancilla"));
        let at = self.statement_around(first);
        let (newline, indent) = (newline(self.text), self.indent(at));
        let comment = format!(
            "// Ancillas of {name}, in |0> at first: every call has its own, as factors of a \
             product must."
        );
        let declaration = format!("qubit[{}] {register};", plan.total);
        let text = format!("{comment}{newline}{indent}{declaration}{newline}{indent}");
        edits.push(Edit::insert(at, text));
        for call in &plan.calls {
            let operands: Vec<String> =
                (0..call.count).map(|k| element(&register, call, k)).collect();
            insert_operands(call.call, &operands, edits);
        }
    }

    /// A name that nothing in the program has.
    fn fresh(&self, base: &str) -> String {
        let mut name = base.to_owned();
        let mut number = 2;
        while self.is_taken(&name) {
            name = format!("{base}{number}");
            number += 1;
        }
        name
    }

    /// The start of the outermost statement around a place, its annotations
    /// included.
    fn statement_around(&self, at: TextSize) -> TextSize {
        let root = self.facts.files[0].parse.root();
        let around = root.statements().find(|statement| statement.range().contains(at));
        around.map_or(at, |statement| statement.range().start())
    }
}

/// Puts operands behind the controls of a call.
fn insert_operands(call: &Call, operands: &[String], edits: &mut Vec<Edit>) {
    if let Some(first) = call.operands.get(call.controls()) {
        edits.push(Edit::insert(first.range.start(), list(operands)));
    }
}

/// `a, b, ` to stand in front of what is there.
fn list(names: &[String]) -> String {
    names.iter().map(|name| format!("{name}, ")).collect()
}

/// `base0`, `base1`, … none of which is taken.
fn numbered(base: &str, count: usize, taken: impl Fn(&str) -> bool) -> Vec<String> {
    let mut base = base.to_owned();
    loop {
        let names: Vec<String> = (0..count).map(|k| format!("{base}{k}")).collect();
        if !names.iter().any(|name| taken(name)) {
            return names;
        }
        base.push('_');
    }
}

/// The `k`-th ancilla operand of a call: an element of the register, or as
/// many as the call is broadcast over.
fn element(register: &str, call: &OuterCall<'_>, k: usize) -> String {
    let first = index(call, call.first + k * call.length);
    if !call.broadcast {
        return format!("{register}[{first}]");
    }
    let last = index(call, call.first + (k + 1) * call.length - 1);
    format!("{register}[{first}:{last}]")
}

/// `first` plus what the turns of the loops add.
fn index(call: &OuterCall<'_>, first: usize) -> String {
    let mut constant = first as i128;
    let mut terms = Vec::new();
    for turns in &call.loops {
        terms.push(term(turns, &mut constant));
    }
    if terms.is_empty() {
        return constant.to_string();
    }
    let sum = terms.join(" + ");
    match constant {
        0 => sum,
        below if below < 0 => format!("{sum} - {}", -below),
        above => format!("{sum} + {above}"),
    }
}

/// What one loop adds; its constant part goes to `constant`.
fn term(turns: &Turns, constant: &mut i128) -> String {
    let (variable, stride) = (&turns.variable, turns.stride as i128);
    let times = |factor: &str| match stride {
        1 => factor.to_owned(),
        _ => format!("{stride}*{factor}"),
    };
    if turns.step == 1 {
        *constant -= stride * turns.start;
        return times(variable);
    }
    let distance = match turns.start {
        0 => variable.clone(),
        below if below < 0 => format!("({variable} + {})", -below),
        above => format!("({variable} - {above})"),
    };
    let step = if turns.step < 0 { format!("({})", turns.step) } else { turns.step.to_string() };
    times(&format!("({distance}/{step})"))
}
