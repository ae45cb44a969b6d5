//! `POST /v1/pours`: a whole pour from a tilting vessel, to its last drop.

mod answer;
mod picture;
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
use super::sweeps::RESULT_MODEL;
use crate::{
    analysis::pour::pour as pour_out,
    service::{
        body::JsonBytes,
        explain::{invalid, read},
        fingerprint::ModelAnswer,
        negotiation::{ARROW, CSV, JSON, choose},
        problem::Problem,
        render::SVG,
        state::Shared,
        table::csv,
    },
};

/// What does a whole pour come to?
///
/// Tilts the vessel, follows level and flow, decides at every instant whether the stream leaves or clings, with the memory that a wetted face has, and says how much is
/// served, how much runs down the outside and when, where the stream lands and what the last drop does. As CSV or as an Arrow stream: the series
/// alone. As SVG: tilt, flow and safety factor against time, and the tilted vessel at rest, at the start, at the largest flow and at the end.
#[utoipa::path(post, path = "/v1/pours", tag = "lip",
    request_body(content = VesselPourRequest, description = "Vessel, fill, tilt, lip, surface and liquid"),
    responses((status = 200, description = "What the pour comes to", content(
        (PourAnswer<'static> = "application/json"),
        (String = "text/csv"),
        (String = "application/vnd.apache.arrow.stream"),
        (String = "image/svg+xml")))))]
pub async fn pour(
    State(state): State<Shared>,
    headers: HeaderMap,
    JsonBytes(bytes): JsonBytes,
) -> Result<Response, Problem> {
    let media_type = choose(&headers, &[JSON, CSV, ARROW, SVG])?;
    let request: VesselPourRequest = read(&bytes)?;
    // A pour takes as long as dozens of evaluations: it waits for its turn among the long computations, up to the request's own deadline.
    let turn = state.heavy.clone().acquire_owned().await;
    let _turn = turn.map_err(|_| Problem::internal("The service is closing."))?;
    // A caller that hangs up drops this future, and with it the pour.
    let stop = StopOnDrop(Arc::new(AtomicBool::new(false)));
    let cancel = stop.0.clone();
    let work = tokio::task::spawn_blocking(move || answer(&request, media_type, &cancel));
    let (body, model) = work.await.map_err(|_| Problem::internal("The service failed on this pour."))??;
    let mut response = Response::new(body.into());
    let headers = response.headers_mut();
    let content_type = if media_type == CSV { csv::CONTENT_TYPE } else { media_type };
    headers.insert(header::CONTENT_TYPE, HeaderValue::from_static(content_type));
    headers.append(header::VARY, HeaderValue::from_static("accept"));
    if let Ok(value) = HeaderValue::try_from(model.dictionary()) {
        headers.insert(RESULT_MODEL, value);
    }
    Ok(response)
}

struct StopOnDrop(Arc<AtomicBool>);

impl Drop for StopOnDrop {
    fn drop(&mut self) {
        self.0.store(true, Ordering::Relaxed);
    }
}

fn answer(
    request: &VesselPourRequest,
    media_type: &str,
    cancel: &AtomicBool,
) -> Result<(Vec<u8>, ModelAnswer), Problem> {
    let spec = request.question().map_err(invalid)?;
    let pour = pour_out(&spec, cancel).map_err(invalid)?;
    let model = ModelAnswer::of(request, spec.lip.coefficients.id);
    let body = match media_type {
        CSV => series::csv(&pour),
        ARROW => series::arrow(&pour, &model)
            .map_err(|_| Problem::internal("The series does not fit its own schema."))?,
        SVG => picture::picture(&spec, &pour, &model).into_bytes(),
        _ => serde_json::to_vec(&PourAnswer::new(&pour, model.clone()))
            .map_err(|_| Problem::internal("The answer holds a number that is not finite."))?,
    };
    Ok((body, model))
}
