//! `POST /v1/tolerances`: from the spreads of the inputs to the share of pours that dribble, and what drives it.

mod answer;
mod picture;
mod request;
mod spread;

use std::sync::{Arc, atomic::AtomicUsize};

use axum::{extract::State, response::Response};
use http::{HeaderMap, HeaderValue, header};

pub use answer::TolerancesAnswer;
pub use request::{EXAMPLE, TolerancesRequest};

use super::inside::{look_into_base, within};
use crate::{
    analysis::{
        tolerance::{Failure, Study},
        watch::Watch,
    },
    service::{
        body::JsonBytes,
        events,
        explain::{invalid, read},
        fingerprint::ModelAnswer,
        heavy::{permit, piece},
        negotiation::{EVENTS, JSON, choose},
        problem::Problem,
        render::SVG,
        state::Shared,
    },
};

/// How many of a million pours dribble?
///
/// Draws the numbers that vary, computes the margin of each pour, and gives the share that dribbles in ppm with the interval of its sampling error (under 100 ppm by
/// importance sampling), the band that the models' doubt makes of it, quantiles and histogram of the margin, and the inputs that drive it. Numbers vary
/// independently of one another. Trials that make no case (a liquid that freezes) are left out and told of; more than 1 % of them are refused.
/// With `Accept: text/event-stream` come `progress` events (in trials) and a last `result` event that equals the JSON answer; as SVG the histogram of the
/// margin with the line where dribbling begins, and below it the shares of the drivers.
#[utoipa::path(post, path = "/v1/tolerances", tag = "production",
    request_body(content = TolerancesRequest, description = "A lip, and how its numbers vary"),
    responses((status = 200, description = "How many dribble, and why", content(
        (TolerancesAnswer<'static> = "application/json"),
        (String = "text/event-stream"),
        (String = "image/svg+xml")))))]
pub async fn tolerances(
    State(state): State<Shared>,
    headers: HeaderMap,
    JsonBytes(bytes): JsonBytes,
) -> Result<Response, Problem> {
    let media_type = choose(&headers, &[JSON, EVENTS, SVG])?;
    let request = read::<TolerancesRequest>(&bytes).map_err(|problem| look_into_base(problem, &bytes))?;
    let study = request.study(state.settings.max_points.get() as u64).map_err(invalid)?;
    let permit = permit(&state).await?;
    let guard = events::Guard::default();
    let (cancelled, done, total) = (guard.flag(), Arc::new(AtomicUsize::new(0)), study.work());
    let counted = done.clone();
    let work = piece(move || {
        let _held = permit;
        answer(&request, &study, media_type, Watch { done: &counted, cancelled: &cancelled })
    });
    let mut response = Response::new(if media_type == EVENTS {
        events::body(guard, done, total, work)
    } else {
        let _guard = guard;
        work.await.map_err(|_| Problem::internal("The work on these tolerances failed."))??.into()
    });
    response.headers_mut().insert(header::CONTENT_TYPE, HeaderValue::from_static(media_type));
    response.headers_mut().append(header::VARY, HeaderValue::from_static("accept"));
    Ok(response)
}

fn answer(
    request: &TolerancesRequest,
    study: &Study,
    media_type: &str,
    watch: Watch<'_>,
) -> Result<Vec<u8>, Problem> {
    let outcome = study.run(watch).map_err(|failure| match failure {
        Failure::Varying(faults) => invalid(faults),
        Failure::Base(faults) => invalid(within("/base", faults)),
        Failure::Statistics(fault) => Problem::internal(format!("The {fault}.")),
        Failure::Cancelled => Problem::internal("The work was cancelled."),
    })?;
    let model = ModelAnswer::of(request, study.base.coefficients.id);
    if media_type == SVG {
        return Ok(picture::picture(study, &outcome, &model).into_bytes());
    }
    serde_json::to_vec(&TolerancesAnswer::new(study, &outcome, model))
        .map_err(|_| Problem::internal("The answer holds a number that is not finite."))
}
