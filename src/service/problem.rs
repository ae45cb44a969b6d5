//! Every error a caller can see, in one list, as RFC 9457 problem documents.
//!
//! A handler returns a [`Problem`]; the outer layer ([`super::layers`]) writes it out, since only there are the
//! request's path (`instance`) and the base path (for `type`) known. The same layer turns failures of the router
//! and of the framework into problems, so no other kind of error body leaves the service.

use axum::response::{IntoResponse, Response};
use http::{HeaderValue, Method, StatusCode, header};
use serde::Serialize;
use utoipa::ToSchema;

/// The media type of a problem document.
pub const PROBLEM_JSON: &str = "application/problem+json";

/// The kinds of problem, each with its own page at `/problems/{slug}`.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum ProblemKind {
    /// 400: the body is not JSON.
    NotJson,
    /// 400: path, query or headers could not be read.
    MalformedRequest,
    /// 401: no bearer token, or one that is not known.
    Unauthorized,
    /// 404: nothing at this path.
    NotFound,
    /// 405: the path exists, the method does not.
    MethodNotAllowed,
    /// 406: none of the media types asked for can be produced.
    NotAcceptable,
    /// 408: the body did not arrive in time.
    SlowRequest,
    /// 413: the body is larger than this server takes.
    TooLarge,
    /// 415: the body is not declared to be JSON.
    UnsupportedMediaType,
    /// 422: JSON, but not a valid request.
    InvalidRequest,
    /// 500: a fault of the service.
    Internal,
    /// 503: more requests in flight than this server takes on.
    Overloaded,
    /// 504: the answer was not ready in time.
    TimedOut,
}

impl ProblemKind {
    /// All kinds, in the order of their status.
    pub const ALL: [Self; 13] = [
        Self::NotJson,
        Self::MalformedRequest,
        Self::Unauthorized,
        Self::NotFound,
        Self::MethodNotAllowed,
        Self::NotAcceptable,
        Self::SlowRequest,
        Self::TooLarge,
        Self::UnsupportedMediaType,
        Self::InvalidRequest,
        Self::Internal,
        Self::Overloaded,
        Self::TimedOut,
    ];

    /// The HTTP status.
    #[must_use]
    pub const fn status(self) -> StatusCode {
        match self {
            Self::NotJson | Self::MalformedRequest => StatusCode::BAD_REQUEST,
            Self::Unauthorized => StatusCode::UNAUTHORIZED,
            Self::NotFound => StatusCode::NOT_FOUND,
            Self::MethodNotAllowed => StatusCode::METHOD_NOT_ALLOWED,
            Self::NotAcceptable => StatusCode::NOT_ACCEPTABLE,
            Self::SlowRequest => StatusCode::REQUEST_TIMEOUT,
            Self::TooLarge => StatusCode::PAYLOAD_TOO_LARGE,
            Self::UnsupportedMediaType => StatusCode::UNSUPPORTED_MEDIA_TYPE,
            Self::InvalidRequest => StatusCode::UNPROCESSABLE_ENTITY,
            Self::Internal => StatusCode::INTERNAL_SERVER_ERROR,
            Self::Overloaded => StatusCode::SERVICE_UNAVAILABLE,
            Self::TimedOut => StatusCode::GATEWAY_TIMEOUT,
        }
    }

