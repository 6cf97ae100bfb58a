//! One state of one open text, and what is known about it.

use std::path::Path;
use std::sync::{Arc, Mutex, OnceLock, Weak};

use operator::Budget;
use program::{Finding, Limits, Program};
use ropey::Rope;
use tower_lsp::lsp_types::{TextDocumentContentChangeEvent, Url};

use super::locked;
use crate::convert::{self, Encoding};
use crate::disk::{self, Disk};

/// An open text at one version. Immutable but for what is found out about
/// it: an edit makes a new one.
#[derive(Debug)]
pub(crate) struct Document {
    /// The client's name for it.
    pub uri: Url,
    /// The client's number of this state.
    pub version: i32,
    /// The text.
    pub text: Rope,
    /// Our name for the file.
    pub path: Arc<str>,
    files: Disk,
    program: OnceLock<Program>,
    /// What the names lane found, once it has.
    pub names: OnceLock<Vec<Finding>>,
    /// What the arithmetic found, once it has.
    pub operators: OnceLock<Vec<Finding>>,
    live: Mutex<Live>,
}

/// The computations that speak of this state of the text.
#[derive(Debug, Default)]
struct Live {
    ended: bool,
    budgets: Vec<Weak<Budget>>,
}

impl Document {
    /// A state of a text. `path` is from [`path_of`].
    pub(crate) fn new(uri: Url, path: Arc<str>, version: i32, text: Rope, files: Disk) -> Self {
        Document {
            uri,
            version,
            text,
            path,
            files,
            program: OnceLock::new(),
            names: OnceLock::new(),
            operators: OnceLock::new(),
            live: Mutex::default(),
        }
    }

    /// The analysis of the text; made by whoever asks first, which takes a
    /// while, so only handlers in a lane may ask.
    pub(crate) fn program(&self) -> &Program {
        self.program.get_or_init(|| {
            let text: Arc<str> = self.text.to_string().into();
            Program::analyse(&self.path, text, &self.files, &Limits::default())
        })
    }

    /// The files that an analysis of this text may read.
    pub(crate) fn files(&self) -> &Disk {
        &self.files
    }

    /// Whether the analysis read the file at `path`, misses an include, or
    /// is still to be made from files as they were.
    pub(crate) fn depends_on(&self, path: &str) -> bool {
        let Some(program) = self.program.get() else { return true };
        let reads = program.files().iter().skip(1).any(|file| file.path == path);
        reads || program.findings().iter().any(|finding| finding.code == "include-not-found")
    }

    /// What has been found so far.
    pub(crate) fn findings(&self) -> impl Iterator<Item = &Finding> {
        self.names.get().into_iter().chain(self.operators.get()).flatten()
    }

    /// Ties a computation to this state of the text: it is stopped when the
    /// text moves on, at once if it already has.
    pub(crate) fn bind(&self, budget: &Arc<Budget>) {
        let mut live = locked(&self.live);
        if live.ended {
            budget.stop();
            return;
        }
        live.budgets.retain(|budget| budget.strong_count() > 0);
        live.budgets.push(Arc::downgrade(budget));
    }

    /// Stops all computations that speak of this state.
    pub(crate) fn end(&self) {
        let budgets = {
            let mut live = locked(&self.live);
            live.ended = true;
            std::mem::take(&mut live.budgets)
        };
        budgets.iter().filter_map(Weak::upgrade).for_each(|budget| budget.stop());
    }
}

/// Our name for the file a client means: one name for one file, whatever
/// way the client spells it. A text that is no file is called by its URI.
pub(crate) fn path_of(uri: &Url) -> Arc<str> {
    match uri.to_file_path() {
        Ok(path) => disk::identity(Path::new(&path)).into(),
        Err(()) => uri.as_str().into(),
    }
}

/// The text after `changes`, which apply one after another. `rangeLength`
/// is ignored: clients count it in different units and the range says it all.
pub(crate) fn edited(
    text: &Rope,
    changes: &[TextDocumentContentChangeEvent],
    encoding: Encoding,
) -> Rope {
    let mut text = text.clone();
    for change in changes {
        let Some(range) = change.range else {
            text = Rope::from_str(&change.text);
            continue;
        };
        let range = convert::text_range(&text, range, encoding);
        let start = text.byte_to_char(range.start().into());
        let end = text.byte_to_char(range.end().into());
        text.remove(start..end);
        text.insert(start, &change.text);
    }
    text
}
