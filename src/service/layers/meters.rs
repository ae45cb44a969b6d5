//! Counts and durations by route, method and status, for Prometheus. Handles are looked up once per combination
//! and kept: registering a metric on every request would cost more than the request.

use std::collections::HashMap;
use std::sync::{OnceLock, PoisonError, RwLock};

use http::Method;
use metrics::{Counter, Histogram, counter, histogram};

struct Meters {
    method: &'static str,
    status: u16,
    requests: Counter,
    seconds: Histogram,
}

static BY_ROUTE: OnceLock<RwLock<HashMap<String, Vec<Meters>>>> = OnceLock::new();

/// Notes one request.
pub(super) fn note(route: &str, method: &Method, status: u16, seconds: f64) {
    let by_route = BY_ROUTE.get_or_init(RwLock::default);
    let method = name(method);
    let known = by_route.read().unwrap_or_else(PoisonError::into_inner);
    if let Some(meters) = known.get(route).and_then(|of_route| find(of_route, method, status)) {
        meters.requests.increment(1);
        meters.seconds.record(seconds);
        return;
    }
    drop(known);
    let requests = counter!("http_requests_total", "route" => route.to_owned(), "method" => method, "status" => status.to_string());
    let timing = histogram!("http_request_duration_seconds", "route" => route.to_owned(), "method" => method);
    requests.increment(1);
    timing.record(seconds);
    let mut known = by_route.write().unwrap_or_else(PoisonError::into_inner);
    let of_route = known.entry(route.to_owned()).or_default();
    if find(of_route, method, status).is_none() {
        of_route.push(Meters { method, status, requests, seconds: timing });
    }
}

fn find<'a>(of_route: &'a [Meters], method: &str, status: u16) -> Option<&'a Meters> {
    of_route.iter().find(|meters| meters.status == status && meters.method == method)
}

/// The method's name; methods nobody defined share one, so that callers cannot make up metrics.
fn name(method: &Method) -> &'static str {
    match *method {
        Method::GET => "GET",
        Method::HEAD => "HEAD",
        Method::POST => "POST",
        Method::OPTIONS => "OPTIONS",
        Method::PUT => "PUT",
        Method::PATCH => "PATCH",
        Method::DELETE => "DELETE",
        _ => "OTHER",
    }
}
