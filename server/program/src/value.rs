//! Values of constant expressions and how they convert.

use std::f64::consts::TAU;
use std::fmt;

use operator::C64;

use crate::types::{Type, WIDEST};

/// An integer of stated width: `value` is always in the range of its type.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) struct Int {
    pub(crate) value: i128,
    pub(crate) width: u32,
    pub(crate) signed: bool,
}

/// `bits` times 2π/2^width.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) struct Angle {
    pub(crate) bits: u64,
    pub(crate) width: u32,
}

/// A length of time.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) enum Time {
    Seconds(f64),
    /// In the backend's own steps.
    Steps(f64),
}

/// A classical value.
#[derive(Debug, Clone, PartialEq)]
pub(crate) enum Value {
    Bool(bool),
    Int(Int),
    Float(f64),
    Complex(C64),
    Angle(Angle),
    /// Bit 0 first; in source it is the rightmost character.
    Bits(Vec<bool>),
    Duration(Time),
    /// Known only when the program runs, or not at all; the words say what it
    /// is: "a measured bit".
    Unknown(&'static str),
}

/// A message about values of the wrong type or range.
pub(crate) type Problem = String;

impl Int {
    /// The integer that `value` wraps to in a type.
    pub(crate) fn wrapped(value: i128, width: u32, signed: bool) -> Int {
        let width = width.clamp(1, WIDEST);
        let low = value & ((1_i128 << width) - 1);
        let negative = signed && low >> (width - 1) & 1 == 1;
        Int { value: if negative { low - (1_i128 << width) } else { low }, width, signed }
    }

    /// The lowest `width` bits.
    pub(crate) fn pattern(self) -> u64 {
        (self.value & ((1_i128 << self.width) - 1)) as u64
    }
}

impl Angle {
    /// The nearest angle of a width, ties to even; 2π wraps to 0.
    pub(crate) fn from_radians(radians: f64, width: u32) -> Angle {
        let width = width.clamp(1, WIDEST);
        let turns = (radians / TAU).rem_euclid(1.0);
        let steps = (turns * 2_f64.powi(width as i32)).round_ties_even();
        let bits = (steps as u128 % (1_u128 << width)) as u64;
        Angle { bits, width }
    }

    /// In [0, 2π).
    pub(crate) fn radians(self) -> f64 {
        self.bits as f64 / 2_f64.powi(self.width as i32) * TAU
    }

    /// The same angle with another number of bits, rounded if there are fewer.
    pub(crate) fn resized(self, width: u32) -> Angle {
        let width = width.clamp(1, WIDEST);
        if width >= self.width {
            return Angle { bits: self.bits << (width - self.width), width };
        }
        let drop = self.width - width;
        let (kept, lost) = (self.bits >> drop, self.bits & ((1 << drop) - 1));
        let half = 1_u64 << (drop - 1);
        let up = lost > half || (lost == half && kept & 1 == 1);
        let bits = (u128::from(kept) + u128::from(up)) & ((1_u128 << width) - 1);
        Angle { bits: bits as u64, width }
    }
}

impl Value {
    /// A plain `int`.
    pub(crate) fn int(value: i128) -> Value {
        Value::Int(Int::wrapped(value, WIDEST, true))
    }

    /// The name of the value's type.
    pub(crate) fn type_name(&self) -> String {
        match self {
            Value::Bool(_) => "bool".to_owned(),
            Value::Int(int) => Type::Int { width: int.width, signed: int.signed }.to_string(),
            Value::Float(_) => "float".to_owned(),
            Value::Complex(_) => "complex".to_owned(),
            Value::Angle(angle) => Type::Angle(angle.width).to_string(),
            Value::Bits(bits) => format!("bit[{}]", bits.len()),
            Value::Duration(_) => "duration".to_owned(),
            Value::Unknown(what) => (*what).to_owned(),
        }
    }

    /// As a real number; angles in radians.
    pub(crate) fn real(&self) -> Option<f64> {
        match self {
            Value::Bool(bit) => Some(f64::from(u8::from(*bit))),
            Value::Int(int) => Some(int.value as f64),
            Value::Float(x) => Some(*x),
            Value::Angle(angle) => Some(angle.radians()),
            Value::Complex(z) if z.im == 0.0 => Some(z.re),
            _ => None,
        }
    }

    /// As a complex number.
    pub(crate) fn complex(&self) -> Option<C64> {
        match self {
            Value::Complex(z) => Some(*z),
            other => other.real().map(|x| C64::new(x, 0.0)),
        }
    }

    /// As an integer, without rounding.
    pub(crate) fn integer(&self) -> Option<i128> {
        match self {
            Value::Int(int) => Some(int.value),
            Value::Bool(bit) => Some(i128::from(*bit)),
            _ => None,
        }
    }

    /// As a condition.
    pub(crate) fn truth(&self) -> Option<bool> {
        match self {
            Value::Bool(bit) => Some(*bit),
            Value::Int(int) => Some(int.value != 0),
            Value::Float(x) => Some(*x != 0.0),
            Value::Angle(angle) => Some(angle.bits != 0),
            Value::Bits(bits) => Some(bits.iter().any(|bit| *bit)),
            _ => None,
        }
    }

