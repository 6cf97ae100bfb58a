//! The `cantle` program.

use std::process::ExitCode;

fn main() -> ExitCode {
    match std::env::args().nth(1).as_deref() {
        Some("serve") => cantle::lsp::serve_stdio(),
        _ => {
            eprintln!("usage: cantle serve");
            ExitCode::from(2)
        }
    }
}
