//! `POST /v1/lots`: measured parts or a pour test against a plan.

mod answer;
mod evidence;
mod limit;
mod picture;
mod request;

use std::sync::{Arc, atomic::AtomicBool};

use axum::{extract::State, response::Response};
use http::{HeaderMap, HeaderValue, header};

pub use answer::LotAnswer;
pub use request::{EXAMPLE, LotRequest};

use self::{limit::LimitSought, request::Question};
use crate::{
    analysis::{lot::Measurement, statistics::StatisticsFault},
    physics::separation::closed_form::DEFAULT_SET,
    service::{
        body::JsonBytes,
        events,
        explain::{invalid, read},
        fingerprint::ModelAnswer,
        heavy::{permit, piece},
        negotiation::{JSON, choose},
        problem::Problem,
        render::SVG,
        state::Shared,
    },
};

/// Is this lot good enough?
///
/// Holds measured parts against a limit (given, or found by a design), or a pour test against a count, at the two risks of the plan: accept, reject, or more pieces
/// needed, with the reasons. Gives the capability of the lot with its exact lower bound, the upper bound of the fraction nonconforming, the guard band that the
/// uncertainty of the measurement asks for with the risks of single parts, tests of normality and what follows when they fail, and the operating characteristic.
/// Limits for measured parts are for the characteristic itself; `fraction_nonconforming` says nothing about pours.
/// As SVG: the histogram of the values with limit and guard band, and the operating characteristic.
#[utoipa::path(post, path = "/v1/lots", tag = "production",
    request_body(content = LotRequest, description = "Evidence, limit and plan"),
    responses((status = 200, description = "What becomes of the lot, and why", content(
        (LotAnswer<'static> = "application/json"), (String = "image/svg+xml")))))]
pub async fn lots(
    State(state): State<Shared>,
    headers: HeaderMap,
    JsonBytes(bytes): JsonBytes,
) -> Result<Response, Problem> {
    let media_type = choose(&headers, &[JSON, SVG])?;
    let request: LotRequest = read(&bytes)?;
    let question = request.question().map_err(invalid)?;
    let designs = matches!(
        &question,
        Question::Measured { limit, .. } if matches!(**limit, LimitSought::Design(_))
    );
    let text = if designs {
        let permit = permit(&state).await?;
        let guard = events::Guard::default();
        let cancelled: Arc<AtomicBool> = guard.flag();
        let work = piece(move || {
            let _held = permit;
            answer(&request, &question, media_type, &cancelled)
        });
        let text = work.await.map_err(|_| Problem::internal("The work on this lot failed."))?;
        drop(guard);
        text?
    } else {
        answer(&request, &question, media_type, &AtomicBool::new(false))?
    };
    let mut response = Response::new(text.into());
    response.headers_mut().insert(header::CONTENT_TYPE, HeaderValue::from_static(media_type));
    response.headers_mut().append(header::VARY, HeaderValue::from_static("accept"));
    Ok(response)
}

fn answer(
    request: &LotRequest,
    question: &Question,
    media_type: &str,
    cancelled: &AtomicBool,
) -> Result<Vec<u8>, Problem> {
    let failed = |fault: StatisticsFault| Problem::internal(format!("No answer: {fault}."));
    let written = match question {
        Question::Poured(test) => {
            let found = test.judge().map_err(failed)?;
            let model = ModelAnswer::of(request, DEFAULT_SET.id);
            if media_type == SVG {
                return Ok(picture::of_pour_test(test, &found, &model).into_bytes());
            }
            serde_json::to_vec(&LotAnswer::of_pour_test(&found, model))
        }
        Question::Measured {
            values,
            gauge: [standard_uncertainty, repeatability, bias],
            limit,
            points,
            unit,
        } => {
            let found = limit.find(cancelled).map_err(|fault| invalid(vec![fault]))?;
            let found_limit = found.ok_or_else(|| Problem::internal("The work was cancelled."))?;
            let measurement = Measurement {
                values,
                standard_uncertainty: *standard_uncertainty,
                repeatability: *repeatability,
                bias: *bias,
                limit: found_limit,
                points: *points,
                confidence: request.confidence.get(),
            };
            let found = measurement.judge().map_err(failed)?;
            let model = ModelAnswer::of(request, limit.coefficients());
            if media_type == SVG {
                let name = request.characteristic.as_ref().map_or("", |c| c.name.as_str());
                return Ok(picture::of_measured(&measurement, &found, (name, unit), &model).into_bytes());
            }
            serde_json::to_vec(&LotAnswer::of_measured(&found, found_limit, unit, model))
        }
    };
    written.map_err(|_| Problem::internal("The answer holds a number that is not finite."))
}