    /// Unsigned number that a bit string spells, if it has at most 64 bits.
    pub(crate) fn unsigned(bits: &[bool]) -> Option<u64> {
        let place = |(k, bit): (usize, &bool)| u64::from(*bit) << k;
        (bits.len() <= 64).then(|| bits.iter().enumerate().map(place).sum())
    }
}

/// The lowest `width` bits of a pattern, bit 0 first.
pub(crate) fn bits_of(pattern: u64, width: usize) -> Vec<bool> {
    (0..width).map(|k| k < 64 && pattern >> k & 1 == 1).collect()
}

/// Converts a value to a type. `explicit` conversions are written as casts
/// and may lose digits; implicit ones may not.
pub(crate) fn convert(value: &Value, to: Type, explicit: bool) -> Result<Value, Problem> {
    if matches!(value, Value::Unknown(_)) || to == Type::Unknown {
        return Ok(value.clone());
    }
    let wrong = || format!("a value of type {} cannot become {to}", value.type_name());
    match to {
        Type::Bool => value.truth().map(Value::Bool).ok_or_else(wrong),
        Type::Bit => to_bit(value).ok_or_else(wrong),
        Type::Bits(width) => to_bits(value, width).ok_or_else(wrong),
        Type::Int { width, signed } => to_int(value, width, signed, explicit, wrong),
        Type::Float => value.real().map(Value::Float).ok_or_else(wrong),
        Type::Complex => value.complex().map(Value::Complex).ok_or_else(wrong),
        Type::Angle(width) => to_angle(value, width).ok_or_else(wrong),
        Type::Duration => match value {
            Value::Duration(_) => Ok(value.clone()),
            _ => Err(wrong()),
        },
        Type::Unknown => Ok(value.clone()),
    }
}

fn to_bit(value: &Value) -> Option<Value> {
    match value {
        Value::Bool(bit) => Some(Value::Bool(*bit)),
        Value::Int(int) if int.value == 0 || int.value == 1 => Some(Value::Bool(int.value == 1)),
        Value::Bits(bits) if bits.len() == 1 => Some(Value::Bool(bits[0])),
        _ => None,
    }
}

fn to_bits(value: &Value, width: usize) -> Option<Value> {
    match value {
        Value::Bits(bits) if bits.len() == width => Some(value.clone()),
        Value::Int(int) if int.width as usize == width || int.width == WIDEST => {
            Some(Value::Bits(bits_of(int.pattern(), width)))
        }
        Value::Angle(angle) if angle.width as usize == width => {
            Some(Value::Bits(bits_of(angle.bits, width)))
        }
        Value::Bool(bit) if width == 1 => Some(Value::Bits(vec![*bit])),
        _ => None,
    }
}

fn to_int(
    value: &Value,
    width: u32,
    signed: bool,
    explicit: bool,
    wrong: impl Fn() -> String,
) -> Result<Value, Problem> {
    let wrap = |value: i128| Ok(Value::Int(Int::wrapped(value, width, signed)));
    match value {
        Value::Bool(bit) => wrap(i128::from(*bit)),
        Value::Int(int) => wrap(int.value),
        Value::Float(x) if !x.is_finite() => Err(format!("{x} is no integer")),
        Value::Float(x) if x.fract() != 0.0 && !explicit => {
            Err(format!("{x} is no integer; to cut it off, write `int({x:?})`"))
        }
        Value::Float(x) => wrap(x.trunc() as i128),
        Value::Bits(bits) if bits.len() == width as usize || (explicit && width == WIDEST) => {
            match Value::unsigned(bits) {
                Some(pattern) => wrap(i128::from(pattern)),
                None => Err(wrong()),
            }
        }
        _ => Err(wrong()),
    }
}

fn to_angle(value: &Value, width: u32) -> Option<Value> {
    match value {
        Value::Angle(angle) => Some(Value::Angle(angle.resized(width))),
        Value::Float(x) if x.is_finite() => Some(Value::Angle(Angle::from_radians(*x, width))),
        Value::Int(int) => Some(Value::Angle(Angle::from_radians(int.value as f64, width))),
        Value::Bits(bits) if bits.len() == width as usize => {
            Value::unsigned(bits).map(|bits| Value::Angle(Angle { bits, width }))
        }
        _ => None,
    }
}

impl fmt::Display for Value {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Value::Bool(bit) => write!(f, "{bit}"),
            Value::Int(int) => write!(f, "{}", int.value),
            Value::Float(x) => write!(f, "{x:?}"),
            Value::Complex(z) => write!(f, "{:?}{:+?}im", z.re, z.im),
            Value::Angle(angle) => write!(f, "{:?}", angle.radians()),
            Value::Bits(bits) => {
                let text: String = bits.iter().rev().map(|b| if *b { '1' } else { '0' }).collect();
                write!(f, "\"{text}\"")
            }
            Value::Duration(Time::Seconds(seconds)) => write!(f, "{seconds:?}s"),
            Value::Duration(Time::Steps(steps)) => write!(f, "{steps:?}dt"),
            Value::Unknown(what) => write!(f, "{what}"),
        }
    }
}
