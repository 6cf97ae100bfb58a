//! The parser's view of the tokens, its errors and its limits.
//!
//! The rules in [`crate::rules`] only look at tokens, take them and open and
//! close nodes; they never fail. Three bounds keep any input harmless: levels
//! of nesting, looks at a token without taking one, tokens looked ahead.

use crate::event::{Event, Marker};
use crate::kind::SyntaxKind;
use crate::lexer::Token;
use crate::tree::{Insertion, SyntaxError};
use SyntaxKind as K;
use rowan::{TextRange, TextSize};
use std::cell::Cell;

/// The levels of blocks and expressions that may be inside each other. The
/// tree is then at most a few nodes a level deep, so that walking it by
/// recursion is safe on the stack of any thread; programs that people or
/// generators write stay far below.
pub const MAX_NESTING: usize = 256;

/// How often the rules may look at the same token. A rule looks a few dozen
/// times; more means that it goes round in circles, and it is then told that
/// the file has ended.
const MAX_LOOKS: u32 = 20_000;

/// How many tokens a rule may look ahead to find a closing bracket: those of
/// an index or a duration, which nobody writes this long.
const MAX_LOOKAHEAD: usize = 10_000;

/// A token that the rules see.
struct Seen {
    kind: SyntaxKind,
    range: TextRange,
    /// Whether a line break stands between it and the token before it.
    starts_line: bool,
    /// Whether it stands at the very start of its line.
    starts_column: bool,
    /// Whether a comment stands between it and the token before it.
    after_comment: bool,
}

/// The state of one run.
pub(crate) struct Parser<'t> {
    text: &'t str,
    tokens: Vec<Seen>,
    position: usize,
    looks: Cell<u32>,
    depth: usize,
    /// The deepest level of what the innermost [`Parser::measure`] runs.
    deepest: usize,
    /// Braces of the file that open and never close.
    unclosed_braces: usize,
    /// Where the last error was reported: there is one a token at most.
    last_error: Option<usize>,
    pub(crate) events: Vec<Event>,
    pub(crate) errors: Vec<SyntaxError>,
    /// Whether the version line says 2.
    pub(crate) version_two: bool,
}

impl<'t> Parser<'t> {
    pub(crate) fn new(text: &'t str, tokens: &[Token]) -> Self {
        let tokens = visible(text, tokens);
        let count = |kind| tokens.iter().filter(|token| token.kind == kind).count();
        let unclosed_braces = count(K::LeftBrace).saturating_sub(count(K::RightBrace));
        Self {
            text,
            position: 0,
            looks: Cell::new(0),
            depth: 0,
            deepest: 0,
            unclosed_braces,
            last_error: None,
            events: Vec::with_capacity(tokens.len() * 4),
            errors: Vec::new(),
            version_two: false,
            tokens,
        }
    }

    /// The kind of the token that is `n` further on.
    pub(crate) fn nth(&self, n: usize) -> SyntaxKind {
        let looks = self.looks.get().saturating_add(1);
        self.looks.set(looks);
        if looks > MAX_LOOKS {
            return K::EndOfFile;
        }
        self.tokens.get(self.position + n).map_or(K::EndOfFile, |token| token.kind)
    }

    /// The kind of the next token.
    pub(crate) fn current(&self) -> SyntaxKind {
        self.nth(0)
    }

    pub(crate) fn at(&self, kind: SyntaxKind) -> bool {
        self.current() == kind
    }

    pub(crate) fn at_any(&self, kinds: &[SyntaxKind]) -> bool {
        kinds.contains(&self.current())
    }

    /// Whether all tokens are taken, or the rules were stopped.
    pub(crate) fn at_end(&self) -> bool {
        self.at(K::EndOfFile)
    }

    /// Whether tokens are left although the rules see the end.
    pub(crate) fn is_stuck(&self) -> bool {
        self.position < self.tokens.len()
    }

