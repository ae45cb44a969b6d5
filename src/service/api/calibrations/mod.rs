//! `POST /v1/calibrations`: bench pours in, fitted model coefficients with covariance out.

mod answer;
mod picture;
mod request;

use axum::{extract::State, response::Response};
use http::{HeaderMap, HeaderValue, header};

pub use self::{
    answer::CalibrationsAnswer,
    request::{CalibrationsRequest, EXAMPLE, MOST_ROWS},
};
use self::{answer::notices, request::Observed};
use crate::{
    analysis::{
        calibration::{Fit, fit},
        fault::Fault,
    },
    service::{
        body::JsonBytes,
        explain::{invalid, read},
        heavy::permit,
        negotiation::{JSON, choose},
        problem::Problem,
        render::SVG,
        state::Shared,
    },
};

/// What do bench pours say of the critical Weber number?
///
/// Onsets, onsets between two flow steps, and single pours that were clean or dribbled, together: a Bayesian fit of the closed form's offset, of its answers to edge radius and to wetting, and
/// of the scatter from pour to pour. The `calibration` that comes back goes into any request for a verdict. Rows that the others do not foretell are flagged, never left out.
#[utoipa::path(post, path = "/v1/calibrations", tag = "bench",
    request_body(content = CalibrationsRequest, description = "Bench pours"),
    responses((status = 200, description = "What they say; as `image/svg+xml` the probability of a clean pour with the bench rows", content(
        (CalibrationsAnswer<'static> = "application/json"),
        (String = "image/svg+xml")
    ))))]
pub async fn calibrate(
    State(state): State<Shared>,
    headers: HeaderMap,
    JsonBytes(bytes): JsonBytes,
) -> Result<Response, Problem> {
    let form = choose(&headers, &[JSON, SVG])?;
    let permit = permit(&state).await?;
    let work = tokio::task::spawn_blocking(move || {
        let answer =
            if form == SVG { calibrate_svg(&bytes).map(String::into_bytes) } else { calibrate_json(&bytes) };
        drop(permit);
        answer
    });
    let answer = work.await.map_err(|_| Problem::internal("The service failed on this calibration."))??;
    let mut response = Response::new(answer.into());
    response.headers_mut().insert(header::CONTENT_TYPE, HeaderValue::from_static(form));
    Ok(response)
}

/// Answers one calibration request given as JSON text with JSON text.
///
/// # Errors
/// The problem that the HTTP resource would answer with.
pub fn calibrate_json(bytes: &[u8]) -> Result<Vec<u8>, Problem> {
    calibrated(bytes, |_, _, _, _, text| text)
}

/// Answers one calibration request given as JSON text with a picture.
///
/// # Errors
/// The problem that the HTTP resource would answer with.
pub fn calibrate_svg(bytes: &[u8]) -> Result<String, Problem> {
    calibrated(bytes, |request, observed, fit, answer, _| picture::picture(request, observed, fit, answer))
}

/// Computes the answer and hands it on with its JSON text: what cannot be said in JSON is not drawn either.
fn calibrated<T>(
    bytes: &[u8],
    shown: impl FnOnce(&CalibrationsRequest, &Observed, &Fit, &CalibrationsAnswer<'_>, Vec<u8>) -> T,
) -> Result<T, Problem> {
    let request: CalibrationsRequest = read(bytes)?;
    let observed = request.observed().map_err(invalid)?;
    let fit = fit(&observed.rows, &observed.prior)
        .map_err(|fault| invalid(vec![Fault::new("/observations", "not_computable", fault.to_string())]))?;
    let notices = notices(&request, &observed, &fit);
    let answer = CalibrationsAnswer::new(&request, &observed, &fit, &notices);
    let text = serde_json::to_vec(&answer)
        .map_err(|_| Problem::internal("The answer holds a number that is not finite."))?;
    Ok(shown(&request, &observed, &fit, &answer, text))
}
