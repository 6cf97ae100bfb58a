//! Inputs without end: each gives one clear error or a few, never a stack
//! overflow, on a thread with a small stack.

#![allow(clippy::unwrap_used)]

use grammar::{MAX_NESTING, SyntaxNode, parse};

/// Far more levels than any limit.
const MANY: usize = 100_000;

/// A stack smaller than that of any thread of a server.
const SMALL_STACK: usize = 1 << 20;

/// A visit by recursion, as users of the tree do it.
fn recursive_depth(node: &SyntaxNode) -> usize {
    1 + node.children().map(|child| recursive_depth(&child)).max().unwrap_or(0)
}

/// Parses on a small stack; gives the messages.
fn messages(text: String) -> Vec<String> {
    let work = move || {
        let parse = parse(&text);
        assert_eq!(parse.syntax().text(), text.as_str());
        assert!(recursive_depth(&parse.syntax()) <= 4 * (MAX_NESTING + 2));
        parse.errors().iter().map(|error| error.message.clone()).collect()
    };
    let thread = std::thread::Builder::new().stack_size(SMALL_STACK).spawn(work);
    thread.unwrap().join().unwrap()
}

#[test]
fn deep_input_is_one_error() {
    let wrapped = |before: &str, middle: &str, after: &str| {
        format!("{}{middle}{}", before.repeat(MANY), after.repeat(MANY))
    };
    let texts = [
        format!("x = {};", wrapped("(", "1", ")")),
        format!("x = {};", wrapped("1 + ", "1", "")),
        format!("x = {};", wrapped("2 ** ", "1", "")),
        format!("x = {};", wrapped("-", "1", "")),
        format!("x = {};", wrapped("f(", "1", ")")),
        format!("x = a{};", "[0]".repeat(MANY)),
        format!("x = {};", wrapped("a[", "0", "]")),
        format!("array[int, 2] a = {};", wrapped("{", "", "}")),
        format!("{} x;", wrapped("complex[", "float", "]")),
        wrapped("{", "", "}"),
        wrapped("if (a) {", "", "}"),
        format!("{} x q;", "if (a) x q; else ".repeat(MANY)),
    ];
    for text in texts {
        let start: String = text.chars().take(24).collect();
        let found = messages(format!("{text}\nint y = ;"));
        let deep = found.iter().filter(|message| message.contains("nested more than")).count();
        assert!((1..=2).contains(&deep), "{start}: {found:?}");
        // The statement behind it is read as ever.
        assert_eq!(found.len(), deep + 1, "{start}: {found:?}");
        assert_eq!(found[found.len() - 1], "expected an expression, found `;`", "{start}");
    }
}

#[test]
fn a_sum_inside_a_sum_counts_all_levels() {
    let sum = format!("(1{})", " + 1".repeat(MAX_NESTING / 2));
    let text = format!("x = {sum};");
    assert!(messages(text).is_empty());
    let text = format!("x = {}{};", "(".repeat(MAX_NESTING / 2), sum.clone());
    assert!(!messages(text).is_empty());
    // The parts on the left are below all operators on the right.
    let text = format!("x = f({sum}){};", " + 1".repeat(MAX_NESTING / 2));
    assert!(messages(text)[0].contains("nested more than"));
}

#[test]
fn unclosed_input_ends() {
    for piece in ["{", "(", "a[", "durationof({ ", "switch (a) { case 1 {", "for int i in ", "@a\n"]
    {
        assert!(!messages(piece.repeat(MANY / 10)).is_empty(), "{piece}");
    }
}

#[test]
fn long_but_flat_input_has_no_error() {
    let list = "1, ".repeat(MANY);
    assert!(messages(format!("array[int, 9] a = {{{list}}};")).is_empty());
    assert!(messages("x q;\n".repeat(MANY)).is_empty());
    assert!(messages(format!("{} x q;", "ctrl @ ".repeat(MANY))).is_empty());
}
