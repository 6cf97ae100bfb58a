//! The formatter: recorded results, and what holds for every source. Setting
//! `UPDATE_EXPECT=1` rewrites the records.

#![allow(clippy::unwrap_used)]

use grammar::{SyntaxKind, format, formatted, parse};
use proptest::prelude::*;
use std::path::{Path, PathBuf};

fn sources(folder: &Path) -> Vec<PathBuf> {
    let entries = std::fs::read_dir(folder).unwrap().map(|entry| entry.unwrap().path());
    let mut found = Vec::new();
    for path in entries {
        if path.is_dir() {
            found.extend(sources(&path));
        } else if path.extension().is_some_and(|extension| extension == "qasm") {
            found.push(path);
        }
    }
    found.sort();
    found
}

fn test_data() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("test_data")
}

/// The tokens without white space.
fn tokens(text: &str) -> Vec<(SyntaxKind, String)> {
    let tokens = parse(text).syntax().descendants_with_tokens().filter_map(|it| it.into_token());
    let solid = tokens.filter(|token| token.kind() != SyntaxKind::Whitespace);
    solid.map(|token| (token.kind(), token.text().to_owned())).collect()
}

/// What holds for any text; gives the formatted one.
fn check(text: &str) -> String {
    let once = formatted(&parse(text));
    assert_eq!(tokens(&once), tokens(text), "tokens of {text:?}");
    let twice = formatted(&parse(&once));
    assert_eq!(twice, once, "not stable: {text:?}");
    let errors = |text: &str| parse(text).errors().is_empty();
    assert_eq!(errors(&once), errors(text), "validity of {text:?}");
    once
}

#[test]
fn results_are_as_recorded() {
    for source in sources(&test_data().join("format/ok")) {
        let text = std::fs::read_to_string(&source).unwrap();
        expect_test::expect_file![source.with_extension("txt")].assert_eq(&check(&text));
    }
}

#[test]
fn every_source_keeps_its_tokens() {
    let sources = sources(&test_data());
    assert!(sources.len() > 20);
    for source in sources {
        check(&std::fs::read_to_string(&source).unwrap());
    }
}

#[test]
fn line_breaks_stay_of_their_kind() {
    assert_eq!(check("x q;\r\n\r\n\r\n\r\ny q;"), "x q;\r\n\r\ny q;\r\n");
    assert_eq!(check("x q;y q;\r"), "x q;\ry q;\r");
    assert_eq!(check("\u{feff}  x   q;"), "\u{feff}  x q;\n");
    assert_eq!(check(""), "");
}

#[test]
fn numbers_are_not_glued_to_names() {
    // On one line, `1` and `s` would be a duration.
    assert_eq!(check("for int i in 1\ns q;"), "for int i in 1\n    s q;\n");
}

#[test]
fn broken_statements_stay() {
    assert_eq!(check("x   q;\ny   q z;\nx   q;\n"), "x q;\ny   q z;\nx q;\n");
}

#[test]
fn changes_lie_between_tokens() {
    let text = "x   q ;y q;";
    let changes = format(&parse(text));
    assert!(changes.len() >= 3);
    for change in changes {
        assert!(text[change.range].chars().all(char::is_whitespace));
    }
}

const PIECES: &[&str] = &[
    "gate g q",
    "{",
    "}",
    "x q",
    ";",
    ";\n",
    "\n",
    "  ",
    "// note\n",
    "/* note */",
    "@a b\n",
    "if (a)",
    "else",
    "for int i in [0:2]",
    "array[int, 2, 2] m =",
    "{1, 2}",
    "{{1, 22},\n{333, 4}}",
    ",",
    "(",
    ")",
    "a",
    "1",
    "=",
    "-",
    "switch (a) {",
    "case 1 {",
    "default {",
    "pragma p\n",
    "box",
    "ctrl @",
    "def f(int a) {",
    "cal {",
    "'",
    "\r\n",
    "let b = c ++ d;",
    "measure q -> c;",
    "return",
    "[0]",
];

proptest! {
    #![proptest_config(ProptestConfig {
        cases: 1500,
        failure_persistence: None,
        rng_seed: proptest::test_runner::RngSeed::Fixed(0x00ca_471e),
        ..ProptestConfig::default()
    })]

    #[test]
    fn any_soup_is_stable(pieces in prop::collection::vec(prop::sample::select(PIECES), 0..40)) {
        check(&pieces.join(" "));
    }

    #[test]
    fn valid_statements_are_stable(pieces in prop::collection::vec(prop::sample::select(STATEMENTS), 0..25)) {
        let text = format!("x   q;\n{}", pieces.concat());
        prop_assert!(parse(&text).errors().is_empty());
        // The formatter changes nothing at all if it would change a token.
        prop_assert!(check(&text).starts_with("x q;"));
    }
}

/// Statements and what may stand between any two of them.
const STATEMENTS: &[&str] = &[
    "x q;",
    "\n",
    "\n\n\n",
    " ",
    "// note\n",
    "/* note */",
    "/* two\nlines */ ",
    "@a b\n@c\nh q;",
    "if (a) x q; else y q;",
    "if (a)\nx q;\nelse\ny q;",
    "if (a) { x q; } else { y q; }",
    "{ }",
    "{x q;\n{y q;}}",
    "gate g q { h q; }",
    "gate g q\n{\nh q; // last\n}",
    "pragma p\n",
    "for int i in [0:2] x q;",
    "for int i in {0,1}\n// note\nx q;",
    "array[int,2,2] m={{1,2},\n{33,4}};",
    "array[int,2] m={1,\n2};",
    "call(1,\n2) q,\nr;",
    "switch(a){case 1{}default{x q;}}",
    "switch(a){ // note\ncase 1\n{}\n}",
    "box\n{x q;}",
    "a=b\n+c;",
    "x /* in */ q /* out */;",
    "cal { a\n }",
    "x // mid\nq;",
    "while (a) { /* only */ }",
    "def f() -> bit { return measure q; }",
];
