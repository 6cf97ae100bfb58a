//! The language server: the shell around the protocol framework.
//!
//! ```text
//! stdin → intake → framework → Service → lanes → handlers
//!            (only well-formed)   (orders)         (answers)
//! stdout ← pump ←── framework ←── answers, Outbox
//! ```
//!
//! - [`intake`] lets only well-formed messages through and ends the session
//!   with `exit` or the end of the input.
//! - [`service`] takes messages one after another; what changes the state is
//!   done before the next message is looked at, so order is made, not hoped
//!   for. Requests get a snapshot of that moment and run in a lane.
//! - Every request is answered exactly once: by its handler, by its
//!   cancellation, or by the error its panic became.

use std::process::ExitCode;
use std::sync::{Mutex, MutexGuard, PoisonError};
use std::time::Duration;

use tokio::io::{AsyncRead, AsyncReadExt, AsyncWrite, AsyncWriteExt, DuplexStream};
use tokio::sync::oneshot;
use tower_lsp::Server;

mod client;
mod document;
mod intake;
mod lanes;
mod memo;
mod outbox;
mod pending;
mod refresh;
mod service;
mod session;
#[cfg(test)]
pub(crate) mod tests;

pub(crate) use client::ClientProfile;
pub(crate) use document::{Document, edited, path_of};
pub(crate) use lanes::Lane;
pub(crate) use session::{Context, Session};

/// Requests served at once. The framework stops reading at this number,
/// cancellations included, so it is far above what an editor has in flight.
const CONCURRENCY: usize = 16 * 1024;

/// Bytes buffered between two stages of the shell.
const PIPE: usize = 64 * 1024;

/// How long the last answers may take to be written once the session is
/// over: only a client that has stopped reading uses it up.
const GRACE: Duration = Duration::from_secs(2);

/// Stack of the threads that run handlers: analysis recurses over nested
/// expressions within its own limits, in unoptimised builds too.
const STACK: usize = 16 * 1024 * 1024;

/// Serves one session on standard input and output. The exit code is 0 after
/// an orderly `shutdown`, 1 otherwise.
pub fn serve_stdio() -> ExitCode {
    let runtime =
        tokio::runtime::Builder::new_multi_thread().enable_all().thread_stack_size(STACK).build();
    let runtime = match runtime {
        Ok(runtime) => runtime,
        Err(error) => {
            tracing::error!("no threads to serve with: {error}");
            return ExitCode::from(2);
        }
    };
    let session = runtime.spawn(serve(tokio::io::stdin(), tokio::io::stdout()));
    let orderly = runtime.block_on(session).unwrap_or(false);
    // A read of standard input cannot be interrupted and arithmetic ends only
    // at its next poll: neither may keep the process alive.
    runtime.shutdown_background();
    if orderly { ExitCode::SUCCESS } else { ExitCode::from(1) }
}

/// Serves one session on any pair of streams until `exit`, the end of the
/// input or the loss of the output; whether it had been shut down in order.
pub async fn serve(input: impl AsyncRead + Unpin, output: impl AsyncWrite + Unpin) -> bool {
    let (service, wire, answers) = service::Service::new();
    let session = service.session();
    let (feed, fed) = tokio::io::duplex(PIPE);
    let (printed, print) = tokio::io::duplex(PIPE);
    let (lost, output_lost) = oneshot::channel();

    let server = Server::new(fed, printed, wire).concurrency_level(CONCURRENCY).serve(service);
    let reading = async {
        tokio::select! {
            () = intake::run(input, feed) => {}
            _ = output_lost => {}
        }
        // Nobody waits for long work any more; what is answered at once still is.
        session.close();
        tokio::time::sleep(GRACE).await;
    };
    let serving = async {
        tokio::join!(server, pump(print, output, lost), session.outbox.settle(answers));
    };
    tokio::select! {
        () = reading => {}
        () = serving => {}
    }
    session.close();
    session.was_shut_down()
}

/// Copies the framework's output to the client. Once the client no longer
/// reads, `lost` is told and the rest is swallowed: the framework panics on
/// a broken output.
async fn pump(mut from: DuplexStream, mut to: impl AsyncWrite + Unpin, lost: oneshot::Sender<()>) {
    let mut lost = Some(lost);
    let mut buffer = vec![0; PIPE];
    while let Ok(count @ 1..) = from.read(&mut buffer).await {
        if lost.is_none() {
            continue;
        }
        let written = async {
            to.write_all(&buffer[..count]).await?;
            to.flush().await
        };
        if written.await.is_err()
            && let Some(lost) = lost.take()
        {
            // The reader of this message may have ended by itself.
            let _ = lost.send(());
        }
    }
}

/// Locks a mutex; a panic elsewhere does not spread through it (what locks
/// protect here is replaced whole, never left half-changed).
pub(crate) fn locked<T>(mutex: &Mutex<T>) -> MutexGuard<'_, T> {
    mutex.lock().unwrap_or_else(PoisonError::into_inner)
}
