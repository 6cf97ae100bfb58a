//! Two-dimensional arrays of numbers: the matrices of the claims.

use std::sync::Arc;

use grammar::nodes::{
    ArrayLiteral, ArrayType, ClassicalDeclaration, Element, Expression, Initialiser, NodeExt,
};
use grammar::{SyntaxKind as K, TextRange};
use operator::{C64, Matrix};

use super::annotations::Note;
use super::{Builder, core_range};
use crate::annotation::{Annotation, MatrixNote, banded, pauli_sum};
use crate::finding::Finding;
use crate::model::{ClaimKind, MatrixDef, MatrixSource, Property, Subject};
use crate::symbols::SymbolKind;
use crate::value::Value;

/// A literal as it was read.
struct Grid {
    rows: usize,
    cols: usize,
    ranges: Vec<Vec<TextRange>>,
    /// None if an entry has no constant finite value, or a row another length.
    matrix: Option<Matrix>,
}

impl Builder<'_> {
    /// Declares an array if it is two-dimensional and of numbers; the answer
    /// is whether it was.
    pub(super) fn array(
        &mut self,
        node: &ClassicalDeclaration,
        array: &ArrayType,
        notes: &[Note],
    ) -> bool {
        let element = array.element().and_then(|ty| ty.keyword()).map(|token| token.kind());
        let numeric =
            matches!(element, Some(K::ComplexKw | K::FloatKw | K::IntKw | K::UintKw | K::AngleKw));
        let sizes: Vec<Expression> = array.sizes().collect();
        let (Some(name), [rows, cols], true) = (node.name(), sizes.as_slice(), numeric) else {
            return false;
        };
        let (rows, cols) = (self.array_size(rows), self.array_size(cols));
        if let Some(element) = array.element() {
            self.scalar_type(&element);
        }
        let literal = match node.value() {
            Some(Initialiser::Array(literal)) => Some(literal),
            _ => None,
        };
        let declared = rows.zip(cols);
        let (source, grid) = self.entries(literal.as_ref(), declared, notes, array.range());
        let unknown = Value::Unknown("an array");
        let symbol = self.declare(&name, SymbolKind::Matrix, core_range(node), unknown);
        let size = declared.unwrap_or((grid.rows, grid.cols));
        let index = self.facts.matrices.len();
        self.facts.matrices.push(MatrixDef {
            name: name.name(),
            symbol,
            file: self.file,
            name_range: name.range(),
            range: node.range(),
            literal_range: literal.map(|literal| literal.range()),
            rows: size.0,
            cols: size.1,
            source,
            matrix: grid.matrix.map(Arc::new),
            used_as_operator: false,
            complex: element == Some(K::ComplexKw),
            entry_ranges: grid.ranges,
        });
        let rest = self.take_claims(notes.to_vec(), Subject::Matrix(index), false);
        let rest: Vec<Note> =
            rest.into_iter().filter(|n| !matches!(n.annotation, Annotation::Matrix(_))).collect();
        self.misplaced(&rest, "an `array`");
        true
    }

    fn array_size(&mut self, node: &Expression) -> Option<usize> {
        let expr = self.expression(node);
        self.constant_size(&expr, "the size of an array")
    }

    /// The entries, from the literal or from an annotation.
    fn entries(
        &mut self,
        literal: Option<&ArrayLiteral>,
        declared: Option<(usize, usize)>,
        notes: &[Note],
        ty: TextRange,
    ) -> (MatrixSource, Grid) {
        let nothing = Grid { rows: 0, cols: 0, ranges: Vec::new(), matrix: None };
        let note = notes.iter().find_map(|note| match &note.annotation {
            Annotation::Matrix(MatrixNote::Properties(_)) => None,
            Annotation::Matrix(matrix) => Some((matrix, note.range)),
            _ => None,
        });
        let most = 1_usize << self.facts.limits.matrix_qubits.min(16);
        if let Some((rows, cols)) = declared.filter(|(r, c)| *r > most || *c > most) {
            let message = format!(
                "a {rows}×{cols} matrix is past the limit of {most}×{most} ({} qubits)",
                self.facts.limits.matrix_qubits
            );
            self.error("matrix-too-large", ty, message);
            return (MatrixSource::None, nothing);
        }
        match (literal, note) {
            (Some(_), Some((_, range))) => {
                let message = "the array has a literal, so its entries cannot come from elsewhere";
                self.error("malformed-annotation", range, message);
                (MatrixSource::None, nothing)
            }
            (Some(literal), None) => {
                let grid = self.grid(literal, most);
                (MatrixSource::Literal, self.checked(grid, declared, literal.range()))
            }
            (None, Some((note, range))) => self.generated(note, range, declared),
            (None, None) => (MatrixSource::None, nothing),
        }
    }

    fn grid(&mut self, literal: &ArrayLiteral, most: usize) -> Grid {
        let elements: Vec<Element> = literal.elements().collect();
        let mut entries: Vec<Vec<Option<C64>>> = Vec::new();
        let mut ranges: Vec<Vec<TextRange>> = Vec::new();
        for element in elements.iter().take(most + 1) {
            let Element::Row(row) = element else {
                let message = "each element of a matrix is a row in braces";
                self.error("matrix-ragged", element.range(), message);
                continue;
            };
            let cells: Vec<Element> = row.elements().take(most + 1).collect();
            entries.push(cells.iter().map(|cell| self.entry(cell)).collect());
            ranges.push(cells.iter().map(NodeExt::range).collect());
        }
        let (rows, cols) = (entries.len(), entries.first().map_or(0, Vec::len));
        let ragged = entries.iter().position(|row| row.len() != cols);
        if let Some(row) = ragged {
            let message = format!(
                "row {row} has {}, but row 0 has {cols}",
                super::gates::counted(entries[row].len(), "entry").replace("entrys", "entries")
            );
            let rows: Vec<TextRange> = elements.iter().map(NodeExt::range).collect();
            let range = rows.get(row).copied().unwrap_or(literal.range());
            self.error("matrix-ragged", range, message);
        }
        let flat: Option<Vec<C64>> = entries.into_iter().flatten().collect();
        let whole = flat.filter(|_| ragged.is_none() && rows == elements.len());
        let matrix = whole.map(|flat| Matrix::from_rows(rows, cols, &flat));
        Grid { rows, cols, ranges, matrix }
    }

    /// The value of an entry; reported if it is not a finite constant.
    fn entry(&mut self, cell: &Element) -> Option<C64> {
        let Element::Expression(node) = cell else {
            self.error("matrix-ragged", cell.range(), "a matrix has no third dimension");
            return None;
        };
        let expr = self.expression(node);
        let value = self.constant(&expr)?;
        let Some(entry) = value.complex() else {
            let message = format!("an entry must be a number, not {}", value.type_name());
            self.error("type-mismatch", expr.range, message);
            return None;
        };
        if !entry.is_finite() {
            let message = format!("this entry is {value}, not a finite number");
            self.error("matrix-not-finite", expr.range, message);
            return None;
        }
        Some(entry)
    }

    /// The literal must have the declared size.
    fn checked(&mut self, grid: Grid, declared: Option<(usize, usize)>, range: TextRange) -> Grid {
        let Some((rows, cols)) = declared else { return Grid { matrix: None, ..grid } };
        if grid.matrix.is_some() && (grid.rows, grid.cols) != (rows, cols) {
            let message = format!(
                "the array is declared {rows}×{cols}, but its literal is {}×{}",
                grid.rows, grid.cols
            );
            self.error("type-mismatch", range, message);
            return Grid { matrix: None, ..grid };
        }
        grid
    }

    /// Entries from `@cantle.matrix pauli` and `bands`.
    fn generated(
        &mut self,
        note: &MatrixNote,
        range: TextRange,
        declared: Option<(usize, usize)>,
    ) -> (MatrixSource, Grid) {
        let (rows, cols) = declared.unwrap_or_default();
        let grid = |matrix| Grid { rows, cols, ranges: Vec::new(), matrix };
        match note {
            MatrixNote::Pauli(terms) => {
                let qubits = terms.first().map_or(0, |term| term.letters.len());
                let size = 1_usize.checked_shl(qubits as u32).unwrap_or(0);
                if size != rows || size != cols {
                    let range = terms.first().map_or(range, |term| term.range);
                    let message = format!(
                        "a Pauli string of {} is a {size}×{size} matrix, not {rows}×{cols}",
                        super::gates::counted(qubits, "letter")
                    );
                    self.error("type-mismatch", range, message);
                    return (MatrixSource::Pauli, grid(None));
                }
                (MatrixSource::Pauli, grid(Some(pauli_sum(terms, qubits))))
            }
            MatrixNote::Bands { bands, periodic } => {
                let size = rows as i64;
                let outside = bands.iter().find(|band| band.offset.abs() >= size);
                if rows != cols {
                    let message = "constant diagonals make a square matrix";
                    self.error("matrix-not-square", range, message);
                    return (MatrixSource::Bands, grid(None));
                }
                if let Some(band) = outside {
                    let message = format!("a {rows}×{cols} matrix has no diagonal {}", band.offset);
                    self.error("index-out-of-range", band.range, message);
                    return (MatrixSource::Bands, grid(None));
                }
                (MatrixSource::Bands, grid(Some(banded(bands, *periodic, rows))))
            }
            MatrixNote::From(path) => {
                let message = format!(
                    "matrices are not read from files in this version, so the entries of \
                     `{}` are not known",
                    path.value
                );
                self.report(Finding::warning("claim-undecided", self.file, path.range, message));
                (MatrixSource::File(path.value.clone()), grid(None))
            }
            MatrixNote::Properties(_) => (MatrixSource::None, grid(None)),
        }
    }

    /// What is used as an operator must be square and on whole qubits; what
    /// is claimed to be symmetric or the like must be square.
    pub(super) fn check_matrices(&mut self) {
        for index in 0..self.facts.matrices.len() {
            let matrix = &self.facts.matrices[index];
            let (rows, cols, name) = (matrix.rows, matrix.cols, matrix.name.clone());
            let subject = Subject::Matrix(index);
            let claimed = self.facts.claims.iter().any(|claim| {
                claim.subject == subject && claim.kind != ClaimKind::Property(Property::Real)
            });
            let operator = matrix.used_as_operator;
            let (code, message) = if rows != cols && (operator || claimed) {
                let message = format!("`{name}` is {rows}×{cols}, but an operator is square");
                ("matrix-not-square", message)
            } else if operator && !rows.is_power_of_two() {
                let (below, above) = (rows.next_power_of_two() / 2, rows.next_power_of_two());
                let message = format!(
                    "`{name}` is {rows}×{cols}, which is no operator on qubits: the nearest \
                     sizes are {below} and {above}"
                );
                ("matrix-not-power-of-two", message)
            } else {
                continue;
            };
            let finding = Finding::error(code, matrix.file, matrix.name_range, message);
            self.report(finding);
        }
    }
}
