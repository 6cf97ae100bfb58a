//! Includes: the standard library is built in, the rest is read.

use grammar::nodes::IncludeStatement;

use super::{Builder, core_range};
use crate::file::FileProblem;
use crate::finding::FileId;
use crate::hir::Stmt;
use crate::standard::LIBRARY;

impl Builder<'_> {
    pub(super) fn include(&mut self, node: &IncludeStatement, out: &mut Vec<Stmt>) {
        let Some(path) = node.path() else { return };
        let range = core_range(node);
        if path == LIBRARY {
            self.declare_library(range);
            return;
        }
        let from = self.facts.files[self.file.index()].path.clone();
        let (path, text) = match self.reader.read(&from, &path) {
            Ok(found) => found,
            Err(problem) => {
                self.incomplete = true;
                let code = match problem {
                    FileProblem::NotText { .. } => "not-text",
                    _ => "include-not-found",
                };
                self.error(code, range, format!("`{path}` cannot be included: {problem}"));
                return;
            }
        };
        let known = self.facts.files.iter().position(|file| file.path == path);
        if let Some(known) = known.map(|index| FileId(index as u32)) {
            if self.open.contains(&known) {
                let message = format!("`{path}` includes itself, directly or through others");
                self.error("include-not-found", range, message);
                return;
            }
            // The text of an include stands in its place, so a second one
            // declares everything twice; it is read again to say so.
            self.include_again(known, range, out);
            return;
        }
        if self.facts.files.len() >= self.facts.limits.files {
            let limit = self.facts.limits.files;
            self.incomplete = true;
            let message = format!("more files are included than the limit of {limit}");
            self.error("limit-reached", range, message);
            return;
        }
        self.open_file(path, text);
        let id = FileId((self.facts.files.len() - 1) as u32);
        self.deeper(range, |this| this.read_file(id, out));
    }

    fn include_again(&mut self, id: FileId, range: grammar::TextRange, out: &mut Vec<Stmt>) {
        let path = self.facts.files[id.index()].path.clone();
        let declares = self.facts.symbols.iter().any(|symbol| symbol.file == id);
        if declares {
            let message = format!("`{path}` is included twice, so its names are declared twice");
            self.error("duplicate-name", range, message);
        } else {
            self.deeper(range, |this| this.read_file(id, out));
        }
    }
}
