//! The built-in functions and constants of the language.

use std::f64::consts::{E, PI, TAU};

use operator::C64;

use crate::value::{Int, Problem, Value};

/// Names of the built-in constants and their values.
pub(crate) const CONSTANTS: [(&str, f64); 6] =
    [("pi", PI), ("π", PI), ("tau", TAU), ("τ", TAU), ("euler", E), ("ℇ", E)];

/// A built-in function.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) enum Function {
    Arccos,
    Arcsin,
    Arctan,
    Ceiling,
    Cos,
    Exp,
    Floor,
    Imag,
    Log,
    Mod,
    Popcount,
    Real,
    Rotl,
    Rotr,
    Sin,
    Sqrt,
    Tan,
}

/// Names of the built-in functions, with the number of arguments.
pub(crate) const FUNCTIONS: [(&str, Function, usize); 17] = [
    ("arccos", Function::Arccos, 1),
    ("arcsin", Function::Arcsin, 1),
    ("arctan", Function::Arctan, 1),
    ("ceiling", Function::Ceiling, 1),
    ("cos", Function::Cos, 1),
    ("exp", Function::Exp, 1),
    ("floor", Function::Floor, 1),
    ("imag", Function::Imag, 1),
    ("log", Function::Log, 1),
    ("mod", Function::Mod, 2),
    ("popcount", Function::Popcount, 1),
    ("real", Function::Real, 1),
    ("rotl", Function::Rotl, 2),
    ("rotr", Function::Rotr, 2),
    ("sin", Function::Sin, 1),
    ("sqrt", Function::Sqrt, 1),
    ("tan", Function::Tan, 1),
];

/// Applies a function to as many values as it takes.
pub(crate) fn call(function: Function, arguments: &[Value]) -> Result<Value, Problem> {
    if let Some(Value::Unknown(what)) = arguments.iter().find(|v| matches!(v, Value::Unknown(_))) {
        return Ok(Value::Unknown(what));
    }
    let [first, rest @ ..] = arguments else { return Err("an argument is missing".to_owned()) };
    match (function, rest) {
        (Function::Popcount, _) => popcount(first),
        (Function::Mod, [second]) => {
            crate::arithmetic::binary(crate::arithmetic::BinaryOp::Remainder, first, second)
        }
        (Function::Rotl, [second]) => rotate(first, second, 1),
        (Function::Rotr, [second]) => rotate(first, second, -1),
        (Function::Mod | Function::Rotl | Function::Rotr, _) => {
            Err("an argument is missing".to_owned())
        }
        _ => match first {
            Value::Complex(z) => complex(function, *z),
            _ => match first.real() {
                Some(x) => Ok(real(function, x)),
                None => Err(format!("this function is not for {}", first.type_name())),
            },
        },
    }
}

fn real(function: Function, x: f64) -> Value {
    Value::Float(match function {
        Function::Arccos => x.acos(),
        Function::Arcsin => x.asin(),
        Function::Arctan => x.atan(),
        Function::Ceiling => x.ceil(),
        Function::Cos => x.cos(),
        Function::Exp => x.exp(),
        Function::Floor => x.floor(),
        Function::Imag => 0.0,
        Function::Log => x.ln(),
        Function::Sin => x.sin(),
        Function::Sqrt => x.sqrt(),
        Function::Tan => x.tan(),
        _ => x,
    })
}

fn complex(function: Function, z: C64) -> Result<Value, Problem> {
    Ok(Value::Complex(match function {
        Function::Cos => z.cos(),
        Function::Exp => z.exp(),
        Function::Log => z.ln(),
        Function::Sin => z.sin(),
        Function::Sqrt => z.sqrt(),
        Function::Tan => z.tan(),
        Function::Real => return Ok(Value::Float(z.re)),
        Function::Imag => return Ok(Value::Float(z.im)),
        _ => return Err("this function is not for complex numbers".to_owned()),
    }))
}

fn popcount(value: &Value) -> Result<Value, Problem> {
    let count = match value {
        Value::Bits(bits) => bits.iter().filter(|bit| **bit).count(),
        Value::Int(int) => int.pattern().count_ones() as usize,
        _ => return Err(format!("popcount is not for {}", value.type_name())),
    };
    Ok(Value::Int(Int::wrapped(count as i128, crate::types::WIDEST, false)))
}

/// Rotates bits toward higher places; by a negative number, toward lower.
fn rotate(value: &Value, by: &Value, sign: i128) -> Result<Value, Problem> {
    let by = by.integer().ok_or("the distance of a rotation must be an integer")? * sign;
    let turn = |length: usize| by.rem_euclid(length.max(1) as i128) as usize;
    match value {
        Value::Bits(bits) => {
            let mut bits = bits.clone();
            let places = turn(bits.len());
            bits.rotate_right(places);
            Ok(Value::Bits(bits))
        }
        Value::Int(int) if !int.signed => {
            let (width, places) = (int.width, turn(int.width as usize) as u32);
            let pattern = u128::from(int.pattern());
            let turned = pattern << places | pattern >> (width - places);
            let turned = turned & ((1_u128 << width) - 1);
            Ok(Value::Int(Int::wrapped(turned as i128, width, false)))
        }
        _ => Err(format!("a rotation is not for {}", value.type_name())),
    }
}
