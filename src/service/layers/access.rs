//! What is noted of each request: one log line, one count, one duration. No bodies, no secrets.

use std::time::Instant;

use axum::extract::MatchedPath;
use http::{HeaderMap, HeaderValue, Method, StatusCode, Uri};

use super::meters;

/// One request, noted when it ends.
#[derive(Debug)]
pub(super) struct Record {
    pub(super) started: Instant,
    pub(super) request_id: HeaderValue,
    pub(super) status: StatusCode,
    pub(super) method: Method,
    pub(super) uri: Uri,
    route: Option<MatchedPath>,
    trace: Option<HeaderValue>,
    base_path_len: usize,
    closed: bool,
}

impl Record {
    pub(super) fn open(request: &axum::extract::Request, request_id: HeaderValue, base_path: &str) -> Self {
        Self {
            started: Instant::now(),
            request_id,
            status: StatusCode::OK,
            method: request.method().clone(),
            uri: request.uri().clone(),
            route: request.extensions().get::<MatchedPath>().cloned(),
            trace: trace_parent(request.headers()),
            base_path_len: base_path.len(),
            closed: false,
        }
    }

    /// The route's pattern without the base path, e.g. `/v1/liquids/{id}`.
    fn route(&self) -> &str {
        let pattern = self.route.as_ref().map_or("unmatched", MatchedPath::as_str);
        match pattern.get(self.base_path_len..) {
            Some("") => "/",
            Some(rest) if rest.starts_with('/') => rest,
            _ => pattern,
        }
    }

    pub(super) fn close(&mut self, bytes: u64) {
        self.closed = true;
        let elapsed = self.started.elapsed();
        let route = self.route();
        meters::note(route, &self.method, self.status.as_u16(), elapsed.as_secs_f64());
        // The trace id is the second field of the traceparent header: 32 hexadecimal digits after "00-".
        let trace =
            self.trace.as_ref().and_then(|value| value.to_str().ok()).and_then(|value| value.get(3..35));
        tracing::info!(
            target: "access",
            request_id = self.request_id.to_str().unwrap_or_default(),
            trace_id = trace,
            method = self.method.as_str(),
            path = self.uri.path(),
            route,
            status = self.status.as_u16(),
            duration_us = u64::try_from(elapsed.as_micros()).unwrap_or(u64::MAX),
            bytes,
        );
    }
}

/// Noted as the status of a request whose caller hung up before there was an answer; never sent.
const HUNG_UP: u16 = 499;

impl Drop for Record {
    /// A request that is dropped unanswered is noted as well: its caller hung up.
    fn drop(&mut self) {
        if !self.closed {
            self.status = StatusCode::from_u16(HUNG_UP).unwrap_or_default();
            self.close(0);
        }
    }
}

/// The caller's W3C trace context, if it is well-formed.
fn trace_parent(headers: &HeaderMap) -> Option<HeaderValue> {
    let value = headers.get("traceparent")?;
    let bytes = value.as_bytes();
    let hex = |range: std::ops::Range<usize>| {
        bytes.get(range).is_some_and(|part| part.iter().all(|byte| matches!(byte, b'0'..=b'9' | b'a'..=b'f')))
    };
    let dashes = [2, 35, 52].into_iter().all(|at| bytes.get(at) == Some(&b'-'));
    let zero = bytes.get(3..35).is_some_and(|id| id.iter().all(|byte| *byte == b'0'));
    (dashes
        && hex(0..2)
        && hex(3..35)
        && hex(36..52)
        && hex(53..55)
        && !zero
        && bytes.get(..2) != Some(b"ff"))
    .then(|| value.clone())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn only_well_formed_trace_contexts_are_taken_in() {
        let take = |value| {
            trace_parent(&HeaderMap::from_iter([(
                "traceparent".parse().unwrap(),
                HeaderValue::from_static(value),
            )]))
        };
        assert!(take("00-4bf92f3577b34da6a3ce929d0e0e4736-00f067aa0ba902b7-01").is_some());
        assert!(take("00-00000000000000000000000000000000-00f067aa0ba902b7-01").is_none());
        assert!(take("00-4bf92f3577b34da6a3ce929d0e0e473-00f067aa0ba902b7-01").is_none());
        assert!(take("00-\"\"\"92f3577b34da6a3ce929d0e0e4736-00f067aa0ba902b7-01").is_none());
        assert!(take("").is_none());
    }
}
