//! The operators of the language on values, as the standard defines them:
//! integers as in C99 (division toward zero, the remainder has the sign of
//! the dividend, overflow wraps), then floats, then complex numbers; angles
//! and bit strings with operators of their own.

use std::cmp::Ordering;

use operator::C64;

use crate::value::{Angle, Int, Problem, Time, Value, bits_of};

/// An operator between two values.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) enum BinaryOp {
    Power,
    Multiply,
    Divide,
    Remainder,
    Add,
    Subtract,
    ShiftLeft,
    ShiftRight,
    Less,
    LessEqual,
    Greater,
    GreaterEqual,
    Equal,
    NotEqual,
    BitAnd,
    BitXor,
    BitOr,
    And,
    Or,
}

/// An operator before a value.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) enum UnaryOp {
    Negate,
    Not,
    BitNot,
}

/// Applies an operator to one value.
pub(crate) fn unary(op: UnaryOp, value: &Value) -> Result<Value, Problem> {
    Ok(match (op, value) {
        (_, Value::Unknown(what)) => Value::Unknown(what),
        (UnaryOp::Negate, Value::Int(i)) => Value::Int(Int::wrapped(-i.value, i.width, i.signed)),
        (UnaryOp::Negate, Value::Bool(bit)) => Value::int(-i128::from(*bit)),
        (UnaryOp::Negate, Value::Float(x)) => Value::Float(-x),
        (UnaryOp::Negate, Value::Complex(z)) => Value::Complex(-z),
        (UnaryOp::Negate, Value::Angle(a)) => Value::Angle(modular(*a, |bits| bits.wrapping_neg())),
        (UnaryOp::Negate, Value::Duration(Time::Seconds(t))) => Value::Duration(Time::Seconds(-t)),
        (UnaryOp::Negate, Value::Duration(Time::Steps(t))) => Value::Duration(Time::Steps(-t)),
        (UnaryOp::Not, value) if value.truth().is_some() => {
            Value::Bool(value.truth() == Some(false))
        }
        (UnaryOp::BitNot, Value::Int(i)) => Value::Int(Int::wrapped(!i.value, i.width, i.signed)),
        (UnaryOp::BitNot, Value::Bool(bit)) => Value::Bool(!bit),
        (UnaryOp::BitNot, Value::Angle(a)) => Value::Angle(modular(*a, |bits| !bits)),
        (UnaryOp::BitNot, Value::Bits(bits)) => Value::Bits(bits.iter().map(|bit| !bit).collect()),
        _ => return Err(format!("this operator is not for {}", value.type_name())),
    })
}

/// Applies an operator to two values.
pub(crate) fn binary(op: BinaryOp, a: &Value, b: &Value) -> Result<Value, Problem> {
    use BinaryOp as O;
    if let Value::Unknown(what) = a {
        return Ok(Value::Unknown(what));
    }
    if let Value::Unknown(what) = b {
        return Ok(Value::Unknown(what));
    }
    let result = match op {
        O::And | O::Or => logic(op, a, b),
        O::Less | O::LessEqual | O::Greater | O::GreaterEqual | O::Equal | O::NotEqual => {
            compare(op, a, b)
        }
        O::BitAnd | O::BitXor | O::BitOr | O::ShiftLeft | O::ShiftRight => bitwise(op, a, b),
        O::Power | O::Multiply | O::Divide | O::Remainder | O::Add | O::Subtract => {
            return arithmetic(op, a, b);
        }
    };
    result.ok_or_else(|| mismatch(a, b))
}

fn mismatch(a: &Value, b: &Value) -> Problem {
    format!("this operator is not for {} and {}", a.type_name(), b.type_name())
}

fn logic(op: BinaryOp, a: &Value, b: &Value) -> Option<Value> {
    let (a, b) = (a.truth()?, b.truth()?);
    Some(Value::Bool(if op == BinaryOp::And { a && b } else { a || b }))
}

