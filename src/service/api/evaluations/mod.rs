//! `POST /v1/evaluations`: does this lip dribble, by what margin, how surely, and what would mend it?

mod answer;
mod request;

use axum::response::Response;
use http::{HeaderMap, HeaderValue, header};

pub use answer::EvaluationAnswer;
pub use request::{EXAMPLE, EvaluationRequest, PourRequest};

use crate::{
    analysis::{evaluation, fault::Fault},
    service::{
        body::JsonBytes,
        explain::{invalid, read},
        fingerprint::ModelAnswer,
        negotiation::{JSON, choose},
        problem::Problem,
    },
};

/// Does this lip dribble?
///
/// Turns the pour rate into a stream at the lip, decides whether it leaves or clings, says by what margin and how sure that is, finds the pour rates at which
/// the lip changes sides, and looks for the smallest single changes that would mend it.
#[utoipa::path(post, path = "/v1/evaluations", tag = "lip",
    request_body(content = EvaluationRequest, description = "Lip, surface, liquid and pour rate"),
    responses((status = 200, description = "What is said of this lip", body = EvaluationAnswer<'static>)))]
pub async fn evaluate(headers: HeaderMap, JsonBytes(bytes): JsonBytes) -> Result<Response, Problem> {
    choose(&headers, &[JSON])?;
    let answer = evaluate_json(&bytes)?;
    let mut response = Response::new(answer.into());
    response.headers_mut().insert(header::CONTENT_TYPE, HeaderValue::from_static(JSON));
    Ok(response)
}

/// Decides one evaluation request given as JSON text and writes the answer as JSON text.
///
/// # Errors
/// The problem that the HTTP resource would answer with.
pub fn evaluate_json(bytes: &[u8]) -> Result<Vec<u8>, Problem> {
    let request: EvaluationRequest = read(bytes)?;
    let mut answer = Vec::with_capacity(4096);
    evaluate_into(&request, &mut answer)?;
    Ok(answer)
}

/// Why there is no answer to a request of the right form.
#[derive(Debug)]
pub enum Failure {
    /// The request's own faults.
    Faults(Vec<Fault>),
    /// A number of the answer is not finite: the service's fault.
    NotFinite,
}

impl From<Failure> for Problem {
    fn from(failure: Failure) -> Self {
        match failure {
            Failure::Faults(faults) => invalid(faults),
            Failure::NotFinite => Self::internal("The answer holds a number that is not finite."),
        }
    }
}

/// Writes the answer to a request as JSON text at the end of `answer`.
///
/// # Errors
/// Every fault of the request; a number that is not finite.
pub fn evaluate_into(request: &EvaluationRequest, answer: &mut Vec<u8>) -> Result<(), Failure> {
    let (spec, limits) = request.question().map_err(Failure::Faults)?;
    let evaluation = evaluation::evaluate(&spec, request.include(), &limits).map_err(Failure::Faults)?;
    let model = ModelAnswer::of(request, spec.coefficients.id);
    let written = EvaluationAnswer::new(&spec, &evaluation, model);
    serde_json::to_writer(answer, &written).map_err(|_| Failure::NotFinite)
}
