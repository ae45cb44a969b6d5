//! What the caller wants and what it has: `Accept`, `Content-Type`, `If-None-Match`.

use axum::response::{IntoResponse, Response};
use bytes::Bytes;
use http::{HeaderMap, HeaderValue, StatusCode, header};
use sha2::{Digest, Sha256};

use super::problem::{Problem, ProblemKind};

/// The media type of JSON.
pub const JSON: &str = "application/json";

/// The media type of comma-separated values (RFC 4180).
pub const CSV: &str = "text/csv";

/// The media type of an Arrow IPC stream.
pub const ARROW: &str = "application/vnd.apache.arrow.stream";

/// The media type of server-sent events.
pub const EVENTS: &str = "text/event-stream";

/// Appended inside the quotes of an entity tag when the answer is compressed: a strong tag may not be shared by
/// two encodings (RFC 9110, 8.8.1).
pub const GZIP_TAG: &str = "-gzip";

/// Picks, out of `offers` (best first, the first being the default), the media type that the caller's `Accept`
/// likes best (RFC 9110, 12.5.1): the highest quality, ties going to the earlier offer.
///
/// # Errors
/// 406 when `Accept` rules out every offer.
pub fn choose(headers: &HeaderMap, offers: &'static [&'static str]) -> Result<&'static str, Problem> {
    let first = offers.first().copied().unwrap_or(JSON);
    let mut fields = headers.get_all(header::ACCEPT).iter();
    let Some(field) = fields.next() else { return Ok(first) };
    if fields.next().is_none() && (field.as_bytes() == b"*/*" || field.as_bytes() == first.as_bytes()) {
        return Ok(first);
    }
    let mut best: Option<(&'static str, u16)> = None;
    for &offer in offers {
        let quality = quality(headers, offer);
        if quality > 0 && best.is_none_or(|(_, known)| quality > known) {
            best = Some((offer, quality));
        }
    }
    best.map(|(offer, _)| offer).ok_or_else(|| {
        Problem::new(
            ProblemKind::NotAcceptable,
            format!("This resource can be had as {}, which Accept rules out.", offers.join(", ")),
        )
    })
}

/// The quality, in thousandths, that `Accept` gives to `offer`: that of the most specific range that matches.
fn quality(headers: &HeaderMap, offer: &str) -> u16 {
    let offered_type = offer.split('/').next().unwrap_or(offer);
    let mut found = (0_u8, 0_u16);
    for field in headers.get_all(header::ACCEPT) {
        let Ok(field) = field.to_str() else { continue };
        for range in field.split(',') {
            let mut parts = range.split(';').map(str::trim);
            let name = parts.next().unwrap_or_default();
            let specificity = if name.eq_ignore_ascii_case(offer) {
                3
            } else if name.strip_suffix("/*").is_some_and(|kind| kind.eq_ignore_ascii_case(offered_type)) {
                2
            } else if name == "*/*" {
                1
            } else {
                continue;
            };
            let weight = parts
                .find_map(|part| part.strip_prefix("q=").or_else(|| part.strip_prefix("Q=")))
                .map_or(1000, thousandths);
            if specificity > found.0 || (specificity == found.0 && weight > found.1) {
                found = (specificity, weight);
            }
        }
    }
    found.1
}

/// A quality value in thousandths; what cannot be read counts as unwanted.
fn thousandths(text: &str) -> u16 {
    match text.trim().parse::<f64>() {
        Ok(q) if (0.0..=1.0).contains(&q) => (q * 1000.0).round() as u16,
        _ => 0,
    }
}

/// Accepts a body declared as `application/json` or `…+json` (parameters are ignored), or not declared at all.
///
/// # Errors
/// 415 for any other type, and for a compressed body.
pub fn require_json(headers: &HeaderMap) -> Result<(), Problem> {
    if let Some(coding) = headers.get(header::CONTENT_ENCODING)
        && !coding.as_bytes().eq_ignore_ascii_case(b"identity")
    {
        return Err(Problem::new(
            ProblemKind::UnsupportedMediaType,
            "The body is compressed (Content-Encoding); send it as it is.",
        ));
    }
    let Some(declared) = headers.get(header::CONTENT_TYPE) else { return Ok(()) };
    if declared.as_bytes() == JSON.as_bytes() {
        return Ok(());
    }
    let text = declared.to_str().unwrap_or_default();
    let essence = text.split(';').next().unwrap_or_default().trim().to_ascii_lowercase();
    let is_json = essence == JSON || (essence.starts_with("application/") && essence.ends_with("+json"));
    if is_json {
        return Ok(());
    }
    Err(Problem::new(
        ProblemKind::UnsupportedMediaType,
        format!("The body is declared as \"{}\"; {JSON} is taken.", text.escape_default()),
    ))
}

