//! Operands: which wires a name with its indices stands for.

use std::sync::Arc;

use grammar::TextRange;

use super::machine::{Binding, Machine, Wires};
use crate::eval::{BROKEN, Trouble};
use crate::hir::{Expr, Index, Operand, OperandBase, Stmt};
use crate::model::Cannot;
use crate::symbols::SymbolId;

/// Qubits, or what they depend on.
pub(super) type Found = Result<Wires, &'static str>;

impl Machine<'_> {
    /// Binds a single qubit to a new wire.
    pub(crate) fn bind_qubit(&mut self, symbol: SymbolId, name: &str) {
        let wire = self.new_wire(name.to_owned());
        self.bindings
            .insert(symbol, Binding::Wires(Wires { wires: [wire].into(), register: false }));
    }

    /// Binds a register, or a single qubit if `size` is none, to new wires;
    /// `false` if they would be too many.
    pub(crate) fn bind_register(&mut self, symbol: SymbolId, size: Option<usize>) -> bool {
        let name = self.facts.symbols.get(symbol.index()).map_or("", |s| s.name.as_str());
        if self.wire_names.len().saturating_add(size.unwrap_or(1)) > self.facts.limits.qubits {
            return false;
        }
        let Some(size) = size else {
            let name = name.to_owned();
            self.bind_qubit(symbol, &name);
            return true;
        };
        let names: Vec<String> = (0..size).map(|k| format!("{name}[{k}]")).collect();
        let wires: Vec<usize> = names.into_iter().map(|name| self.new_wire(name)).collect();
        self.bindings.insert(symbol, Binding::Wires(Wires { wires: wires.into(), register: true }));
        true
    }

    fn new_wire(&mut self, name: String) -> usize {
        self.wire_names.push(name);
        self.wire_names.len() - 1
    }

    /// The wires of an operand; the inner error says what they depend on.
    pub(super) fn qubits(&mut self, statement: &Stmt, operand: &Operand) -> Result<Found, Cannot> {
        let mut found = match operand.base {
            OperandBase::Broken => {
                self.trouble(statement, None)?;
                return Ok(Err(BROKEN));
            }
            OperandBase::Hardware(number) => {
                let known = self.hardware.get(&number).copied();
                let wire = known.unwrap_or_else(|| self.new_wire(format!("${number}")));
                self.hardware.insert(number, wire);
                Wires { wires: [wire].into(), register: false }
            }
            OperandBase::Symbol(symbol) => match self.bindings.get(&symbol) {
                Some(Binding::Wires(wires)) => wires.clone(),
                _ => {
                    self.trouble(statement, None)?;
                    return Ok(Err(BROKEN));
                }
            },
        };
        for items in &operand.indices {
            found = match self.indexed(statement, operand, &found, items)? {
                Ok(found) => found,
                Err(what) => return Ok(Err(what)),
            };
        }
        Ok(Ok(found))
    }

    fn indexed(
        &mut self,
        statement: &Stmt,
        operand: &Operand,
        from: &Wires,
        items: &[Index],
    ) -> Result<Found, Cannot> {
        let refuse = |this: &mut Self, message: &str| {
            let trouble = Trouble::new("type-mismatch", operand.range, message);
            this.trouble(statement, Some(trouble)).map(|()| Err(BROKEN))
        };
        let [item] = items else {
            return refuse(self, "a register of qubits has one dimension");
        };
        if !from.register {
            return refuse(self, "a single qubit has no index");
        }
        let length = from.wires.len();
        match item {
            Index::One(expr) => {
                let place = match self.place(statement, expr, length)? {
                    Ok(place) => place,
                    Err(what) => return Ok(Err(what)),
                };
                Ok(Ok(Wires { wires: [from.wires[place]].into(), register: false }))
            }
            Index::Set(values) => {
                let mut wires = Vec::with_capacity(values.len());
                for value in values {
                    match self.place(statement, value, length)? {
                        Ok(place) => wires.push(from.wires[place]),
                        Err(what) => return Ok(Err(what)),
                    }
                }
                Ok(Ok(Wires { wires: wires.into(), register: true }))
            }
            Index::Range { range, start, step, stop } => {
                let parts = [start.as_ref(), step.as_ref(), stop.as_ref()];
                self.slice(statement, from, *range, parts)
            }
        }
    }

    /// The position an index means; negative ones count from the end.
    fn place(
        &mut self,
        statement: &Stmt,
        expr: &Expr,
        length: usize,
    ) -> Result<Result<usize, &'static str>, Cannot> {
        let index = match self.whole(statement, expr)? {
            Ok(index) => index,
            Err(what) => return Ok(Err(what)),
        };
        match position(index, length) {
            Some(place) => Ok(Ok(place)),
            None => {
                let message = format!("index {index} is outside a register of {length} qubits");
                let trouble = Trouble::new("index-out-of-range", expr.range, message);
                self.trouble(statement, Some(trouble))?;
                Ok(Err(BROKEN))
            }
        }
    }

    fn whole(
        &mut self,
        statement: &Stmt,
        expr: &Expr,
    ) -> Result<Result<i128, &'static str>, Cannot> {
        let value = match self.needed(statement, expr)? {
            Ok(value) => value,
            Err(what) => return Ok(Err(what)),
        };
        match value.integer() {
            Some(index) => Ok(Ok(index)),
            None => {
                let message = format!("an index must be an integer, not {}", value.type_name());
                let trouble = Trouble::new("type-mismatch", expr.range, message);
                self.trouble(statement, Some(trouble))?;
                Ok(Err(BROKEN))
            }
        }
    }

    /// `start:step:stop`, both ends included, negative ones from the end.
    fn slice(
        &mut self,
        statement: &Stmt,
        from: &Wires,
        range: TextRange,
        [start, step, stop]: [Option<&Expr>; 3],
    ) -> Result<Found, Cannot> {
        let length = from.wires.len() as i128;
        let mut values = [None; 3];
        for (value, expr) in values.iter_mut().zip([start, step, stop]) {
            let Some(expr) = expr else { continue };
            match self.whole(statement, expr)? {
                Ok(found) => *value = Some(found),
                Err(what) => return Ok(Err(what)),
            }
        }
        let step = values[1].unwrap_or(1);
        let ends = if step < 0 { (length - 1, 0) } else { (0, length - 1) };
        let from_end = |index: i128| if index < 0 { index + length } else { index };
        let start = values[0].map_or(ends.0, from_end);
        let stop = values[2].map_or(ends.1, from_end);
        let refusal = if step == 0 {
            Some(("type-mismatch", "the step of a range must not be zero".to_owned()))
        } else if (stop - start).signum() == -step.signum() || length == 0 {
            Some(("index-out-of-range", "this range holds no qubit".to_owned()))
        } else {
            let last = start + (stop - start) / step * step;
            let outside = [start, last].into_iter().find(|end| !(0..length).contains(end));
            let words = |end| format!("index {end} is outside a register of {length} qubits");
            outside.map(|end| ("index-out-of-range", words(end)))
        };
        if let Some((code, message)) = refusal {
            self.trouble(statement, Some(Trouble::new(code, range, message)))?;
            return Ok(Err(BROKEN));
        }
        let turns = ((stop - start) / step + 1) as usize;
        let wire = |turn: usize| from.wires[(start + turn as i128 * step) as usize];
        Ok(Ok(Wires { wires: (0..turns).map(wire).collect(), register: true }))
    }

    /// Binds a `let`; the answer is what it depends on, if that is not known.
    pub(super) fn alias(
        &mut self,
        statement: &Stmt,
        symbol: SymbolId,
        terms: &[Operand],
    ) -> Result<Option<&'static str>, Cannot> {
        let mut joined = Vec::new();
        let mut register = terms.len() > 1;
        for term in terms {
            match self.qubits(statement, term)? {
                Ok(found) => {
                    register |= found.register;
                    joined.extend_from_slice(&found.wires);
                }
                Err(what) => return Ok(Some(what)),
            }
        }
        let mut sorted = joined.clone();
        sorted.sort_unstable();
        if sorted.windows(2).any(|pair| pair[0] == pair[1]) {
            let message = "the same qubit is joined twice";
            let trouble = Trouble::new("repeated-operand", statement.range, message);
            self.trouble(statement, Some(trouble))?;
        }
        let wires: Arc<[usize]> = joined.into();
        self.bindings.insert(symbol, Binding::Wires(Wires { wires, register }));
        Ok(None)
    }
}

/// The position that an index means in a list.
fn position(index: i128, length: usize) -> Option<usize> {
    let place = if index < 0 { index + length as i128 } else { index };
    usize::try_from(place).ok().filter(|place| *place < length)
}
