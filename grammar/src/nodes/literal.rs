//! Reading the text of literals.

use super::{AstNode, Literal};
use crate::kind::{SyntaxKind as K, SyntaxToken};

/// A unit of time.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum TimeUnit {
    /// The backend's own step, `dt`.
    Step,
    /// `ns`
    Nano,
    /// `us` or `µs`
    Micro,
    /// `ms`
    Milli,
    /// `s`
    Second,
}

/// What the text of a literal says.
#[derive(Clone, Debug, PartialEq)]
pub enum LiteralValue {
    /// An integer of any radix; none if it needs more than 128 bits.
    Integer(Option<u128>),
    /// A number with a point or an exponent. One beyond the range of `f64` is
    /// infinite.
    Float(f64),
    /// The imaginary part of an imaginary number.
    Imaginary(f64),
    /// A duration.
    Timing(f64, TimeUnit),
    /// The bits of a bit string, leftmost character first.
    Bits(Vec<bool>),
    /// `true` or `false`
    Bool(bool),
    /// The number of a hardware qubit; none if it needs more than 64 bits.
    HardwareQubit(Option<u64>),
}

impl Literal {
    /// The token of the literal.
    pub fn token(&self) -> Option<SyntaxToken> {
        self.syntax().first_token()
    }

    /// What the text says; none in a broken file only.
    pub fn value(&self) -> Option<LiteralValue> {
        let token = self.token()?;
        let text: String = token.text().chars().filter(|&digit| digit != '_').collect();
        let radix =
            |radix| Some(LiteralValue::Integer(u128::from_str_radix(&text[2..], radix).ok()));
        match token.kind() {
            K::DecimalInteger => Some(LiteralValue::Integer(text.parse().ok())),
            K::BinaryInteger => radix(2),
            K::OctalInteger => radix(8),
            K::HexInteger => radix(16),
            K::Float => text.parse().ok().map(LiteralValue::Float),
            K::Imaginary => split_number(&text).map(|(number, _)| LiteralValue::Imaginary(number)),
            K::Timing => timing(&text),
            K::BitString => Some(LiteralValue::Bits(bits(&text))),
            K::TrueKw => Some(LiteralValue::Bool(true)),
            K::FalseKw => Some(LiteralValue::Bool(false)),
            K::HardwareQubit => Some(LiteralValue::HardwareQubit(text[1..].parse().ok())),
            _ => None,
        }
    }
}

fn timing(text: &str) -> Option<LiteralValue> {
    let (number, unit) = split_number(text)?;
    let unit = match unit {
        "dt" => TimeUnit::Step,
        "ns" => TimeUnit::Nano,
        "us" | "\u{b5}s" | "\u{3bc}s" => TimeUnit::Micro,
        "ms" => TimeUnit::Milli,
        _ => TimeUnit::Second,
    };
    Some(LiteralValue::Timing(number, unit))
}

fn bits(text: &str) -> Vec<bool> {
    text.chars().filter(|&bit| bit != '"').map(|bit| bit == '1').collect()
}

/// A number and the letters behind it. The letters begin at the first one that
/// is not the mark of an exponent, and no unit begins with that mark.
fn split_number(text: &str) -> Option<(f64, &str)> {
    let is_unit = |letter: char| letter.is_alphabetic() && !matches!(letter, 'e' | 'E');
    let end = text.find(is_unit).unwrap_or(text.len());
    let number = text[..end].trim_end().parse().ok()?;
    Some((number, &text[end..]))
}
