//! Permits for long computations, so that they never starve single evaluations.

use std::{
    panic::{AssertUnwindSafe, catch_unwind},
    sync::OnceLock,
    time::Duration,
};

use tokio::{
    sync::{OwnedSemaphorePermit, oneshot},
    time::timeout,
};

use super::{
    problem::{Problem, ProblemKind},
    settings::cores,
    state::ServiceState,
};

/// How long a long computation waits for its turn before the caller is told to come back.
const PATIENCE: Duration = Duration::from_millis(5);

/// A permit for one long computation.
///
/// # Errors
/// 503 with `Retry-After` when as many run already as this server allows.
pub async fn permit(state: &ServiceState) -> Result<OwnedSemaphorePermit, Problem> {
    match timeout(PATIENCE, state.heavy.clone().acquire_owned()).await {
        Ok(Ok(permit)) => Ok(permit),
        Ok(Err(_)) | Err(_) => {
            let most = state.settings.heavy_count();
            let detail =
                format!("{most} long computations are running, as many as this server allows at a time.");
            Err(Problem::new(ProblemKind::Overloaded, detail).retry_after(1))
        }
    }
}

/// Does a piece of a long computation on the threads kept for it, one per core, and gives its result. A piece that panics gives none.
///
/// The piece is queued at once, whether or not the result is waited for.
pub fn piece<T: Send + 'static>(work: impl FnOnce() -> T + Send + 'static) -> oneshot::Receiver<T> {
    static POOL: OnceLock<Option<rayon::ThreadPool>> = OnceLock::new();
    let pool = POOL.get_or_init(|| {
        let named = rayon::ThreadPoolBuilder::new().thread_name(|i| format!("heavy-{i}"));
        named
            .num_threads(cores())
            .build()
            .inspect_err(|error| tracing::error!(%error, "no pool of threads"))
            .ok()
    });
    let (done, result) = oneshot::channel();
    let work = move || {
        if let Ok(value) = catch_unwind(AssertUnwindSafe(work)) {
            // Nobody waits for it any more if this fails.
            let _ = done.send(value);
        }
    };
    match pool {
        Some(pool) => pool.spawn(work),
        None => rayon::spawn(work),
    }
    result
}
