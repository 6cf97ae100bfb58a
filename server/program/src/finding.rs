//! What is wrong with a file, and the edits that mend it.

use grammar::{TextRange, TextSize};

/// A file of the analysis: 0 is the file itself, the rest are its includes
/// in the order of their first mention.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct FileId(pub u32);

impl FileId {
    /// The file that was asked about.
    pub const MAIN: FileId = FileId(0);
    /// The home of what the language or its standard library defines; it has
    /// no text.
    pub const STANDARD: FileId = FileId(u32::MAX);

    /// Position in [`crate::Program::files`].
    pub fn index(self) -> usize {
        self.0 as usize
    }
}

/// How bad a finding is.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Severity {
    /// The file does not mean anything here, or a claim does not hold.
    Error,
    /// Legal, but hardly what was wanted.
    Warning,
    /// Worth knowing.
    Hint,
}

/// One thing to tell the user. `code` is the name of the lint it belongs to.
#[derive(Debug, Clone, PartialEq)]
pub struct Finding {
    /// Name of the lint, in kebab case.
    pub code: &'static str,
    /// How bad it is.
    pub severity: Severity,
    /// The file it is about.
    pub file: FileId,
    /// The bytes of that file.
    pub range: TextRange,
    /// One or two sentences for the reader of the file.
    pub message: String,
    /// Other places that explain it.
    pub related: Vec<Related>,
    /// Edits that would mend it, the likeliest first.
    pub fixes: Vec<Fix>,
}

/// A second place that a finding points to.
#[derive(Debug, Clone, PartialEq)]
pub struct Related {
    /// The file of the place.
    pub file: FileId,
    /// Its bytes.
    pub range: TextRange,
    /// What is there.
    pub message: String,
}

/// A set of edits of the finding's own file that mends it.
#[derive(Debug, Clone, PartialEq)]
pub struct Fix {
    /// What the edits do, as an order: "Add `include …`".
    pub title: String,
    /// Edits that do not overlap.
    pub edits: Vec<Edit>,
}

/// Replaces the bytes of a range by a text.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Edit {
    /// The bytes to replace; empty for an insertion.
    pub range: TextRange,
    /// The text to put there.
    pub text: String,
}

impl Finding {
    /// An error without related places or fixes.
    pub fn error(
        code: &'static str,
        file: FileId,
        range: TextRange,
        message: impl Into<String>,
    ) -> Self {
        let (related, fixes) = (Vec::new(), Vec::new());
        Finding {
            code,
            severity: Severity::Error,
            file,
            range,
            message: message.into(),
            related,
            fixes,
        }
    }

    /// A warning without related places or fixes.
    pub fn warning(
        code: &'static str,
        file: FileId,
        range: TextRange,
        message: impl Into<String>,
    ) -> Self {
        Finding { severity: Severity::Warning, ..Finding::error(code, file, range, message) }
    }

    /// With one more place that explains it.
    pub fn related(mut self, file: FileId, range: TextRange, message: impl Into<String>) -> Self {
        self.related.push(Related { file, range, message: message.into() });
        self
    }

    /// With one more fix.
    pub fn fix(mut self, title: impl Into<String>, edits: Vec<Edit>) -> Self {
        self.fixes.push(Fix { title: title.into(), edits });
        self
    }
}

impl Edit {
    /// Puts `text` in the place of `range`.
    pub fn replace(range: TextRange, text: impl Into<String>) -> Self {
        Edit { range, text: text.into() }
    }

    /// Puts `text` before the byte at `offset`.
    pub fn insert(offset: TextSize, text: impl Into<String>) -> Self {
        Edit { range: TextRange::empty(offset), text: text.into() }
    }
}

/// Applies edits to a text. They may come in any order; of two that overlap
/// the later one is left out, and so is one that does not lie on characters
/// of the text. Insertions at one place keep their order.
pub fn apply_edits(text: &str, edits: &[Edit]) -> String {
    let mut sorted: Vec<&Edit> = edits.iter().collect();
    sorted.sort_by_key(|edit| (edit.range.start(), edit.range.end()));
    let (mut out, mut done) = (String::with_capacity(text.len()), 0);
    for edit in sorted {
        let (start, end) = (usize::from(edit.range.start()), usize::from(edit.range.end()));
        let Some(kept) = text.get(done..start) else { continue };
        if text.get(start..end).is_none() {
            continue;
        }
        out.push_str(kept);
        out.push_str(&edit.text);
        done = end;
    }
    out.push_str(text.get(done..).unwrap_or_default());
    out
}
