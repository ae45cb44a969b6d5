//! `POST /v1/evaluations`: does this lip dribble, by what margin, how surely, and what would mend it?

mod answer;
mod parts;
mod picture;
mod request;

use axum::response::Response;
use http::{HeaderMap, HeaderValue, header};

pub use answer::EvaluationAnswer;
pub use parts::{IntervalAnswer, VerdictAnswer};
pub use picture::conditions;
pub(super) use picture::materials;
pub use request::{EXAMPLE, EvaluationRequest, MethodRequest, OuterFaceRequest, PourRequest};

use crate::{
    analysis::{
        evaluation::{self, Evaluation},
        fault::Fault,
        spec::Spec,
    },
    service::{
        body::JsonBytes,
        explain::{invalid, read},
        fingerprint::ModelAnswer,
        negotiation::{JSON, choose},
        problem::Problem,
        render::SVG,
    },
};

/// Does this lip dribble?
///
/// Turns the pour rate into a stream at the lip, decides whether it leaves or clings, says by what margin and how sure that is, finds the pour rates at which
/// the lip changes sides, and looks for the smallest single changes that would mend it.
#[utoipa::path(post, path = "/v1/evaluations", tag = "lip",
    request_body(content = EvaluationRequest, description = "Lip, surface, liquid and pour rate"),
    responses((status = 200, description = "What is said of this lip; as `image/svg+xml` a drawing of it, to scale, with its stream and the key numbers in words", content(
        (EvaluationAnswer<'static> = "application/json"),
        (String = "image/svg+xml")
    ))))]
pub async fn evaluate(headers: HeaderMap, JsonBytes(bytes): JsonBytes) -> Result<Response, Problem> {
    let form = choose(&headers, &[JSON, SVG])?;
    let answer = if form == SVG { evaluate_svg(&bytes)?.into_bytes() } else { evaluate_json(&bytes)? };
    let mut response = Response::new(answer.into());
    response.headers_mut().insert(header::CONTENT_TYPE, HeaderValue::from_static(form));
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

/// Decides one evaluation request given as JSON text and draws the lip.
///
/// # Errors
/// The problem that the HTTP resource would answer with.
pub fn evaluate_svg(bytes: &[u8]) -> Result<String, Problem> {
    let request: EvaluationRequest = read(bytes)?;
    let (spec, evaluation) = evaluated(&request)?;
    let model = ModelAnswer::of(&request, spec.coefficients.id);
    let answer = EvaluationAnswer::new(&spec, &evaluation, model);
    // What cannot be said in JSON is not drawn either.
    serde_json::to_writer(std::io::sink(), &answer).map_err(|_| Failure::NotFinite)?;
    Ok(picture::picture(&spec, &evaluation, &answer))
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
    let (spec, evaluation) = evaluated(request)?;
    let model = ModelAnswer::of(request, spec.coefficients.id);
    let written = EvaluationAnswer::new(&spec, &evaluation, model);
    serde_json::to_writer(answer, &written).map_err(|_| Failure::NotFinite)
}

fn evaluated(request: &EvaluationRequest) -> Result<(Spec, Evaluation), Failure> {
    let (spec, limits) = request.question().map_err(Failure::Faults)?;
    let evaluation = evaluation::evaluate(&spec, request.include(), &limits).map_err(Failure::Faults)?;
    Ok((spec, evaluation))
}