    /// The last part of the problem's `type`: `/problems/{slug}`.
    #[must_use]
    pub const fn slug(self) -> &'static str {
        match self {
            Self::NotJson => "not-json",
            Self::MalformedRequest => "malformed-request",
            Self::Unauthorized => "unauthorized",
            Self::NotFound => "not-found",
            Self::MethodNotAllowed => "method-not-allowed",
            Self::NotAcceptable => "not-acceptable",
            Self::SlowRequest => "slow-request",
            Self::TooLarge => "too-large",
            Self::UnsupportedMediaType => "unsupported-media-type",
            Self::InvalidRequest => "invalid-request",
            Self::Internal => "internal-error",
            Self::Overloaded => "overloaded",
            Self::TimedOut => "timed-out",
        }
    }

    /// The problem's `title`: the same for every occurrence.
    #[must_use]
    pub const fn title(self) -> &'static str {
        match self {
            Self::NotJson => "The body is not JSON",
            Self::MalformedRequest => "The request could not be read",
            Self::Unauthorized => "A bearer token is needed",
            Self::NotFound => "There is nothing here",
            Self::MethodNotAllowed => "This path does not take this method",
            Self::NotAcceptable => "None of the media types asked for can be produced",
            Self::SlowRequest => "The request did not arrive in time",
            Self::TooLarge => "The request body is too large",
            Self::UnsupportedMediaType => "The request body must be JSON",
            Self::InvalidRequest => "The request is not valid",
            Self::Internal => "The service failed",
            Self::Overloaded => "The service is busy",
            Self::TimedOut => "The answer was not ready in time",
        }
    }

    /// What the problem means, for its page.
    #[must_use]
    pub const fn meaning(self) -> &'static str {
        match self {
            Self::NotJson => {
                "The request body is not JSON text in UTF-8 (RFC 8259), names a member of an object twice, or is nested too deeply. The detail gives the line and column."
            }
            Self::MalformedRequest => {
                "The path, the query or a header could not be read, so the request was not looked at any further."
            }
            Self::Unauthorized => {
                "This server is set up to ask for a bearer token on every call under /v1; none was sent, or it is not one the server knows."
            }
            Self::NotFound => {
                "No resource has this path, or the catalogue has no entry with this identifier."
            }
            Self::MethodNotAllowed => "The resource exists but does not answer this method.",
            Self::NotAcceptable => {
                "The Accept header rules out every media type that this resource can produce."
            }
            Self::SlowRequest => "The server waited for the rest of the request body for as long as it may.",
            Self::TooLarge => {
                "The request body is larger than this server's limit, so it was not read to its end."
            }
            Self::UnsupportedMediaType => {
                "The Content-Type of the request body is neither application/json nor a type ending in +json, or the body is compressed."
            }
            Self::InvalidRequest => {
                "The body is JSON, but fields are missing, unknown, of the wrong type, out of range, or contradict each other. `errors` lists every fault found, each with a JSON Pointer (RFC 6901) to the field, a stable code and what is accepted."
            }
            Self::Internal => {
                "The fault is the service's own. The request id in the X-Request-Id header finds it in the server's log."
            }
            Self::Overloaded => "The server is already working on as many requests as it takes on at a time.",
            Self::TimedOut => "The work was given up because it took longer than this server allows.",
        }
    }

    /// What the caller can do about it, for the problem's page.
    #[must_use]
    pub const fn remedy(self) -> &'static str {
        match self {
            Self::NotJson => {
                "Send one JSON value, encoded as UTF-8 without a byte order mark, each member named once."
            }
            Self::MalformedRequest => "Check the percent-encoding of the path and the query parameters.",
            Self::Unauthorized => "Send `Authorization: Bearer <token>` with a token the operator gave you.",
            Self::NotFound => {
                "Compare the path with /openapi.json, and identifiers with GET /v1/liquids and GET /v1/surfaces."
            }
            Self::MethodNotAllowed => "Use one of the methods in the Allow header.",
            Self::NotAcceptable => {
                "Ask for one of the types named in the detail, or leave out the Accept header."
            }
            Self::SlowRequest => "Send the request again; if the link is slow, send a smaller one.",
            Self::TooLarge => "Split the request, for instance into several batches.",
            Self::UnsupportedMediaType => "Send `Content-Type: application/json` and no Content-Encoding.",
            Self::InvalidRequest => "Mend the fields that `errors` points at and send the request again.",
            Self::Internal => "Report it to the operator with the request id.",
            Self::Overloaded => "Wait for as many seconds as Retry-After says, then try again.",
            Self::TimedOut => "Ask for less at a time: fewer points, fewer cases, fewer parts of the answer.",
        }
    }

    /// The kind that stands for a bare `status` of the framework, where there is one.
    #[must_use]
    pub fn from_status(status: StatusCode) -> Option<Self> {
        if status == StatusCode::BAD_REQUEST {
            return Some(Self::MalformedRequest);
        }
        Self::ALL.into_iter().find(|kind| kind.status() == status)
    }

    /// The kind with this slug.
    #[must_use]
    pub fn from_slug(slug: &str) -> Option<Self> {
        Self::ALL.into_iter().find(|kind| kind.slug() == slug)
    }
}

