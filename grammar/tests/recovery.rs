//! A broken statement never hides the ones after it: whatever stands before,
//! the last two statements are read.

#![allow(clippy::unwrap_used)]

use grammar::SyntaxKind;
use grammar::parse;

const BROKEN: &[&str] = &[
    "h q",
    "h",
    "foo bar baz",
    "qubit",
    "qubit[2",
    "int x =",
    "int x = = 3;",
    "int x = (1 + 2",
    "const = 3;",
    "array[float, 2, 2] m = {{1, 2 3}, {4}};",
    "array[float, 2, 2] m = {{1, 2}, {3, 4}",
    "array[float, 2] m = {1, };;",
    "gate",
    "gate g {}",
    "gate g q h q; }",
    "gate g(a q { h q; }",
    "gate g q { h q; ) }",
    "gate g q { foo bar baz }",
    "ctrl @",
    "ctrl x q;",
    "ctrl(2 @ x q;",
    "cx q[0] q[1];",
    "cx q[0, q[1];",
    "for int i in { x q;",
    "for int i [0:3] { }",
    "if (a { x q; }",
    "if a",
    "while",
    "box x q;",
    "let a =",
    "let = q;",
    "measure",
    "measure q ->",
    "reset",
    "x = 1 +",
    "x = [1, 2];",
    "include 3;",
    "@note\n{ }",
    "}",
    ")",
    "; ;",
    "\"text\"",
    "\"text",
    "$",
    "def f( { }",
    "def f(int a -> bit { }",
    "extern f(",
    "switch (a) { x q; }",
    "else { x q; }",
    "case 1 { }",
    "input float",
    "é\u{301}",
];

#[test]
fn later_statements_are_read() {
    for broken in BROKEN {
        let text = format!("{broken}\ninclude \"a.inc\";\nreset last;\n");
        let parse = parse(&text);
        assert!(!parse.errors().is_empty(), "{broken}");
        let kinds: Vec<_> = parse.syntax().descendants().map(|node| node.kind()).collect();
        for kind in [SyntaxKind::IncludeStatement, SyntaxKind::ResetStatement] {
            assert!(kinds.contains(&kind), "{kind:?} is lost after {broken:?}");
        }
        let behind = text.find("\ninclude").unwrap() as u32 + 1;
        let late: Vec<_> =
            parse.errors().iter().filter(|error| u32::from(error.range.start()) > behind).collect();
        let is_open = broken.contains('{') && !broken.contains('}');
        assert!(is_open || late.is_empty(), "{broken:?} blames what follows: {late:?}");
    }
}

#[test]
fn one_mistake_is_one_error() {
    for broken in ["h q", "if (a { x q; }", "cx q[0] q[1];", "int x = = 3;", "x = 1 +", "gate g {}"]
    {
        let parse = parse(&format!("{broken}\nreset last;"));
        assert_eq!(parse.errors().len(), 1, "{broken}: {:?}", parse.errors());
    }
}

#[test]
fn a_missing_brace_ends_before_the_next_gate() {
    let parse = parse("gate a q { h q;\ngate b q { x q; }\n");
    let top = parse.syntax().children().map(|node| node.kind()).collect::<Vec<_>>();
    assert_eq!(top, [SyntaxKind::GateDefinition, SyntaxKind::GateDefinition]);
}

#[test]
fn applying_the_fix_mends_the_text() {
    let texts = [
        "h q\nx q;",
        "const n = 8;",
        "const n = -8.5;",
        "gphase -pi / 2;",
        "ctrl @x q, r;",
        "defcal g $0 $1 { }",
        "for i in [0:3] { }",
        "if (a { x q; }",
        "x q[0;",
        "gate g q { h q;\n",
        "/* open",
        "include \"a.inc;\n",
    ];
    for text in texts {
        let errors = parse(text).errors().to_vec();
        let mut insertions: Vec<_> = errors.iter().flat_map(|error| error.fix.clone()).collect();
        assert!(!insertions.is_empty(), "{text}");
        insertions.sort_by_key(|insertion| insertion.offset);
        let mut mended = text.to_owned();
        for insertion in insertions.iter().rev() {
            mended.insert_str(insertion.offset.into(), &insertion.text);
        }
        assert!(parse(&mended).errors().is_empty(), "{mended}: {:?}", parse(&mended).errors());
    }
}
