//! The files of an analysis and the way to read included ones.

use std::sync::Arc;

use grammar::Parse;

/// Reads included files; this crate does no input or output itself.
pub trait Files {
    /// The file that `include "include"` in the file at `from` means, as its
    /// path and text. The path must be canonical: the same file must give the
    /// same path, or a cycle of includes is only stopped by the depth limit.
    fn read(&self, from: &str, include: &str) -> Result<(String, Arc<str>), FileProblem>;
}

/// Why an included file cannot be read.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
pub enum FileProblem {
    /// There is none on the search path.
    #[error("there is no such file; looked in {}", .looked_in.join(", "))]
    NotFound {
        /// The directories or paths tried, in order.
        looked_in: Vec<String>,
    },
    /// The file is not UTF-8 text.
    #[error("the file is not UTF-8 text (byte {offset})")]
    NotText {
        /// Offset of the first byte that is no part of a character.
        offset: usize,
    },
    /// It is a directory, a device or too large.
    #[error("{0}")]
    Refused(String),
}

/// No other files: every include but the standard library is missing.
#[derive(Debug, Clone, Copy, Default)]
pub struct NoFiles;

impl Files for NoFiles {
    fn read(&self, _from: &str, _include: &str) -> Result<(String, Arc<str>), FileProblem> {
        Err(FileProblem::NotFound { looked_in: Vec::new() })
    }
}

/// A file of the analysis with its tree.
#[derive(Debug, Clone)]
pub struct SourceFile {
    /// Its path, as given or as the [`Files`] named it.
    pub path: String,
    /// Its text.
    pub text: Arc<str>,
    /// Its tree and syntax errors. Sharable between threads; the nodes made
    /// from it are not.
    pub parse: Parse,
}
