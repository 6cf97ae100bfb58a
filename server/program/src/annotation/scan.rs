//! Words, numbers and signs of one annotation line.

use grammar::{TextRange, TextSize};

use super::{Malformed, Number, Read, Spanned};

/// A piece of the line.
#[derive(Debug, Clone, PartialEq)]
pub(super) enum Token {
    /// Letters, digits, `_`, and `-` inside.
    Word(String),
    /// An unsigned number.
    Number(f64),
    /// Text in double quotes, without them.
    Quoted(String),
    /// Any other character.
    Sign(char),
    /// Nothing is left.
    End,
}

/// A reader of one annotation line.
pub(super) struct Scan<'a> {
    text: &'a str,
    start: TextSize,
    at: usize,
}

impl<'a> Scan<'a> {
    /// A reader of `text`, which begins at `start` of its file.
    pub(super) fn new(text: &'a str, start: TextSize) -> Self {
        Scan { text: text.trim_end(), start, at: 0 }
    }

    fn rest(&self) -> &'a str {
        &self.text[self.at..]
    }

    fn skip_blanks(&mut self) {
        self.at = self.text.len() - self.rest().trim_start().len();
    }

    fn range(&self, from: usize, to: usize) -> TextRange {
        let size = |at: usize| self.start + TextSize::from(u32::try_from(at).unwrap_or(u32::MAX));
        TextRange::new(size(from), size(to))
    }

    /// The next token and its place, without taking it.
    pub(super) fn peek(&mut self) -> (Token, TextRange) {
        self.skip_blanks();
        let (token, length) = token(self.rest());
        (token, self.range(self.at, self.at + length))
    }

    /// Takes the next token.
    pub(super) fn take(&mut self) -> (Token, TextRange) {
        let (token, range) = self.peek();
        self.at += usize::from(range.len());
        (token, range)
    }

    /// Takes this sign if it comes next.
    pub(super) fn sign(&mut self, sign: char) -> bool {
        let found = self.peek().0 == Token::Sign(sign);
        if found {
            self.take();
        }
        found
    }

    /// Takes this word if it comes next.
    pub(super) fn word(&mut self, word: &str) -> bool {
        let found = matches!(self.peek().0, Token::Word(found) if found == word);
        if found {
            self.take();
        }
        found
    }

    /// A word; `what` names it in the message.
    pub(super) fn name(&mut self, what: &str) -> Read<Spanned<String>> {
        match self.take() {
            (Token::Word(value), range) => Ok(Spanned { value, range }),
            (Token::End, range) => Err(Malformed::new(range, format!("{what} is missing here"))),
            (_, range) => Err(Malformed::new(range, format!("{what} should stand here"))),
        }
    }

    /// Words between commas, at least one.
    pub(super) fn names(&mut self, what: &str) -> Read<Vec<Spanned<String>>> {
        let mut names = vec![self.name(what)?];
        while self.sign(',') {
            names.push(self.name(what)?);
        }
        Ok(names)
    }

    /// A number: a literal, `pi`, or a product and quotient of such.
    pub(super) fn number(&mut self, what: &str) -> Read<Number> {
        self.skip_blanks();
        let from = self.at;
        let mut value = self.factor(what)?;
        loop {
            match self.peek().0 {
                Token::Sign('*') => {
                    self.take();
                    value *= self.factor(what)?;
                }
                Token::Sign('/') => {
                    self.take();
                    value /= self.factor(what)?;
                }
                _ => break,
            }
        }
        let range = self.range(from, self.at);
        if !value.is_finite() {
            return Err(Malformed::new(range, format!("{what} must be a finite number")));
        }
        Ok(Number { value, text: self.text[from..self.at].trim_end().to_owned(), range })
    }

    fn factor(&mut self, what: &str) -> Read<f64> {
        let negative = self.sign('-');
        let (token, range) = self.take();
        let value = match token {
            Token::Number(value) => value,
            Token::Word(word) if word == "pi" || word == "π" => std::f64::consts::PI,
            Token::Word(word) if word == "tau" || word == "τ" => std::f64::consts::TAU,
            Token::End => return Err(Malformed::new(range, format!("{what} is missing here"))),
            _ => return Err(Malformed::new(range, format!("{what} should be a number"))),
        };
        Ok(if negative { -value } else { value })
    }

    /// Nothing but white space may be left.
    pub(super) fn end(&mut self) -> Read<()> {
        match self.peek() {
            (Token::End, _) => Ok(()),
            (_, range) => {
                let rest = TextRange::new(range.start(), self.range(0, self.text.len()).end());
                Err(Malformed::new(rest, "this is not part of the annotation"))
            }
        }
    }
}

/// The first token of a text without blanks in front, and its length.
fn token(text: &str) -> (Token, usize) {
    let Some(first) = text.chars().next() else { return (Token::End, 0) };
    if first.is_ascii_digit() || first == '.' {
        let length = number_length(text);
        let digits = text[..length].replace('_', "");
        return match digits.parse() {
            Ok(value) => (Token::Number(value), length),
            Err(_) => (Token::Sign(first), first.len_utf8()),
        };
    }
    if first == '"'
        && let Some(length) = text[1..].find('"')
    {
        return (Token::Quoted(text[1..=length].to_owned()), length + 2);
    }
    if first.is_alphabetic() || first == '_' {
        let more = |c: char| c.is_alphanumeric() || c == '_' || c == '-';
        let length = text.find(|c| !more(c)).unwrap_or(text.len());
        let word = text[..length].trim_end_matches('-');
        return (Token::Word(word.to_owned()), word.len());
    }
    (Token::Sign(first), first.len_utf8())
}

/// Bytes of the decimal number at the front of a text.
fn number_length(text: &str) -> usize {
    let bytes = text.as_bytes();
    let digits = |mut at: usize| {
        while bytes.get(at).is_some_and(|b| b.is_ascii_digit() || *b == b'_') {
            at += 1;
        }
        at
    };
    let mut end = digits(0);
    if bytes.get(end) == Some(&b'.') {
        end = digits(end + 1);
    }
    if matches!(bytes.get(end), Some(b'e' | b'E')) {
        let sign = usize::from(matches!(bytes.get(end + 1), Some(b'+' | b'-')));
        let exponent = digits(end + 1 + sign);
        if exponent > end + 1 + sign {
            end = exponent;
        }
    }
    end
}
