//! Text to tokens.
//!
//! Most tokens are found by their patterns alone, see [`SyntaxKind`]. Some
//! words change what the text behind them means up to some point, as the
//! standard's lexer modes do: the version number, paths, the raw rest of a
//! pragma or annotation line, calibration bodies.

use crate::kind::SyntaxKind;
use crate::tree::{Insertion, SyntaxError};
use SyntaxKind as K;
use logos::{Lexer, Logos};
use rowan::{TextRange, TextSize};

/// One token: its kind and its bytes in the text.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) struct Token {
    pub kind: SyntaxKind,
    pub range: TextRange,
}

/// The tokens of a text, side by side without a gap, and what is wrong with
/// single ones.
#[derive(Debug, Default)]
pub(crate) struct Lexed {
    pub tokens: Vec<Token>,
    pub errors: Vec<SyntaxError>,
}

/// What the last word makes of the text behind it.
#[derive(Clone, Copy, PartialEq, Eq)]
enum Mode {
    Plain,
    /// A string is a path, even one of zeros and ones.
    Path,
    /// The next brace opens a calibration body, if it comes at once.
    Cal,
    /// The next brace opens a calibration body.
    Defcal,
}

/// Cuts a text of less than 4 GiB into tokens.
pub(crate) fn lex(text: &str) -> Lexed {
    let mut lexed = Lexed::default();
    let mut lexer = SyntaxKind::lexer(text);
    // A byte order mark is allowed as the very first character.
    if text.starts_with('\u{feff}') {
        lexer.bump('\u{feff}'.len_utf8());
        lexed.push(K::Whitespace, &lexer, 0);
    }
    let mut mode = Mode::Plain;
    while let Some(found) = lexer.next() {
        let start = lexer.span().start;
        let kind = match found {
            Ok(K::BitString) if mode == Mode::Path => K::StringLiteral,
            Ok(kind) if mode == Mode::Defcal && is_plain_name(kind) => K::Identifier,
            Ok(kind) => kind,
            Err(()) => {
                let (kind, length) = lexed.broken(&text[start..], &lexer);
                // The lexer may have read on in vain.
                lexer = SyntaxKind::lexer(text);
                lexer.bump(start + length);
                kind
            }
        };
        lexed.push(kind, &lexer, start);
        mode = lexed.after(kind, mode, &mut lexer);
    }
    lexed
}

impl Lexed {
    fn push(&mut self, kind: SyntaxKind, lexer: &Lexer<'_, SyntaxKind>, start: usize) {
        let range = range(start, lexer.span().end);
        self.tokens.push(Token { kind, range });
    }

    /// Takes this many bytes as one token; none if there are none.
    fn take(&mut self, kind: SyntaxKind, lexer: &mut Lexer<'_, SyntaxKind>, length: usize) {
        if length > 0 {
            let start = lexer.span().end;
            lexer.bump(length);
            self.push(kind, lexer, start);
        }
    }

    /// Takes the raw text that a token announces; gives the new mode.
    fn after(&mut self, kind: SyntaxKind, mode: Mode, lexer: &mut Lexer<'_, SyntaxKind>) -> Mode {
        match kind {
            K::PragmaKw | K::HashPragmaKw | K::AnnotationName if mode != Mode::Defcal => {
                self.rest_of_line(lexer);
                Mode::Plain
            }
            K::OpenqasmKw if mode != Mode::Defcal => {
                self.version(lexer);
                Mode::Plain
            }
            K::LeftBrace if matches!(mode, Mode::Cal | Mode::Defcal) => {
                self.take(K::CalibrationBody, lexer, calibration_length(lexer.remainder()));
                Mode::Plain
            }
            K::Semicolon => Mode::Plain,
            _ if mode == Mode::Defcal || kind.is_skipped() => mode,
            K::IncludeKw | K::DefcalgrammarKw => Mode::Path,
            K::CalKw => Mode::Cal,
            K::DefcalKw => Mode::Defcal,
            _ => Mode::Plain,
        }
    }

    fn rest_of_line(&mut self, lexer: &mut Lexer<'_, SyntaxKind>) {
        let blanks = count(lexer.remainder(), |letter| matches!(letter, ' ' | '\t'));
        self.take(K::Whitespace, lexer, blanks);
        let rest = count(lexer.remainder(), |letter| !matches!(letter, '\r' | '\n'));
        self.take(K::RestOfLine, lexer, rest);
    }

