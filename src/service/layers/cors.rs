//! Which web pages may call the service from a browser.

use axum::response::{IntoResponse, Response};
use http::{HeaderMap, HeaderName, HeaderValue, Method, StatusCode, header};

use crate::service::settings::Origin;

const ALLOWED_METHODS: HeaderValue = HeaderValue::from_static("GET, HEAD, POST, OPTIONS");
const ALLOWED_HEADERS: HeaderValue =
    HeaderValue::from_static("accept, authorization, content-type, if-none-match, traceparent, x-request-id");
const EXPOSED_HEADERS: HeaderValue =
    HeaderValue::from_static("allow, etag, location, result-model, retry-after, server-timing, x-request-id");
/// Browsers cap it at two hours at most.
const PREFLIGHT_SECONDS: HeaderValue = HeaderValue::from_static("7200");

/// Whether a request is a browser's question if it may send the real one.
pub(super) fn is_preflight(method: &Method, headers: &HeaderMap) -> bool {
    *method == Method::OPTIONS
        && headers.contains_key(header::ORIGIN)
        && headers.contains_key(header::ACCESS_CONTROL_REQUEST_METHOD)
}

/// The answer to a preflight; whether it allows anything is up to [`grant`].
pub(super) fn preflight() -> Response {
    let mut response = StatusCode::NO_CONTENT.into_response();
    let headers = response.headers_mut();
    headers.insert(header::ACCESS_CONTROL_ALLOW_METHODS, ALLOWED_METHODS);
    headers.insert(header::ACCESS_CONTROL_ALLOW_HEADERS, ALLOWED_HEADERS);
    headers.insert(header::ACCESS_CONTROL_MAX_AGE, PREFLIGHT_SECONDS);
    response
}

/// Names the caller's origin in the answer if it is on the list. Credentials are never allowed: the service knows
/// no cookies.
pub(super) fn grant(allowed: &[Origin], origin: Option<&HeaderValue>, answer: &mut HeaderMap) {
    if allowed.is_empty() {
        return;
    }
    answer.append(header::VARY, HeaderValue::from_static("origin"));
    let Some(origin) = origin else { return };
    if allowed.iter().any(|one| one.is_any() || one.value() == origin) {
        answer.insert(header::ACCESS_CONTROL_ALLOW_ORIGIN, origin.clone());
        answer.insert(header::ACCESS_CONTROL_EXPOSE_HEADERS, EXPOSED_HEADERS);
        answer.insert(
            HeaderName::from_static("cross-origin-resource-policy"),
            HeaderValue::from_static("cross-origin"),
        );
    }
}
