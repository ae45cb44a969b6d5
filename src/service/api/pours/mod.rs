//! `POST /v1/pours`: a whole pour from a tilting vessel, to its last drop.

mod answer;
mod request;
mod series;

use std::sync::{
    Arc,
    atomic::{AtomicBool, Ordering},
};

use axum::{extract::State, response::Response};
use http::{HeaderMap, HeaderValue, header};

pub use self::{
    answer::PourAnswer,
    request::{DEMO, EXAMPLE, VesselPourRequest},
};
use crate::{
    analysis::pour::pour as pour_out,
    service::{
        body::JsonBytes,
        explain::{invalid, read},
        fingerprint::ModelAnswer,
        negotiation::{JSON, choose},
        problem::Problem,
        state::Shared,
    },
};

/// The media type of comma-separated values (RFC 4180).
const CSV: &str = "text/csv";

/// What does a whole pour come to?
///
/// Tilts the vessel, follows level and flow, decides at every instant whether the stream leaves or clings, with the memory that a wetted face has, and says how much is
/// served, how much runs down the outside and when, where the stream lands and what the last drop does. As CSV: the series alone.
#[utoipa::path(post, path = "/v1/pours", tag = "lip",
    request_body(content = VesselPourRequest, description = "Vessel, fill, tilt, lip, surface and liquid"),
    responses((status = 200, description = "What the pour comes to", content(
        (PourAnswer<'static> = "application/json"), (String = "text/csv")))))]
pub async fn pour(
    State(state): State<Shared>,
    headers: HeaderMap,
    JsonBytes(bytes): JsonBytes,
) -> Result<Response, Problem> {
    let media_type = choose(&headers, &[JSON, CSV])?;
    let request: VesselPourRequest = read(&bytes)?;
    // A pour takes as long as dozens of evaluations: it waits for its turn among the long computations, up to the request's own deadline.
    let turn = state.heavy.clone().acquire_owned().await;
    let _turn = turn.map_err(|_| Problem::internal("The service is closing."))?;
    // A caller that hangs up drops this future, and with it the pour.
    let stop = StopOnDrop(Arc::new(AtomicBool::new(false)));
    let cancel = stop.0.clone();
    let work = tokio::task::spawn_blocking(move || answer(&request, media_type, &cancel));
    let text = work.await.map_err(|_| Problem::internal("The service failed on this pour."))??;
    let mut response = Response::new(text.into());
    response.headers_mut().insert(header::CONTENT_TYPE, HeaderValue::from_static(media_type));
    response.headers_mut().append(header::VARY, HeaderValue::from_static("accept"));
    Ok(response)
}

struct StopOnDrop(Arc<AtomicBool>);

impl Drop for StopOnDrop {
    fn drop(&mut self) {
        self.0.store(true, Ordering::Relaxed);
    }
}

fn answer(request: &VesselPourRequest, media_type: &str, cancel: &AtomicBool) -> Result<Vec<u8>, Problem> {
    let spec = request.question().map_err(invalid)?;
    let pour = pour_out(&spec, cancel).map_err(invalid)?;
    if media_type == CSV {
        return Ok(series::csv(&pour));
    }
    let model = ModelAnswer::of(request, spec.lip.coefficients.id);
    serde_json::to_vec(&PourAnswer::new(&pour, model))
        .map_err(|_| Problem::internal("The answer holds a number that is not finite."))
}
