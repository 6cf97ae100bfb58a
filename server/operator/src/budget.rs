//! The stop flag and the limits that bound every long computation.

use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};

use crate::{Error, Result};

/// Default for [`Budget::max_wires`]: a dense `2ⁿ × 2ⁿ` complex operator at
/// n = 12 takes 256 MiB, the most a person's editor should be asked for.
pub const DEFAULT_MAX_WIRES: usize = 12;

/// Bounds on a computation: a flag that stops it and a size limit.
///
/// Cloning shares the flag. No clock is read: whoever owns the flag decides
/// when to raise it, so the same input gives the same answer or `Stopped`.
#[derive(Debug, Clone)]
pub struct Budget {
    stop: Arc<AtomicBool>,
    /// Most wires a dense operator may have.
    pub max_wires: usize,
}

impl Default for Budget {
    fn default() -> Self {
        Budget { stop: Arc::default(), max_wires: DEFAULT_MAX_WIRES }
    }
}

impl Budget {
    /// Asks everything that runs under this budget to stop.
    pub fn stop(&self) {
        self.stop.store(true, Ordering::Relaxed);
    }

    /// Whether [`Budget::stop`] was called.
    pub fn is_stopped(&self) -> bool {
        self.stop.load(Ordering::Relaxed)
    }

    /// `Err(Stopped)` once the flag is up; to be called once per sweep.
    pub fn poll(&self) -> Result<()> {
        if self.is_stopped() { Err(Error::Stopped) } else { Ok(()) }
    }

    /// Refuses a number of columns on `wires` wires, each of `2^wires`
    /// amplitudes, that takes more memory than a dense operator on
    /// [`Budget::max_wires`] does.
    pub fn admit_columns(&self, wires: usize, columns: usize) -> Result<()> {
        let column_wires = columns.max(1).next_power_of_two().trailing_zeros() as usize;
        if wires + column_wires > 2 * self.max_wires {
            return Err(Error::TooLarge { wires, limit: self.max_wires });
        }
        self.poll()
    }

    /// Refuses a dense operator on more wires than allowed, before any of
    /// its memory is taken.
    pub fn admit(&self, wires: usize) -> Result<()> {
        if wires > self.max_wires {
            return Err(Error::TooLarge { wires, limit: self.max_wires });
        }
        self.poll()
    }
}
