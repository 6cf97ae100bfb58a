//! Hovers as markdown or as plain text.

use program::queries::Block;
use tower_lsp::lsp_types::{HoverContents, MarkupContent, MarkupKind};

use crate::lsp::ClientProfile;

/// The parts of a hover in the form that the client shows.
pub(crate) fn hover_contents(blocks: &[Block], client: &ClientProfile) -> HoverContents {
    let (kind, part): (_, fn(&Block) -> String) = match client.markdown {
        true => (MarkupKind::Markdown, markdown),
        false => (MarkupKind::PlainText, plain),
    };
    let parts: Vec<String> = blocks.iter().map(part).collect();
    HoverContents::Markup(MarkupContent { kind, value: parts.join("\n\n") })
}

fn markdown(block: &Block) -> String {
    match block {
        Block::Source(text) => format!("```qasm\n{text}\n```"),
        Block::Grid(text) => format!("```text\n{text}\n```"),
        Block::Text(text) => escaped(text),
    }
}

fn plain(block: &Block) -> String {
    match block {
        Block::Source(text) | Block::Grid(text) => text.clone(),
        Block::Text(text) => text.replace('`', ""),
    }
}

/// Text in which only backquotes keep a meaning: names may hold characters
/// that markdown would take for its own.
fn escaped(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    let mut quoted = false;
    for character in text.chars() {
        quoted ^= character == '`';
        if !quoted && matches!(character, '*' | '_' | '<' | '>' | '[' | ']' | '#' | '|' | '\\') {
            out.push('\\');
        }
        out.push(character);
    }
    out
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn both_forms() {
        let blocks = [
            Block::Source("gate g a".into()),
            Block::Text("|0⟩ of `a_1`, b_2".into()),
            Block::Grid("1  0\n0  1".into()),
        ];
        let text = |markdown: bool| {
            let client = ClientProfile { markdown, ..ClientProfile::default() };
            match hover_contents(&blocks, &client) {
                HoverContents::Markup(content) => content.value,
                other => panic!("{other:?}"),
            }
        };
        assert_eq!(
            text(true),
            "```qasm\ngate g a\n```\n\n\\|0⟩ of `a_1`, b\\_2\n\n```text\n1  0\n0  1\n```"
        );
        assert_eq!(text(false), "gate g a\n\n|0⟩ of a_1, b_2\n\n1  0\n0  1");
    }
}
