//! Where handlers run: never on the thread that reads messages.

use std::panic::{AssertUnwindSafe, catch_unwind};
use std::sync::Arc;

use tokio::sync::Semaphore;

use crate::error::Fail;

/// What kind of work a request asks for.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) enum Lane {
    /// Names, syntax, text: done within a frame.
    Names,
    /// Arithmetic on operators that the user waits for.
    Operators,
    /// Arithmetic nobody asked for explicitly: the checks after an edit.
    Background,
}

/// Permits of the lanes. Work waits for its lane, not for a thread, so that
/// long arithmetic can never take the threads of short answers.
#[derive(Debug)]
pub(crate) struct Lanes {
    names: Arc<Semaphore>,
    operators: Arc<Semaphore>,
    background: Arc<Semaphore>,
}

impl Default for Lanes {
    fn default() -> Self {
        let cores = std::thread::available_parallelism().map_or(1, usize::from);
        Lanes {
            // Short work; more than a few at once only share the same cores.
            names: Arc::new(Semaphore::new(cores.max(2))),
            // Two, so that one long candidate search does not stop hovers.
            operators: Arc::new(Semaphore::new(2)),
            background: Arc::new(Semaphore::new(1)),
        }
    }
}

impl Lanes {
    /// Runs `work` in its lane. A panic in it is `Err(Internal)`. Dropping
    /// the future before `work` has begun means that it never begins.
    pub(crate) async fn run<T: Send + 'static>(
        &self,
        lane: Lane,
        work: impl FnOnce() -> T + Send + 'static,
    ) -> Result<T, Fail> {
        let permits = match lane {
            Lane::Names => &self.names,
            Lane::Operators => &self.operators,
            Lane::Background => &self.background,
        };
        let permit = permits.clone().acquire_owned().await.map_err(|_| Fail::Cancelled)?;
        let job = tokio::task::spawn_blocking(move || {
            // Held by the work itself: a cancelled request gives its permit
            // back when its arithmetic has really ended.
            let _permit = permit;
            contained(work)
        });
        job.await.unwrap_or(Err(Fail::Cancelled))
    }
}

/// Runs `work`; a panic in it is logged and becomes `Err(Internal)`.
///
/// State is shared between handlers only as immutable values and behind
/// locks that are never held while foreign code runs, so what a panic leaves
/// behind is whole.
pub(crate) fn contained<T>(work: impl FnOnce() -> T) -> Result<T, Fail> {
    catch_unwind(AssertUnwindSafe(work)).map_err(|panic| {
        let text = panic
            .downcast_ref::<&str>()
            .map(|text| text.to_string())
            .or_else(|| panic.downcast_ref::<String>().cloned())
            .unwrap_or_default();
        tracing::error!("a handler panicked: {text}");
        Fail::Internal
    })
}
