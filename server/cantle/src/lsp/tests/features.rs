//! What a user sees and does, on a small invented file: heat along a bench
//! of four seed trays.

use serde_json::{Value, json};

use super::driver::{Editor, applied, place, range, uri};

/// The comment puts characters outside the basic plane in front of what is
/// asked about.
const BENCH: &str = "\
OPENQASM 3.0;
include \"stdgates.inc\";
array[float[64], 4, 4] bench = {{2, -1, 0, 0}, {-1, 2, -1, 0}, {0, -1, 2, -1}, {0, 0, -1, 2}};
gate turn a { h a; }
gate swing a, b { cx a, b; }
/* 𝛼𝛽 */ @cantle.dense bench within 1e-8
gate step t1, t0 {}
gate twice a, b { step a, b; step a, b; }
qubit[2] tray;
h tray;
/* 𝛼𝛽 */ twice tray[1], tray[0];
";

/// What a client says that resolves edits and shows markdown.
fn modern() -> Value {
    json!({
        "textDocument": {
            "hover": { "contentFormat": ["markdown", "plaintext"] },
            "codeAction": { "resolveSupport": { "properties": ["edit"] } },
        },
        "workspace": { "applyEdit": true, "workspaceEdit": { "documentChanges": true } },
    })
}

fn at(text: &str, piece: &str) -> Value {
    let (line, character) = place(text, piece);
    json!({ "textDocument": { "uri": uri("a") }, "position": { "line": line, "character": character } })
}

async fn hover(editor: &mut Editor, text: &str, piece: &str) -> String {
    let answer = editor.ask("textDocument/hover", at(text, piece)).await;
    answer["contents"]["value"].as_str().unwrap_or_default().to_owned()
}

async fn hints(editor: &mut Editor) -> Vec<(u64, String)> {
    let all = range((0, 0), (1000, 0));
    let params = json!({ "textDocument": { "uri": uri("a") }, "range": all });
    let answer = editor.ask("textDocument/inlayHint", params).await;
    let hint = |hint: &Value| {
        let line = hint["position"]["line"].as_u64().expect("a line");
        (line, hint["label"].as_str().expect("a label").to_owned())
    };
    answer.as_array().expect("hints").iter().map(hint).collect()
}

async fn actions(editor: &mut Editor, text: &str, piece: &str, only: Value) -> Vec<Value> {
    let place = place(text, piece);
    let params = json!({
        "textDocument": { "uri": uri("a") },
        "range": range(place, place),
        "context": { "diagnostics": [], "only": only },
    });
    let answer = editor.ask("textDocument/codeAction", params).await;
    answer.as_array().expect("actions").clone()
}

async fn diagnostics(editor: &mut Editor, version: i64) -> Value {
    let fits = |m: &Value| {
        m["method"] == "textDocument/publishDiagnostics" && m["params"]["version"] == version
    };
    editor.wait(fits).await["params"]["diagnostics"].clone()
}

/// Opens a text, as it is after an edit, and checks that the claim in it holds.
async fn check_replaced(text: &str) {
    assert!(text.contains("@cantle.encodes bench"), "{text}");
    assert!(!text.contains("@cantle.dense"), "{text}");
    let mut editor = Editor::start(modern()).await;
    editor.open("a", text).await;
    diagnostics(&mut editor, 1).await;
    let findings = diagnostics(&mut editor, 1).await;
    assert_eq!(findings, json!([]), "{text}");
    let step = place(text, "gate step").0;
    let hints = hints(&mut editor).await;
    let hint = hints.iter().find(|(line, _)| *line == u64::from(step)).expect("a hint");
    assert!(hint.1.starts_with("≈ bench, error "), "{hint:?}");
}

