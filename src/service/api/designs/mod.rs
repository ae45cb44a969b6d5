//! `POST /v1/designs`: the limit of one field over many cases.

mod answer;
mod request;

use std::sync::{
    Arc,
    atomic::{AtomicBool, AtomicUsize, Ordering},
};

use axum::{extract::State, response::Response};
use http::{HeaderMap, HeaderValue, header};

pub use answer::DesignAnswer;
pub use request::{DesignRequest, Plan};

use super::inside::look_into_base;
use crate::{
    analysis::design::{Design, design as find_limit},
    service::{
        body::JsonBytes,
        events,
        explain::{invalid, read},
        fingerprint::ModelAnswer,
        heavy::{permit, piece},
        negotiation::{EVENTS, JSON, choose},
        problem::Problem,
        state::Shared,
    },
};

/// The limit of one field over many cases
///
/// Finds the last value of a field (edge radius, contact angle, pour rate, width …) at which a whole list of liquids and pours stays clean, says which case
/// governs, and reports every clean interval. Where no value in the bracket is clean, `limit` is null, and `blocking_case` and `nearest` say why.
/// With `Accept: text/event-stream` come `progress` events (in cases) and a last `result` event that equals the JSON answer.
#[utoipa::path(post, path = "/v1/designs", tag = "maps",
    request_body(content = DesignRequest, description = "A lip, the field to be limited, and the cases it has to stand"),
    responses((status = 200, description = "The limit, or why there is none", content(
        (DesignAnswer<'static> = "application/json"),
        (String = "text/event-stream")))))]
pub async fn design(
    State(state): State<Shared>,
    headers: HeaderMap,
    JsonBytes(bytes): JsonBytes,
) -> Result<Response, Problem> {
    let media_type = choose(&headers, &[JSON, EVENTS])?;
    let request = read::<DesignRequest>(&bytes).map_err(|problem| look_into_base(problem, &bytes))?.filled();
    let plan = request.plan().map_err(invalid)?;
    let permit = permit(&state).await?;
    let guard = events::Guard::default();
    let (cancelled, done, total) = (guard.flag(), Arc::new(AtomicUsize::new(0)), plan.cases.len());
    let counted = done.clone();
    let work = piece(move || {
        let _held = permit;
        answer(&request, &plan, &cancelled, &counted)
    });
    let mut response = Response::new(if media_type == EVENTS {
        events::body(guard, done, total, work)
    } else {
        let _guard = guard;
        work.await.map_err(|_| Problem::internal("The work on this design failed."))??.into()
    });
    response.headers_mut().insert(header::CONTENT_TYPE, HeaderValue::from_static(media_type));
    Ok(response)
}

fn answer(
    request: &DesignRequest,
    plan: &Plan,
    cancelled: &AtomicBool,
    done: &AtomicUsize,
) -> Result<Vec<u8>, Problem> {
    let question = Design { field: plan.field, between: plan.between, cases: &plan.cases };
    let count = || {
        done.fetch_add(1, Ordering::Relaxed);
    };
    let outcome = find_limit(&question, cancelled, &count)
        .map_err(|cancelled| Problem::internal(cancelled.to_string()))?;
    let coefficients = plan.cases.first().map_or("", |case| case.coefficients.id);
    let model = ModelAnswer::of(request, coefficients);
    serde_json::to_vec(&DesignAnswer::new(request, plan, &outcome, model))
        .map_err(|_| Problem::internal("The answer holds a number that is not finite."))
}
