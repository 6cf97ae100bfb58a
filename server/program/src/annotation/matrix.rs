//! `@cantle.matrix`: properties of an array, or where its entries come from.

use grammar::TextRange;
use operator::{C64, Matrix};

use super::scan::Scan;
use super::{Malformed, Read, Spanned, Token};
use crate::finding::Edit;
use crate::model::Property;
use crate::nearest::nearest;

/// What `@cantle.matrix` says.
#[derive(Debug, Clone, PartialEq)]
pub(crate) enum MatrixNote {
    Properties(Vec<Property>),
    From(Spanned<String>),
    Pauli(Vec<PauliTerm>),
    Bands { bands: Vec<Band>, periodic: bool },
}

/// A number times a Pauli string, such as `0.5*XXI`.
#[derive(Debug, Clone, PartialEq)]
pub(crate) struct PauliTerm {
    pub(crate) weight: f64,
    pub(crate) letters: String,
    pub(crate) range: TextRange,
}

/// A diagonal of one value; offset 1 is the one above the main diagonal.
#[derive(Debug, Clone, PartialEq)]
pub(crate) struct Band {
    pub(crate) offset: i64,
    pub(crate) value: f64,
    pub(crate) range: TextRange,
}

pub(super) fn matrix(scan: &mut Scan<'_>) -> Read<MatrixNote> {
    if scan.word("from") {
        return match scan.take() {
            (Token::Quoted(value), range) => Ok(MatrixNote::From(Spanned { value, range })),
            (_, range) => {
                Err(Malformed::new(range, "the name of a file in quotes is missing here"))
            }
        };
    }
    if scan.word("pauli") {
        return pauli(scan);
    }
    if scan.word("bands") {
        return bands(scan);
    }
    let mut properties = Vec::new();
    for word in scan.names("a property")? {
        properties.push(property(&word)?);
    }
    Ok(MatrixNote::Properties(properties))
}

fn property(word: &Spanned<String>) -> Read<Property> {
    if let Some((property, _)) = Property::ALL.iter().find(|(_, known)| *known == word.value) {
        return Ok(*property);
    }
    let words = Property::ALL.map(|(_, word)| word);
    let message = format!("`{}` is no property; there are {}", word.value, words.join(", "));
    Err(match nearest(&word.value, words.into_iter()) {
        Some(near) => Malformed::new(word.range, message)
            .with_fix(format!("Write `{near}`"), Edit::replace(word.range, near)),
        None => Malformed::new(word.range, message),
    })
}

fn pauli(scan: &mut Scan<'_>) -> Read<MatrixNote> {
    let mut terms: Vec<PauliTerm> = Vec::new();
    loop {
        let sign = if scan.sign('-') {
            -1.0
        } else if scan.sign('+') || terms.is_empty() {
            1.0
        } else {
            break;
        };
        let weight = match scan.peek().0 {
            Token::Number(value) => {
                scan.take();
                if !scan.sign('*') {
                    let (_, range) = scan.peek();
                    return Err(Malformed::new(range, "`*` and a Pauli string are missing here"));
                }
                value
            }
            _ => 1.0,
        };
        let letters = scan.name("a Pauli string")?;
        if !letters.value.chars().all(|letter| "IXYZ".contains(letter)) {
            return Err(Malformed::new(letters.range, "a Pauli string has only I, X, Y and Z"));
        }
        if terms.iter().any(|term| term.letters.len() != letters.value.len()) {
            return Err(Malformed::new(letters.range, "all Pauli strings must have one length"));
        }
        let range = letters.range;
        terms.push(PauliTerm { weight: sign * weight, letters: letters.value, range });
    }
    Ok(MatrixNote::Pauli(terms))
}

fn bands(scan: &mut Scan<'_>) -> Read<MatrixNote> {
    let mut bands: Vec<Band> = Vec::new();
    loop {
        let number = scan.number("the offset of a diagonal")?;
        if number.value.fract() != 0.0 || number.value.abs() > f64::from(u16::MAX) {
            return Err(Malformed::new(number.range, "the offset must be a whole number"));
        }
        if !scan.sign(':') {
            let (_, range) = scan.peek();
            return Err(Malformed::new(range, "`:` is missing here"));
        }
        let value = scan.number("the value of the diagonal")?;
        let (offset, range) = (number.value as i64, number.range.cover(value.range));
        if bands.iter().any(|band| band.offset == offset) {
            return Err(Malformed::new(range, "this diagonal is there twice"));
        }
        bands.push(Band { offset, value: value.value, range });
        if !scan.sign(',') {
            break;
        }
    }
    let parens = scan.sign('(');
    let periodic = scan.word("periodic");
    if parens && !scan.sign(')') {
        return Err(Malformed::new(scan.peek().1, "`periodic)` should stand here"));
    }
    Ok(MatrixNote::Bands { bands, periodic })
}

/// The `2ⁿ × 2ⁿ` sum of the Pauli strings, the first letter on the most
/// significant qubit.
pub(crate) fn pauli_sum(terms: &[PauliTerm], qubits: usize) -> Matrix {
    let mut sum = Matrix::zeros(1 << qubits, 1 << qubits);
    for term in terms {
        let letters: Vec<char> = term.letters.chars().collect();
        for row in 0..1_usize << qubits {
            let (mut column, mut entry) = (row, C64::new(term.weight, 0.0));
            for (k, letter) in letters.iter().enumerate() {
                let bit = 1 << (qubits - 1 - k);
                let one = row & bit != 0;
                match letter {
                    'X' => column ^= bit,
                    'Y' => {
                        column ^= bit;
                        entry *= C64::new(0.0, if one { 1.0 } else { -1.0 });
                    }
                    'Z' if one => entry = -entry,
                    _ => {}
                }
            }
            sum[(row, column)] += entry;
        }
    }
    sum
}

/// The `n × n` matrix with these constant diagonals, wrapped around at the
/// corners if periodic.
pub(crate) fn banded(bands: &[Band], periodic: bool, n: usize) -> Matrix {
    let mut matrix = Matrix::zeros(n, n);
    for band in bands {
        for row in 0..n as i64 {
            let column = row + band.offset;
            let inside = (0..n as i64).contains(&column);
            if inside || periodic {
                matrix[(row as usize, column.rem_euclid(n as i64) as usize)] +=
                    C64::new(band.value, 0.0);
            }
        }
    }
    matrix
}
