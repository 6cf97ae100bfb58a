//! The beginning and the end of a session, cancellation, panics.

use serde_json::{Value, json};

use super::driver::{Editor, uri};

#[tokio::test]
async fn only_initialize_is_served_first() {
    let mut editor = Editor::connect();
    assert_eq!(editor.refused("textDocument/hover", json!({})).await, -32002);
    assert_eq!(editor.refused("shutdown", Value::Null).await, -32002);
    assert_eq!(editor.refused("initialize", json!([])).await, -32602);
    let answer = editor.ask("initialize", json!({ "capabilities": {} })).await;
    assert_eq!(answer["capabilities"]["positionEncoding"], "utf-16");
    assert_eq!(answer["capabilities"]["textDocumentSync"]["change"], 2);
    assert_eq!(answer["capabilities"].get("diagnosticProvider"), None);
    assert_eq!(answer["serverInfo"]["name"], "cantle");
    assert_eq!(editor.refused("initialize", json!({ "capabilities": {} })).await, -32600);
    assert_eq!(editor.refused("no/such/method", json!({})).await, -32601);
}

#[tokio::test]
async fn an_encoding_the_client_names_is_chosen() {
    for (named, chosen) in [
        (json!(["utf-16"]), "utf-16"),
        (json!(["utf-16", "utf-8"]), "utf-8"),
        (json!(["utf-32"]), "utf-32"),
        (json!(["ebcdic"]), "utf-16"),
        (json!("nonsense"), "utf-16"),
    ] {
        let mut editor = Editor::connect();
        let capabilities = json!({ "general": { "positionEncodings": named } });
        let answer = editor.ask("initialize", json!({ "capabilities": capabilities })).await;
        assert_eq!(answer["capabilities"]["positionEncoding"], chosen, "{named}");
    }
}

#[tokio::test]
async fn exit_ends_the_session_while_the_input_is_open() {
    let mut editor = Editor::start(json!({})).await;
    assert_eq!(editor.ask("shutdown", Value::Null).await, Value::Null);
    assert_eq!(editor.refused("textDocument/hover", json!({})).await, -32600);
    editor.tell("exit", Value::Null).await;
    let (rest, orderly) = editor.finish().await;
    assert!(rest.is_empty() && orderly, "{rest:?}");

    let mut editor = Editor::start(json!({})).await;
    editor.tell("exit", Value::Null).await;
    assert!(!editor.finish().await.1, "without `shutdown` it is not an orderly end");
}

#[tokio::test]
async fn a_closed_input_ends_the_session_and_what_runs_in_it() {
    let mut editor = Editor::start(json!({})).await;
    let long = editor.post("cantle/test/toil", json!({})).await;
    let (rest, orderly) = editor.hang_up().await;
    assert!(!orderly);
    assert_eq!(rest.len(), 1, "{rest:?}");
    assert_eq!((&rest[0]["id"], &rest[0]["error"]["code"]), (&json!(long), &json!(-32800)));
}

#[tokio::test]
async fn messages_sent_in_one_breath_are_all_answered() {
    let mut editor = Editor::connect();
    editor.post("initialize", json!({ "capabilities": {} })).await;
    editor.tell("initialized", json!({})).await;
    editor.post("shutdown", Value::Null).await;
    editor.tell("exit", Value::Null).await;
    let (rest, orderly) = editor.hang_up().await;
    assert!(orderly);
    let ids: Vec<_> = rest.iter().map(|answer| answer["id"].clone()).collect();
    assert_eq!(ids, [json!(1), json!(2)]);
}

#[tokio::test]
async fn long_work_is_cancelled_and_short_answers_pass_it() {
    let mut editor = Editor::start(json!({})).await;
    editor.open("a", "x").await;
    // More long requests than the lane has places.
    let mut long = Vec::new();
    for _ in 0..300 {
        long.push(editor.post("cantle/test/toil", json!({})).await);
    }
    assert_eq!(editor.text("a").await.0, "x");
    for &id in &long {
        editor.tell("$/cancelRequest", json!({ "id": id })).await;
    }
    for id in long {
        assert_eq!(editor.answer(id).await["error"]["code"], -32800);
    }
    // Cancelling what was answered, or never asked, is nothing.
    for id in [json!(1), json!(99_999), json!("x"), json!(null), json!({})] {
        editor.tell("$/cancelRequest", json!({ "id": id })).await;
    }
    editor.tell("$/cancelRequest", json!([])).await;
    assert_eq!(editor.text("a").await.0, "x");
}

#[tokio::test]
async fn an_edit_or_a_close_stops_the_work_on_the_text_before() {
    let mut editor = Editor::start(json!({})).await;
    for end in ["didChange", "didClose"] {
        editor.open("a", "x").await;
        let long = editor.post("cantle/test/toil", json!({ "uri": uri("a") })).await;
        match end {
            "didChange" => editor.change("a", 2, json!([{ "text": "y" }])).await,
            _ => {
                let params = json!({ "textDocument": { "uri": uri("a") } });
                editor.tell("textDocument/didClose", params).await;
            }
        }
        assert_eq!(editor.answer(long).await["error"]["code"], -32801);
    }
}

#[tokio::test]
async fn a_panic_is_one_failed_request() {
    let mut editor = Editor::start(json!({})).await;
    editor.open("a", "x").await;
    for _ in 0..5 {
        assert_eq!(editor.refused("cantle/test/panic", json!({})).await, -32603);
    }
    assert_eq!(editor.text("a").await.0, "x");
    editor.ask("shutdown", Value::Null).await;
    editor.tell("exit", Value::Null).await;
    assert!(editor.finish().await.1);
}

#[tokio::test]
async fn a_client_that_no_longer_reads_ends_the_session() {
    let (mut input, fed) = tokio::io::duplex(1 << 16);
    let (printed, output) = tokio::io::duplex(1 << 10);
    drop(output);
    let server = tokio::spawn(crate::lsp::serve(fed, printed));
    let body = r#"{"jsonrpc":"2.0","id":1,"method":"initialize","params":{"capabilities":{}}}"#;
    let message = format!("Content-Length: {}\r\n\r\n{body}", body.len());
    tokio::io::AsyncWriteExt::write_all(&mut input, message.as_bytes()).await.expect("written");
    assert!(!server.await.expect("no panic"));
}