fn compare(op: BinaryOp, a: &Value, b: &Value) -> Option<Value> {
    use BinaryOp as O;
    if let (O::Equal | O::NotEqual, Some(x), Some(y)) = (op, complex_side(a), complex_side(b)) {
        return Some(Value::Bool((x == y) == (op == O::Equal)));
    }
    let order = ordering(a, b)?;
    Some(Value::Bool(match op {
        O::Less => order == Some(Ordering::Less),
        O::Greater => order == Some(Ordering::Greater),
        O::LessEqual => matches!(order, Some(Ordering::Less | Ordering::Equal)),
        O::GreaterEqual => matches!(order, Some(Ordering::Greater | Ordering::Equal)),
        O::Equal => order == Some(Ordering::Equal),
        _ => order != Some(Ordering::Equal),
    }))
}

fn complex_side(value: &Value) -> Option<C64> {
    if let Value::Complex(z) = value { Some(*z) } else { None }
}

/// The order of two values; the outer option is about their types, the inner
/// one about NaN.
fn ordering(a: &Value, b: &Value) -> Option<Option<Ordering>> {
    let whole = |v: &Value| match v {
        Value::Bits(bits) => Value::unsigned(bits).map(i128::from),
        other => other.integer(),
    };
    if let (Value::Bits(x), Value::Bits(y)) = (a, b) {
        return Some(Some(x.iter().rev().cmp(y.iter().rev())));
    }
    if let (Value::Angle(x), Value::Angle(y)) = (a, b) {
        let width = x.width.max(y.width);
        return Some(Some(x.resized(width).bits.cmp(&y.resized(width).bits)));
    }
    if let (Value::Duration(x), Value::Duration(y)) = (a, b) {
        return match (x, y) {
            (Time::Seconds(x), Time::Seconds(y)) | (Time::Steps(x), Time::Steps(y)) => {
                Some(x.partial_cmp(y))
            }
            _ => None,
        };
    }
    if let (Some(x), Some(y)) = (whole(a), whole(b)) {
        return Some(Some(x.cmp(&y)));
    }
    let (x, y) = (a.complex()?, b.complex()?);
    (x.im == 0.0 && y.im == 0.0).then(|| x.re.partial_cmp(&y.re))
}

fn bitwise(op: BinaryOp, a: &Value, b: &Value) -> Option<Value> {
    use BinaryOp as O;
    if matches!(op, O::ShiftLeft | O::ShiftRight) {
        return shift(op, a, b);
    }
    let join = |x: u64, y: u64| match op {
        O::BitAnd => x & y,
        O::BitXor => x ^ y,
        _ => x | y,
    };
    let join_bit = |x: bool, y: bool| join(u64::from(x), u64::from(y)) == 1;
    Some(match (a, b) {
        (Value::Bool(x), Value::Bool(y)) => Value::Bool(join_bit(*x, *y)),
        (Value::Bits(x), Value::Bits(y)) if x.len() == y.len() => {
            Value::Bits(x.iter().zip(y).map(|(x, y)| join_bit(*x, *y)).collect())
        }
        (Value::Angle(x), Value::Angle(y)) => {
            let width = x.width.max(y.width);
            let bits = join(x.resized(width).bits, y.resized(width).bits);
            Value::Angle(Angle { bits, width })
        }
        _ => {
            let (x, y) = (a.integer()?, b.integer()?);
            let (width, signed) = common(a, b);
            let value = match op {
                O::BitAnd => x & y,
                O::BitXor => x ^ y,
                _ => x | y,
            };
            Value::Int(Int::wrapped(value, width, signed))
        }
    })
}

fn shift(op: BinaryOp, a: &Value, b: &Value) -> Option<Value> {
    let by = usize::try_from(b.integer()?).ok()?;
    let left = op == BinaryOp::ShiftLeft;
    let pattern = |bits: u64| match (left, by < 64) {
        (_, false) => 0,
        (true, true) => bits << by,
        (false, true) => bits >> by,
    };
    Some(match a {
        Value::Bits(bits) => {
            let n = bits.len();
            let from = |k: usize| if left { k.checked_sub(by) } else { k.checked_add(by) };
            let bit = |k| from(k).is_some_and(|j| j < n && bits[j]);
            Value::Bits((0..n).map(bit).collect())
        }
        Value::Angle(angle) => Value::Angle(modular(*angle, pattern)),
        Value::Int(int) if left => {
            Value::Int(Int::wrapped(i128::from(pattern(int.pattern())), int.width, int.signed))
        }
        Value::Int(int) => {
            let value = int.value >> by.min(127);
            Value::Int(Int::wrapped(value, int.width, int.signed))
        }
        _ => return None,
    })
}

