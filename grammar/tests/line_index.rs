//! Lines and columns: all line ends, characters of all widths, places that do
//! not exist.

use grammar::{Columns, LineColumn, LineIndex};

/// The columns of an offset in UTF-8, UTF-16 and UTF-32, on its line.
fn columns(text: &str, offset: u32) -> (u32, [u32; 3]) {
    let index = LineIndex::new(text);
    let place = |kind| index.line_column(text, offset.into(), kind);
    let places = [Columns::Utf8, Columns::Utf16, Columns::Utf32].map(place);
    assert!(places.iter().all(|place| place.line == places[0].line));
    (places[0].line, places.map(|place| place.column))
}

fn offset(text: &str, line: u32, column: u32, kind: Columns) -> u32 {
    LineIndex::new(text).offset(text, LineColumn { line, column }, kind).into()
}

#[test]
fn all_line_ends_count() {
    let text = "a\nb\rc\r\nd\n\re";
    assert_eq!(LineIndex::new(text).lines(), 6);
    let table = [(0, 0, 0), (1, 0, 1), (2, 1, 0), (3, 1, 1), (4, 2, 0), (5, 2, 1)];
    // Between CR and LF, and behind them on the next line.
    let more = [(6, 2, 1), (7, 3, 0), (9, 4, 0), (10, 5, 0), (11, 5, 1)];
    for (offset, line, column) in table.into_iter().chain(more) {
        assert_eq!(columns(text, offset), (line, [column; 3]), "offset {offset}");
    }
}

#[test]
fn wide_characters_count_in_each_unit() {
    let text = "é𝜃x\n𝜃";
    assert_eq!(columns(text, 2), (0, [2, 1, 1]));
    assert_eq!(columns(text, 6), (0, [6, 3, 2]));
    assert_eq!(columns(text, 7), (0, [7, 4, 3]));
    assert_eq!(columns(text, 12), (1, [4, 2, 1]));
    for (kind, column) in [(Columns::Utf8, 6), (Columns::Utf16, 3), (Columns::Utf32, 2)] {
        assert_eq!(offset(text, 0, column, kind), 6);
    }
}

#[test]
fn places_inside_a_character_are_its_start() {
    let text = "é𝜃x";
    for inside in [3, 4, 5] {
        assert_eq!(columns(text, inside), (0, [2, 1, 1]));
    }
    assert_eq!(offset(text, 0, 2, Columns::Utf16), 2);
    assert_eq!(offset(text, 0, 1, Columns::Utf8), 0);
}

#[test]
fn places_that_do_not_exist_are_moved() {
    let text = "ab\r\ncd\n";
    assert_eq!(offset(text, 0, 99, Columns::Utf16), 2);
    assert_eq!(offset(text, 1, 99, Columns::Utf8), 6);
    assert_eq!(offset(text, 2, 5, Columns::Utf16), 7);
    assert_eq!(offset(text, u32::MAX, u32::MAX, Columns::Utf32), 7);
    assert_eq!(columns(text, 1000), (2, [0; 3]));
    assert_eq!(columns("", 5), (0, [0; 3]));
    assert_eq!(offset("", 3, 3, Columns::Utf16), 0);
}

#[test]
fn a_line_has_no_line_break() {
    let text = "ab\r\n\rcd";
    let index = LineIndex::new(text);
    let lines: Vec<&str> =
        (0..index.lines()).map(|line| &text[index.line_range(text, line)]).collect();
    assert_eq!(lines, ["ab", "", "cd"]);
}