#[tokio::test]
async fn diagnostics_come_in_two_steps_with_the_version() {
    let mut editor = Editor::start(modern()).await;
    editor.open("a", BENCH).await;
    let names = diagnostics(&mut editor, 1).await;
    let all = diagnostics(&mut editor, 1).await;
    assert!(all.as_array().expect("a list").len() >= names.as_array().expect("a list").len());
    editor.change("a", 7, json!([{ "text": "OPENQASM 3.0;\nqubit q;\nnowhere q;\n" }])).await;
    let names = diagnostics(&mut editor, 7).await;
    assert_eq!(names[0]["code"], "unknown-name", "{names}");
    assert_eq!((&names[0]["source"], &names[0]["severity"]), (&json!("cantle"), &json!(1)));
    assert_eq!(names[0]["range"], range((2, 0), (2, 7)));
    let params = json!({ "textDocument": { "uri": uri("a") } });
    editor.tell("textDocument/didClose", params).await;
    let cleared = |m: &Value| {
        m["method"] == "textDocument/publishDiagnostics" && m["params"].get("version").is_none()
    };
    let cleared = editor.wait(cleared).await;
    assert_eq!(cleared["params"]["diagnostics"], json!([]));
}

#[tokio::test]
async fn nothing_stale_is_published() {
    let mut editor = Editor::start(modern()).await;
    editor.open("a", BENCH).await;
    for version in 2..60 {
        let text = format!("{BENCH}nowhere_{version} tray;\n");
        editor.change("a", version, json!([{ "text": text }])).await;
    }
    let mut last = 0;
    loop {
        let message = editor.read().await.expect("goes on");
        if message["method"] != "textDocument/publishDiagnostics" {
            continue;
        }
        let version = message["params"]["version"].as_i64().expect("a version");
        assert!(version >= last, "{version} after {last}");
        let text = message["params"]["diagnostics"].to_string();
        assert!(version == 1 || text.contains(&format!("nowhere_{version}`")), "{text}");
        last = version;
        if version == 59 {
            break;
        }
    }
}

#[tokio::test]
async fn hovers_show_the_operator_in_operand_order() {
    let mut editor = Editor::start(modern()).await;
    editor.open("a", BENCH).await;
    let swing = hover(&mut editor, BENCH, "swing").await;
    assert!(swing.contains("```qasm\ngate swing a, b\n```"), "{swing}");
    assert!(swing.contains("1  0  0  0\n0  1  0  0\n0  0  0  1\n0  0  1  0"), "{swing}");
    assert!(swing.contains("`a` is the most significant bit"), "{swing}");
    assert!(swing.contains("CX 1"), "{swing}");
    let turn = hover(&mut editor, BENCH, "turn").await;
    assert!(turn.contains("0.7071   0.7071\n0.7071  -0.7071"), "{turn}");
    let step = hover(&mut editor, BENCH, "twice tray").await;
    assert!(step.contains("gate twice a, b") && !step.contains("not shown"), "{step}");
    let stand_in = hover(&mut editor, BENCH, "step t1").await;
    assert!(stand_in.contains("Stand-in for `bench`"), "{stand_in}");
    assert!(stand_in.contains("2  -1   0   0\n-1   2  -1   0"), "{stand_in}");
    let entry = hover(&mut editor, BENCH, "2, -1, 0, 0").await;
    assert!(entry.contains("Entry (0, 0) = 2") && entry.contains("‖M‖ = 3.618"), "{entry}");
    let register = hover(&mut editor, BENCH, "tray;").await;
    assert!(register.contains("qubits 0 to 1"), "{register}");
    let claim = hover(&mut editor, BENCH, "@cantle.dense").await;
    assert!(claim.contains("stands for `bench`"), "{claim}");
    assert_eq!(hover(&mut editor, BENCH, "OPENQASM").await, "");
}

