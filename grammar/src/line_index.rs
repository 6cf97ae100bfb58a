//! Byte offsets to lines and columns and back.
//!
//! A line ends at LF, CR or CRLF. Lines and columns count from 0. Anything out
//! of range is moved to the nearest place that exists: an offset inside a
//! character to its start, a column behind its line to the end of that line
//! (before the line break), a line behind the file to its end.

use rowan::{TextRange, TextSize};

/// What a column counts.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Columns {
    /// Bytes of UTF-8.
    Utf8,
    /// 16-bit units of UTF-16.
    Utf16,
    /// Characters (code points).
    Utf32,
}

impl Columns {
    /// How many columns a character takes.
    fn width(self, letter: char) -> usize {
        match self {
            Self::Utf8 => letter.len_utf8(),
            Self::Utf16 => letter.len_utf16(),
            Self::Utf32 => 1,
        }
    }
}

/// A place as a line and a column, both from 0.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct LineColumn {
    /// The line, from 0.
    pub line: u32,
    /// The column, from 0, in units of the caller's choice.
    pub column: u32,
}

/// Where the lines of one text begin. Holds no text: each question is asked
/// with the text that the index was made from. One question reads one line.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct LineIndex {
    /// The offset of the first byte of each line; the first is 0.
    starts: Vec<usize>,
}

impl LineIndex {
    /// Finds the lines of a text.
    pub fn new(text: &str) -> Self {
        let bytes = text.as_bytes();
        let is_break = |&(place, byte): &(usize, u8)| match byte {
            b'\n' => true,
            // The break of CRLF is its LF.
            b'\r' => bytes.get(place + 1) != Some(&b'\n'),
            _ => false,
        };
        let breaks = text.bytes().enumerate().filter(is_break).map(|(place, _)| place + 1);
        Self { starts: std::iter::once(0).chain(breaks).collect() }
    }

    /// The number of lines; a text that ends with a line break has an empty
    /// one behind it.
    pub fn lines(&self) -> u32 {
        self.starts.len() as u32
    }

    /// The line and column of an offset.
    pub fn line_column(&self, text: &str, offset: TextSize, columns: Columns) -> LineColumn {
        let offset = text.floor_char_boundary(usize::from(offset));
        let line = self.starts.partition_point(|&start| start <= offset).saturating_sub(1);
        let range = self.line(text, line);
        // An offset between CR and LF, or behind them, is the end of its line.
        let before = text.get(range.start..offset.min(range.end)).unwrap_or("");
        let column: usize = before.chars().map(|letter| columns.width(letter)).sum();
        LineColumn { line: line as u32, column: column as u32 }
    }

    /// The offset of a line and column. A column inside a character is its
    /// start.
    pub fn offset(&self, text: &str, place: LineColumn, columns: Columns) -> TextSize {
        let line = place.line as usize;
        if line >= self.starts.len() {
            return size(text.len());
        }
        let range = self.line(text, line);
        let mut left = place.column as usize;
        let mut offset = range.start;
        for letter in text.get(range).unwrap_or("").chars() {
            let width = columns.width(letter);
            if width > left {
                break;
            }
            left -= width;
            offset += letter.len_utf8();
        }
        size(offset)
    }

    /// The bytes of a line without its line break; an empty range at the end
    /// of the text if there is no such line.
    pub fn line_range(&self, text: &str, line: u32) -> TextRange {
        let range = self.line(text, line as usize);
        TextRange::new(size(range.start), size(range.end))
    }

    fn line(&self, text: &str, line: usize) -> std::ops::Range<usize> {
        let start = self.starts.get(line).copied().unwrap_or(text.len()).min(text.len());
        let next = self.starts.get(line + 1).copied().unwrap_or(text.len());
        let content = text.get(start..next.min(text.len())).unwrap_or("");
        let is_last = line + 1 >= self.starts.len();
        let content = if is_last { content } else { without_break(content) };
        start..start + content.len()
    }
}

/// A line without the one break at its end.
fn without_break(line: &str) -> &str {
    let line = line.strip_suffix('\n').unwrap_or(line);
    line.strip_suffix('\r').unwrap_or(line)
}

/// An offset as the tree counts it; texts are shorter than 4 GiB.
fn size(offset: usize) -> TextSize {
    TextSize::new(offset as u32)
}