/// One fault of a request.
#[derive(Debug, Clone, PartialEq, Serialize, ToSchema)]
pub struct Fault {
    /// JSON Pointer (RFC 6901) to the field; for a missing field, the pointer it would have.
    #[schema(example = "/lip/edge/rounded/radius_mm")]
    pub pointer: String,
    /// Stable code, for programs.
    #[schema(example = "out_of_range")]
    pub code: &'static str,
    /// What is wrong and what is accepted, for people.
    #[schema(example = "must be between 0 and 50 mm")]
    pub detail: String,
    /// Smallest value accepted, where there is one.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub minimum: Option<f64>,
    /// Largest value accepted, where there is one.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub maximum: Option<f64>,
    /// The values accepted, or the nearest known ones, where they can be listed.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub choices: Vec<String>,
}

impl Fault {
    /// A fault without bounds or choices.
    #[must_use]
    pub fn new(pointer: impl Into<String>, code: &'static str, detail: impl Into<String>) -> Self {
        Self {
            pointer: pointer.into(),
            code,
            detail: detail.into(),
            minimum: None,
            maximum: None,
            choices: Vec::new(),
        }
    }

    /// The same fault with the range that is accepted.
    #[must_use]
    pub fn between(mut self, minimum: f64, maximum: f64) -> Self {
        self.minimum = Some(minimum);
        self.maximum = Some(maximum);
        self
    }

    /// The same fault with the choices that are accepted.
    #[must_use]
    pub fn among<S: Into<String>>(mut self, choices: impl IntoIterator<Item = S>) -> Self {
        self.choices = choices.into_iter().map(Into::into).collect();
        self
    }
}

/// A problem on its way to the caller.
#[derive(Debug, Clone, PartialEq)]
pub struct Problem {
    /// Which of the listed kinds it is.
    pub kind: ProblemKind,
    /// What happened this time.
    pub detail: String,
    /// All faults of the request that were found.
    pub errors: Vec<Fault>,
    /// The methods the resource does take, for `Allow`.
    pub allow: Option<HeaderValue>,
    /// Seconds after which to try again, for `Retry-After`.
    pub retry_after_s: Option<u32>,
}

impl Problem {
    /// A problem without faults.
    #[must_use]
    pub fn new(kind: ProblemKind, detail: impl Into<String>) -> Self {
        Self { kind, detail: detail.into(), errors: Vec::new(), allow: None, retry_after_s: None }
    }

    /// 422 with all the faults found.
    #[must_use]
    pub fn invalid(errors: Vec<Fault>) -> Self {
        let detail = match errors.as_slice() {
            [only] => format!("{}: {}", only.pointer, only.detail),
            several => format!("The request has {} faults; see errors.", several.len()),
        };
        Self { errors, ..Self::new(ProblemKind::InvalidRequest, detail) }
    }

    /// 404 for something that is not there; `detail` says what, and what is.
    #[must_use]
    pub fn not_found(detail: impl Into<String>) -> Self {
        Self::new(ProblemKind::NotFound, detail)
    }

    /// 500; `detail` is for the caller, so it names no inner matters.
    #[must_use]
    pub fn internal(detail: impl Into<String>) -> Self {
        Self::new(ProblemKind::Internal, detail)
    }

    /// The same problem with the seconds after which to try again.
    #[must_use]
    pub fn retry_after(mut self, seconds: u32) -> Self {
        self.retry_after_s = Some(seconds);
        self
    }

    /// The document as it is sent, for `instance` on a service under `base_path`.
    #[must_use]
    pub fn into_document(self, base_path: &str, instance: &str) -> ProblemDocument {
        ProblemDocument {
            kind: format!("{base_path}/problems/{}", self.kind.slug()),
            title: self.kind.title().into(),
            status: self.kind.status().as_u16(),
            detail: self.detail,
            instance: instance.into(),
            errors: self.errors,
        }
    }
}