#[tokio::test]
async fn plain_text_goes_to_clients_without_markdown() {
    let mut editor = Editor::start(json!({})).await;
    editor.open("a", BENCH).await;
    let answer = editor.ask("textDocument/hover", at(BENCH, "swing")).await;
    assert_eq!(answer["contents"]["kind"], "plaintext");
    let text = answer["contents"]["value"].as_str().expect("a text");
    assert!(text.starts_with("gate swing a, b\n") && !text.contains('`'), "{text}");
}

#[tokio::test]
async fn hints_stand_at_the_end_of_the_heads() {
    for text in [BENCH.to_owned(), BENCH.replace('\n', "\r\n")] {
        let mut editor = Editor::start(modern()).await;
        editor.open("a", &text).await;
        let params = json!({
            "textDocument": { "uri": uri("a") },
            "range": range((0, 0), (1000, 0)),
        });
        let answer = editor.ask("textDocument/inlayHint", params).await;
        assert_eq!(answer[0]["position"], json!({ "line": 3, "character": 11 }));
        let hints = hints(&mut editor).await;
        let lines: Vec<u64> = hints.iter().map(|(line, _)| *line).collect();
        assert_eq!(lines, [3, 4, 6, 7], "{hints:?}");
        assert_eq!(hints[2].1, "stand-in for bench");
    }
}

#[tokio::test]
async fn a_stand_in_is_replaced_by_a_resolved_edit() {
    let mut editor = Editor::start(modern()).await;
    editor.open("a", BENCH).await;
    for piece in ["step t1", "@cantle.dense", "step a, b"] {
        let found = actions(&mut editor, BENCH, piece, json!(["refactor.rewrite"])).await;
        assert!(!found.is_empty(), "{piece}");
        assert!(found.iter().all(|action| action.get("edit").is_none()));
        let title = found[0]["title"].as_str().expect("a title");
        for word in ["Replace `step` by ", "error ", "scale ", "ancilla", " CX"] {
            assert!(title.contains(word), "{title}");
        }
    }
    let found = actions(&mut editor, BENCH, "step t1", json!(null)).await;
    for action in &found {
        let resolved = editor.ask("codeAction/resolve", action.clone()).await;
        let change = &resolved["edit"]["documentChanges"][0];
        assert_eq!(change["textDocument"], json!({ "uri": uri("a"), "version": 1 }));
        check_replaced(&applied(BENCH, &change["edits"])).await;
    }
    assert_eq!(
        actions(&mut editor, BENCH, "step t1", json!(["quickfix"])).await,
        Vec::<Value>::new()
    );
    assert_eq!(actions(&mut editor, BENCH, "turn", json!(["refactor"])).await, Vec::<Value>::new());
    // An edit in between: the choice is for a text that is gone.
    editor.change("a", 2, json!([{ "text": format!("{BENCH}// more\n") }])).await;
    assert_eq!(editor.refused("codeAction/resolve", found[0].clone()).await, -32801);
    // What is complete goes back as it came.
    let complete =
        json!({ "title": "x", "command": { "title": "x", "command": "cantle.replace" } });
    assert_eq!(editor.ask("codeAction/resolve", complete.clone()).await, complete);
}

#[tokio::test]
async fn a_client_that_cannot_resolve_runs_a_command() {
    let capabilities = json!({
        "workspace": { "applyEdit": true, "workspaceEdit": { "documentChanges": true } },
    });
    let mut editor = Editor::start(capabilities).await;
    editor.open("a", BENCH).await;
    let found = actions(&mut editor, BENCH, "step t1", json!(null)).await;
    let command = &found[0]["command"];
    assert_eq!(command["command"], "cantle.replace");
    for applies in [true, false] {
        let params = json!({ "command": "cantle.replace", "arguments": command["arguments"] });
        assert_eq!(editor.ask("workspace/executeCommand", params).await, Value::Null);
        let request = editor.wait(|m| m["method"] == "workspace/applyEdit").await;
        let change = &request["params"]["edit"]["documentChanges"][0];
        check_replaced(&applied(BENCH, &change["edits"])).await;
        let result = json!({ "applied": applies });
        let answer = json!({ "jsonrpc": "2.0", "id": request["id"], "result": result });
        editor.body(&answer.to_string()).await;
    }
    editor.wait(|m| m["method"] == "window/showMessage").await;
    let bad = json!({ "command": "cantle.replace", "arguments": null });
    assert_eq!(editor.refused("workspace/executeCommand", bad).await, -32602);
    let bad = json!({ "command": "rm", "arguments": [] });
    assert_eq!(editor.refused("workspace/executeCommand", bad).await, -32602);
}

