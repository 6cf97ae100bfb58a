//! The protocol's line and column against our byte offsets.
//!
//! Lines end at LF, CR LF or a lone CR, as the protocol says. Positions past
//! the end of a line or of the text are clamped, positions inside a character
//! are rounded down: no position a client sends is an error.

use grammar::{TextRange, TextSize};
use ropey::{Rope, RopeSlice};
use serde_json::Value;
use tower_lsp::lsp_types::{Position, PositionEncodingKind, Range};

/// The unit in which a client counts columns.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub(crate) enum Encoding {
    /// Bytes of UTF-8.
    Utf8,
    /// 16-bit units, the protocol's default.
    #[default]
    Utf16,
    /// Code points.
    Utf32,
}

impl Encoding {
    /// The best encoding the client names: ours where it can, else the first
    /// it named that we know, else the default.
    pub(crate) fn negotiate(named: Option<&Value>) -> Self {
        let named: Vec<&str> = named
            .and_then(Value::as_array)
            .map(|list| list.iter().filter_map(Value::as_str).collect())
            .unwrap_or_default();
        let order =
            [("utf-8", Encoding::Utf8), ("utf-16", Encoding::Utf16), ("utf-32", Encoding::Utf32)];
        order
            .into_iter()
            .find(|(name, _)| named.contains(name))
            .map_or(Encoding::default(), |(_, encoding)| encoding)
    }

    /// The protocol's name for it.
    pub(crate) fn kind(self) -> PositionEncodingKind {
        match self {
            Encoding::Utf8 => PositionEncodingKind::UTF8,
            Encoding::Utf16 => PositionEncodingKind::UTF16,
            Encoding::Utf32 => PositionEncodingKind::UTF32,
        }
    }
}

/// Byte offset of a position, clamped into the text.
pub(crate) fn offset(text: &Rope, position: Position, encoding: Encoding) -> usize {
    let line = position.line as usize;
    if line >= text.len_lines() {
        return text.len_bytes();
    }
    let slice = without_line_end(text.line(line));
    let column = position.character as usize;
    let inside = match encoding {
        Encoding::Utf8 => slice.char_to_byte(slice.byte_to_char(column.min(slice.len_bytes()))),
        Encoding::Utf16 => {
            let units = column.min(slice.len_utf16_cu());
            slice.char_to_byte(slice.utf16_cu_to_char(units))
        }
        Encoding::Utf32 => slice.char_to_byte(column.min(slice.len_chars())),
    };
    text.line_to_byte(line) + inside
}

/// Position of a byte offset, clamped into the text.
pub(crate) fn position(text: &Rope, offset: usize, encoding: Encoding) -> Position {
    let offset = offset.min(text.len_bytes());
    let line = text.byte_to_line(offset);
    let slice = without_line_end(text.line(line));
    // Between CR and LF is the end of the line, too.
    let inside = (offset - text.line_to_byte(line)).min(slice.len_bytes());
    let inside = slice.byte_to_char(inside);
    let column = match encoding {
        Encoding::Utf8 => slice.char_to_byte(inside),
        Encoding::Utf16 => slice.char_to_utf16_cu(inside),
        Encoding::Utf32 => inside,
    };
    // A text of 4 Gi lines or columns does not fit the protocol anyway.
    let narrow = |n: usize| u32::try_from(n).unwrap_or(u32::MAX);
    Position::new(narrow(line), narrow(column))
}

/// A range of ours as the protocol's.
pub(crate) fn range(text: &Rope, range: TextRange, encoding: Encoding) -> Range {
    Range::new(
        position(text, range.start().into(), encoding),
        position(text, range.end().into(), encoding),
    )
}

/// A range of the protocol as ours; a reversed one is turned round.
pub(crate) fn text_range(text: &Rope, range: Range, encoding: Encoding) -> TextRange {
    let ends = [range.start, range.end].map(|p| offset(text, p, encoding));
    let size = |n: usize| TextSize::new(u32::try_from(n).unwrap_or(u32::MAX));
    TextRange::new(size(ends[0].min(ends[1])), size(ends[0].max(ends[1])))
}

fn without_line_end(line: RopeSlice<'_>) -> RopeSlice<'_> {
    let mut length = line.len_chars();
    while length > 0 && matches!(line.char(length - 1), '\n' | '\r') {
        length -= 1;
    }
    line.slice(..length)
}

#[cfg(test)]
mod tests {
    use grammar::{Columns, LineColumn, LineIndex};
    use proptest::prelude::*;

    use super::*;

    const UNITS: [(Encoding, Columns); 3] = [
        (Encoding::Utf8, Columns::Utf8),
        (Encoding::Utf16, Columns::Utf16),
        (Encoding::Utf32, Columns::Utf32),
    ];

    proptest! {
        #![proptest_config(ProptestConfig::with_cases(200))]

        /// Against the line index of `grammar`, which is written without a rope.
        #[test]
        fn agrees_with_the_line_index(text in "[a\u{3c0}\u{221e}\u{1d6fc}\r\n ]{0,40}") {
            let (rope, index) = (Rope::from_str(&text), LineIndex::new(&text));
            for (encoding, columns) in UNITS {
                for at in 0..=text.len() + 2 {
                    let size = TextSize::new(u32::try_from(at).unwrap_or(0));
                    let theirs = index.line_column(&text, size, columns);
                    let ours = position(&rope, at, encoding);
                    prop_assert_eq!((ours.line, ours.character), (theirs.line, theirs.column));
                }
                for line in 0..8 {
                    for column in 0..12 {
                        let place = LineColumn { line, column };
                        let theirs = usize::from(index.offset(&text, place, columns));
                        let ours = offset(&rope, Position::new(line, column), encoding);
                        prop_assert_eq!(ours, theirs, "{:?} {}:{}", encoding, line, column);
                    }
                }
            }
        }
    }

    #[test]
    fn a_reversed_range_is_turned_round() {
        let text = Rope::from_str("abc\ndef");
        let reversed = Range::new(Position::new(1, 1), Position::new(0, 2));
        let turned = text_range(&text, reversed, Encoding::Utf16);
        assert_eq!(turned, TextRange::new(TextSize::new(2), TextSize::new(5)));
    }
}
