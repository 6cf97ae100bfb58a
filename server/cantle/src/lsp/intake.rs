//! The gate in front of the framework: cuts the input into messages and lets
//! only well-formed ones through.
//!
//! One malformed message costs one error answer, never the session. What is
//! refused is passed on as a message of our own ([`REFUSED`]) that the service
//! answers, so that answers keep the order of what they answer.

use serde_json::{Map, Value, json};
use tokio::io::{AsyncRead, AsyncReadExt, AsyncWrite, AsyncWriteExt};
use tower_lsp::jsonrpc::{self, Id};

use crate::error::Fail;

/// Method under which a refused message reaches the service; its parameters
/// are a [`Refusal`].
pub(super) const REFUSED: &str = "$/cantle/refused";

/// Longest header block looked at. Real ones take under 100 bytes.
const MAX_HEADER: usize = 8 * 1024;

/// Longest message taken. An editor sends whole files in one message; a
/// source file of this size is far past what can be analysed.
const MAX_MESSAGE: usize = 256 * 1024 * 1024;

const READ_CHUNK: usize = 64 * 1024;

/// What is said of a message that cannot be served: a JSON-RPC error object.
#[derive(Debug, PartialEq)]
pub(super) struct Refusal {
    /// Id of the refused message where it has a usable one.
    pub id: Id,
    /// The error.
    pub fail: Fail,
}

/// Reads until the end of input, the `exit` notification or a write error
/// (the framework is gone), and writes what may pass to `feed`.
pub(super) async fn run(input: impl AsyncRead + Unpin, mut feed: impl AsyncWrite + Unpin) {
    let mut frames = Frames::new(input);
    while let Some(frame) = frames.next().await {
        let message = match frame.and_then(|body| admit(&body)) {
            Ok(message) => message,
            Err(refusal) => {
                tracing::warn!("refused a message: {}", refusal.fail);
                refusal.into_message()
            }
        };
        let body = message.to_string();
        let framed = format!("Content-Length: {}\r\n\r\n{body}", body.len());
        let is_exit = message["method"] == "exit" && message.get("id").is_none();
        if feed.write_all(framed.as_bytes()).await.is_err() || is_exit {
            return;
        }
    }
}

/// Checks one message body and brings it into the form the framework reads
/// without failing.
pub(super) fn admit(body: &[u8]) -> Result<Value, Refusal> {
    let value: Value = serde_json::from_slice(body)
        .map_err(|error| Refusal::nameless(Fail::NotJson(error.to_string())))?;
    let Value::Object(mut object) = value else {
        return Err(Refusal::nameless(Fail::InvalidRequest("a message is one object".into())));
    };
    let id = match object.get("id") {
        None => None,
        Some(Value::String(text)) => Some(Id::String(text.clone())),
        Some(Value::Number(number)) if number.is_i64() => number.as_i64().map(Id::Number),
        Some(Value::Null) => Some(Id::Null),
        Some(_) => {
            let why = "an id is an integer or a string".into();
            return Err(Refusal::nameless(Fail::InvalidRequest(why)));
        }
    };
    let refuse = |why: &str| {
        let id = id.clone().unwrap_or(Id::Null);
        Err(Refusal { id, fail: Fail::InvalidRequest(why.into()) })
    };
    if object.get("jsonrpc").and_then(Value::as_str) != Some("2.0") {
        return refuse("\"jsonrpc\" must be \"2.0\"");
    }
    match object.get("method") {
        Some(Value::String(_)) => {}
        Some(_) => return refuse("a method is a string"),
        None if id.is_some() => return Ok(answer(&mut object)),
        None => return refuse("neither a method nor an id"),
    }
    match object.get("params") {
        None | Some(Value::Null | Value::Object(_) | Value::Array(_)) => Ok(Value::Object(object)),
        Some(_) => refuse("parameters are an object or an array"),
    }
}

/// The client's answer to one of our requests, with exactly the members the
/// framework knows.
fn answer(object: &mut Map<String, Value>) -> Value {
    let id = object.remove("id");
    match object.remove("error") {
        None | Some(Value::Null) => {
            json!({ "jsonrpc": "2.0", "id": id, "result": object.remove("result") })
        }
        Some(error) => {
            let code = error["code"].as_i64().unwrap_or(jsonrpc::ErrorCode::InternalError.code());
            let message = error["message"].as_str().unwrap_or("no message");
            json!({ "jsonrpc": "2.0", "id": id, "error": { "code": code, "message": message } })
        }
    }
}

impl Refusal {
    fn nameless(fail: Fail) -> Self {
        Refusal { id: Id::Null, fail }
    }

    fn into_message(self) -> Value {
        let error = jsonrpc::Error::from(&self.fail);
        let params = json!({ "code": error.code.code(), "message": error.message });
        json!({ "jsonrpc": "2.0", "id": self.id, "method": REFUSED, "params": params })
    }
}

/// Message bodies cut out of a byte stream.
pub(super) struct Frames<R> {
    input: R,
    buffer: Vec<u8>,
    /// Inside a stretch of garbage that was reported already.
    skipping: bool,
}

impl<R: AsyncRead + Unpin> Frames<R> {
    pub(super) fn new(input: R) -> Self {
        Frames { input, buffer: Vec::new(), skipping: false }
    }

    /// The next body; a [`Refusal`] for a header block without a usable
    /// length; `None` at the end of the input.
    pub(super) async fn next(&mut self) -> Option<Result<Vec<u8>, Refusal>> {
        let headers = loop {
            if let Some(end) = header_end(&self.buffer) {
                break self.buffer.drain(..end).collect::<Vec<u8>>();
            }
            if self.buffer.len() > MAX_HEADER {
                // A good header may have begun in the last bytes.
                self.buffer.drain(..self.buffer.len() - MAX_HEADER / 2);
                if !std::mem::replace(&mut self.skipping, true) {
                    return Some(Err(bad_headers("no end of the header block in sight")));
                }
            }
            self.fill().await?;
        };
        self.skipping = false;
        let length = match content_length(&headers) {
            Ok(length) => length,
            Err(why) => return Some(Err(bad_headers(why))),
        };
        while self.buffer.len() < length {
            self.fill().await?;
        }
        Some(Ok(self.buffer.drain(..length).collect()))
    }

    /// Reads some more; `None` at the end of the input or when it breaks.
    async fn fill(&mut self) -> Option<()> {
        self.buffer.reserve(READ_CHUNK);
        match self.input.read_buf(&mut self.buffer).await {
            Ok(0) | Err(_) => None,
            Ok(_) => Some(()),
        }
    }
}

fn bad_headers(why: &str) -> Refusal {
    Refusal::nameless(Fail::NotJson(format!("{why} (a message starts with Content-Length)")))
}

/// Where the body starts: after the first empty line.
fn header_end(bytes: &[u8]) -> Option<usize> {
    bytes.windows(4).position(|window| window == b"\r\n\r\n").map(|at| at + 4)
}

/// The length announced last in the block, so that garbage in front of a
/// good header (the rest of a broken message) costs nothing more.
fn content_length(headers: &[u8]) -> Result<usize, &'static str> {
    let text = String::from_utf8_lossy(headers).to_ascii_lowercase();
    let at = text.rfind("content-length:").ok_or("no Content-Length")?;
    let rest = &text[at + "content-length:".len()..];
    let digits = rest.lines().next().unwrap_or_default().trim();
    let length: usize = digits.parse().map_err(|_| "Content-Length is not a number")?;
    if length > MAX_MESSAGE { Err("the message is too long") } else { Ok(length) }
}