#[tokio::test]
async fn a_client_that_can_do_neither_gets_the_edit_at_once() {
    let mut editor = Editor::start(json!({})).await;
    editor.open("a", BENCH).await;
    let found = actions(&mut editor, BENCH, "step t1", json!(null)).await;
    assert!(!found.is_empty());
    for action in found {
        check_replaced(&applied(BENCH, &action["edit"]["changes"][uri("a")])).await;
    }
}

#[tokio::test]
async fn what_is_announced_is_what_the_client_can_use() {
    for (capabilities, resolves, lenses) in [(modern(), true, true), (json!({}), false, false)] {
        let mut editor = Editor::connect();
        let answer = editor.ask("initialize", json!({ "capabilities": capabilities })).await;
        let announced = &answer["capabilities"];
        assert_eq!(announced["codeActionProvider"]["resolveProvider"], resolves);
        assert_eq!(announced["codeLensProvider"].is_object(), lenses);
        assert_eq!(announced["executeCommandProvider"]["commands"], json!(["cantle.replace"]));
    }
}

#[tokio::test]
async fn names_lead_to_their_declarations_and_uses() {
    let mut editor = Editor::start(json!({})).await;
    editor.open("a", BENCH).await;
    let declared = editor.ask("textDocument/definition", at(BENCH, "twice tray")).await;
    let start = place(BENCH, "twice a");
    assert_eq!(declared["range"], range(start, (start.0, start.1 + 5)));
    let mut params = at(BENCH, "step t1");
    params["context"] = json!({ "includeDeclaration": true });
    let uses = editor.ask("textDocument/references", params).await;
    assert_eq!(uses.as_array().expect("uses").len(), 3, "{uses}");
    let params = json!({ "textDocument": { "uri": uri("a") } });
    let symbols = editor.ask("textDocument/documentSymbol", params).await;
    let names: Vec<&str> =
        symbols.as_array().expect("symbols").iter().filter_map(|s| s["name"].as_str()).collect();
    assert_eq!(names, ["bench", "turn", "swing", "step", "twice", "tray"]);
    let offered = editor.ask("textDocument/completion", at(BENCH, "tray;")).await;
    let labels: Vec<&str> =
        offered.as_array().expect("items").iter().filter_map(|i| i["label"].as_str()).collect();
    assert!(["h", "cx", "step", "tray", "bench"].iter().all(|name| labels.contains(name)));
}

#[tokio::test]
async fn a_quick_fix_mends_what_it_is_offered_for() {
    let text = "OPENQASM 3.0;\nqubit q;\nh q;\n";
    let mut editor = Editor::start(json!({})).await;
    editor.open("a", text).await;
    let found = diagnostics(&mut editor, 1).await;
    assert_eq!(found[0]["code"], "unknown-name", "{found}");
    let fixes = actions(&mut editor, text, "h q", json!(["quickfix"])).await;
    assert_eq!(fixes[0]["kind"], "quickfix", "{fixes:?}");
    assert_eq!(fixes[0]["diagnostics"][0], found[0]);
    let mended = applied(text, &fixes[0]["edit"]["changes"][uri("a")]);
    assert!(mended.contains("include \"stdgates.inc\";"), "{mended}");
    editor.change("a", 2, json!([{ "text": mended }])).await;
    assert_eq!(diagnostics(&mut editor, 2).await, json!([]));
}
