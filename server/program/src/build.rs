//! From the tree to resolved statements: names, types, constants, claims.
//!
//! One walk in the order of the text, as the language itself demands: a name
//! is known from its declaration on. Whatever is wrong becomes a finding at
//! the place where the fact is known, and a broken part of the result that
//! nothing reports again.

mod annotations;
mod claims;
mod declarations;
mod expressions;
mod gates;
mod includes;
mod matrices;
mod scopes;
mod statements;

use std::sync::Arc;

use grammar::nodes::NodeExt;
use grammar::{TextRange, TextSize};

use crate::eval::{Trouble, eval_known};
use crate::facts::Facts;
use crate::file::{Files, SourceFile};
use crate::finding::{Edit, FileId, Finding};
use crate::hir::{Expr, Stmt};
use crate::limits::Limits;
use crate::value::Value;
pub(crate) use claims::DEFAULT_TOLERANCE;
use claims::Pending;
use scopes::Scope;
pub(crate) use statements::written;

/// The state of the walk.
pub(crate) struct Builder<'a> {
    reader: &'a dyn Files,
    facts: Facts,
    scopes: Vec<Scope>,
    file: FileId,
    /// Includes being read, the main file first.
    open: Vec<FileId>,
    /// Nesting of blocks and expressions.
    depth: usize,
    loops: usize,
    /// An include is missing, so unknown names are not reported any more.
    incomplete: bool,
    library_included: bool,
    /// The main file is in version 2 of the language.
    old_version: bool,
    /// Subroutine calls seen so far; an expression that raises it has one.
    calls_seen: usize,
    pending: Vec<Pending>,
}

/// Analyses a file with its includes.
pub(crate) fn build(path: &str, text: Arc<str>, reader: &dyn Files, limits: &Limits) -> Facts {
    let facts = Facts { limits: limits.clone(), ..Facts::default() };
    let mut builder = Builder {
        reader,
        facts,
        scopes: vec![Scope::global()],
        file: FileId::MAIN,
        open: Vec::new(),
        depth: 0,
        loops: 0,
        incomplete: false,
        library_included: false,
        old_version: false,
        calls_seen: 0,
        pending: Vec::new(),
    };
    let mut main = Vec::new();
    let old = builder.open_file(path.to_owned(), text);
    builder.old_version = old;
    builder.declare_language();
    builder.read_file(FileId::MAIN, &mut main);
    builder.facts.main = main;
    builder.settle_claims();
    builder.check_matrices();
    builder.facts
}

impl Builder<'_> {
    /// Adds a file to the analysis and reports its syntax errors; the answer
    /// is whether its version line says 2.
    fn open_file(&mut self, path: String, text: Arc<str>) -> bool {
        let id = FileId(self.facts.files.len() as u32);
        let limit = self.facts.limits.file_bytes;
        let too_long = text.len() > limit;
        let parse = grammar::parse(if too_long { "" } else { &text });
        if too_long {
            let message = format!("the file is longer than the limit of {limit} bytes");
            self.report(Finding::error("limit-reached", id, TextRange::default(), message));
        }
        for error in parse.errors() {
            let finding = Finding::error("syntax", id, error.range, error.message.clone());
            let insertions = error.fix.iter();
            let edits: Vec<Edit> =
                insertions.map(|fix| Edit::insert(fix.offset, fix.text.clone())).collect();
            self.report(match edits.first() {
                Some(first) => finding.fix(format!("Insert `{}`", first.text.trim()), edits),
                None => finding,
            });
        }
        let version = parse.root().version().and_then(|version| version.number());
        let old = version.is_some_and(|number| number.text().starts_with('2'));
        self.facts.files.push(SourceFile { path, text, parse });
        old
    }

    /// Walks through the statements of an opened file.
    fn read_file(&mut self, id: FileId, out: &mut Vec<Stmt>) {
        let Some(file) = self.facts.files.get(id.index()) else { return };
        let root = file.parse.root();
        let before = std::mem::replace(&mut self.file, id);
        self.open.push(id);
        for statement in root.statements() {
            self.statement(&statement, out);
        }
        self.open.pop();
        self.file = before;
    }

    fn report(&mut self, finding: Finding) {
        self.facts.report(finding);
    }

    /// Reports an error in the current file.
    fn error(&mut self, code: &'static str, range: TextRange, message: impl Into<String>) {
        self.report(Finding::error(code, self.file, range, message));
    }

    fn trouble(&mut self, trouble: Option<Trouble>) {
        if let Some(trouble) = trouble {
            self.error(trouble.code, trouble.range, trouble.message);
        }
    }

    /// The value of an expression that must be constant; reported if not.
    fn constant(&mut self, expr: &Expr) -> Option<Value> {
        eval_known(expr, &self.facts).map_err(|trouble| self.trouble(trouble)).ok()
    }

    /// A constant whole number from 0 up; reported if it is none. `what`
    /// begins the message.
    fn constant_size(&mut self, expr: &Expr, what: &str) -> Option<usize> {
        let value = self.constant(expr)?;
        let size = value.integer().and_then(|size| usize::try_from(size).ok());
        if size.is_none() {
            let message = match value.integer() {
                Some(size) => format!("{what} must not be negative, but it is {size}"),
                None => format!("{what} must be an integer, not {}", value.type_name()),
            };
            self.error("type-mismatch", expr.range, message);
        }
        size
    }

    /// Runs `inner` one level deeper; past the limit reports `range` instead.
    fn deeper<T>(&mut self, range: TextRange, inner: impl FnOnce(&mut Self) -> T) -> Option<T> {
        let limit = self.facts.limits.depth;
        if self.depth >= limit {
            let message = format!("this is nested deeper than the limit of {limit}");
            self.error("limit-reached", range, message);
            return None;
        }
        self.depth += 1;
        let result = inner(self);
        self.depth -= 1;
        Some(result)
    }
}

/// The range of a statement without the annotations before it.
fn core_range(node: &impl NodeExt) -> TextRange {
    let whole = node.range();
    let Some(last) = node.annotations().last() else { return whole };
    let after = last.range().end();
    let mut children = node.syntax().children_with_tokens();
    let next =
        children.find(|child| child.text_range().start() >= after && !child.kind().is_trivia());
    let start: TextSize = next.map_or(after, |next| next.text_range().start());
    TextRange::new(start.min(whole.end()), whole.end())
}
