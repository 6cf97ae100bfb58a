//! Precedence and grouping: each expression with all its parentheses written.

#![allow(clippy::unwrap_used)]

use grammar::nodes::{AstNode, Expression, Initialiser, NodeExt, Statement};
use grammar::parse;

/// The expression with one pair of parentheses around each operation.
fn grouped(expression: &Expression) -> String {
    match expression {
        Expression::Unary(unary) => {
            let operator = unary.operator().unwrap();
            format!("({}{})", operator.text(), grouped(&unary.operand().unwrap()))
        }
        Expression::Binary(binary) => {
            let operator = binary.operator().unwrap();
            let left = grouped(&binary.left().unwrap());
            let right = match binary.set() {
                Some(set) => set.text(),
                None => grouped(&binary.right().unwrap()),
            };
            format!("({left} {} {right})", operator.text())
        }
        Expression::Index(index) => {
            format!("({}{})", grouped(&index.base().unwrap()), index.index().unwrap().text())
        }
        other => other.syntax().text().to_string(),
    }
}

fn check(source: &str, expected: &str) {
    let parse = parse(&format!("x = {source};"));
    assert!(parse.errors().is_empty(), "{source}: {:?}", parse.errors());
    let Some(Statement::Assignment(statement)) = parse.root().statements().next() else {
        panic!("{source} is no assignment")
    };
    let Some(Initialiser::Expression(value)) = statement.value() else {
        panic!("{source} is no expression")
    };
    assert_eq!(grouped(&value), expected, "{source}");
}

#[test]
fn operators_group_as_the_standard_says() {
    let table = [
        ("a + b * c", "(a + (b * c))"),
        ("a - b - c", "((a - b) - c)"),
        ("a / b * c % d", "(((a / b) * c) % d)"),
        ("a ** b ** c", "(a ** (b ** c))"),
        ("-a ** b", "(-(a ** b))"),
        ("a ** -b ** c", "(a ** (-(b ** c)))"),
        ("a ** -b * c", "((a ** (-b)) * c)"),
        ("!a == b", "((!a) == b)"),
        ("-a * ~b", "((-a) * (~b))"),
        ("--a", "(-(-a))"),
        ("-a[0]", "(-(a[0]))"),
        ("a[0][1] ** 2", "(((a[0])[1]) ** 2)"),
        ("a & b == c", "(a & (b == c))"),
        ("a | b ^ c & d", "(a | (b ^ (c & d)))"),
        ("a || b && c | d", "(a || (b && (c | d)))"),
        ("a < b < c", "((a < b) < c)"),
        ("a == b < c", "(a == (b < c))"),
        ("a << b + c >> d", "((a << (b + c)) >> d)"),
        ("a < b << c", "(a < (b << c))"),
        ("a != b || c >= d", "((a != b) || (c >= d))"),
        ("i in {0, 3} == b", "((i in {0, 3}) == b)"),
        ("f(a)[0] + int[8](b)", "((f(a)[0]) + int[8](b))"),
    ];
    for (source, expected) in table {
        check(source, expected);
    }
}
