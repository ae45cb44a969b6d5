//! Permits for long computations, so that they never starve single evaluations.

use std::time::Duration;

use tokio::{sync::OwnedSemaphorePermit, time::timeout};

use super::{
    problem::{Problem, ProblemKind},
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
