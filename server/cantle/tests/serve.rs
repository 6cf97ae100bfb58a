//! The real binary: its exit codes and that it ends when it should.

use std::io::{BufRead, BufReader, Read, Write};
use std::process::{Child, Command, Stdio};

fn start() -> Child {
    Command::new(env!("CARGO_BIN_EXE_cantle"))
        .arg("serve")
        .stdin(Stdio::piped())
        .stdout(Stdio::piped())
        .stderr(Stdio::null())
        .spawn()
        .expect("the binary starts")
}

fn send(server: &mut Child, body: &str) {
    let input = server.stdin.as_mut().expect("an input");
    write!(input, "Content-Length: {}\r\n\r\n{body}", body.len()).expect("written");
    input.flush().expect("written");
}

fn answer(server: &mut Child) -> String {
    let mut output = BufReader::with_capacity(1, server.stdout.as_mut().expect("an output"));
    let mut length = 0;
    loop {
        let mut line = String::new();
        output.read_line(&mut line).expect("a header");
        match line.trim().strip_prefix("Content-Length: ") {
            Some(digits) => length = digits.parse().expect("a length"),
            None => break,
        }
    }
    let mut body = vec![0; length];
    output.read_exact(&mut body).expect("a body");
    String::from_utf8(body).expect("text")
}

fn code(mut server: Child) -> Option<i32> {
    server.wait().expect("an end").code()
}

const INITIALIZE: &str =
    r#"{"jsonrpc":"2.0","id":1,"method":"initialize","params":{"capabilities":{}}}"#;
const SHUTDOWN: &str = r#"{"jsonrpc":"2.0","id":2,"method":"shutdown"}"#;
const EXIT: &str = r#"{"jsonrpc":"2.0","method":"exit"}"#;

#[test]
fn exit_after_shutdown_is_zero_with_the_input_still_open() {
    let mut server = start();
    for message in [INITIALIZE, SHUTDOWN] {
        send(&mut server, message);
        assert!(answer(&mut server).contains("\"result\""));
    }
    send(&mut server, EXIT);
    // `wait` closes the input: hold it open past the end.
    let input = server.stdin.take();
    assert_eq!(code(server), Some(0));
    drop(input);
}

#[test]
fn exit_without_shutdown_is_one() {
    let mut server = start();
    send(&mut server, INITIALIZE);
    answer(&mut server);
    send(&mut server, EXIT);
    let input = server.stdin.take();
    assert_eq!(code(server), Some(1));
    drop(input);
}

#[test]
fn a_closed_input_ends_the_process() {
    let mut server = start();
    send(&mut server, INITIALIZE);
    answer(&mut server);
    drop(server.stdin.take());
    assert_eq!(code(server), Some(1));
    let mut server = start();
    drop(server.stdin.take());
    assert_eq!(code(server), Some(1));
}

#[test]
fn garbage_is_answered_and_survived() {
    let mut server = start();
    send(&mut server, "garbage");
    assert!(answer(&mut server).contains("-32700"));
    send(&mut server, INITIALIZE);
    assert!(answer(&mut server).contains("capabilities"));
    send(&mut server, SHUTDOWN);
    answer(&mut server);
    send(&mut server, EXIT);
    assert_eq!(code(server), Some(0));
}
