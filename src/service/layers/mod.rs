//! What every request goes through, written as one layer: a tower of boxed ones would cost more than the answers.
//!
//! Outside in: request id and clock → preflight → bearer token → load shedding → body limit → compression →
//! deadline and panics → the route. On the way back: problem documents for every status of 400 or more → draining
//! of a refused body → headers → metrics and access line. Problem documents are written outside compression, so
//! they are never compressed.

mod access;
pub mod bearer;
mod cors;
mod incoming;
mod meters;
mod outgoing;
mod request_id;

use std::convert::Infallible;
use std::future::{Future, poll_fn};
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::pin::{Pin, pin};
use std::task::{Context, Poll};
use std::time::Duration;

use axum::body::Body;
use axum::extract::Request;
use axum::response::{IntoResponse, Response};
use http::{HeaderName, HeaderValue, Method, StatusCode, header};
use http_body::Body as HttpBody;
use tower::{Layer, Service};
use tower_http::CompressionLevel;
use tower_http::compression::predicate::{DefaultPredicate, Predicate, SizeAbove};
use tower_http::compression::{Compression, CompressionLayer};

use self::access::Record;
use self::incoming::Incoming;
use self::outgoing::Place;
use super::problem::{self, Problem, ProblemKind};
use super::state::Shared;

pub(super) use self::incoming::BodyFault;

/// Answers smaller than this are sent as they are: compressing them costs several times what it saves.
const COMPRESS_ABOVE_BYTES: u64 = 16 * 1024;

/// A refused body is drained up to this many times the body limit.
const DRAIN_LIMITS: usize = 4;

/// … and for no longer than this.
const DRAIN_PATIENCE: Duration = Duration::from_secs(5);

/// Seconds after which a caller that was turned away may try again.
const RETRY_AFTER_S: u32 = 1;

/// The layer.
#[derive(Debug, Clone)]
pub(super) struct House {
    state: Shared,
}

impl House {
    pub(super) const fn new(state: Shared) -> Self {
        Self { state }
    }
}

type Sized = tower_http::compression::predicate::And<DefaultPredicate, SizeAbove>;

impl<S: Clone> Layer<S> for House {
    type Service = Housed<S>;

    fn layer(&self, inner: S) -> Housed<S> {
        let compression = CompressionLayer::new()
            .quality(CompressionLevel::Fastest)
            .compress_when(DefaultPredicate::new().and(SizeAbove::new(COMPRESS_ABOVE_BYTES)));
        Housed { state: self.state.clone(), compressing: compression.layer(inner) }
    }
}

/// A route with the layer around it.
#[derive(Clone)]
pub(super) struct Housed<S> {
    state: Shared,
    compressing: Compression<S, Sized>,
}

impl<S> Service<Request> for Housed<S>
where
    S: Service<Request, Response = Response, Error = Infallible> + Clone + Send + 'static,
    S::Future: Send,
{
    type Response = Response;
    type Error = Infallible;
    type Future = Pin<Box<dyn Future<Output = Result<Response, Infallible>> + Send>>;

    fn poll_ready(&mut self, _: &mut Context<'_>) -> Poll<Result<(), Infallible>> {
        // A route is always ready; readiness of the service is a matter of load shedding below.
        Poll::Ready(Ok(()))
    }

    fn call(&mut self, request: Request) -> Self::Future {
        let state = self.state.clone();
        let compressing = self.compressing.clone();
        Box::pin(async move { Ok(answer(&state, compressing, request).await) })
    }
}

