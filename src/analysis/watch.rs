//! Progress and cancellation of long work: plain references handed down.

use std::sync::atomic::{AtomicBool, AtomicU64, Ordering};

/// The work was given up because nobody waits for it any more.
#[derive(Debug, Clone, Copy, PartialEq, Eq, thiserror::Error)]
#[error("the work was given up")]
pub struct GivenUp;

/// What a long computation tells, and what it is told.
#[derive(Debug, Default)]
pub struct Watch {
    done: AtomicU64,
    total: AtomicU64,
    given_up: AtomicBool,
}

impl Watch {
    /// Says how much work there is.
    pub fn expect(&self, total: u64) {
        self.total.store(total, Ordering::Relaxed);
    }

    /// Adds work done, and says whether to go on.
    pub fn advance(&self, done: u64) -> bool {
        self.done.fetch_add(done, Ordering::Relaxed);
        !self.given_up.load(Ordering::Relaxed)
    }

    /// Work done and work there is.
    #[must_use]
    pub fn progress(&self) -> (u64, u64) {
        let total = self.total.load(Ordering::Relaxed);
        (self.done.load(Ordering::Relaxed).min(total), total)
    }

    /// Tells the computation to stop at its next look.
    pub fn give_up(&self) {
        self.given_up.store(true, Ordering::Relaxed);
    }

    /// Whether it was told to stop.
    ///
    /// # Errors
    /// [`GivenUp`] once it was.
    pub fn look(&self) -> Result<(), GivenUp> {
        if self.given_up.load(Ordering::Relaxed) { Err(GivenUp) } else { Ok(()) }
    }
}
