//! What holds for any text: the tree keeps every byte, errors lie in the text,
//! and the tree is never deep.

use grammar::{Columns, LineIndex, MAX_NESTING, SyntaxNode, TextSize, parse};
use proptest::prelude::*;

/// How many nodes of the tree one level of nesting can make: a statement, its
/// branch, its list and its expression, or an index with its set.
const NODES_A_LEVEL: usize = 4;

/// Pieces of programs, so that random texts come near the language.
const PIECES: &[&str] = &[
    "OPENQASM",
    "3.0",
    "include",
    "\"stdgates.inc\"",
    "gate",
    "g",
    "q",
    "qubit",
    "[2]",
    "bit",
    "int",
    "float[64]",
    "array",
    "complex",
    "const",
    "let",
    "def",
    "extern",
    "return",
    "if",
    "else",
    "for",
    "in",
    "while",
    "switch",
    "case",
    "default",
    "box",
    "measure",
    "reset",
    "barrier",
    "delay",
    "ctrl",
    "inv",
    "pow",
    "negctrl",
    "@",
    "@a.b",
    "pragma",
    "cal",
    "defcal",
    "(",
    ")",
    "[",
    "]",
    "{",
    "}",
    ",",
    ";",
    ":",
    "=",
    "==",
    "+",
    "++",
    "-",
    "*",
    "**",
    "/",
    "->",
    "~",
    "!",
    "<<",
    "1",
    "2.5",
    "3im",
    "10ns",
    "\"01\"",
    "$0",
    "pi",
    "// note",
    "/* note */",
    "/*",
    "\"",
    "'",
    "\n",
    "\r\n",
    "\r",
    " ",
    "\t",
    "é",
    "𝜃",
    "\u{feff}",
    "\u{0}",
    "opaque",
    "gphase",
    "durationof",
    "+=",
    "end",
    "µ",
    "#",
];

fn depth(node: &SyntaxNode) -> usize {
    let mut deepest = 0;
    let mut depth = 0;
    for event in node.preorder() {
        match event {
            rowan::WalkEvent::Enter(_) => depth += 1,
            rowan::WalkEvent::Leave(_) => depth -= 1,
        }
        deepest = deepest.max(depth);
    }
    deepest
}

fn check(text: &str) {
    let parse = parse(text);
    assert_eq!(parse.syntax().text(), text);
    let end = TextSize::of(text);
    for error in parse.errors() {
        assert!(error.range.end() <= end, "{error:?} of {text:?}");
        assert!(
            text.get(std::ops::Range::<usize>::from(error.range)).is_some(),
            "{error:?} of {text:?}"
        );
        assert!(!error.message.is_empty());
        for fix in &error.fix {
            assert!(text.is_char_boundary(fix.offset.into()), "{error:?} of {text:?}");
        }
    }
    let has_broken = |node: SyntaxNode| {
        node.descendants().any(|node| node.kind() == grammar::SyntaxKind::ErrorNode)
    };
    assert!(!parse.errors().is_empty() || !has_broken(parse.syntax()), "silent error in {text:?}");
    assert!(depth(&parse.syntax()) <= (MAX_NESTING + 2) * NODES_A_LEVEL);
}

proptest! {
    #![proptest_config(ProptestConfig {
        cases: 1500,
        failure_persistence: None,
        rng_seed: proptest::test_runner::RngSeed::Fixed(0x00ca_471e),
        ..ProptestConfig::default()
    })]

    #[test]
    fn any_text_is_kept(text in "\\PC*|(?s).{0,200}") {
        check(&text);
    }

    #[test]
    fn any_soup_of_pieces_is_kept(pieces in prop::collection::vec(prop::sample::select(PIECES), 0..120)) {
        check(&pieces.join(" "));
        check(&pieces.concat());
    }

    #[test]
    fn a_damaged_program_is_kept(start in 0usize..2000, length in 0usize..40, piece in prop::sample::select(PIECES)) {
        let program = include_str!("../test_data/parser/ok/whole_program.qasm");
        let start = program.floor_char_boundary(start.min(program.len()));
        let end = program.floor_char_boundary((start + length).min(program.len()));
        check(&format!("{}{piece}{}", &program[..start], &program[end..]));
    }

    #[test]
    fn offsets_survive_the_line_index(text in "[a-c\u{e9}\u{20ac}\u{1d703}\r\n]{0,40}", offset in 0u32..80) {
        let index = LineIndex::new(&text);
        for columns in [Columns::Utf8, Columns::Utf16, Columns::Utf32] {
            let place = index.line_column(&text, offset.into(), columns);
            let back = index.offset(&text, place, columns);
            prop_assert!(text.is_char_boundary(back.into()));
            prop_assert_eq!(index.line_column(&text, back, columns), place);
            let line_end = index.line_range(&text, place.line).end();
            let inside = TextSize::new(text.floor_char_boundary(offset as usize) as u32);
            prop_assert_eq!(back, inside.min(line_end));
        }
    }
}
