//! The annotations whose content is a name and named fields.

use grammar::TextRange;

use super::scan::Scan;
use super::{Annotation, Encodes, Malformed, Number, Read, Token};
use crate::finding::Edit;
use crate::model::BudgetClaim;
use crate::nearest::nearest;

/// `M within t`
pub(super) fn dense(scan: &mut Scan<'_>) -> Read<Annotation> {
    let matrix = scan.name("the name of a matrix")?;
    let mut within = None;
    while let Some(field) = field(scan, &["within"])? {
        store(&mut within, tolerance(scan)?, field.1)?;
    }
    Ok(Annotation::Dense { matrix, within })
}

/// `M ancilla a scale s within t`, the fields in any order.
pub(super) fn encodes(scan: &mut Scan<'_>) -> Read<Annotation> {
    let matrix = scan.name("the name of a matrix")?;
    let mut read = Encodes { matrix, ancilla: None, scale: None, within: None };
    while let Some((word, range)) = field(scan, &["ancilla", "scale", "within"])? {
        match word {
            "ancilla" => store(&mut read.ancilla, count(scan)?, range)?,
            "scale" => store(&mut read.scale, scale(scan)?, range)?,
            _ => store(&mut read.within, tolerance(scan)?, range)?,
        }
    }
    Ok(Annotation::Encodes(read))
}

/// `G exactphase within t`
pub(super) fn equals(scan: &mut Scan<'_>) -> Read<Annotation> {
    let of = scan.name("the name of a gate or a matrix")?;
    let (mut exact_phase, mut within) = (None, None);
    while let Some((word, range)) = field(scan, &["within", "exactphase"])? {
        match word {
            "exactphase" => store(&mut exact_phase, (), range)?,
            _ => store(&mut within, tolerance(scan)?, range)?,
        }
    }
    Ok(Annotation::Equals { of, exact_phase: exact_phase.is_some(), within })
}

/// `cx 400, depth 900, ancilla 4, error 1e-6, success 0.2`
pub(super) fn budget(scan: &mut Scan<'_>) -> Read<Annotation> {
    let mut read = BudgetClaim::default();
    loop {
        let words = ["cx", "depth", "ancilla", "error", "success"];
        let Some((word, range)) = field(scan, &words)? else {
            let (_, range) = scan.peek();
            return Err(Malformed::new(range, "a bound is missing here"));
        };
        let bound = scan.number("the bound")?.value;
        match word {
            "cx" => store(&mut read.cx, bound, range)?,
            "depth" => store(&mut read.depth, bound, range)?,
            "ancilla" => store(&mut read.ancilla, bound, range)?,
            "error" => store(&mut read.error, bound, range)?,
            _ => store(&mut read.success, bound, range)?,
        }
        if !scan.sign(',') {
            return Ok(Annotation::Budget(read));
        }
    }
}

/// `theta = 0.3, phi = pi/4`
pub(super) fn sample(scan: &mut Scan<'_>) -> Read<Annotation> {
    let mut values = Vec::new();
    loop {
        let name = scan.name("the name of a parameter")?;
        if !scan.sign('=') {
            let (token, range) = scan.peek();
            let malformed = Malformed::new(range, "`=` is missing here");
            return Err(match token {
                Token::Number(_) => {
                    malformed.with_fix("Insert `=`", Edit::insert(range.start(), "= "))
                }
                _ => malformed,
            });
        }
        values.push((name, scan.number("the value")?.value));
        if !scan.sign(',') {
            return Ok(Annotation::Sample(values));
        }
    }
}

/// The next field's word, one of `words`; none at the end of the line. The
/// last word of a list is the one a lone number would belong to only if it
/// is `within`, the field people forget to name.
fn field<'w>(scan: &mut Scan<'_>, words: &[&'w str]) -> Read<Option<(&'w str, TextRange)>> {
    let (token, range) = scan.peek();
    match token {
        Token::End => Ok(None),
        Token::Word(found) => match words.iter().find(|word| **word == found) {
            Some(word) => {
                scan.take();
                Ok(Some((word, range)))
            }
            None => Err(unknown_field(&found, range, words)),
        },
        Token::Number(_) if words.contains(&"within") => {
            Err(Malformed::new(range, "it is not said what this number is")
                .with_fix("Insert `within`", Edit::insert(range.start(), "within ")))
        }
        _ => Err(Malformed::new(range, format!("one of {} should stand here", list(words)))),
    }
}

fn unknown_field(found: &str, range: TextRange, words: &[&str]) -> Malformed {
    let message = format!("`{found}` is no field of this annotation; there are {}", list(words));
    match nearest(found, words.iter().copied()) {
        Some(near) => Malformed::new(range, message)
            .with_fix(format!("Write `{near}`"), Edit::replace(range, near)),
        None => Malformed::new(range, message),
    }
}

fn list(words: &[&str]) -> String {
    words.iter().map(|word| format!("`{word}`")).collect::<Vec<_>>().join(", ")
}

/// Stores a field, which must not be there yet.
fn store<T>(slot: &mut Option<T>, value: T, range: TextRange) -> Read<()> {
    if slot.replace(value).is_some() {
        return Err(Malformed::new(range, "this field is there twice"));
    }
    Ok(())
}

fn tolerance(scan: &mut Scan<'_>) -> Read<Number> {
    let number = scan.number("the tolerance")?;
    if number.value <= 0.0 {
        return Err(Malformed::new(number.range, "the tolerance must be above zero"));
    }
    Ok(number)
}

fn scale(scan: &mut Scan<'_>) -> Read<Number> {
    let number = scan.number("the scale")?;
    if number.value <= 0.0 {
        return Err(Malformed::new(number.range, "the scale must be above zero"));
    }
    Ok(number)
}

fn count(scan: &mut Scan<'_>) -> Read<Number> {
    let number = scan.number("the number of ancillas")?;
    let whole = number.value.fract() == 0.0 && (0.0..=f64::from(u16::MAX)).contains(&number.value);
    if !whole {
        return Err(Malformed::new(number.range, "the number of ancillas must be 0, 1, 2, …"));
    }
    Ok(number)
}