/// The type two integers are brought to: the wider width, unsigned if the
/// unsigned one is at least as wide.
fn common(a: &Value, b: &Value) -> (u32, bool) {
    match (a, b) {
        (Value::Int(a), Value::Int(b)) if a.signed == b.signed => (a.width.max(b.width), a.signed),
        (Value::Int(a), Value::Int(b)) => {
            let (signed, unsigned) = if a.signed { (a, b) } else { (b, a) };
            (a.width.max(b.width), signed.width > unsigned.width)
        }
        (Value::Int(int), _) | (_, Value::Int(int)) => (int.width, int.signed),
        _ => (crate::types::WIDEST, true),
    }
}

fn arithmetic(op: BinaryOp, a: &Value, b: &Value) -> Result<Value, Problem> {
    if let (Some(x), Some(y)) = (a.integer(), b.integer()) {
        let (width, signed) = common(a, b);
        return integers(op, x, y).map(|value| Value::Int(Int::wrapped(value, width, signed)));
    }
    if matches!(a, Value::Duration(_)) || matches!(b, Value::Duration(_)) {
        return durations(op, a, b).ok_or_else(|| mismatch(a, b));
    }
    if (matches!(a, Value::Angle(_)) || matches!(b, Value::Angle(_)))
        && let Some(value) = angles(op, a, b)?
    {
        return Ok(value);
    }
    if matches!(a, Value::Complex(_)) || matches!(b, Value::Complex(_)) {
        let sides = a.complex().zip(b.complex());
        let value = sides.and_then(|(x, y)| complexes(op, x, y));
        return value.map(Value::Complex).ok_or_else(|| mismatch(a, b));
    }
    let (x, y) = a.real().zip(b.real()).ok_or_else(|| mismatch(a, b))?;
    Ok(Value::Float(match op {
        BinaryOp::Add => x + y,
        BinaryOp::Subtract => x - y,
        BinaryOp::Multiply => x * y,
        BinaryOp::Divide => x / y,
        BinaryOp::Remainder => x % y,
        _ => x.powf(y),
    }))
}

fn integers(op: BinaryOp, x: i128, y: i128) -> Result<i128, Problem> {
    Ok(match op {
        BinaryOp::Add => x.wrapping_add(y),
        BinaryOp::Subtract => x.wrapping_sub(y),
        BinaryOp::Multiply => x.wrapping_mul(y),
        BinaryOp::Divide | BinaryOp::Remainder if y == 0 => {
            return Err("an integer is divided by zero".to_owned());
        }
        BinaryOp::Divide => x.wrapping_div(y),
        BinaryOp::Remainder => x.wrapping_rem(y),
        _ => {
            if y < 0 {
                return Err("an integer has no negative power; write `1.0*` before it".to_owned());
            }
            wrapping_power(x, y)
        }
    })
}

/// x^y modulo 2^128, by squaring.
fn wrapping_power(x: i128, y: i128) -> i128 {
    let (mut base, mut rest, mut product) = (x, y, 1_i128);
    while rest > 0 {
        if rest & 1 == 1 {
            product = product.wrapping_mul(base);
        }
        base = base.wrapping_mul(base);
        rest >>= 1;
    }
    product
}

fn complexes(op: BinaryOp, x: C64, y: C64) -> Option<C64> {
    Some(match op {
        BinaryOp::Add => x + y,
        BinaryOp::Subtract => x - y,
        BinaryOp::Multiply => x * y,
        BinaryOp::Divide => x / y,
        BinaryOp::Power if y.im == 0.0 && y.re.fract() == 0.0 && y.re.abs() <= 1024.0 => {
            x.powi(y.re as i32)
        }
        BinaryOp::Power => x.powc(y),
        _ => return None,
    })
}

