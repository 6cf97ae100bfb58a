//! The typed views find the parts they name, and none in a broken file.

#![allow(clippy::unwrap_used)]

use grammar::nodes::*;
use grammar::parse;

/// The first statement of a text, as this view.
fn first<N: AstNode<Language = grammar::OpenQasm>>(text: &str) -> N {
    let found = parse(text).syntax().descendants().find_map(N::cast);
    found.unwrap_or_else(|| panic!("no such node in {text}"))
}

fn texts<N: NodeExt>(nodes: impl IntoIterator<Item = N>) -> Vec<String> {
    nodes.into_iter().map(|node| node.text()).collect()
}

#[test]
fn a_gate_has_its_parts() {
    let text = "@cantle.dense M within 1e-8\n@note\ngate g(a, b) q, r /* here */ { h q; x r; }";
    let gate: GateDefinition = first(text);
    assert_eq!(gate.name().unwrap().name(), "g");
    assert_eq!(texts(gate.parameters()), ["a", "b"]);
    assert_eq!(texts(gate.operands()), ["q", "r"]);
    assert_eq!(&text[..usize::from(gate.head_end())], text.split(" /*").next().unwrap());
    assert_eq!(gate.body().unwrap().statements().count(), 2);
    let annotations: Vec<_> = gate.annotations().collect();
    assert_eq!(annotations[0].name(), "cantle.dense");
    assert_eq!(annotations[0].content().unwrap().text(), "M within 1e-8");
    assert_eq!(&text[annotations[0].range()], "@cantle.dense M within 1e-8");
    assert!(annotations[1].content().is_none());
    assert_eq!(gate.range().start(), 0.into());
}

#[test]
fn a_broken_gate_has_what_is_there() {
    let text = "gate g(a ";
    let gate: GateDefinition = first(text);
    assert_eq!(texts(gate.parameters()), ["a"]);
    assert!(gate.body().is_none() && gate.operands().is_empty());
    assert_eq!(gate.head_end(), 8.into());
}

#[test]
fn a_call_has_its_parts() {
    let call: GateCall = first("ctrl(2) @ inv @ pow(-1) @ g(a, 1)[5ns] q, r[0][1:2], $3;");
    let kinds: Vec<_> = call.modifiers().filter_map(|modifier| modifier.kind()).collect();
    assert_eq!(kinds, [ModifierKind::Ctrl, ModifierKind::Inv, ModifierKind::Pow]);
    let counts: Vec<_> = call.modifiers().filter_map(|modifier| modifier.argument()).collect();
    assert_eq!(texts(counts), ["2", "-1"]);
    assert_eq!(call.name().unwrap().name(), "g");
    assert_eq!(texts(call.arguments()), ["a", "1"]);
    assert_eq!(call.designator().unwrap().text(), "[5ns]");
    let operands = call.operands();
    assert_eq!(texts(operands.clone()), ["q", "r[0][1:2]", "$3"]);
    assert_eq!(operands[1].name().unwrap().name(), "r");
    assert_eq!(texts(operands[1].indices()), ["[0]", "[1:2]"]);
    assert_eq!(operands[2].hardware_qubit().unwrap().text(), "$3");
}

#[test]
fn a_range_knows_its_parts() {
    let table: [(&str, [Option<&str>; 3]); 7] = [
        (":", [None, None, None]),
        ("1:", [Some("1"), None, None]),
        (":2", [None, None, Some("2")]),
        ("1:2", [Some("1"), None, Some("2")]),
        ("::2", [None, None, Some("2")]),
        ("1:3:", [Some("1"), Some("3"), None]),
        ("1:3:2", [Some("1"), Some("3"), Some("2")]),
    ];
    for (source, expected) in table {
        let range: RangeExpression = first(&format!("x[{source}];"));
        let parts = [range.start(), range.step(), range.stop()];
        let parts = parts.map(|part| part.map(|part| part.text()));
        assert_eq!(parts, expected.map(|part| part.map(str::to_owned)), "{source}");
    }
}

#[test]
fn an_array_has_rows_and_sizes() {
    let text = "array[complex[float[64]], 2, n + 1] m = {{1, -2im}, {f(3), 4}};";
    let declaration: ClassicalDeclaration = first(text);
    let Some(Type::Array(array)) = declaration.ty() else { panic!("no array type") };
    assert_eq!(array.element().unwrap().part().unwrap().text(), "float[64]");
    assert_eq!(texts(array.sizes()), ["2", "n + 1"]);
    let Some(Initialiser::Array(literal)) = declaration.value() else { panic!("no literal") };
    let rows = literal.elements().map(|row| match row {
        Element::Row(row) => texts(row.elements()),
        Element::Expression(_) => panic!("an entry instead of a row"),
    });
    assert_eq!(rows.collect::<Vec<_>>(), [["1", "-2im"], ["f(3)", "4"]]);
}