    fn version(&mut self, lexer: &mut Lexer<'_, SyntaxKind>) {
        let space = count(lexer.remainder(), |letter| matches!(letter, ' ' | '\t' | '\r' | '\n'));
        self.take(K::Whitespace, lexer, space);
        let major = count(lexer.remainder(), |digit| digit.is_ascii_digit());
        if major == 0 {
            return;
        }
        let minor = lexer.remainder()[major..].strip_prefix('.');
        let minor = minor.map_or(0, |text| count(text, |digit| digit.is_ascii_digit()));
        let length = if minor == 0 { major } else { major + 1 + minor };
        self.take(K::VersionNumber, lexer, length);
    }

    /// Reports the text that no pattern takes; gives its kind and its length.
    fn broken(&mut self, rest: &str, lexer: &Lexer<'_, SyntaxKind>) -> (SyntaxKind, usize) {
        let start = lexer.span().start;
        if rest.starts_with("/*") {
            let end = range(start, start + rest.len()).end();
            let opening = range(start, start + 2);
            self.error(opening, "this comment is never closed".into(), Some((end, "*/")));
            return (K::UnclosedComment, rest.len());
        }
        if let Some(quote @ ('"' | '\'')) = rest.chars().next() {
            let (length, closed) = broken_string(rest, quote);
            self.string_error(range(start, start + length), quote, closed);
            return (K::BrokenString, length);
        }
        self.error(range(start, lexer.span().end), unknown(lexer.slice()), None);
        (K::UnknownText, lexer.slice().len())
    }

    fn string_error(&mut self, place: TextRange, quote: char, closed: bool) {
        if !closed {
            let message = format!("this string has no closing `{quote}`");
            let quote = if quote == '"' { "\"" } else { "'" };
            return self.error(place, message, Some((place.end(), quote)));
        }
        let message = match usize::from(place.len()) {
            2 => "a string must not be empty",
            _ => "a string must not contain a tab",
        };
        self.error(place, message.into(), None);
    }

    fn error(&mut self, range: TextRange, message: String, fix: Option<(TextSize, &str)>) {
        let fix = fix.map(|(offset, text)| Insertion { offset, text: text.into() });
        self.errors.push(SyntaxError { range, message, fix: fix.into_iter().collect() });
    }
}

/// Whether this word, reserved elsewhere, is a plain name in the head of a
/// `defcal`: that knows some types and three quantum statements only.
fn is_plain_name(kind: SyntaxKind) -> bool {
    match kind {
        K::QregKw | K::CregKw | K::QubitKw | K::BoolKw | K::BitKw | K::IntKw | K::UintKw => false,
        K::AngleKw | K::FloatKw | K::ComplexKw | K::ArrayKw | K::DurationKw => false,
        K::MeasureKw | K::DelayKw | K::ResetKw | K::HashDimKw | K::HashPragmaKw => false,
        kind => kind.is_keyword(),
    }
}

/// The message about characters that begin no token.
fn unknown(slice: &str) -> String {
    match slice.chars().next() {
        Some('$') => "expected a number after `$`, as in `$0`".into(),
        Some('#') => "expected `#pragma` or `#dim`".into(),
        Some(letter) if letter.is_whitespace() || letter.is_control() => {
            format!("the character U+{:04X} is no white space here; use a space", letter as u32)
        }
        Some('\u{feff}') => "a byte order mark may only be the first character".into(),
        Some(_) => format!("`{slice}` is no part of the language"),
        None => "this is no part of the language".into(),
    }
}

/// The length of a string that is no proper one, and whether it is closed. One
/// that is not ends before the `;` at the end of its line.
fn broken_string(rest: &str, quote: char) -> (usize, bool) {
    let line = &rest[..count(rest, |letter| !matches!(letter, '\r' | '\n'))];
    match line[1..].find(quote) {
        Some(end) => (end + 2, true),
        None => {
            let text = line.trim_end().trim_end_matches(';').trim_end();
            (text.len().max(1), false)
        }
    }
}

/// The length of the text before the brace that closes a calibration body.
/// Braces are matched blindly, in strings and comments too.
fn calibration_length(text: &str) -> usize {
    let mut depth = 0usize;
    for (place, byte) in text.bytes().enumerate() {
        match byte {
            b'{' => depth += 1,
            b'}' if depth == 0 => return place,
            b'}' => depth -= 1,
            _ => {}
        }
    }
    text.len()
}

/// The bytes of the characters at the start of a text that fit.
fn count(text: &str, fits: impl Fn(char) -> bool) -> usize {
    text.find(|letter| !fits(letter)).unwrap_or(text.len())
}

/// Offsets as a range; the text is shorter than 4 GiB.
fn range(start: usize, end: usize) -> TextRange {
    TextRange::new((start as u32).into(), (end as u32).into())
}
