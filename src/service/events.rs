//! Long work as server-sent events: progress while it goes on, then the result, which equals the JSON answer.

use std::{
    sync::{
        Arc,
        atomic::{AtomicBool, AtomicUsize, Ordering},
    },
    time::{Duration, Instant},
};

use axum::body::Body;
use bytes::Bytes;
use futures_util::stream;
use serde::Serialize;
use tokio::{sync::oneshot, time::Interval};

use super::problem::Problem;

/// Time between two progress events.
const PROGRESS_EVERY: Duration = Duration::from_millis(200);

/// Sets its flag once it is dropped: nobody wants the result any more.
#[derive(Debug, Default)]
pub struct Guard(Arc<AtomicBool>);

impl Guard {
    /// The flag.
    #[must_use]
    pub fn flag(&self) -> Arc<AtomicBool> {
        self.0.clone()
    }
}

impl Drop for Guard {
    fn drop(&mut self) {
        self.0.store(true, Ordering::Relaxed);
    }
}

/// How far the work is.
#[derive(Serialize)]
struct Progress {
    done: usize,
    total: usize,
    elapsed_s: f64,
}

/// A clock that tells when the next progress event is due, and writes it.
#[derive(Debug)]
pub struct Clock {
    begun: Instant,
    ticks: Interval,
}

impl Default for Clock {
    fn default() -> Self {
        Self { begun: Instant::now(), ticks: tokio::time::interval(PROGRESS_EVERY) }
    }
}

impl Clock {
    /// Waits until the next progress event is due.
    pub async fn tick(&mut self) {
        self.ticks.tick().await;
    }

    /// A progress event.
    #[must_use]
    pub fn event(&self, done: usize, total: usize) -> String {
        let progress = Progress { done, total, elapsed_s: self.begun.elapsed().as_secs_f64() };
        // Finite numbers: this cannot fail.
        format!("event: progress\ndata: {}\n\n", serde_json::to_string(&progress).unwrap_or_default())
    }
}

/// What stands before the JSON text of a result; it is one line.
pub const RESULT: &str = "event: result\ndata: ";
/// What stands after it.
pub const END: &str = "\n\n";

/// Progress events until the work is done, then its result. Dropping the body drops `guard`.
pub fn body(
    guard: Guard,
    done: Arc<AtomicUsize>,
    total: usize,
    work: oneshot::Receiver<Result<Vec<u8>, Problem>>,
) -> Body {
    let events = stream::unfold(Some((guard, Clock::default(), work)), move |waiting| {
        let done = done.clone();
        async move {
            let (guard, mut clock, mut work) = waiting?;
            tokio::select! {
                biased;
                finished = &mut work => match finished {
                    Ok(Ok(result)) => {
                        let last = clock.event(total, total);
                        let text = [last.as_bytes(), RESULT.as_bytes(), &result, END.as_bytes()].concat();
                        Some((Ok(Bytes::from(text)), None))
                    }
                    // The caller sees the connection break off: it is too late for a status.
                    _ => Some((Err(std::io::Error::other("the work failed")), None)),
                },
                () = clock.tick() => {
                    let text = clock.event(done.load(Ordering::Relaxed), total);
                    Some((Ok(Bytes::from(text)), Some((guard, clock, work))))
                }
            }
        }
    });
    Body::from_stream(events)
}
