//! `POST /v1/calibrations`: bench pours in, fitted model coefficients with covariance out.

mod answer;
mod request;

use axum::{extract::State, response::Response};
use http::{HeaderMap, HeaderValue, header};

use self::answer::notices;
pub use self::{
    answer::CalibrationsAnswer,
    request::{CalibrationsRequest, EXAMPLE, MOST_ROWS},
};
use crate::{
    analysis::{calibration::fit, fault::Fault},
    service::{
        body::JsonBytes,
        explain::{invalid, read},
        heavy::permit,
        negotiation::{JSON, choose},
        problem::Problem,
        state::Shared,
    },
};

/// What do bench pours say of the critical Weber number?
///
/// Onsets, onsets between two flow steps, and single pours that were clean or dribbled, together: a Bayesian fit of the closed form's offset, of its answers to edge radius and to wetting, and
/// of the scatter from pour to pour. The `calibration` that comes back goes into any request for a verdict. Rows that the others do not foretell are flagged, never left out.
#[utoipa::path(post, path = "/v1/calibrations", tag = "bench",
    request_body(content = CalibrationsRequest, description = "Bench pours"),
    responses((status = 200, description = "What they say", body = CalibrationsAnswer<'static>)))]
pub async fn calibrate(
    State(state): State<Shared>,
    headers: HeaderMap,
    JsonBytes(bytes): JsonBytes,
) -> Result<Response, Problem> {
    choose(&headers, &[JSON])?;
    let permit = permit(&state).await?;
    let work = tokio::task::spawn_blocking(move || {
        let answer = calibrate_json(&bytes);
        drop(permit);
        answer
    });
    let answer = work.await.map_err(|_| Problem::internal("The service failed on this calibration."))??;
    let mut response = Response::new(answer.into());
    response.headers_mut().insert(header::CONTENT_TYPE, HeaderValue::from_static(JSON));
    Ok(response)
}

/// Answers one calibration request given as JSON text with JSON text.
///
/// # Errors
/// The problem that the HTTP resource would answer with.
pub fn calibrate_json(bytes: &[u8]) -> Result<Vec<u8>, Problem> {
    let request: CalibrationsRequest = read(bytes)?;
    let observed = request.observed().map_err(invalid)?;
    let fit = fit(&observed.rows, &observed.prior)
        .map_err(|fault| invalid(vec![Fault::new("/observations", "not_computable", fault.to_string())]))?;
    let notices = notices(&request, &observed, &fit);
    let answer = CalibrationsAnswer::new(&request, &observed, &fit, &notices);
    serde_json::to_vec(&answer)
        .map_err(|_| Problem::internal("The answer holds a number that is not finite."))
}