    /// The text of the next token.
    pub(crate) fn text(&self) -> &'t str {
        self.tokens.get(self.position).map_or("", |token| &self.text[token.range])
    }

    /// Whether the next token is the first on its line.
    pub(crate) fn starts_line(&self) -> bool {
        self.nth_starts_line(0)
    }

    /// Whether the token that is `n` further on is the first on its line.
    pub(crate) fn nth_starts_line(&self, n: usize) -> bool {
        self.tokens.get(self.position + n).is_none_or(|token| token.starts_line)
    }

    /// Whether the next token stands at the start of its line in a file in
    /// which a brace is missing. Only then is indentation a better witness
    /// than the braces.
    pub(crate) fn brace_is_missing(&self) -> bool {
        let seen = self.tokens.get(self.position);
        self.unclosed_braces > 0 && seen.is_some_and(|token| token.starts_column)
    }

    /// Counts a brace that was found to be missing.
    pub(crate) fn brace_was_missing(&mut self) {
        self.unclosed_braces = self.unclosed_braces.saturating_sub(1);
    }

    /// Whether a comment stands before the next token.
    pub(crate) fn after_comment(&self) -> bool {
        self.tokens.get(self.position).is_some_and(|token| token.after_comment)
    }

    /// The kind of the token taken last.
    pub(crate) fn previous(&self) -> SyntaxKind {
        let before = self.position.checked_sub(1).and_then(|index| self.tokens.get(index));
        before.map_or(K::EndOfFile, |token| token.kind)
    }

    /// Where the token taken last ends.
    pub(crate) fn previous_end(&self) -> TextSize {
        let before = self.position.checked_sub(1).and_then(|index| self.tokens.get(index));
        before.map_or(TextSize::new(0), |token| token.range.end())
    }

    /// The bytes of the next token; empty at the end of the file, and there
    /// behind the last token.
    pub(crate) fn range(&self) -> TextRange {
        let here = self.tokens.get(self.position).map(|token| token.range);
        here.unwrap_or_else(|| TextRange::empty(self.previous_end()))
    }

    /// The number of tokens taken so far.
    pub(crate) fn position(&self) -> usize {
        self.position
    }

    /// The kinds and ranges of the tokens taken since this position.
    pub(crate) fn taken_since(&self, start: usize) -> Vec<(SyntaxKind, TextRange)> {
        let taken = self.tokens.get(start..self.position).unwrap_or_default();
        taken.iter().map(|token| (token.kind, token.range)).collect()
    }

    /// The kind of the token behind the bracket that is `n` further on, all
    /// inside it and any more brackets right behind it; the end of the file if
    /// they do not close near by.
    pub(crate) fn behind_brackets(&self, n: usize) -> SyntaxKind {
        let rest = self.tokens.get(self.position + n..).unwrap_or_default();
        let mut depth = 0usize;
        for (index, token) in rest.iter().enumerate().take(MAX_LOOKAHEAD) {
            match token.kind {
                K::LeftBracket => depth += 1,
                K::RightBracket => depth = depth.saturating_sub(1),
                K::Semicolon => break,
                kind if token.starts_line && kind.is_keyword() => break,
                _ if depth == 0 => return self.nth(n + index),
                _ => {}
            }
        }
        K::EndOfFile
    }

    /// Takes the next token, whatever it is.
    pub(crate) fn bump(&mut self) {
        if self.position < self.tokens.len() {
            self.position += 1;
            self.looks.set(0);
            self.events.push(Event::Token);
        }
    }

    /// Takes the next token if it is of this kind.
    pub(crate) fn eat(&mut self, kind: SyntaxKind) -> bool {
        let found = self.at(kind);
        if found {
            self.bump();
        }
        found
    }

    /// Takes a token of this kind or reports that it is missing; `place` says
    /// where, as in "after the condition".
    pub(crate) fn expect(&mut self, kind: SyntaxKind, place: &str) -> bool {
        let found = self.eat(kind);
        if !found {
            self.missing(kind, place);
        }
        found
    }

    /// Reports that a token is missing behind the one taken last. Where it has
    /// one spelling and the next token would be fine behind it, inserting it
    /// is the fix.
    fn missing(&mut self, kind: SyntaxKind, place: &str) {
        let end = self.previous_end();
        let ends_here = self.starts_line() || self.at_any(&[K::RightBrace, K::EndOfFile]);
        let mends = match kind {
            K::Semicolon | K::RightBrace => ends_here,
            K::RightParen | K::RightBracket => {
                self.at_any(&[K::Semicolon, K::LeftBrace, K::At, K::Identifier])
            }
            _ => false,
        };
        let text = kind.spelling().filter(|_| mends);
        let fix = text.map(|text| Insertion { offset: end, text: text.into() });
        let message = format!("expected {} {place}", kind.noun());
        self.report(TextRange::empty(end), message, fix.into_iter().collect());
    }

    /// Reports something about the next token.
    pub(crate) fn error(&mut self, message: impl Into<String>) {
        self.report(self.range(), message.into(), Vec::new());
    }

    /// Reports that something else was expected instead of the next token.
    pub(crate) fn expected(&mut self, what: &str) {
        if self.at(K::BrokenString) {
            // The lexer has said what is wrong here.
            self.last_error = Some(self.position);
            return;
        }
        let found = match self.current() {
            K::EndOfFile => "the file ends here".to_owned(),
            kind if kind.spelling().is_some() => format!("found {}", kind.noun()),
            K::AnnotationName => "found an annotation".to_owned(),
            _ => format!("found `{}`", shortened(self.text())),
        };
        self.error(format!("expected {what}, {found}"));
    }

    /// Reports an error unless one was reported at the same token.
    pub(crate) fn report(&mut self, range: TextRange, message: String, fix: Vec<Insertion>) {
        if self.last_error != Some(self.position) {
            self.last_error = Some(self.position);
            self.errors.push(SyntaxError { range, message, fix });
        }
    }

    /// Whether an error was reported at the next token.
    pub(crate) fn has_error_here(&self) -> bool {
        self.last_error == Some(self.position)
    }

    /// Opens a node.
    pub(crate) fn start(&mut self) -> Marker {
        self.events.push(Event::Open { kind: None, parent: None });
        Marker::new(self.events.len() - 1)
    }

    /// Whether there may be this many levels below the current one.
    pub(crate) fn fits(&self, levels: usize) -> bool {
        self.depth + levels < MAX_NESTING
    }

    /// Runs a rule one level deeper.
    pub(crate) fn nested<T>(&mut self, rule: impl FnOnce(&mut Self) -> T) -> T {
        self.depth += 1;
        self.reach(0);
        let result = rule(self);
        self.depth -= 1;
        result
    }

    /// Runs a rule and gives the levels it needs below the current one.
    pub(crate) fn measure<T>(&mut self, rule: impl FnOnce(&mut Self) -> T) -> (T, usize) {
        let outer = std::mem::replace(&mut self.deepest, self.depth);
        let result = rule(self);
        let levels = self.deepest - self.depth;
        self.deepest = self.deepest.max(outer);
        (result, levels)
    }

    /// Notes that there are this many levels below the current one, which
    /// happens where a node is put around others afterwards.
    pub(crate) fn reach(&mut self, levels: usize) {
        self.deepest = self.deepest.max(self.depth + levels);
    }

    /// Reports that the next token is one level too deep.
    pub(crate) fn too_deep(&mut self) {
        self.error(format!("this is nested more than {MAX_NESTING} levels deep; split it up"));
    }
}

/// The tokens that the rules see, with what stands before each.
fn visible(text: &str, tokens: &[Token]) -> Vec<Seen> {
    let mut seen = Vec::with_capacity(tokens.len() / 2 + 1);
    let (mut starts_line, mut after_comment) = (true, false);
    for token in tokens {
        if token.kind.is_skipped() {
            starts_line |= text[token.range].contains(['\r', '\n']);
            after_comment |= matches!(token.kind, K::LineComment | K::BlockComment);
            continue;
        }
        let before = text[..usize::from(token.range.start())].chars().next_back();
        let starts_column = before.is_none_or(|letter| matches!(letter, '\r' | '\n'));
        let Token { kind, range } = *token;
        seen.push(Seen { kind, range, starts_line, starts_column, after_comment });
        (starts_line, after_comment) = (false, false);
    }
    seen
}

/// A piece of the file short enough for a message.
fn shortened(text: &str) -> String {
    const LONGEST: usize = 24;
    match text.char_indices().nth(LONGEST) {
        Some((end, _)) => format!("{}…", &text[..end]),
        None => text.to_owned(),
    }
}