impl std::fmt::Display for Problem {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        write!(f, "{}: {}", self.kind.title(), self.detail)
    }
}

impl std::error::Error for Problem {}

impl IntoResponse for Problem {
    /// Status and headers, with the problem itself as an extension: the outer layer writes the body.
    fn into_response(self) -> Response {
        let mut response = self.kind.status().into_response();
        if let Some(allow) = &self.allow {
            response.headers_mut().insert(header::ALLOW, allow.clone());
        }
        if let Some(seconds) = self.retry_after_s {
            response.headers_mut().insert(header::RETRY_AFTER, seconds.into());
        }
        if self.kind == ProblemKind::Unauthorized {
            response.headers_mut().insert(header::WWW_AUTHENTICATE, HeaderValue::from_static("Bearer"));
        }
        response.extensions_mut().insert(self);
        response
    }
}

/// A problem document (RFC 9457).
#[derive(Debug, Clone, PartialEq, Serialize, ToSchema)]
#[schema(as = Problem)]
pub struct ProblemDocument {
    /// URI reference of the page that explains this kind of problem.
    #[serde(rename = "type")]
    #[schema(example = "/problems/invalid-request", format = "uri-reference")]
    pub kind: String,
    /// The kind of problem in a few words; the same for every occurrence.
    #[schema(example = "The request is not valid")]
    pub title: String,
    /// The HTTP status.
    #[schema(example = 422, minimum = 400, maximum = 599)]
    pub status: u16,
    /// What happened this time.
    #[schema(example = "/pour/flow_ml_s: must be between 0.001 and 5000 ml/s")]
    pub detail: String,
    /// The path that was asked for.
    #[schema(example = "/v1/evaluations", format = "uri-reference")]
    pub instance: String,
    /// All faults found in the request; empty where the problem is not with its fields.
    pub errors: Vec<Fault>,
}

/// Turns any answer with a status of 400 or more into a problem document, keeping its other headers
/// (`Allow`, `Retry-After`, …); leaves alone what is one already.
pub(super) fn rewrite(mut response: Response, method: &Method, path: &str, base_path: &str) -> Response {
    let written = response
        .headers()
        .get(header::CONTENT_TYPE)
        .is_some_and(|kind| kind.as_bytes().starts_with(PROBLEM_JSON.as_bytes()));
    if written {
        return response;
    }
    let status = response.status();
    let document = match response.extensions_mut().remove::<Problem>() {
        Some(problem) => problem.into_document(base_path, path),
        None => bare(status, method, path, base_path, &response),
    };
    let text = serde_json::to_vec(&document).unwrap_or_default();
    let (mut head, _) = response.into_parts();
    head.headers.insert(header::CONTENT_TYPE, HeaderValue::from_static(PROBLEM_JSON));
    head.headers.insert(header::CONTENT_LENGTH, text.len().into());
    for stale in [header::ETAG, header::CONTENT_ENCODING, header::TRANSFER_ENCODING, header::LAST_MODIFIED] {
        head.headers.remove(stale);
    }
    let body = if method == Method::HEAD { axum::body::Body::empty() } else { text.into() };
    Response::from_parts(head, body)
}

/// The document for an answer of the router or the framework.
fn bare(
    status: StatusCode,
    method: &Method,
    path: &str,
    base_path: &str,
    response: &Response,
) -> ProblemDocument {
    let detail = match status {
        StatusCode::NOT_FOUND => "Nothing has this path; /openapi.json lists what there is.".into(),
        StatusCode::METHOD_NOT_ALLOWED => {
            let allow = response.headers().get(header::ALLOW).and_then(|value| value.to_str().ok());
            format!("{method} is not one of the methods taken here: {}.", allow.unwrap_or("none"))
        }
        _ => "The service refused the request before any resource saw it.".into(),
    };
    match ProblemKind::from_status(status) {
        Some(kind) => Problem::new(kind, detail).into_document(base_path, path),
        None => ProblemDocument {
            kind: "about:blank".into(),
            title: status.canonical_reason().unwrap_or("Error").into(),
            status: status.as_u16(),
            detail,
            instance: path.into(),
            errors: Vec::new(),
        },
    }
}
