//! Loops: their values, and running their bodies.

use grammar::TextRange;

use super::machine::{Flow, Machine};
use crate::build::written;
use crate::eval::{BROKEN, Trouble, eval};
use crate::hir::{Expr, Over, Stmt};
use crate::model::Cannot;
use crate::symbols::SymbolId;
use crate::types::Type;
use crate::value::{Value, convert};

impl Machine<'_> {
    pub(super) fn repeat(
        &mut self,
        statement: &Stmt,
        symbol: SymbolId,
        ty: Type,
        over: &Over,
        body: &[Stmt],
    ) -> Result<Flow, Cannot> {
        let values = match self.loop_values(over) {
            Ok(values) => values,
            Err(Unrolled::Trouble(trouble)) => {
                self.trouble(statement, trouble)?;
                return self.unknown_loop(statement, symbol, body);
            }
            Err(Unrolled::Unknown(what)) => {
                if self.building() {
                    let reason = format!("how often this loop turns depends on {what}");
                    return Ok(self.cut_here(statement, reason));
                }
                return self.unknown_loop(statement, symbol, body);
            }
        };
        self.note_turns(statement, Some(values.count()));
        for value in values.iter() {
            if !self.spend(statement, 1)? {
                return Ok(Flow::End);
            }
            let value = convert(&value, ty, false).unwrap_or(value);
            self.bind_value(symbol, value);
            match self.all(body)? {
                Flow::Next | Flow::Continue => {}
                Flow::Break => break,
                Flow::End => return Ok(Flow::End),
            }
        }
        Ok(Flow::Next)
    }

    /// Checks the body of a loop of which nothing is known.
    fn unknown_loop(
        &mut self,
        statement: &Stmt,
        symbol: SymbolId,
        body: &[Stmt],
    ) -> Result<Flow, Cannot> {
        self.note_turns(statement, None);
        let writes = written(body);
        self.forget(&writes);
        self.bind_value(symbol, Value::Unknown("the variable of a loop"));
        self.all(body)?;
        self.forget(&writes);
        Ok(Flow::Next)
    }

    fn note_turns(&mut self, statement: &Stmt, turns: Option<usize>) {
        let key = (statement.file, statement.range.start());
        let noted = self.turns.entry(key).or_insert(turns);
        if *noted != turns {
            *noted = None;
        }
    }

    fn loop_values(&self, over: &Over) -> Result<Values, Unrolled> {
        match over {
            Over::Broken => Err(Unrolled::Trouble(None)),
            Over::Set(values) => {
                let values: Result<Vec<Value>, Unrolled> =
                    values.iter().map(|value| self.loop_value(value)).collect();
                Ok(Values::List(values?))
            }
            Over::Value(expr) => match self.loop_value(expr)? {
                Value::Bits(bits) => Ok(Values::List(bits.into_iter().map(Value::Bool).collect())),
                other => {
                    let message = format!("a loop cannot run over {}", other.type_name());
                    Err(Unrolled::Trouble(Some(Trouble::new("type-mismatch", expr.range, message))))
                }
            },
            Over::Range { range, start, step, stop } => {
                let whole = |expr: &Expr| -> Result<i128, Unrolled> {
                    let value = self.loop_value(expr)?;
                    value.integer().ok_or_else(|| {
                        let message = format!("this must be an integer, not {}", value.type_name());
                        Unrolled::Trouble(Some(Trouble::new("type-mismatch", expr.range, message)))
                    })
                };
                let (start, stop) = (whole(start)?, whole(stop)?);
                let step = step.as_ref().map_or(Ok(1), whole)?;
                self.range_values(*range, start, step, stop)
            }
        }
    }

    fn loop_value(&self, expr: &Expr) -> Result<Value, Unrolled> {
        match eval(expr, self) {
            Ok(Value::Unknown(BROKEN)) => Err(Unrolled::Trouble(None)),
            Ok(Value::Unknown(what)) => Err(Unrolled::Unknown(what)),
            Ok(value) => Ok(value),
            Err(trouble) => Err(Unrolled::Trouble(Some(trouble))),
        }
    }

    fn range_values(
        &self,
        range: TextRange,
        start: i128,
        step: i128,
        stop: i128,
    ) -> Result<Values, Unrolled> {
        let refuse = |code, message| Unrolled::Trouble(Some(Trouble::new(code, range, message)));
        if step == 0 {
            return Err(refuse("type-mismatch", "the step of a range must not be zero".to_owned()));
        }
        let turns = ((stop - start) / step + 1).max(0);
        let turns = if (stop - start).signum() == -step.signum() { 0 } else { turns };
        let limit = self.facts.limits.steps;
        match usize::try_from(turns) {
            Ok(turns) if turns <= limit => Ok(Values::Range { start, step, turns }),
            _ => {
                let message = format!("{turns} turns are past the limit of {limit}");
                Err(refuse("limit-reached", message))
            }
        }
    }
}

/// The values of a loop.
enum Values {
    List(Vec<Value>),
    Range { start: i128, step: i128, turns: usize },
}

impl Values {
    fn count(&self) -> usize {
        match self {
            Values::List(values) => values.len(),
            Values::Range { turns, .. } => *turns,
        }
    }

    fn iter(&self) -> impl Iterator<Item = Value> + '_ {
        (0..self.count()).map(|turn| match self {
            Values::List(values) => values[turn].clone(),
            Values::Range { start, step, .. } => Value::int(start + turn as i128 * step),
        })
    }
}

/// Why a loop is not unrolled.
enum Unrolled {
    Trouble(Option<Trouble>),
    Unknown(&'static str),
}