fn durations(op: BinaryOp, a: &Value, b: &Value) -> Option<Value> {
    let scale = |time: &Time, by: f64| match time {
        Time::Seconds(t) => Value::Duration(Time::Seconds(t * by)),
        Time::Steps(t) => Value::Duration(Time::Steps(t * by)),
    };
    match (op, a, b) {
        (_, Value::Duration(x), Value::Duration(y)) => {
            let (x, y, steps) = match (x, y) {
                (Time::Seconds(x), Time::Seconds(y)) => (*x, *y, false),
                (Time::Steps(x), Time::Steps(y)) => (*x, *y, true),
                _ => return Some(Value::Unknown("a duration in steps of the device")),
            };
            let time = |t| Value::Duration(if steps { Time::Steps(t) } else { Time::Seconds(t) });
            match op {
                BinaryOp::Add => Some(time(x + y)),
                BinaryOp::Subtract => Some(time(x - y)),
                BinaryOp::Divide => Some(Value::Float(x / y)),
                _ => None,
            }
        }
        (BinaryOp::Multiply, Value::Duration(t), n)
        | (BinaryOp::Multiply, n, Value::Duration(t)) => n.real().map(|n| scale(t, n)),
        (BinaryOp::Divide, Value::Duration(t), n) => n.real().map(|n| scale(t, 1.0 / n)),
        _ => None,
    }
}

/// Operators with an angle; none where the angle is taken as a real number.
fn angles(op: BinaryOp, a: &Value, b: &Value) -> Result<Option<Value>, Problem> {
    Ok(match (op, a, b) {
        (BinaryOp::Add | BinaryOp::Subtract, Value::Angle(x), Value::Angle(y)) => {
            let width = x.width.max(y.width);
            let y = y.resized(width).bits;
            let sum = |bits: u64| match op {
                BinaryOp::Add => bits.wrapping_add(y),
                _ => bits.wrapping_sub(y),
            };
            Some(Value::Angle(modular(x.resized(width), sum)))
        }
        (BinaryOp::Divide, Value::Angle(x), Value::Angle(y)) => {
            let width = x.width.max(y.width);
            let (x, y) = (x.resized(width).bits, y.resized(width).bits);
            let quotient = x.checked_div(y).ok_or("an angle is divided by zero")?;
            Some(Value::Int(Int::wrapped(i128::from(quotient), width, false)))
        }
        (BinaryOp::Multiply, Value::Angle(angle), Value::Int(n))
        | (BinaryOp::Multiply, Value::Int(n), Value::Angle(angle)) => {
            Some(Value::Angle(modular(*angle, |bits| bits.wrapping_mul(n.value as u64))))
        }
        (BinaryOp::Divide, Value::Angle(angle), Value::Int(n)) if n.value > 0 => {
            Some(Value::Angle(modular(*angle, |bits| bits / n.value as u64)))
        }
        _ => None,
    })
}

/// An angle with its bits changed, modulo a full turn.
fn modular(angle: Angle, change: impl Fn(u64) -> u64) -> Angle {
    let mask = u64::MAX >> (64 - angle.width);
    Angle { bits: change(angle.bits) & mask, width: angle.width }
}

/// Whether bit `index` of a value's pattern is set; negative indices count
/// from the end. Outer error: not a value with bits; inner `None`: out of range.
pub(crate) fn bit(value: &Value, index: i128) -> Result<Option<bool>, Problem> {
    let bits = match value {
        Value::Bits(bits) => bits.clone(),
        Value::Int(int) => bits_of(int.pattern(), int.width as usize),
        Value::Angle(angle) => bits_of(angle.bits, angle.width as usize),
        _ => return Err(format!("{} has no bits to index", value.type_name())),
    };
    let length = bits.len() as i128;
    let place = if index < 0 { index + length } else { index };
    Ok(usize::try_from(place).ok().and_then(|place| bits.get(place).copied()))
}
