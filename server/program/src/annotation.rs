//! The claim language: annotations in the namespace `cantle`.
//!
//! An annotation is read from the raw rest of its line, so its positions are
//! those of the line shifted to the file. What does not fit is reported with
//! an example, and with an edit where one mends it.

mod fields;
mod matrix;
mod scan;

use grammar::{TextRange, TextSize};

use crate::finding::{Edit, FileId, Finding};
use crate::model::BudgetClaim;
use crate::nearest::nearest;

pub(crate) use matrix::{MatrixNote, banded, pauli_sum};
use scan::{Scan, Token};

/// A name or number with its place.
#[derive(Debug, Clone, PartialEq)]
pub(crate) struct Spanned<T> {
    pub(crate) value: T,
    pub(crate) range: TextRange,
}

/// A number with its place and its spelling.
#[derive(Debug, Clone, PartialEq)]
pub(crate) struct Number {
    pub(crate) value: f64,
    pub(crate) text: String,
    pub(crate) range: TextRange,
}

/// A well-formed annotation.
#[derive(Debug, Clone, PartialEq)]
pub(crate) enum Annotation {
    Dense { matrix: Spanned<String>, within: Option<Number> },
    Encodes(Encodes),
    Equals { of: Spanned<String>, exact_phase: bool, within: Option<Number> },
    Clean(Vec<Spanned<String>>),
    Budget(BudgetClaim),
    Matrix(MatrixNote),
    Sample(Vec<(Spanned<String>, f64)>),
    Allow(Vec<Spanned<String>>),
}

/// The fields of `@cantle.encodes`.
#[derive(Debug, Clone, PartialEq)]
pub(crate) struct Encodes {
    pub(crate) matrix: Spanned<String>,
    pub(crate) ancilla: Option<Number>,
    pub(crate) scale: Option<Number>,
    pub(crate) within: Option<Number>,
}

/// The words of the claim language, each with an example.
pub(crate) const WORDS: [(&str, &str); 8] = [
    ("dense", "@cantle.dense M within 1e-8"),
    ("encodes", "@cantle.encodes M ancilla 3 scale 4.0 within 1e-8"),
    ("equals", "@cantle.equals G within 1e-9"),
    ("clean", "@cantle.clean a, b"),
    ("budget", "@cantle.budget cx 400, depth 900"),
    ("matrix", "@cantle.matrix unitary"),
    ("sample", "@cantle.sample theta = 0.3"),
    ("allow", "@cantle.allow stand-in-not-replaced"),
];

/// What is wrong with an annotation.
#[derive(Debug)]
pub(crate) struct Malformed {
    range: TextRange,
    message: String,
    fix: Option<(String, Edit)>,
}

type Read<T> = Result<T, Malformed>;

impl Malformed {
    fn new(range: TextRange, message: impl Into<String>) -> Self {
        Malformed { range, message: message.into(), fix: None }
    }

    fn with_fix(self, title: impl Into<String>, edit: Edit) -> Self {
        Malformed { fix: Some((title.into(), edit)), ..self }
    }

    /// The finding, with an example of the word if it is known.
    fn finding(self, file: FileId, word: &str) -> Finding {
        let example = WORDS.iter().find(|(known, _)| *known == word);
        let example = example.map_or(String::new(), |(_, e)| format!("; for example `{e}`"));
        let message = format!("{}{example}", self.message);
        let finding = Finding::error("malformed-annotation", file, self.range, message);
        match self.fix {
            Some((title, edit)) => finding.fix(title, vec![edit]),
            None => finding,
        }
    }
}

/// Reads the annotation `@name content`. `None` if it is outside our
/// namespace; an error is already a finding.
pub(crate) fn read(
    file: FileId,
    name: &str,
    name_range: TextRange,
    content: &str,
    content_start: TextSize,
) -> Option<Result<Annotation, Box<Finding>>> {
    let mut parts = name.splitn(2, '.');
    if parts.next() != Some("cantle") {
        return None;
    }
    let word = parts.next().unwrap_or_default();
    let mut scan = Scan::new(content, content_start);
    let read = match word {
        "dense" => fields::dense(&mut scan),
        "encodes" => fields::encodes(&mut scan),
        "equals" => fields::equals(&mut scan),
        "clean" => scan.names("an operand").map(Annotation::Clean),
        "budget" => fields::budget(&mut scan),
        "matrix" => matrix::matrix(&mut scan).map(Annotation::Matrix),
        "sample" => fields::sample(&mut scan),
        "allow" => scan.names("the name of a lint").map(Annotation::Allow),
        _ => Err(unknown_word(word, name_range)),
    };
    let read = read.and_then(|annotation| scan.end().map(|()| annotation));
    Some(read.map_err(|malformed| Box::new(malformed.finding(file, word))))
}

fn unknown_word(word: &str, name_range: TextRange) -> Malformed {
    let list: Vec<&str> = WORDS.iter().map(|(word, _)| *word).collect();
    let message = format!("`@cantle.{word}` is no claim; there are {}", list.join(", "));
    match nearest(word, list.into_iter()) {
        Some(near) => Malformed::new(name_range, message).with_fix(
            format!("Write `@cantle.{near}`"),
            Edit::replace(name_range, format!("@cantle.{near}")),
        ),
        None => Malformed::new(name_range, message),
    }
}

#[cfg(test)]
mod tests;
