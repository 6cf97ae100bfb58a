//! Each malformed message costs one error answer, never the session.

use serde_json::{Value, json};

use super::driver::{Editor, uri};

/// Sends bytes, checks that exactly `count` answers come of them and that
/// the session goes on; the answers.
async fn answers(bytes: &[u8], count: usize) -> Vec<Value> {
    let what = String::from_utf8_lossy(&bytes[..bytes.len().min(80)]).into_owned();
    let mut editor = Editor::start(json!({})).await;
    editor.open("a", "still here").await;
    editor.raw(bytes).await;
    assert_eq!(editor.text("a").await.0, "still here", "{what}");
    let is_answer = |message: &Value| message.get("method").is_none();
    let mut found = Vec::new();
    for _ in 0..count {
        found.push(editor.wait(is_answer).await);
    }
    editor.ask("shutdown", Value::Null).await;
    editor.tell("exit", Value::Null).await;
    let (rest, orderly) = editor.finish().await;
    assert!(orderly && !rest.iter().any(is_answer), "{what}: {rest:?}");
    found
}

fn framed(body: &str) -> Vec<u8> {
    format!("Content-Length: {}\r\n\r\n{body}", body.len()).into_bytes()
}

#[tokio::test]
async fn bad_bodies() {
    for (body, id, code) in [
        ("{", json!(null), -32700),
        ("", json!(null), -32700),
        ("nonsense", json!(null), -32700),
        ("[]", json!(null), -32600),
        ("3", json!(null), -32600),
        (r#"{"jsonrpc":"2.0"}"#, json!(null), -32600),
        (r#"{"jsonrpc":"2.0","method":3}"#, json!(null), -32600),
        (r#"{"jsonrpc":"2.0","id":70,"method":3}"#, json!(70), -32600),
        (r#"{"jsonrpc":"1.0","id":70,"method":"shutdown"}"#, json!(70), -32600),
        (r#"{"id":"seventy","method":"shutdown"}"#, json!("seventy"), -32600),
        (r#"{"jsonrpc":"2.0","id":{},"method":"shutdown"}"#, json!(null), -32600),
        (r#"{"jsonrpc":"2.0","id":1.5,"method":"shutdown"}"#, json!(null), -32600),
        (r#"{"jsonrpc":"2.0","id":70,"method":"cantle/test/text","params":3}"#, json!(70), -32600),
        (
            r#"{"jsonrpc":"2.0","id":70,"method":"cantle/test/text","params":[3]}"#,
            json!(70),
            -32602,
        ),
        (r#"{"jsonrpc":"2.0","id":70,"method":"cantle/test/text"}"#, json!(70), -32602),
        (
            r#"{"jsonrpc":"2.0","id":70,"method":"cantle/test/text","params":{"uri":"file:///x"}}"#,
            json!(70),
            -32602,
        ),
    ] {
        let found = answers(&framed(body), 1).await;
        assert_eq!((&found[0]["id"], &found[0]["error"]["code"]), (&id, &json!(code)), "{body}");
    }
    let not_utf8 = answers(b"Content-Length: 3\r\n\r\n\"\xff\"", 1).await;
    assert_eq!(not_utf8[0]["error"]["code"], -32700);
    let deep = answers(&framed(&"[".repeat(100_000)), 1).await;
    assert_eq!(deep[0]["error"]["code"], -32700);
}

#[tokio::test]
async fn bad_headers() {
    for (bytes, refusals) in [
        (b"Content-Length: ten\r\n\r\n".to_vec(), 1),
        (b"Content-Length: -1\r\n\r\n".to_vec(), 1),
        (b"Content-Length: 99999999999999999999\r\n\r\n".to_vec(), 1),
        (b"Content-Length: 9999999999999\r\n\r\n".to_vec(), 1),
        (b"Content-Type: text/plain\r\n\r\n".to_vec(), 1),
        (b"\r\n\r\n".to_vec(), 1),
        (vec![b'x'; 100_000], 1),
        (b"\xff\xfe\x00\r\n\r\n".to_vec(), 1),
        // A broken body whose rest stands in front of the next good header.
        (b"Content-Length: 2\r\n\r\n{\"jsonrpc\"".to_vec(), 1),
        // Unusual and right.
        (b"".to_vec(), 0),
        (
            b"content-length: 33\r\nX-A: 1\r\nX-B: 2\r\nX-C: 3\r\n\r\n\
           {\"jsonrpc\":\"2.0\",\"method\":\"x/y\"} "
                .to_vec(),
            0,
        ),
    ] {
        let found = answers(&bytes, refusals).await;
        assert!(found.iter().all(|answer| answer["error"]["code"] == -32700), "{found:?}");
    }
}

#[tokio::test]
async fn bad_notifications_are_left_out() {
    let mut editor = Editor::start(json!({})).await;
    editor.open("a", "abc").await;
    for (method, params) in [
        ("textDocument/didChange", json!({})),
        ("textDocument/didChange", json!({ "textDocument": { "uri": "not a uri" } })),
        ("textDocument/didChange", json!([1, 2])),
        ("textDocument/didOpen", json!(null)),
        ("textDocument/didClose", json!({ "textDocument": { "uri": uri("never opened") } })),
        ("$/progress", json!({})),
        ("no/such/notification", json!({})),
    ] {
        editor.tell(method, params).await;
    }
    editor.change("never opened", 3, json!([{ "text": "x" }])).await;
    assert_eq!(editor.text("a").await, ("abc".into(), 1));
    // A notification asked as a request, and the other way round.
    assert_eq!(editor.refused("textDocument/didOpen", json!({})).await, -32601);
    editor.tell("cantle/test/text", json!({ "uri": uri("a") })).await;
    assert_eq!(editor.text("a").await, ("abc".into(), 1));
}

#[tokio::test]
async fn answers_to_nothing_are_ignored() {
    let mut editor = Editor::start(json!({})).await;
    editor.open("a", "abc").await;
    for body in [
        r#"{"jsonrpc":"2.0","id":5,"result":null}"#,
        r#"{"jsonrpc":"2.0","id":"five"}"#,
        r#"{"jsonrpc":"2.0","id":5,"error":{"code":"x","message":7,"more":1}}"#,
    ] {
        editor.body(body).await;
    }
    assert_eq!(editor.text("a").await.0, "abc");
}
