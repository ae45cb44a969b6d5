//! A sweep as a picture: curves or a map.

use std::sync::{
    Arc,
    atomic::{AtomicBool, Ordering},
};

use tokio::sync::OwnedSemaphorePermit;

use super::request::{Plan, SweepRequest};
use crate::{
    analysis::{
        fault::Fault,
        sweep::{Output, Sweep},
    },
    service::{
        api::evaluations::conditions,
        explain::invalid,
        fingerprint::ModelAnswer,
        heavy::piece,
        problem::Problem,
        render::{Drawn, Heading, drawable, sweep_picture},
    },
};

/// Refuses what cannot be drawn, before anything is computed.
///
/// # Errors
/// A slice; more than two axes; more points than can be seen.
pub(super) fn check(request: &SweepRequest, plan: &Plan) -> Result<(), Problem> {
    let mut faults = Vec::new();
    if request.part.is_some() {
        faults.push(Fault::new(
            "/part",
            "not_drawable",
            "a picture shows the whole sweep, not a slice of it",
        ));
    }
    let points = plan.axes.iter().map(crate::analysis::sweep::Axis::len).product();
    if let Err(reason) = drawable(plan.axes.len(), points) {
        faults.push(Fault::new("/axes", "not_drawable", reason.to_string()));
    }
    if faults.is_empty() { Ok(()) } else { Err(invalid(faults)) }
}

/// Draws the sweep on a thread kept for long work. A caller that hangs up stops it.
///
/// # Errors
/// 500 where the work fails.
pub(super) async fn draw(
    plan: Plan,
    model: ModelAnswer,
    permit: OwnedSemaphorePermit,
) -> Result<String, Problem> {
    /// Raised when the answer is no longer wanted.
    struct Flag(Arc<AtomicBool>);
    impl Drop for Flag {
        fn drop(&mut self) {
            self.0.store(true, Ordering::Relaxed);
        }
    }
    let cancelled = Arc::new(AtomicBool::new(false));
    let _hung_up = Flag(cancelled.clone());
    let work = piece(move || {
        let _held = permit;
        let asks = |output: Output| plan.outputs.contains(&output);
        let quantity = if asks(Output::DribbleProbability) && !asks(Output::SafetyFactor) {
            Drawn::DribbleProbability
        } else {
            Drawn::SafetyFactor
        };
        let subtitle = format!("Base: {}", conditions(&plan.spec));
        let note = format!(
            "dribble-risk {}, coefficients {}, fingerprint {}",
            model.version, model.coefficients, model.fingerprint
        );
        let table = Sweep::new(plan.spec, plan.axes, &cancelled)
            .and_then(|sweep| sweep.picture_table(&cancelled))
            .ok()?;
        sweep_picture(&table, quantity, Heading { title: "", subtitle: &subtitle, note: &note }).ok()
    });
    work.await.ok().flatten().ok_or_else(|| Problem::internal("The picture could not be drawn."))
}
