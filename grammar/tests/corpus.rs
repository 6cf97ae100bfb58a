//! The corpus: each source in `test_data` stands beside the dump of what is
//! made of it. Those in `ok` have no error, those in `err` at least one.
//!
//! Setting `UPDATE_EXPECT=1` rewrites the dumps.

#![allow(clippy::unwrap_used)]

use grammar::{Parse, parse};
use std::fmt::Write;
use std::path::{Path, PathBuf};

/// One line a token, then the errors.
fn dump_tokens(parse: &Parse) -> String {
    let tokens = parse.syntax().descendants_with_tokens().filter_map(|it| it.into_token());
    let mut dump = String::new();
    for token in tokens {
        let _ = writeln!(dump, "{:?} {:?}", token.kind(), token.text());
    }
    dump + &dump_errors(parse)
}

/// The tree without its white space, then the errors.
fn dump_tree(parse: &Parse) -> String {
    let tree = format!("{:#?}", parse.syntax());
    let lines = tree.lines().filter(|line| !line.trim_start().starts_with("Whitespace@"));
    let mut dump = String::new();
    for line in lines {
        let _ = writeln!(dump, "{line}");
    }
    dump + &dump_errors(parse)
}

fn dump_errors(parse: &Parse) -> String {
    let mut dump = String::new();
    for error in parse.errors() {
        let _ = write!(dump, "error {:?}: {}", error.range, error.message);
        for fix in &error.fix {
            let _ = write!(dump, "; insert {:?} at {:?}", fix.text, fix.offset);
        }
        dump.push('\n');
    }
    dump
}

fn sources(folder: &str) -> Vec<PathBuf> {
    let root = Path::new(env!("CARGO_MANIFEST_DIR")).join("test_data").join(folder);
    let entries = std::fs::read_dir(&root).unwrap();
    let mut paths: Vec<_> = entries.map(|entry| entry.unwrap().path()).collect();
    paths.retain(|path| path.extension().is_some_and(|extension| extension == "qasm"));
    paths.sort();
    assert!(!paths.is_empty(), "no source in {}", root.display());
    paths
}

fn check(part: &str, dump: fn(&Parse) -> String) {
    for (verdict, has_errors) in [("ok", false), ("err", true)] {
        for source in sources(&format!("{part}/{verdict}")) {
            let text = std::fs::read_to_string(&source).unwrap();
            let parse = parse(&text);
            let place = source.display();
            assert_eq!(parse.syntax().text(), text.as_str(), "{place}");
            let errors = parse.errors();
            assert_eq!(!errors.is_empty(), has_errors, "{place}: {errors:?}");
            expect_test::expect_file![source.with_extension("txt")].assert_eq(&dump(&parse));
        }
    }
}

#[test]
fn tokens_are_as_recorded() {
    check("lexer", dump_tokens);
}

#[test]
fn trees_are_as_recorded() {
    check("parser", dump_tree);
}