async fn answer<S>(state: &Shared, compressing: Compression<S, Sized>, request: Request) -> Response
where
    S: Service<Request, Response = Response, Error = Infallible>,
{
    let settings = &state.settings;
    let base_path = settings.base_path.as_str();
    let mut record = Record::open(&request, request_id::of(request.headers()), base_path);
    let origin = request.headers().get(header::ORIGIN).cloned();
    let expects = request.headers().contains_key(header::EXPECT);
    let (request, incoming) = hold_body(request, settings.max_body_bytes.get());

    let (mut response, place) = match admit(state, &request) {
        Ok(Admission::Preflight) => (cors::preflight(), None),
        Ok(Admission::Place(place)) => {
            let timeout = settings.request_timeout_s.duration();
            (run(compressing, request, incoming.as_ref(), timeout).await, place)
        }
        Err(problem) => (problem.into_response(), None),
    };

    if let Some(incoming) = &incoming
        && incoming.is_too_large()
    {
        response = too_large(settings.max_body_bytes.get()).into_response();
    }
    if record.method == Method::OPTIONS && response.status() == StatusCode::METHOD_NOT_ALLOWED {
        response = options(&response);
    }
    if response.status().as_u16() >= 400 {
        response = problem::rewrite(response, &record.method, record.uri.path(), base_path);
        if let Some(incoming) = &incoming
            && !incoming.is_complete()
            && !expects
            && response.status() != StatusCode::REQUEST_TIMEOUT
        {
            let overloaded = response.status() == StatusCode::SERVICE_UNAVAILABLE;
            let limits = if overloaded { 1 } else { DRAIN_LIMITS };
            incoming.drain(settings.max_body_bytes.get().saturating_mul(limits), DRAIN_PATIENCE).await;
        }
    }
    record.status = response.status();
    dress(&mut response, &record);
    cors::grant(&settings.cors_origin, origin.as_ref(), response.headers_mut());
    let (head, body) = response.into_parts();
    Response::from_parts(head, outgoing::finish(body, record, place))
}

/// Puts the body, if there is one, where both the layer and the handler can reach it.
fn hold_body(request: Request, limit: usize) -> (Request, Option<Incoming>) {
    if HttpBody::is_end_stream(request.body()) {
        return (request, None);
    }
    let (head, body) = request.into_parts();
    let incoming = Incoming::new(body);
    let guarded = incoming.guarded(limit);
    (Request::from_parts(head, guarded), Some(incoming))
}

enum Admission {
    Preflight,
    /// The place among the requests in flight; none for probes, which must get through under load.
    Place(Option<Place>),
}

/// Everything that can be decided from the head of the request.
fn admit(state: &Shared, request: &Request) -> Result<Admission, Problem> {
    let settings = &state.settings;
    if cors::is_preflight(request.method(), request.headers()) {
        return Ok(Admission::Preflight);
    }
    let path = request.uri().path();
    let path = path.strip_prefix(settings.base_path.as_str()).unwrap_or(path);
    if let Some(tokens) = &state.tokens
        && (path == "/v1" || path.starts_with("/v1/"))
    {
        tokens.check(request.headers())?;
    }
    let limit = settings.max_body_bytes.get();
    if request.body().size_hint().lower() > limit as u64 {
        return Err(too_large(limit));
    }
    if path.starts_with("/health/") || path == "/metrics" {
        return Ok(Admission::Place(None));
    }
    match Place::take(&state.in_flight, settings.max_in_flight.get()) {
        Some(place) => Ok(Admission::Place(Some(place))),
        None => Err(Problem::new(
            ProblemKind::Overloaded,
            format!("{} requests are already being worked on.", settings.max_in_flight),
        )
        .retry_after(RETRY_AFTER_S)),
    }
}

fn too_large(limit: usize) -> Problem {
    Problem::new(ProblemKind::TooLarge, format!("The body is larger than {limit} bytes."))
}

/// Runs the route: compressed if the caller takes it, given up at the deadline, a panic caught.
async fn run<S>(
    mut compressing: Compression<S, Sized>,
    request: Request,
    incoming: Option<&Incoming>,
    timeout: Duration,
) -> Response
where
    S: Service<Request, Response = Response, Error = Infallible>,
{
    let gzip = request
        .headers()
        .get(header::ACCEPT_ENCODING)
        .is_some_and(|codings| codings.as_bytes().windows(4).any(|word| word.eq_ignore_ascii_case(b"gzip")));
    let outcome = if gzip {
        raced(|| compressing.call(request), timeout).await.map(|answer| answer.map(compressed))
    } else {
        raced(|| compressing.get_mut().call(request), timeout).await
    };
    match outcome {
        Ok(Ok(response)) => response,
        Ok(Err(never)) => match never {},
        Err(GaveUp::Panicked) => {
            Problem::internal("The service met a fault of its own; the log has more under the request id.")
                .into_response()
        }
        Err(GaveUp::TooLong) if incoming.is_some_and(|body| !body.is_complete()) => {
            Problem::new(ProblemKind::SlowRequest, format!("The body did not arrive within {timeout:?}."))
                .into_response()
        }
        Err(GaveUp::TooLong) => {
            Problem::new(ProblemKind::TimedOut, format!("The answer was not ready within {timeout:?}."))
                .into_response()
        }
    }
}

