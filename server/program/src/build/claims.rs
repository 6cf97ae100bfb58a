//! Claims: what the annotations before gates, matrices and blocks state.
//!
//! The names in them may be declared later in the file, so they are settled
//! when every file has been read.

use grammar::TextRange;

use super::Builder;
use super::annotations::Note;
use crate::annotation::{Annotation, MatrixNote, Number, Spanned};
use crate::finding::{FileId, Finding};
use crate::model::{Claim, ClaimKind, Property, StandIn, Subject};
use crate::symbols::SymbolKind;

/// Default of a tolerance that is not written. In spectral norm; a thousand
/// times what a circuit of some hundred gates loses to rounding, and far
/// below the precision of any device.
pub(crate) const DEFAULT_TOLERANCE: f64 = 1e-8;

/// A claim whose names are not looked up yet.
pub(super) struct Pending {
    claim: Claim,
    /// The tolerance of a stand-in as written.
    tolerance_text: Option<String>,
    name: Option<Spanned<String>>,
    empty_body: bool,
}

impl Builder<'_> {
    /// Takes the claims among the notes before something; what is no claim on
    /// such a subject is given back.
    pub(super) fn take_claims(
        &mut self,
        notes: Vec<Note>,
        subject: Subject,
        empty_body: bool,
    ) -> Vec<Note> {
        let mut rest = Vec::new();
        for note in notes {
            if !fits(&note.annotation, subject) {
                rest.push(note);
            } else if let Annotation::Matrix(MatrixNote::Properties(properties)) = note.annotation {
                for property in properties {
                    let stated = Stated::of(ClaimKind::Property(property));
                    self.push_claim(stated, note.range, subject, empty_body);
                }
            } else if let Some(stated) = stated(note.annotation) {
                if let ClaimKind::Clean { .. } = &stated.kind {
                    self.check_operands(&stated.operands, subject);
                }
                self.push_claim(stated, note.range, subject, empty_body);
            }
        }
        rest
    }

    fn push_claim(&mut self, stated: Stated, range: TextRange, subject: Subject, empty_body: bool) {
        let Stated { kind, name, tolerance_text, .. } = stated;
        let name_range = name.as_ref().map(|name| name.range);
        let claim = Claim { kind, file: self.file, range, name_range, subject };
        self.pending.push(Pending { claim, tolerance_text, name, empty_body });
    }

    /// The names of `@cantle.clean` must be operands of the gate.
    fn check_operands(&mut self, operands: &[Spanned<String>], subject: Subject) {
        let Subject::Gate(gate) = subject else { return };
        let known = self.facts.gates[gate].operands.clone();
        for operand in operands {
            if !known.contains(&operand.value) {
                let message = format!("the gate has no operand `{}`", operand.value);
                self.error("unknown-name", operand.range, message);
            }
        }
    }

    /// Looks up the names in the claims, once everything is declared.
    pub(super) fn settle_claims(&mut self) {
        for pending in std::mem::take(&mut self.pending) {
            self.settle(pending);
        }
    }

    fn settle(&mut self, pending: Pending) {
        let Pending { claim, tolerance_text, name, empty_body } = pending;
        self.file = claim.file;
        let matrix = name.as_ref().and_then(|name| self.matrix_named(name, &claim.kind));
        if let Some(index) = matrix {
            self.facts.matrices[index].used_as_operator = true;
        }
        let position = self.facts.claims.len();
        if let Subject::Gate(gate) = claim.subject {
            self.facts.gates[gate].claims.push(position);
            if let ClaimKind::Dense { matrix: name, within } = &claim.kind {
                if empty_body {
                    self.facts.gates[gate].stand_in = Some(StandIn {
                        matrix: name.clone(),
                        matrix_index: matrix,
                        tolerance: within.unwrap_or(DEFAULT_TOLERANCE),
                        tolerance_text,
                        range: claim.range,
                    });
                } else {
                    let message = "a gate with a body is no stand-in: empty the body, or claim \
                                   what the body does with `@cantle.encodes` or `@cantle.equals`";
                    self.error("malformed-annotation", claim.range, message);
                }
            }
            self.check_size(&claim, gate, matrix);
        }
        if let (Subject::Matrix(index), ClaimKind::Property(Property::Unitary)) =
            (claim.subject, &claim.kind)
        {
            self.facts.matrices[index].used_as_operator = true;
        }
        self.facts.claims.push(claim);
    }

    /// The matrix a claim names; reported if there is neither it nor, where
    /// one will do, a gate.
    fn matrix_named(&mut self, name: &Spanned<String>, kind: &ClaimKind) -> Option<usize> {
        let found = self.find(&name.value).map(|(id, _)| id);
        let symbol = found.map(|id| (id, self.facts.symbols[id.index()].kind));
        let gate_will_do = matches!(kind, ClaimKind::Equals { .. });
        match symbol {
            Some((id, SymbolKind::Matrix)) => {
                self.refer(id, name.range, false);
                self.facts.matrices.iter().position(|matrix| matrix.symbol == id)
            }
            Some((id, SymbolKind::Gate)) if gate_will_do => {
                self.refer(id, name.range, false);
                None
            }
            Some((id, _)) => {
                self.refer(id, name.range, false);
                let what = if gate_will_do { "neither a gate nor a matrix" } else { "no matrix" };
                let message = format!(
                    "`{}` is {what}; a matrix is a two-dimensional array of numbers",
                    name.value
                );
                self.error("type-mismatch", name.range, message);
                None
            }
            None => {
                self.report_unknown_matrix(name, gate_will_do);
                None
            }
        }
    }

    fn report_unknown_matrix(&mut self, name: &Spanned<String>, gate_will_do: bool) {
        if self.incomplete {
            return;
        }
        let what = if gate_will_do { "gate or matrix" } else { "matrix" };
        let message = format!("there is no {what} `{}`", name.value);
        let finding = Finding::error("unknown-name", self.file, name.range, message);
        let kinds: &[SymbolKind] = if gate_will_do {
            &[SymbolKind::Matrix, SymbolKind::Gate]
        } else {
            &[SymbolKind::Matrix]
        };
        self.report(self.suggest(finding, &name.value, kinds));
    }

    /// The operands of a gate must be as many as the matrix it is compared
    /// with has qubits, the ancillas of an encoding counted on top.
    fn check_size(&mut self, claim: &Claim, gate: usize, matrix: Option<usize>) {
        let Some(matrix) = matrix.map(|index| &self.facts.matrices[index]) else { return };
        if matrix.rows != matrix.cols || !matrix.rows.is_power_of_two() {
            return; // reported as such
        }
        let (n, (rows, cols)) = (matrix.rows.trailing_zeros() as usize, (matrix.rows, matrix.cols));
        let (place, name) = ((matrix.file, matrix.name_range), matrix.name.clone());
        let gate = &self.facts.gates[gate];
        let found = gate.operands.len();
        let (fits, needed) = match &claim.kind {
            ClaimKind::Encodes { ancilla: Some(a), .. } => {
                let total = super::gates::counted(a.saturating_add(n), "operand");
                (Some(found) == a.checked_add(n), format!("{total}, the ancillas included"))
            }
            ClaimKind::Encodes { ancilla: None, .. } => {
                (found >= n, format!("at least {}", super::gates::counted(n, "operand")))
            }
            _ => (found == n, super::gates::counted(n, "operand")),
        };
        if fits {
            return;
        }
        let message = format!(
            "`{name}` is a {rows}×{cols} matrix, so `{}` must have {needed}; it has {found}",
            gate.name
        );
        let range = operands_range(gate);
        let finding = Finding::error("operand-count", gate.file, range, message);
        let finding = finding.related(claim.file, claim.range, "claimed here");
        let finding = match place {
            (FileId::STANDARD, _) => finding,
            (file, range) => finding.related(file, range, format!("`{name}` is declared here")),
        };
        self.report(finding);
    }
}