/// How long a look-up may be kept: an hour, then asked for again by its tag (own judgement: the catalogue changes
/// only with a new version of the service).
pub const LOOK_UP: HeaderValue = HeaderValue::from_static("public, max-age=3600");

/// Always ask again, by the tag.
pub const REVALIDATE: HeaderValue = HeaderValue::from_static("no-cache");

/// Answers a `GET` with a strong `ETag` (SHA-256 of the body) and `Cache-Control`, or with 304 when the caller's
/// `If-None-Match` names that tag.
#[must_use]
pub fn cacheable(
    request: &HeaderMap,
    media_type: &'static str,
    cache_control: HeaderValue,
    body: impl Into<Bytes>,
) -> Response {
    let body = body.into();
    let tag = entity_tag(&body);
    let known = request.get_all(header::IF_NONE_MATCH).iter().any(|field| names(field, &tag));
    let etag = HeaderValue::from_str(&format!("\"{tag}\"")).unwrap_or(HeaderValue::from_static("\"\""));
    let mut response = if known {
        StatusCode::NOT_MODIFIED.into_response()
    } else {
        let mut full = Response::new(body.into());
        full.headers_mut().insert(header::CONTENT_TYPE, HeaderValue::from_static(media_type));
        full
    };
    response.headers_mut().insert(header::ETAG, etag);
    response.headers_mut().insert(header::CACHE_CONTROL, cache_control);
    response.headers_mut().append(header::VARY, HeaderValue::from_static("accept"));
    response
}

/// The first half of the body's SHA-256 in hexadecimal.
fn entity_tag(body: &[u8]) -> String {
    Sha256::digest(body).iter().take(16).map(|byte| format!("{byte:02x}")).collect()
}

/// Whether an `If-None-Match` field names `tag` (weak comparison, RFC 9110 13.1.2; either encoding).
fn names(field: &HeaderValue, tag: &str) -> bool {
    let Ok(field) = field.to_str() else { return false };
    field.split(',').map(str::trim).any(|candidate| {
        let candidate = candidate.strip_prefix("W/").unwrap_or(candidate).trim_matches('"');
        candidate == "*" || candidate.strip_suffix(GZIP_TAG).unwrap_or(candidate) == tag
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    const OFFERS: &[&str] = &["application/json", "text/csv"];

    fn accept(value: &'static str) -> HeaderMap {
        HeaderMap::from_iter([(header::ACCEPT, HeaderValue::from_static(value))])
    }

    #[test]
    fn accept_picks_by_quality_then_by_order_of_the_offers() {
        for (field, expected) in [
            ("*/*", Some("application/json")),
            ("text/csv", Some("text/csv")),
            ("text/csv, application/json", Some("application/json")),
            ("text/csv;q=0.9, application/json;q=0.8", Some("text/csv")),
            ("text/*;q=0.5, application/json; q=0.4", Some("text/csv")),
            ("application/json;q=0, */*", Some("text/csv")),
            ("TEXT/CSV; charset=utf-8; Q=1", Some("text/csv")),
            ("image/png", None),
            ("*/*;q=0", None),
            ("text/csv;q=many", None),
        ] {
            assert_eq!(choose(&accept(field), OFFERS).ok(), expected, "{field}");
        }
        assert_eq!(choose(&HeaderMap::new(), OFFERS).ok(), Some("application/json"));
    }

    #[test]
    fn content_types_that_are_json() {
        let declared = |value| {
            require_json(&HeaderMap::from_iter([(header::CONTENT_TYPE, HeaderValue::from_static(value))]))
                .is_ok()
        };
        assert!(require_json(&HeaderMap::new()).is_ok());
        assert!(declared("application/json; charset=utf-8") && declared("application/vnd.lip+json"));
        assert!(!declared("text/plain") && !declared("text/json-ish") && !declared(""));
    }

    #[test]
    fn a_known_tag_gets_304() {
        let first = cacheable(&HeaderMap::new(), JSON, LOOK_UP, "{}");
        let tag = first.headers()[header::ETAG].clone();
        assert!(tag.as_bytes().starts_with(b"\""), "strong");
        let ask = |value| {
            let headers = HeaderMap::from_iter([(header::IF_NONE_MATCH, value)]);
            cacheable(&headers, JSON, LOOK_UP, "{}").status()
        };
        assert_eq!(ask(tag.clone()), StatusCode::NOT_MODIFIED);
        let text = tag.to_str().unwrap();
        let gzip = text.replacen('"', "", 1).replace('"', "-gzip\"");
        assert_eq!(
            ask(HeaderValue::from_str(&format!("\"x\", W/{text}")).unwrap()),
            StatusCode::NOT_MODIFIED
        );
        assert_eq!(ask(HeaderValue::from_str(&format!("\"{gzip}")).unwrap()), StatusCode::NOT_MODIFIED);
        assert_eq!(ask(HeaderValue::from_static("\"other\"")), StatusCode::OK);
    }
}
