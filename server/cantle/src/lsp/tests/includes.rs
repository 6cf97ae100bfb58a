//! Files that include each other, on disk and in open buffers.

use std::path::Path;

use serde_json::{Value, json};
use tower_lsp::lsp_types::Url;

use super::driver::{Editor, range};

const MAIN: &str = "OPENQASM 3.0;\ninclude \"bench.inc\";\nqubit tray;\nwarm tray;\n";

fn file(home: &Path, name: &str) -> String {
    Url::from_file_path(home.join(name)).expect("an absolute path").to_string()
}

/// The codes of the newest diagnostics of a text, once both steps are there.
async fn codes(editor: &mut Editor, uri: &str) -> Vec<String> {
    let mut last = Vec::new();
    for _ in 0..2 {
        let published = |m: &Value| {
            m["method"] == "textDocument/publishDiagnostics" && m["params"]["uri"] == uri
        };
        let message = editor.wait(published).await;
        let list = message["params"]["diagnostics"].as_array().expect("a list").clone();
        last = list.iter().map(|d| d["code"].as_str().unwrap_or_default().to_owned()).collect();
    }
    last
}

#[tokio::test]
async fn an_open_include_takes_the_place_of_the_disk_and_edits_reach_those_who_include_it() {
    let home = tempfile::tempdir().expect("a directory");
    let (main, bench) = (file(home.path(), "main.qasm"), file(home.path(), "bench.inc"));
    let mut editor = Editor::start(json!({})).await;
    editor.open_at(&main, MAIN).await;
    let missing = codes(&mut editor, &main).await;
    assert!(missing.contains(&"include-not-found".to_owned()), "{missing:?}");
    // It appears on disk.
    std::fs::write(home.path().join("bench.inc"), "gate warm a {}\n").expect("written");
    let saved = json!({ "textDocument": { "uri": bench } });
    editor.tell("textDocument/didSave", saved).await;
    assert_eq!(codes(&mut editor, &main).await, Vec::<String>::new());
    // It is opened with another content, edited back, and closed.
    editor.open_at(&bench, "gate cool a {}\n").await;
    assert_eq!(codes(&mut editor, &main).await, ["unknown-name"]);
    let document = json!({ "uri": bench, "version": 2 });
    let change = json!([{ "range": range((0, 5), (0, 9)), "text": "warm" }]);
    let params = json!({ "textDocument": document, "contentChanges": change });
    editor.tell("textDocument/didChange", params).await;
    assert_eq!(codes(&mut editor, &main).await, Vec::<String>::new());
    // A declaration in the included file is found there.
    let at = json!({ "line": 3, "character": 1 });
    let params = json!({ "textDocument": { "uri": main }, "position": at });
    let declared = editor.ask("textDocument/definition", params).await;
    assert_eq!(declared, json!({ "uri": bench, "range": range((0, 5), (0, 9)) }));
    std::fs::remove_file(home.path().join("bench.inc")).expect("removed");
    let closed = json!({ "textDocument": { "uri": bench } });
    editor.tell("textDocument/didClose", closed).await;
    let missing = codes(&mut editor, &main).await;
    assert!(missing.contains(&"include-not-found".to_owned()), "{missing:?}");
}

#[tokio::test]
async fn a_text_that_is_no_file_is_served() {
    let mut editor = Editor::start(json!({})).await;
    editor.open_at("untitled:Untitled-1", "OPENQASM 3.0;\nqubit a;\nnowhere a;\n").await;
    assert_eq!(codes(&mut editor, "untitled:Untitled-1").await, ["unknown-name"]);
}

#[tokio::test]
async fn what_is_wrong_with_an_include_is_said_there_while_it_is_not_open() {
    let home = tempfile::tempdir().expect("a directory");
    std::fs::write(home.path().join("bench.inc"), "gate warm a { nowhere a; }\n").expect("written");
    let (main, bench) = (file(home.path(), "main.qasm"), file(home.path(), "bench.inc"));
    let mut editor = Editor::start(json!({})).await;
    editor.open_at(&main, MAIN).await;
    assert_eq!(codes(&mut editor, &main).await, Vec::<String>::new());
    assert_eq!(codes(&mut editor, &bench).await, ["unknown-name"]);
    // Once open, it speaks for itself; closed, its includer speaks again.
    editor.open_at(&bench, "gate warm a {}\n").await;
    assert_eq!(codes(&mut editor, &bench).await, Vec::<String>::new());
    assert_eq!(codes(&mut editor, &main).await, Vec::<String>::new());
    editor.tell("textDocument/didClose", json!({ "textDocument": { "uri": bench } })).await;
    assert_eq!(codes(&mut editor, &bench).await, ["unknown-name"]);
    // The includer is closed: nothing is left.
    editor.tell("textDocument/didClose", json!({ "textDocument": { "uri": main } })).await;
    let cleared =
        |m: &Value| m["params"]["uri"] == bench.as_str() && m["params"]["diagnostics"] == json!([]);
    editor.wait(cleared).await;
}
