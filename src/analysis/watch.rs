//! Progress and cancellation of long work: plain references handed down.

use std::sync::atomic::{AtomicBool, AtomicUsize, Ordering};

pub use super::sweep::Cancelled;

/// What a long computation tells, and what it is told.
#[derive(Debug, Clone, Copy)]
pub struct Watch<'a> {
    /// Work done so far.
    pub done: &'a AtomicUsize,
    /// Set once nobody wants the result any more.
    pub cancelled: &'a AtomicBool,
}

impl Watch<'_> {
    /// Adds work done, and says whether to go on.
    #[must_use]
    pub fn advance(&self, done: usize) -> bool {
        self.done.fetch_add(done, Ordering::Relaxed);
        !self.cancelled.load(Ordering::Relaxed)
    }

    /// Whether to go on.
    ///
    /// # Errors
    /// [`Cancelled`] once the flag is set.
    pub fn look(&self) -> Result<(), Cancelled> {
        if self.cancelled.load(Ordering::Relaxed) { Err(Cancelled) } else { Ok(()) }
    }
}
