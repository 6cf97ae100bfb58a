//! Evaluation of expressions.

use grammar::TextRange;

use crate::arithmetic::{binary, bit, unary};
use crate::functions;
use crate::hir::{Expr, ExprKind, Index};
use crate::symbols::SymbolId;
use crate::value::{Problem, Value, convert};

/// Why an expression has no value: a finding without its file.
#[derive(Debug, Clone, PartialEq)]
pub(crate) struct Trouble {
    pub(crate) code: &'static str,
    pub(crate) range: TextRange,
    pub(crate) message: String,
}

/// What [`Value::Unknown`] says of an expression that was reported already.
pub(crate) const BROKEN: &str = "a value that is not understood";

/// The values of names.
pub(crate) trait Env {
    /// The value of a name; `Value::Unknown` if only its kind is known.
    fn value(&self, symbol: SymbolId) -> Value;
}

impl Trouble {
    pub(crate) fn new(code: &'static str, range: TextRange, message: impl Into<String>) -> Self {
        Trouble { code, range, message: message.into() }
    }
}

/// The value of an expression.
pub(crate) fn eval(expr: &Expr, env: &dyn Env) -> Result<Value, Trouble> {
    let typed = |problem: Problem| Trouble::new("type-mismatch", expr.range, problem);
    match &expr.kind {
        ExprKind::Value(value) => Ok(value.clone()),
        ExprKind::Name(symbol) => Ok(env.value(*symbol)),
        ExprKind::Unary(op, operand) => unary(*op, &eval(operand, env)?).map_err(typed),
        ExprKind::Chain(first, rest) => {
            let mut value = eval(first, env)?;
            for (op, operand) in rest {
                let right = eval(operand, env)?;
                value = binary(*op, &value, &right).map_err(|problem| {
                    let range = TextRange::new(expr.range.start(), operand.range.end());
                    Trouble::new("type-mismatch", range, problem)
                })?;
            }
            Ok(value)
        }
        ExprKind::Call(function, arguments) => {
            let values: Result<Vec<Value>, Trouble> =
                arguments.iter().map(|argument| eval(argument, env)).collect();
            functions::call(*function, &values?).map_err(typed)
        }
        ExprKind::Cast(ty, operand) => convert(&eval(operand, env)?, *ty, true).map_err(typed),
        ExprKind::Index(base, items) => index(expr, &eval(base, env)?, items, env),
        ExprKind::Concat(terms) => concat(expr.range, terms, env),
        ExprKind::Broken => Ok(Value::Unknown(BROKEN)),
    }
}

/// A value that must be known now. `Err(None)` means: reported already.
pub(crate) fn eval_known(expr: &Expr, env: &dyn Env) -> Result<Value, Option<Trouble>> {
    match eval(expr, env).map_err(Some)? {
        Value::Unknown(BROKEN) => Err(None),
        Value::Unknown(what) => {
            let message = format!("this must be a constant, but it depends on {what}");
            Err(Some(Trouble::new("not-constant", expr.range, message)))
        }
        value => Ok(value),
    }
}

fn index(expr: &Expr, base: &Value, items: &[Index], env: &dyn Env) -> Result<Value, Trouble> {
    if let Value::Unknown(what) = base {
        return Ok(Value::Unknown(what));
    }
    let [Index::One(place)] = items else {
        return Ok(Value::Unknown("a slice of a value"));
    };
    let place = match eval(place, env)? {
        Value::Unknown(what) => return Ok(Value::Unknown(what)),
        value => value.integer().ok_or_else(|| {
            let message = format!("an index must be an integer, not {}", value.type_name());
            Trouble::new("type-mismatch", place.range, message)
        })?,
    };
    match bit(base, place) {
        Ok(Some(bit)) => Ok(Value::Bool(bit)),
        Ok(None) => {
            let message = format!("there is no bit {place} in {}", base.type_name());
            Err(Trouble::new("index-out-of-range", expr.range, message))
        }
        Err(problem) => Err(Trouble::new("type-mismatch", expr.range, problem)),
    }
}

fn concat(range: TextRange, terms: &[Expr], env: &dyn Env) -> Result<Value, Trouble> {
    let mut joined = Vec::new();
    for term in terms.iter().rev() {
        match eval(term, env)? {
            Value::Bits(bits) => joined.extend(bits),
            Value::Bool(bit) => joined.push(bit),
            Value::Unknown(what) => return Ok(Value::Unknown(what)),
            other => {
                let message = format!("`++` is not for {}", other.type_name());
                return Err(Trouble::new("type-mismatch", range, message));
            }
        }
    }
    Ok(Value::Bits(joined))
}
