//! A small client: typed where it helps, raw where a test must misbehave.

use std::collections::VecDeque;
use std::time::Duration;

use serde_json::{Value, json};
use tokio::io::{AsyncWriteExt, DuplexStream};
use tokio::task::JoinHandle;

use crate::lsp::intake::Frames;
use crate::lsp::serve;

/// Guards against a hang; no test measures time.
const PATIENCE: Duration = Duration::from_secs(60);

/// A client of one session.
pub(crate) struct Editor {
    input: Option<DuplexStream>,
    output: Frames<DuplexStream>,
    server: JoinHandle<bool>,
    next_id: i64,
    /// Messages read while something else was waited for.
    unread: VecDeque<Value>,
}

impl Editor {
    /// A session before `initialize`.
    pub(crate) fn connect() -> Self {
        let (input, fed) = tokio::io::duplex(1 << 20);
        let (printed, output) = tokio::io::duplex(1 << 20);
        Editor {
            input: Some(input),
            output: Frames::new(output),
            server: tokio::spawn(serve(fed, printed)),
            next_id: 0,
            unread: VecDeque::new(),
        }
    }

    /// A session of a client with these capabilities.
    pub(crate) async fn start(capabilities: Value) -> Self {
        let mut editor = Editor::connect();
        let answer = editor.ask("initialize", json!({ "capabilities": capabilities })).await;
        assert!(answer["capabilities"].is_object(), "{answer}");
        editor.tell("initialized", json!({})).await;
        editor
    }

    /// Sends bytes as they are.
    pub(crate) async fn raw(&mut self, bytes: &[u8]) {
        let input = self.input.as_mut().expect("the input is open");
        input.write_all(bytes).await.expect("the server reads");
    }

    /// Sends one framed body.
    pub(crate) async fn body(&mut self, body: &str) {
        self.raw(format!("Content-Length: {}\r\n\r\n{body}", body.len()).as_bytes()).await;
    }

    /// Sends a notification.
    pub(crate) async fn tell(&mut self, method: &str, params: Value) {
        let message = json!({ "jsonrpc": "2.0", "method": method, "params": params });
        self.body(&message.to_string()).await;
    }

    /// Sends a request without waiting; its id.
    pub(crate) async fn post(&mut self, method: &str, params: Value) -> i64 {
        self.next_id += 1;
        let id = self.next_id;
        let message = json!({ "jsonrpc": "2.0", "id": id, "method": method, "params": params });
        self.body(&message.to_string()).await;
        id
    }

    /// The whole answer to a request: it must come exactly once.
    pub(crate) async fn answer(&mut self, id: impl Into<Value>) -> Value {
        let id = id.into();
        self.wait(|message| message["id"] == id && message.get("method").is_none()).await
    }

    /// Sends a request; its result.
    pub(crate) async fn ask(&mut self, method: &str, params: Value) -> Value {
        let id = self.post(method, params).await;
        let answer = self.answer(id).await;
        assert!(answer.get("error").is_none(), "{method}: {answer}");
        answer["result"].clone()
    }

    /// Sends a request; the code of the error it must end with.
    pub(crate) async fn refused(&mut self, method: &str, params: Value) -> i64 {
        let id = self.post(method, params).await;
        self.answer(id).await["error"]["code"].as_i64().expect("an error")
    }

    /// The next message, in the order of arrival, that fits.
    pub(crate) async fn wait(&mut self, fits: impl Fn(&Value) -> bool) -> Value {
        if let Some(at) = self.unread.iter().position(&fits) {
            return self.unread.remove(at).expect("found there");
        }
        loop {
            let message = self.read().await.expect("the session ended too early");
            if fits(&message) {
                return message;
            }
            self.unread.push_back(message);
        }
    }

    /// The next message; `None` at the end of the session.
    pub(crate) async fn read(&mut self) -> Option<Value> {
        let frame = tokio::time::timeout(PATIENCE, self.output.next()).await.expect("an answer");
        frame.map(|body| serde_json::from_slice(&body.expect("a frame")).expect("JSON"))
    }

