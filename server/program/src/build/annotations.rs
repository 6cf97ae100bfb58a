//! The annotations before a statement.

use grammar::TextRange;
use grammar::nodes::{Annotation as AnnotationNode, NodeExt};

use super::Builder;
use crate::annotation::{self, Annotation};
use crate::facts::Suppression;

/// A well-formed annotation of our namespace and its place.
#[derive(Debug, Clone)]
pub(super) struct Note {
    pub(super) annotation: Annotation,
    pub(super) range: TextRange,
}

impl Builder<'_> {
    /// Reads the annotations of a statement. `@cantle.allow` is dealt with;
    /// the others are given back.
    pub(super) fn notes(&mut self, node: &impl NodeExt) -> Vec<Note> {
        let nodes: Vec<AnnotationNode> = node.annotations().collect();
        let mut notes = Vec::new();
        for annotation in nodes {
            let Some(note) = self.note(&annotation) else { continue };
            let Annotation::Allow(codes) = &note.annotation else {
                notes.push(note);
                continue;
            };
            for code in codes {
                let (file, range) = (self.file, node.range());
                self.facts.suppressions.push(Suppression { code: code.value.clone(), file, range });
            }
        }
        notes
    }

    fn note(&mut self, node: &AnnotationNode) -> Option<Note> {
        let name = node.name();
        let name_range = node.name_token()?.text_range();
        let content = node.content();
        let text = content.as_ref().map_or("", |token| token.text());
        let start = content.as_ref().map_or(name_range.end(), |c| c.text_range().start());
        let trimmed = text.trim_end().len();
        let end = if trimmed == 0 {
            name_range.end()
        } else {
            start + grammar::TextSize::of(&text[..trimmed])
        };
        let range = TextRange::new(name_range.start(), end);
        match annotation::read(self.file, &name, name_range, text, start)? {
            Ok(annotation) => Some(Note { annotation, range }),
            Err(finding) => {
                self.report(*finding);
                None
            }
        }
    }

    /// Reports annotations that mean nothing before this kind of statement.
    pub(super) fn misplaced(&mut self, notes: &[Note], kind: &str) {
        for note in notes {
            let place = match note.annotation {
                Annotation::Dense { .. } => "a `gate` with an empty body",
                Annotation::Encodes(_) | Annotation::Sample(_) => "a `gate`",
                Annotation::Equals { .. } => "a `gate`, `box`, `for` or `def`",
                Annotation::Clean(_) => "a `gate` or `def`",
                Annotation::Budget(_) => "a `gate`, `box` or `def`",
                Annotation::Matrix(_) => "a two-dimensional `array` of numbers",
                Annotation::Allow(_) => continue,
            };
            let message = format!("this annotation belongs before {place}, not before {kind}");
            self.error("malformed-annotation", note.range, message);
        }
    }
}