/// What one annotation states.
struct Stated {
    kind: ClaimKind,
    /// The matrix or gate that is named.
    name: Option<Spanned<String>>,
    /// The tolerance of a stand-in as written.
    tolerance_text: Option<String>,
    /// The operands of `@cantle.clean`.
    operands: Vec<Spanned<String>>,
}

impl Stated {
    fn of(kind: ClaimKind) -> Self {
        Stated { kind, name: None, tolerance_text: None, operands: Vec::new() }
    }

    fn naming(kind: ClaimKind, name: Spanned<String>) -> Self {
        Stated { name: Some(name), ..Stated::of(kind) }
    }
}

/// The claim in an annotation about a gate or a block, if it is one.
fn stated(annotation: Annotation) -> Option<Stated> {
    let value = |number: Number| number.value;
    Some(match annotation {
        Annotation::Dense { matrix, within } => {
            let tolerance_text = within.as_ref().map(|within| within.text.clone());
            let kind = ClaimKind::Dense { matrix: matrix.value.clone(), within: within.map(value) };
            Stated { tolerance_text, ..Stated::naming(kind, matrix) }
        }
        Annotation::Encodes(fields) => {
            let kind = ClaimKind::Encodes {
                matrix: fields.matrix.value.clone(),
                ancilla: fields.ancilla.map(|number| number.value as usize),
                scale: fields.scale.map(value),
                within: fields.within.map(value),
            };
            Stated::naming(kind, fields.matrix)
        }
        Annotation::Equals { of, exact_phase, within } => {
            let within = within.map(value);
            let kind = ClaimKind::Equals { of: of.value.clone(), exact_phase, within };
            Stated::naming(kind, of)
        }
        Annotation::Clean(operands) => {
            let names = operands.iter().map(|operand| operand.value.clone()).collect();
            Stated { operands, ..Stated::of(ClaimKind::Clean { operands: names }) }
        }
        Annotation::Budget(budget) => Stated::of(ClaimKind::Budget(budget)),
        Annotation::Matrix(_) | Annotation::Sample(_) | Annotation::Allow(_) => return None,
    })
}

/// From the name of a gate to the end of its head.
fn operands_range(gate: &crate::GateDef) -> TextRange {
    TextRange::new(gate.name_range.start(), gate.head_end.max(gate.name_range.end()))
}

/// Whether an annotation can speak of such a subject.
fn fits(annotation: &Annotation, subject: Subject) -> bool {
    match (annotation, subject) {
        (Annotation::Dense { .. } | Annotation::Encodes(_), Subject::Gate(_)) => true,
        (Annotation::Equals { .. }, subject) => !matches!(subject, Subject::Matrix(_)),
        (
            Annotation::Clean(_) | Annotation::Budget(_),
            Subject::Gate(_) | Subject::Subroutine(_),
        ) => true,
        (Annotation::Budget(_), Subject::Block(_)) => true,
        (Annotation::Matrix(MatrixNote::Properties(_)), Subject::Matrix(_)) => true,
        _ => false,
    }
}
