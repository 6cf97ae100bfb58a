//! Gate definitions, gate calls and their modifiers.

use grammar::nodes::{
    AstChildren, AstNode, Expression, GateCall, GateDefinition, GphaseCall,
    Modifier as ModifierNode, ModifierKind, Name, NodeExt, OpaqueDeclaration,
    Operand as OperandNode,
};
use grammar::{TextRange, TextSize};

use super::scopes::ScopeKind;
use super::{Builder, core_range};
use crate::annotation::Annotation;
use crate::finding::Finding;
use crate::hir::{Body, Call, Callee, DefinedBody, Modifier, Operand, Stmt, StmtKind};
use crate::model::{GateDef, Subject};
use crate::symbols::{SymbolId, SymbolKind};
use crate::value::Value;

/// What the value of a gate's parameter is before it is called.
pub(crate) const PARAMETER: &str = "a parameter of the gate";

/// `1 operand`, `2 operands`.
pub(super) fn counted(count: usize, noun: &str) -> String {
    format!("{count} {noun}{}", if count == 1 { "" } else { "s" })
}

impl Builder<'_> {
    pub(super) fn gate(&mut self, node: &GateDefinition) {
        let notes = self.notes(node);
        let Some(name) = node.name() else { return };
        let (params, operands) = (node.parameters(), node.operands());
        let body_node = node.body();
        // The gate's own name is declared after its body: it may not call
        // itself.
        let body = self.scoped(ScopeKind::Gate, |this| {
            let params = this.declare_all(&params, SymbolKind::Parameter, PARAMETER);
            let operands = this.declare_all(&operands, SymbolKind::Operand, "a qubit");
            let mut body = Vec::new();
            if let Some(block) = &body_node {
                for statement in block.statements() {
                    this.statement(&statement, &mut body);
                }
            }
            DefinedBody { params, operands, body }
        });
        let empty = body.body.is_empty();
        let ranges = (core_range(node), node.range());
        let symbol = self.declare(&name, SymbolKind::Gate, ranges.0, Value::Unknown("a gate"));
        let mut def = self.gate_def(&name, symbol, ranges.1, &params, &operands);
        def.head_end = node.head_end();
        def.body_range = body_node.map(|block| block.range());
        let index = self.facts.gates.len();
        self.facts.gates.push(def);
        self.facts.bodies.push(Body::Defined(body));
        let rest = self.take_claims(notes, Subject::Gate(index), empty);
        let rest: Vec<_> = rest.into_iter().filter(|note| !self.take_sample(note, index)).collect();
        self.misplaced(&rest, "a `gate`");
    }

    fn gate_def(
        &self,
        name: &Name,
        symbol: SymbolId,
        range: TextRange,
        params: &[Name],
        operands: &[Name],
    ) -> GateDef {
        let strings = |names: &[Name]| names.iter().map(Name::name).collect();
        GateDef {
            name: name.name(),
            symbol,
            file: self.file,
            range,
            name_range: name.range(),
            head_end: TextSize::default(),
            body_range: None,
            params: strings(params),
            operands: strings(operands),
            stand_in: None,
            claims: Vec::new(),
            samples: Vec::new(),
            builtin: false,
        }
    }

    fn declare_all(
        &mut self,
        names: &[Name],
        kind: SymbolKind,
        unknown: &'static str,
    ) -> Vec<SymbolId> {
        let value = || Value::Unknown(unknown);
        names.iter().map(|name| self.declare(name, kind, name.range(), value())).collect()
    }

    /// Stores `@cantle.sample`; the answer is whether it was one.
    fn take_sample(&mut self, note: &super::annotations::Note, gate: usize) -> bool {
        let Annotation::Sample(values) = &note.annotation else { return false };
        for (name, value) in values {
            if self.facts.gates[gate].params.contains(&name.value) {
                self.facts.gates[gate].samples.push((name.value.clone(), *value));
            } else {
                let message = format!("the gate has no parameter `{}`", name.value);
                self.error("unknown-name", name.range, message);
            }
        }
        true
    }

    pub(super) fn opaque(&mut self, node: &OpaqueDeclaration) {
        let notes = self.notes(node);
        self.misplaced(&notes, "an `opaque`");
        let Some(name) = node.name() else { return };
        let symbol =
            self.declare(&name, SymbolKind::Gate, core_range(node), Value::Unknown("a gate"));
        let mut def =
            self.gate_def(&name, symbol, node.range(), &node.parameters(), &node.operands());
        def.head_end = core_range(node).end();
        self.facts.gates.push(def);
        self.facts.bodies.push(Body::Opaque);
    }

    pub(super) fn gate_call(&mut self, node: &GateCall, out: &mut Vec<Stmt>) {
        let range = core_range(node);
        let name = node.name();
        let callee = match &name {
            Some(name) => self.callee(name),
            None => Callee::Broken,
        };
        let call = self.call(callee, node.modifiers(), &node.arguments(), &node.operands());
        if let (Some(name), Callee::Gate(gate)) = (name, callee) {
            self.check_counts(&call, gate, name.range(), range);
        }
        if node.target().is_some() {
            let reason = "a calibrated measurement is made".to_owned();
            let (writes, inside) = (Vec::new(), Vec::new());
            let kind = StmtKind::Cut { reason, writes, operands: call.operands, inside };
            out.push(Stmt { file: self.file, range, kind });
            return;
        }
        out.push(Stmt { file: self.file, range, kind: StmtKind::Call(call) });
    }

    fn callee(&mut self, name: &grammar::nodes::NameRef) -> Callee {
        let Some(id) = self.resolve(name, &[SymbolKind::Gate]) else { return Callee::Broken };
        let symbol = &self.facts.symbols[id.index()];
        let message = match symbol.kind {
            SymbolKind::Gate => {
                let gate = self.facts.gates.iter().position(|gate| gate.symbol == id);
                return gate.map_or(Callee::Broken, Callee::Gate);
            }
            SymbolKind::Subroutine => {
                format!("`{0}` is a subroutine; it is called as `{0}(…);`", symbol.name)
            }
            _ => format!("`{}` is no gate", symbol.name),
        };
        self.error("type-mismatch", name.range(), message);
        Callee::Broken
    }

    pub(super) fn gphase(&mut self, node: &GphaseCall, out: &mut Vec<Stmt>) {
        let range = core_range(node);
        let call = self.call(Callee::Phase, node.modifiers(), &node.arguments(), &node.operands());
        if call.arguments.len() != 1 {
            self.error("parameter-count", range, "`gphase` takes one angle");
        } else if call.operands.len() != call.controls() && !self.broken_controls(&call) {
            let message = format!(
                "`gphase` acts on no qubit: with these modifiers it takes {}, one a control",
                counted(call.controls(), "operand")
            );
            self.error("operand-count", range, message);
        } else {
            out.push(Stmt { file: self.file, range, kind: StmtKind::Call(call) });
        }
    }

    fn call(
        &mut self,
        callee: Callee,
        modifiers: AstChildren<ModifierNode>,
        arguments: &[Expression],
        operands: &[OperandNode],
    ) -> Call {
        let modifiers: Vec<ModifierNode> = modifiers.collect();
        let modifiers = modifiers.iter().map(|node| self.modifier(node)).collect();
        let arguments = arguments.iter().map(|node| self.expression(node)).collect();
        let operands = operands.iter().map(|node| self.operand(node)).collect();
        Call { callee, modifiers, arguments, operands }
    }

    fn modifier(&mut self, node: &ModifierNode) -> Modifier {
        let range = node.range();
        match node.kind() {
            Some(ModifierKind::Inv) | None => Modifier::Inverse,
            Some(ModifierKind::Pow) => Modifier::Power(self.maybe(node.argument(), range)),
            Some(kind) => {
                let on = kind == ModifierKind::Ctrl;
                let Some(argument) = node.argument() else { return Modifier::Controls(1, on) };
                let argument = self.expression(&argument);
                // No controls at all marks a number that was reported.
                let count = self.constant_size(&argument, "the number of controls");
                let limit = self.facts.limits.controls;
                match count {
                    Some(0) => {
                        self.error("type-mismatch", argument.range, "there must be a control");
                        Modifier::Controls(0, on)
                    }
                    Some(count) if count > limit => {
                        let message = format!("{count} controls are past the limit of {limit}");
                        self.error("limit-reached", argument.range, message);
                        Modifier::Controls(0, on)
                    }
                    count => Modifier::Controls(count.unwrap_or(0), on),
                }
            }
        }
    }

    fn broken_controls(&self, call: &Call) -> bool {
        call.modifiers.iter().any(|modifier| matches!(modifier, Modifier::Controls(0, _)))
    }

    /// Parameters and operands of a call must be as many as the gate has.
    fn check_counts(&mut self, call: &Call, gate: usize, name: TextRange, range: TextRange) {
        let gate = &self.facts.gates[gate];
        let (place, builtin) = ((gate.file, gate.name_range), gate.builtin);
        let (params, operands, title) = (gate.params.len(), gate.operands.len(), gate.name.clone());
        let related = |finding: Finding| match builtin {
            true => finding,
            false => finding.related(place.0, place.1, format!("`{title}` is defined here")),
        };
        if call.arguments.len() != params {
            let found = call.arguments.len();
            let range = match (call.arguments.first(), call.arguments.last()) {
                (Some(first), Some(last)) => first.range.cover(last.range),
                _ => name,
            };
            let needed = counted(params, "parameter");
            let message = format!("`{title}` takes {needed}, not {found}");
            self.report(related(Finding::error("parameter-count", self.file, range, message)));
        }
        let found = call.operands.len();
        let needed = operands + call.controls();
        if found != needed && !self.broken_controls(call) {
            let message = match call.controls() {
                0 => format!("`{title}` acts on {}, not on {found}", counted(operands, "operand")),
                controls => format!(
                    "`{title}` acts on {}, with {} on {needed}, not on {found}",
                    counted(operands, "operand"),
                    counted(controls, "control")
                ),
            };
            let span = match (call.operands.first(), call.operands.last()) {
                (Some(first), Some(last)) => first.range.cover(last.range),
                _ => range,
            };
            self.report(related(Finding::error("operand-count", self.file, span, message)));
        }
    }

    /// Operands inside a gate are names of its own operands, without indices.
    pub(super) fn check_gate_operands(&mut self, operands: &[Operand]) {
        if !self.inside(ScopeKind::Gate) {
            return;
        }
        for operand in operands {
            let message = match operand.base {
                crate::hir::OperandBase::Hardware(_) => "a gate acts on its own operands only",
                crate::hir::OperandBase::Symbol(_) if !operand.indices.is_empty() => {
                    "an operand of a gate is one qubit and has no index"
                }
                _ => continue,
            };
            self.error("not-allowed-in-gate", operand.range, message);
        }
    }
}

/// The first token of a statement as the reader sees it, for messages.
pub(super) fn keyword(node: &impl AstNode<Language = grammar::OpenQasm>) -> String {
    let mut tokens = node.syntax().children_with_tokens();
    let first = tokens.find_map(|child| match child {
        grammar::SyntaxElement::Token(token) if !token.kind().is_trivia() => Some(token),
        grammar::SyntaxElement::Node(node) if node.kind() != grammar::SyntaxKind::Annotation => {
            node.first_token()
        }
        _ => None,
    });
    first.map_or_else(String::new, |token| format!("`{}`", token.text()))
}
