//! The result of parsing: the tree and the errors.

use crate::event::Event;
use crate::kind::{SyntaxKind as K, SyntaxNode};
use crate::lexer::{self, Token};
use crate::nodes::Root;
use crate::parser::Parser;
use crate::rules;
use rowan::{GreenNode, GreenNodeBuilder, TextRange, TextSize};
use std::sync::Arc;

/// Something the text says that the language does not allow.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct SyntaxError {
    /// The bytes of the file that the message is about; empty where something
    /// is missing.
    pub range: TextRange,
    /// What is wrong, in words for the reader of the file.
    pub message: String,
    /// The insertions that mend it together, where there is one right answer;
    /// else empty.
    pub fix: Vec<Insertion>,
}

/// A piece of text that is missing.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct Insertion {
    /// Where it belongs.
    pub offset: TextSize,
    /// What to insert.
    pub text: String,
}

/// A parsed file. Clones share the tree, and any thread may hold one; the
/// nodes handed out by [`Parse::syntax`] stay on their thread.
#[derive(Clone, Debug)]
pub struct Parse {
    green: GreenNode,
    errors: Arc<[SyntaxError]>,
}

impl Parse {
    /// The root of the tree. Its text is the text that was parsed.
    pub fn syntax(&self) -> SyntaxNode {
        SyntaxNode::new_root(self.green.clone())
    }

    /// The typed view of the root.
    pub fn root(&self) -> Root {
        Root::new(self.syntax())
    }

    /// The shared tree itself.
    pub fn green(&self) -> &GreenNode {
        &self.green
    }

    /// What is wrong with the text, in its order.
    pub fn errors(&self) -> &[SyntaxError] {
        &self.errors
    }
}

/// The longest text that is parsed. The tree counts bytes in 32 bits; this
/// leaves room and is beyond any program.
pub const MAX_BYTES: usize = 1 << 30;

/// Builds the tree of a text.
pub(crate) fn build(text: &str) -> Parse {
    if text.len() > MAX_BYTES {
        return too_long(text);
    }
    let lexed = lexer::lex(text);
    let mut parser = Parser::new(text, &lexed.tokens);
    rules::root(&mut parser);
    let Parser { events, mut errors, .. } = parser;
    errors.extend(lexed.errors);
    errors.sort_by_key(|error| (error.range.start(), error.range.end()));
    let green = Builder::new(text, &lexed.tokens).build(events);
    Parse { green, errors: errors.into() }
}

/// A tree of the part of the text that can be counted, not understood.
fn too_long(text: &str) -> Parse {
    let longest = text.len().min(u32::MAX as usize);
    let end = (0..=longest).rev().find(|&end| text.is_char_boundary(end)).unwrap_or(0);
    let mut builder = GreenNodeBuilder::new();
    builder.start_node(K::Root.into());
    builder.token(K::UnknownText.into(), &text[..end]);
    builder.finish_node();
    let message = format!("the file is longer than {MAX_BYTES} bytes and is not read");
    let range = TextRange::empty(TextSize::new(0));
    let error = SyntaxError { range, message, fix: Vec::new() };
    Parse { green: builder.finish(), errors: Arc::new([error]) }
}

/// Puts tokens and events together. White space and comments go outside the
/// nodes that they stand before and behind.
struct Builder<'t> {
    text: &'t str,
    tokens: &'t [Token],
    position: usize,
    inner: GreenNodeBuilder<'static>,
}

impl<'t> Builder<'t> {
    fn new(text: &'t str, tokens: &'t [Token]) -> Self {
        Self { text, tokens, position: 0, inner: GreenNodeBuilder::new() }
    }

    fn build(mut self, mut events: Vec<Event>) -> GreenNode {
        self.inner.start_node(K::Root.into());
        for index in 0..events.len() {
            match events[index] {
                Event::Open { .. } => self.open(&mut events, index),
                Event::Close => self.inner.finish_node(),
                Event::Token => {
                    self.skipped();
                    self.token();
                }
            }
        }
        self.skipped();
        self.inner.finish_node();
        self.inner.finish()
    }

    /// Opens the node of an event and those that were put around it later,
    /// outermost first.
    fn open(&mut self, events: &mut [Event], first: usize) {
        let mut kinds = Vec::new();
        let mut index = first;
        while let Some(event) = events.get_mut(index) {
            let Event::Open { kind, parent } = *event else { break };
            *event = Event::Open { kind: None, parent: None };
            kinds.extend(kind);
            match parent {
                Some(distance) => index += distance as usize,
                None => break,
            }
        }
        if !kinds.is_empty() {
            self.skipped();
        }
        for kind in kinds.into_iter().rev() {
            self.inner.start_node(kind.into());
        }
    }

    fn skipped(&mut self) {
        while self.tokens.get(self.position).is_some_and(|token| token.kind.is_skipped()) {
            self.token();
        }
    }

    fn token(&mut self) {
        if let Some(token) = self.tokens.get(self.position) {
            self.inner.token(token.kind.into(), &self.text[token.range]);
            self.position += 1;
        }
    }
}
