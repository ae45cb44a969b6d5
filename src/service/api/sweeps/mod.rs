//! `POST /v1/sweeps`: a table or map over one or more fields.

mod answer;
mod drive;
mod picture;
mod request;

use axum::{body::Body, extract::State, response::Response};
use http::{HeaderMap, HeaderName, HeaderValue, header};

pub use answer::SweepAnswer;
pub use request::{Plan, SweepRequest};

use self::drive::Form;
use super::inside::look_into_base;
use crate::service::{
    body::JsonBytes,
    explain::{invalid, read},
    fingerprint::ModelAnswer,
    heavy::permit,
    negotiation::{ARROW, CSV, EVENTS, JSON, choose},
    problem::Problem,
    render::SVG,
    state::Shared,
    table::csv,
};

/// The model that made a result, where the result itself has no place for it: a dictionary (RFC 9651).
pub const RESULT_MODEL: HeaderName = HeaderName::from_static("result-model");

/// One question at many points
///
/// A table over one to four fields named by JSON Pointer. The first axis is the slowest; the columns are the axes, by the last part of their pointer, then
/// the outputs, then `fault`. A point that is impossible (a liquid that freezes there, say) has no outputs and the code of its first fault; the rest stand.
///
/// The answer is streamed, as JSON by columns, as CSV, or as an Arrow stream; memory does not grow with the number of points. With
/// `Accept: image/svg+xml` comes a picture of the whole sweep: curves for one axis or where one of two has few values, else a map with the verdict boundaries on it. With
/// `Accept: text/event-stream` come `progress` events and a last `result` event that equals the JSON answer. A caller that hangs up stops the work.
#[utoipa::path(post, path = "/v1/sweeps", tag = "maps",
    request_body(content = SweepRequest, description = "A question, one to four axes, and what is asked of each point"),
    responses((status = 200, description = "The table", content(
        (SweepAnswer = "application/json"),
        (String = "text/csv"),
        (String = "application/vnd.apache.arrow.stream"),
        (String = "text/event-stream"),
        (String = "image/svg+xml")))))]
pub async fn sweep(
    State(state): State<Shared>,
    headers: HeaderMap,
    JsonBytes(bytes): JsonBytes,
) -> Result<Response, Problem> {
    let media_type = choose(&headers, &[JSON, CSV, ARROW, EVENTS, SVG])?;
    let request = read::<SweepRequest>(&bytes).map_err(|problem| look_into_base(problem, &bytes))?.filled();
    let plan = request.plan(state.settings.max_points.get()).map_err(invalid)?;
    let model = ModelAnswer::of(&request, plan.spec.coefficients.id);
    if media_type == SVG {
        picture::check(&request, &plan)?;
        let drawn = picture::draw(plan, model, permit(&state).await?).await?;
        let mut response = Response::new(drawn.into());
        response.headers_mut().insert(header::CONTENT_TYPE, HeaderValue::from_static(SVG));
        return Ok(response);
    }
    let permit = permit(&state).await?;
    let form = match media_type {
        CSV => Form::Csv,
        ARROW => Form::Arrow,
        EVENTS => Form::Events,
        _ => Form::Json,
    };
    let mut response = Response::new(Body::empty());
    let headers = response.headers_mut();
    let content_type = match form {
        Form::Csv => csv::CONTENT_TYPE,
        Form::Json | Form::Arrow | Form::Events => media_type,
    };
    headers.insert(header::CONTENT_TYPE, HeaderValue::from_static(content_type));
    if let Ok(value) = HeaderValue::try_from(model.dictionary()) {
        headers.insert(RESULT_MODEL, value);
    }
    *response.body_mut() = drive::body(plan, model, form, permit);
    Ok(response)
}