enum GaveUp {
    Panicked,
    TooLong,
}

/// Polls to the end, unless the deadline comes first or the work panics. No timer is set for work that is done at
/// the first poll, as most is.
async fn raced<F, T>(start: impl FnOnce() -> F, timeout: Duration) -> Result<T, GaveUp>
where
    F: Future<Output = T>,
{
    let Ok(work) = catch_unwind(AssertUnwindSafe(start)) else { return Err(GaveUp::Panicked) };
    let mut work = pin!(work);
    let mut alarm: Option<Pin<Box<tokio::time::Sleep>>> = None;
    poll_fn(move |context| match catch_unwind(AssertUnwindSafe(|| work.as_mut().poll(context))) {
        Err(_) => Poll::Ready(Err(GaveUp::Panicked)),
        Ok(Poll::Ready(done)) => Poll::Ready(Ok(done)),
        Ok(Poll::Pending) => alarm
            .get_or_insert_with(|| Box::pin(tokio::time::sleep(timeout)))
            .as_mut()
            .poll(context)
            .map(|()| Err(GaveUp::TooLong)),
    })
    .await
}

/// Brings a compressed answer back to the common type; its entity tag must differ from the plain one's.
fn compressed<B>(response: http::Response<B>) -> Response
where
    B: HttpBody<Data = bytes::Bytes> + Send + 'static,
    B::Error: Into<axum::BoxError>,
{
    let mut response = response.map(Body::new);
    if response.headers().contains_key(header::CONTENT_ENCODING)
        && let Some(tag) = response.headers().get(header::ETAG).and_then(|tag| tag.to_str().ok())
        && let Some(open) = tag.strip_suffix('"')
        && let Ok(own) = HeaderValue::from_str(&format!("{open}{}\"", super::negotiation::GZIP_TAG))
    {
        response.headers_mut().insert(header::ETAG, own);
    }
    response
}

/// Answers OPTIONS from the router's own list of methods.
fn options(refused: &Response) -> Response {
    let mut response = StatusCode::NO_CONTENT.into_response();
    if let Some(allow) = refused.headers().get(header::ALLOW) {
        response.headers_mut().insert(header::ALLOW, allow.clone());
    }
    response
}

const X_CONTENT_TYPE_OPTIONS: HeaderName = header::X_CONTENT_TYPE_OPTIONS;
const SERVER_TIMING: HeaderName = HeaderName::from_static("server-timing");
const RESOURCE_POLICY: HeaderName = HeaderName::from_static("cross-origin-resource-policy");

/// Nothing may be loaded, run or framed: an API's answers are data. Pages bring their own policy.
const CLOSED_POLICY: HeaderValue = HeaderValue::from_static("default-src 'none'; frame-ancestors 'none'");

/// The headers of every answer.
fn dress(response: &mut Response, record: &Record) {
    let status = response.status();
    let headers = response.headers_mut();
    headers.reserve(9);
    headers.insert(request_id::X_REQUEST_ID, record.request_id.clone());
    headers.insert(SERVER_TIMING, server_timing(record.started.elapsed()));
    headers.insert(X_CONTENT_TYPE_OPTIONS, HeaderValue::from_static("nosniff"));
    headers.insert(header::REFERRER_POLICY, HeaderValue::from_static("no-referrer"));
    headers.insert(header::X_FRAME_OPTIONS, HeaderValue::from_static("DENY"));
    headers.insert(RESOURCE_POLICY, HeaderValue::from_static("same-origin"));
    if !headers.contains_key(header::CONTENT_SECURITY_POLICY) {
        headers.insert(header::CONTENT_SECURITY_POLICY, CLOSED_POLICY);
    }
    if status.as_u16() >= 400 || !headers.contains_key(header::CACHE_CONTROL) {
        headers.insert(header::CACHE_CONTROL, HeaderValue::from_static("no-store"));
    }
}

/// `total;dur=` in milliseconds, to the microsecond.
fn server_timing(elapsed: Duration) -> HeaderValue {
    let micros = elapsed.as_micros();
    let text = format!("total;dur={}.{:03}", micros / 1000, micros % 1000);
    HeaderValue::from_maybe_shared(bytes::Bytes::from(text)).unwrap_or(HeaderValue::from_static("total"))
}