    /// Opens a text under `file:///demo/NAME` at version 1.
    pub(crate) async fn open(&mut self, name: &str, text: &str) {
        self.open_at(&uri(name), text).await;
    }

    /// Opens a text under any name at version 1.
    pub(crate) async fn open_at(&mut self, uri: &str, text: &str) {
        let item = json!({ "uri": uri, "languageId": "qasm", "version": 1, "text": text });
        self.tell("textDocument/didOpen", json!({ "textDocument": item })).await;
    }

    /// Changes a text; each change is `(range or null, text)`.
    pub(crate) async fn change(&mut self, name: &str, version: i32, changes: Value) {
        let document = json!({ "uri": uri(name), "version": version });
        let params = json!({ "textDocument": document, "contentChanges": changes });
        self.tell("textDocument/didChange", params).await;
    }

    /// The text as the server holds it, with its version.
    pub(crate) async fn text(&mut self, name: &str) -> (String, i64) {
        let held = self.ask("cantle/test/text", json!({ "uri": uri(name) })).await;
        let text = held["text"].as_str().expect("a text").to_owned();
        (text, held["version"].as_i64().expect("a version"))
    }

    /// Closes the input; the rest of the output and whether the session was
    /// shut down in order.
    pub(crate) async fn hang_up(mut self) -> (Vec<Value>, bool) {
        self.input = None;
        self.finish().await
    }

    /// Waits for the end with the input still open.
    pub(crate) async fn finish(mut self) -> (Vec<Value>, bool) {
        let mut rest = Vec::from(std::mem::take(&mut self.unread));
        while let Some(message) = self.read().await {
            rest.push(message);
        }
        let ended = tokio::time::timeout(PATIENCE, self.server).await.expect("an end");
        (rest, ended.expect("no panic"))
    }
}

/// The name of a test text.
pub(crate) fn uri(name: &str) -> String {
    format!("file:///demo/{name}")
}

/// A range of the protocol.
pub(crate) fn range(from: (u32, u32), to: (u32, u32)) -> Value {
    let at = |(line, character): (u32, u32)| json!({ "line": line, "character": character });
    json!({ "start": at(from), "end": at(to) })
}

/// A text after the protocol's edits of it, positions in UTF-16: the way a
/// client applies them, written apart from the server's own conversion.
pub(crate) fn applied(text: &str, edits: &Value) -> String {
    let offset = |position: &Value| {
        let number = |name: &str| position[name].as_u64().expect("a number") as usize;
        let mut start = 0;
        for _ in 0..number("line") {
            start += text[start..].find('\n').expect("a line") + 1;
        }
        let mut units = 0;
        for (at, character) in text[start..].char_indices() {
            if units >= number("character") || character == '\n' {
                return start + at;
            }
            units += character.len_utf16();
        }
        text.len()
    };
    let edits = edits.as_array().expect("edits");
    let mut edits: Vec<(usize, usize, &str)> = edits
        .iter()
        .map(|edit| {
            let range = &edit["range"];
            let text = edit["newText"].as_str().expect("a text");
            (offset(&range["start"]), offset(&range["end"]), text)
        })
        .collect();
    // From the end, so that what is left keeps its place; a stable sort and
    // a reversal keep insertions at one place in order.
    edits.sort_by_key(|&(start, end, _)| (start, end));
    let mut out = text.to_owned();
    for &(start, end, text) in edits.iter().rev() {
        out.replace_range(start..end, text);
    }
    out
}

/// The position of a piece of text, columns in UTF-16.
pub(crate) fn place(text: &str, piece: &str) -> (u32, u32) {
    let at = text.find(piece).expect("the piece is in the text");
    let line = text[..at].matches('\n').count();
    let start = text[..at].rfind('\n').map_or(0, |end| end + 1);
    let column = text[start..at].encode_utf16().count();
    (u32::try_from(line).expect("small"), u32::try_from(column).expect("small"))
}
