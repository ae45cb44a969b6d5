//! Where the bands wait for one another, once a step.

use std::sync::atomic::{AtomicBool, AtomicUsize, Ordering};

/// Turns of the waiting loop before the waiter offers its core to others.
const SPINS: u32 = 4_000;

/// A barrier that spins: a step takes tens of microseconds, less than waking a sleeping thread.
#[derive(Debug)]
pub(super) struct Barrier {
    parties: usize,
    arrived: AtomicUsize,
    round: AtomicUsize,
    broken: AtomicBool,
}

impl Barrier {
    pub(super) const fn new(parties: usize) -> Self {
        Self {
            parties,
            arrived: AtomicUsize::new(0),
            round: AtomicUsize::new(0),
            broken: AtomicBool::new(false),
        }
    }

    /// Waits for the others; `false` if one of them is gone for good.
    pub(super) fn wait(&self) -> bool {
        let round = self.round.load(Ordering::Acquire);
        if self.arrived.fetch_add(1, Ordering::AcqRel) + 1 == self.parties {
            self.arrived.store(0, Ordering::Release);
            self.round.store(round.wrapping_add(1), Ordering::Release);
            return !self.broken.load(Ordering::Acquire);
        }
        let mut turns = 0;
        while self.round.load(Ordering::Acquire) == round {
            if self.broken.load(Ordering::Acquire) {
                return false;
            }
            turns += 1;
            if turns < SPINS {
                std::hint::spin_loop();
            } else {
                std::thread::yield_now();
            }
        }
        !self.broken.load(Ordering::Acquire)
    }

    /// A token that breaks the barrier if its holder unwinds, lest the others wait for ever.
    pub(super) const fn token(&self) -> Token<'_> {
        Token(self)
    }
}

/// See [`Barrier::token`].
pub(super) struct Token<'a>(&'a Barrier);

impl Drop for Token<'_> {
    fn drop(&mut self) {
        if std::thread::panicking() {
            self.0.broken.store(true, Ordering::Release);
        }
    }
}