#[test]
fn literals_say_their_values() {
    let table = [
        ("1_000", LiteralValue::Integer(Some(1000))),
        ("0xfF", LiteralValue::Integer(Some(255))),
        ("0b1_01", LiteralValue::Integer(Some(5))),
        ("0o17", LiteralValue::Integer(Some(15))),
        ("007", LiteralValue::Integer(Some(7))),
        ("340282366920938463463374607431768211456", LiteralValue::Integer(None)),
        ("1.", LiteralValue::Float(1.0)),
        (".5e1", LiteralValue::Float(5.0)),
        ("1_0e1_0", LiteralValue::Float(1e11)),
        ("2.5 im", LiteralValue::Imaginary(2.5)),
        ("1e3im", LiteralValue::Imaginary(1000.0)),
        ("10 ns", LiteralValue::Timing(10.0, TimeUnit::Nano)),
        ("1.5µs", LiteralValue::Timing(1.5, TimeUnit::Micro)),
        ("1E-3μs", LiteralValue::Timing(1e-3, TimeUnit::Micro)),
        ("3us", LiteralValue::Timing(3.0, TimeUnit::Micro)),
        ("3ms", LiteralValue::Timing(3.0, TimeUnit::Milli)),
        ("2dt", LiteralValue::Timing(2.0, TimeUnit::Step)),
        ("2s", LiteralValue::Timing(2.0, TimeUnit::Second)),
        ("\"0_1\"", LiteralValue::Bits(vec![false, true])),
        ("true", LiteralValue::Bool(true)),
        ("$12", LiteralValue::HardwareQubit(Some(12))),
        ("$99999999999999999999", LiteralValue::HardwareQubit(None)),
    ];
    for (source, expected) in table {
        let literal: Literal = first(&format!("x = {source};"));
        assert_eq!(literal.value(), Some(expected), "{source}");
    }
}

#[test]
fn control_flow_has_its_parts() {
    let branch: IfStatement = first("if (a == 1) x q; else { y q; }");
    assert_eq!(branch.condition().unwrap().text(), "a == 1");
    assert_eq!(branch.then_branch().unwrap().text(), "x q;");
    assert_eq!(branch.else_branch().unwrap().text(), "{ y q; }");
    let lonely: IfStatement = first("if (a) { x q; }");
    assert!(lonely.else_branch().is_none());

    let repeat: ForStatement = first("for uint[8] i in [0:2:n] { x q[i]; }");
    assert_eq!(repeat.ty().unwrap().keyword().unwrap().text(), "uint");
    assert_eq!(repeat.variable().unwrap().name(), "i");
    assert_eq!(repeat.iterated().unwrap().text(), "0:2:n");
    assert!(matches!(repeat.body(), Some(Statement::Block(_))));

    let choice: SwitchStatement = first("switch (n) { case 0, 1 { x q; } default { } }");
    assert_eq!(choice.selector().unwrap().text(), "n");
    assert_eq!(texts(choice.cases().next().unwrap().values()), ["0", "1"]);
    assert!(choice.default().is_some());
}

#[test]
fn measurements_and_assignments_have_their_parts() {
    let arrow: MeasureStatement = first("measure q[0] -> c[1];");
    assert_eq!(arrow.operand().unwrap().text(), "q[0]");
    assert_eq!(arrow.target().unwrap().text(), "c[1]");

    let assignment: AssignmentStatement = first("c[0] ^= measure q;");
    assert_eq!(assignment.target().unwrap().text(), "c[0]");
    assert_eq!(assignment.operator().unwrap().text(), "^=");
    assert!(matches!(assignment.value(), Some(Initialiser::Measure(_))));

    let phase: GphaseCall = first("ctrl @ gphase(pi / 2) q;");
    assert_eq!(texts(phase.arguments()), ["pi / 2"]);
    assert_eq!(texts(phase.operands()), ["q"]);
}

#[test]
fn the_head_of_a_file_is_read() {
    let root = parse("OPENQASM 3.1;\ninclude 'a b.inc';\npragma x y \n").root();
    assert_eq!(root.version().unwrap().number().unwrap().text(), "3.1");
    let statements: Vec<_> = root.statements().collect();
    let Statement::Include(include) = &statements[0] else { panic!("no include") };
    assert_eq!(include.path().unwrap(), "a b.inc");
    let Statement::Pragma(pragma) = &statements[1] else { panic!("no pragma") };
    assert_eq!(pragma.content().unwrap().text(), "x y ");
}

#[test]
fn a_parse_can_be_shared_between_threads() {
    fn is_shared<T: Send + Sync + Clone>(_: &T) {}
    is_shared(&parse("x q;"));
}
