//! `POST /v1/contact-angles`: the contact angle from surface energies, roughness or texture, several published models side by side.

mod answer;
mod estimates;
mod request;
mod solid;

use axum::response::Response;
use http::{HeaderMap, HeaderValue, header};

use self::answer::Findings;
pub use self::{
    answer::ContactAnglesAnswer,
    request::{ContactAnglesRequest, EXAMPLE},
};
use crate::service::{
    body::JsonBytes,
    explain::{invalid, read},
    fingerprint::ModelAnswer,
    negotiation::{JSON, choose},
    problem::Problem,
};

/// Which contact angle do the models predict?
///
/// Young, Owens & Wendt, van Oss, Chaudhury & Good, Neumann, and on a rough or textured face Wenzel or Cassie & Baxter, side by side, each with its uncertainty and
/// what it rests on, or with what it lacks. They are the fallback where no measured angles are at hand.
#[utoipa::path(post, path = "/v1/contact-angles", tag = "catalogue",
    request_body(content = ContactAnglesRequest, description = "Liquid, solid, and texture if any"),
    responses((status = 200, description = "What the models say", body = ContactAnglesAnswer<'static>)))]
pub async fn contact_angles(headers: HeaderMap, JsonBytes(bytes): JsonBytes) -> Result<Response, Problem> {
    choose(&headers, &[JSON])?;
    let answer = contact_angles_json(&bytes)?;
    let mut response = Response::new(answer.into());
    response.headers_mut().insert(header::CONTENT_TYPE, HeaderValue::from_static(JSON));
    Ok(response)
}

/// Answers one contact-angle request given as JSON text with JSON text.
///
/// # Errors
/// The problem that the HTTP resource would answer with.
pub fn contact_angles_json(bytes: &[u8]) -> Result<Vec<u8>, Problem> {
    let request: ContactAnglesRequest = read(bytes)?;
    let question = request.question().map_err(invalid)?;
    let findings = Findings::of(&question);
    let model = ModelAnswer::of(&request, question.coefficients.id);
    serde_json::to_vec(&ContactAnglesAnswer::new(&question, &findings, model))
        .map_err(|_| Problem::internal("The answer holds a number that is not finite."))
}
