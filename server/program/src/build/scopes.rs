//! Scopes: declaring names, finding them, and saying what is wrong if not.

use std::collections::HashMap;

use grammar::TextRange;
use grammar::nodes::{Name, NameRef, NodeExt};

use super::Builder;
use crate::finding::{Edit, FileId, Finding};
use crate::functions::{CONSTANTS, FUNCTIONS};
use crate::hir::Body;
use crate::model::GateDef;
use crate::nearest::nearest;
use crate::standard::{LIBRARY, OLD_CX, OLD_U, STANDARD_GATES, StandardGate, U, standard_gate};
use crate::symbols::{Reference, Symbol, SymbolId, SymbolKind};
use crate::value::Value;

/// What a scope belongs to; it decides what is visible through it.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum ScopeKind {
    Global,
    Block,
    /// Of a gate: outside it only constants, gates and functions are seen.
    Gate,
    /// Of a subroutine: likewise, and other subroutines.
    Subroutine,
}

/// The names of a scope.
pub(super) struct Scope {
    pub(super) kind: ScopeKind,
    names: HashMap<String, SymbolId>,
}

impl Scope {
    pub(super) fn global() -> Self {
        Scope { kind: ScopeKind::Global, names: HashMap::new() }
    }
}

impl Builder<'_> {
    /// Declares what is known in every program.
    pub(super) fn declare_language(&mut self) {
        for (name, value) in CONSTANTS {
            let detail = format!("const float {name} = {value}");
            self.declare_builtin(name, SymbolKind::Constant, detail, Value::Float(value));
        }
        for (name, _, count) in FUNCTIONS {
            let detail = format!("{name}({})", if count == 1 { "x" } else { "x, n" });
            let unknown = Value::Unknown("a function");
            self.declare_builtin(name, SymbolKind::Function, detail, unknown);
        }
        if self.old_version {
            self.declare_standard_gate(&OLD_U);
            self.declare_standard_gate(&OLD_CX);
        } else {
            self.declare_standard_gate(&U);
        }
    }

    /// Declares the gates of the standard library; `range` is the include.
    pub(super) fn declare_library(&mut self, range: TextRange) {
        if std::mem::replace(&mut self.library_included, true) {
            return;
        }
        for gate in STANDARD_GATES {
            match self.scopes[0].names.get(gate.name).copied() {
                Some(_) if self.old_version && gate.name == "CX" => {}
                Some(earlier) => self.report_duplicate(gate.name, range, earlier),
                None => self.declare_standard_gate(gate),
            }
        }
    }

    fn declare_builtin(
        &mut self,
        name: &str,
        kind: SymbolKind,
        detail: String,
        value: Value,
    ) -> SymbolId {
        let (file, range) = (FileId::STANDARD, TextRange::default());
        let symbol = Symbol { name: name.to_owned(), kind, file, name_range: range, range, detail };
        let id = self.facts.add_symbol(symbol, value);
        self.scopes[0].names.insert(name.to_owned(), id);
        id
    }

    fn declare_standard_gate(&mut self, gate: &'static StandardGate) {
        let detail = gate_detail(gate.name, gate.params, gate.operands);
        let unknown = Value::Unknown("a gate");
        let symbol = self.declare_builtin(gate.name, SymbolKind::Gate, detail, unknown);
        let strings = |names: &[&str]| names.iter().map(|name| (*name).to_owned()).collect();
        self.facts.gates.push(GateDef {
            name: gate.name.to_owned(),
            symbol,
            file: FileId::STANDARD,
            range: TextRange::default(),
            name_range: TextRange::default(),
            head_end: TextRange::default().end(),
            body_range: None,
            params: strings(gate.params),
            operands: strings(gate.operands),
            stand_in: None,
            claims: Vec::new(),
            samples: Vec::new(),
            builtin: true,
        });
        self.facts.bodies.push(Body::Standard(gate));
    }

    /// Runs `inner` in a new scope.
    pub(super) fn scoped<T>(&mut self, kind: ScopeKind, inner: impl FnOnce(&mut Self) -> T) -> T {
        self.scopes.push(Scope { kind, names: HashMap::new() });
        let result = inner(self);
        self.scopes.pop();
        result
    }

    /// Whether the walk is inside a scope of this kind.
    pub(super) fn inside(&self, kind: ScopeKind) -> bool {
        self.scopes.iter().any(|scope| scope.kind == kind)
    }

    /// Declares a name in the innermost scope.
    pub(super) fn declare(
        &mut self,
        name: &Name,
        kind: SymbolKind,
        range: TextRange,
        value: Value,
    ) -> SymbolId {
        let (text, name_range) = (name.name(), name.range());
        let detail = self.detail(range);
        let symbol =
            Symbol { name: text.clone(), kind, file: self.file, name_range, range, detail };
        let id = self.facts.add_symbol(symbol, value);
        self.refer(id, name_range, true);
        let scope = self.scopes.last_mut();
        if let Some(earlier) = scope.and_then(|scope| scope.names.insert(text.clone(), id)) {
            self.report_duplicate(&text, name_range, earlier);
        }
        id
    }

    fn report_duplicate(&mut self, name: &str, range: TextRange, earlier: SymbolId) {
        let earlier = self.facts.symbols[earlier.index()].clone();
        let finding = if earlier.file == FileId::STANDARD {
            let message = format!("`{name}` is a name of the language or its standard library");
            Finding::error("duplicate-name", self.file, range, message)
        } else {
            let message = format!("`{name}` is declared twice");
            Finding::error("duplicate-name", self.file, range, message).related(
                earlier.file,
                earlier.name_range,
                format!("`{name}` is declared here first"),
            )
        };
        self.report(finding);
    }

    /// The first line of a declaration.
    fn detail(&self, range: TextRange) -> String {
        /// Longest line that a list or a hover shows whole.
        const LONGEST: usize = 120;
        let text = self.facts.files.get(self.file.index()).map_or("", |file| &file.text);
        let text = text.get(usize::from(range.start())..usize::from(range.end())).unwrap_or("");
        let end = text.find(['{', '\n', ';']).unwrap_or(text.len());
        let line = text[..end].trim_end().trim_end_matches('=').trim_end();
        line.chars().take(LONGEST).collect()
    }

    /// Notes that a name is written at a place.
    pub(super) fn refer(&mut self, symbol: SymbolId, range: TextRange, is_definition: bool) {
        let file = self.file;
        self.facts.references.push(Reference { symbol, file, range, is_definition });
    }

    /// The symbol a name stands for; reported if there is none, or none that
    /// is visible here. `wanted` are the kinds to suggest instead.
    pub(super) fn resolve(&mut self, name: &NameRef, wanted: &[SymbolKind]) -> Option<SymbolId> {
        let (text, range) = (name.name(), name.range());
        if text.is_empty() {
            return None;
        }
        let Some((id, through)) = self.find(&text) else {
            self.report_unknown(&text, range, wanted);
            return None;
        };
        self.refer(id, range, false);
        let kind = self.facts.symbols[id.index()].kind;
        if let Some(scope) = through
            && !visible_outside(kind)
        {
            let inside = if scope == ScopeKind::Gate { "a gate" } else { "a subroutine" };
            let code =
                if scope == ScopeKind::Gate { "not-allowed-in-gate" } else { "unknown-name" };
            let message = format!("`{text}` is declared outside and is not visible in {inside}");
            self.error(code, range, message);
            return None;
        }
        Some(id)
    }

    /// The innermost symbol of a name, and the gate or subroutine whose
    /// boundary lies between.
    pub(super) fn find(&self, name: &str) -> Option<(SymbolId, Option<ScopeKind>)> {
        let mut through = None;
        for scope in self.scopes.iter().rev() {
            if let Some(id) = scope.names.get(name) {
                return Some((*id, through));
            }
            if matches!(scope.kind, ScopeKind::Gate | ScopeKind::Subroutine) {
                through = Some(scope.kind);
            }
        }
        None
    }

    fn report_unknown(&mut self, name: &str, range: TextRange, wanted: &[SymbolKind]) {
        if self.incomplete {
            return; // it may well be in the file that could not be read
        }
        let message = format!("`{name}` is not declared");
        let finding = Finding::error("unknown-name", self.file, range, message);
        self.report(self.suggest(finding, name, wanted));
    }

    /// Adds what was probably meant to a finding about an unknown name.
    pub(super) fn suggest(&self, finding: Finding, name: &str, wanted: &[SymbolKind]) -> Finding {
        let gates = wanted.contains(&SymbolKind::Gate);
        if gates && !self.library_included && standard_gate(name).is_some() {
            let message = format!("`{name}` is a gate of `{LIBRARY}`, which is not included");
            let finding = Finding { message, ..finding };
            return match self.library_edit() {
                Some(edit) => finding.fix(format!("Add `include \"{LIBRARY}\";`"), vec![edit]),
                None => finding,
            };
        }
        let visible = self.visible_names(wanted);
        match nearest(name, visible.iter().map(String::as_str)) {
            Some(near) => {
                let message = format!("{}; did you mean `{near}`?", finding.message);
                let edit = Edit::replace(finding.range, near);
                Finding { message, ..finding }.fix(format!("Write `{near}`"), vec![edit])
            }
            None => finding,
        }
    }

    fn visible_names(&self, wanted: &[SymbolKind]) -> Vec<String> {
        let mut names: Vec<String> = Vec::new();
        let mut through = false;
        for scope in self.scopes.iter().rev() {
            let mut here: Vec<&String> = scope.names.keys().collect();
            here.sort();
            for name in here {
                let kind = self.facts.symbols[scope.names[name].index()].kind;
                if wanted.contains(&kind) && (!through || visible_outside(kind)) {
                    names.push(name.clone());
                }
            }
            through |= matches!(scope.kind, ScopeKind::Gate | ScopeKind::Subroutine);
        }
        names
    }

    /// The edit that includes the standard library in the current file.
    fn library_edit(&self) -> Option<Edit> {
        self.facts.files.get(self.file.index()).map(crate::raise::library_edit)
    }
}

/// Whether a name of this kind is seen inside gates and subroutines.
fn visible_outside(kind: SymbolKind) -> bool {
    matches!(
        kind,
        SymbolKind::Gate
            | SymbolKind::Subroutine
            | SymbolKind::Extern
            | SymbolKind::Function
            | SymbolKind::Constant
    )
}

/// The head of a gate in one line.
fn gate_detail(name: &str, params: &[&str], operands: &[&str]) -> String {
    let params = if params.is_empty() { String::new() } else { format!("({})", params.join(", ")) };
    format!("gate {name}{params} {}", operands.join(", "))
}
