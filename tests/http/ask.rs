//! Asking the service in process, without a socket.

use axum::Router;
use axum::body::Body;
use axum::extract::State;
use axum::routing::{get, post};
use bytes::Bytes;
use dribble_risk::service::body::{JsonBytes, read_document};
use dribble_risk::service::problem::{Fault, Problem};
use dribble_risk::service::router::app_with;
use dribble_risk::service::settings::Settings;
use dribble_risk::service::state::{ServiceState, Shared};
use http::{HeaderMap, Request, StatusCode};
use http_body_util::BodyExt;
use serde_json::Value;
use tower::ServiceExt;

pub struct Answer {
    pub status: StatusCode,
    pub headers: HeaderMap,
    pub body: Bytes,
}

impl Answer {
    pub fn header(&self, name: &str) -> &str {
        self.headers.get(name).map_or("", |value| value.to_str().unwrap())
    }

    pub fn json(&self) -> Value {
        serde_json::from_slice(&self.body).unwrap()
    }

    /// The problem document, checked for its form.
    #[track_caller]
    pub fn problem(&self) -> Value {
        assert_eq!(self.header("content-type"), "application/problem+json", "{:?}", self.body);
        let document = self.json();
        assert_eq!(document["status"], self.status.as_u16());
        for text in ["type", "title", "detail", "instance"] {
            assert!(document[text].as_str().is_some_and(|text| !text.is_empty()), "{text}: {document}");
        }
        assert!(document["errors"].is_array());
        assert_eq!(self.header("cache-control"), "no-store");
        assert!(!self.header("x-request-id").is_empty());
        document
    }
}

pub fn state(set: impl FnOnce(&mut Settings)) -> Shared {
    let mut settings = Settings::default();
    set(&mut settings);
    ServiceState::new(settings).unwrap()
}

/// The service with routes that only tests need.
pub fn service(state: &Shared) -> Router {
    let extra = Router::new()
        .route("/test/panic", get(|| async { panic!("as the test asked") as () }))
        .route("/test/later-panic", get(later_panic))
        .route("/test/never", get(std::future::pending::<()>))
        .route("/test/pause", get(pause))
        .route("/test/large", get(|| async { "lip ".repeat(50_000) }))
        .route("/test/teapot", get(|| async { StatusCode::IM_A_TEAPOT }))
        .route("/test/busy", get(|| async { Problem::internal("Busy.").retry_after(7) }))
        .route("/test/count", post(count))
        .route("/v1/test", post(count).get(|| async { "in" }));
    app_with(state, extra)
}

async fn later_panic() {
    tokio::task::yield_now().await;
    panic!("as the test asked, later");
}

async fn pause(State(_): State<Shared>) -> &'static str {
    tokio::time::sleep(std::time::Duration::from_millis(400)).await;
    "rested"
}

/// Counts a JSON body's bytes; asks for an object.
async fn count(JsonBytes(body): JsonBytes) -> Result<String, Problem> {
    let document = read_document(&body)?;
    let mut faults = document.faults;
    if !document.value.is_object() {
        faults.push(Fault::new("", "wrong_type", "must be an object"));
    }
    if faults.is_empty() { Ok(body.len().to_string()) } else { Err(Problem::invalid(faults)) }
}

pub async fn send(service: &Router, request: Request<Body>) -> Answer {
    let response = service.clone().oneshot(request).await.unwrap();
    let (head, body) = response.into_parts();
    let body = body.collect().await.unwrap().to_bytes();
    Answer { status: head.status, headers: head.headers, body }
}

pub async fn call(
    service: &Router,
    method: &str,
    path: &str,
    headers: &[(&str, &str)],
    body: Body,
) -> Answer {
    let mut request = Request::builder().method(method).uri(path);
    for (name, value) in headers {
        request = request.header(*name, *value);
    }
    send(service, request.body(body).unwrap()).await
}

pub async fn get_with(service: &Router, path: &str, headers: &[(&str, &str)]) -> Answer {
    call(service, "GET", path, headers, Body::empty()).await
}

pub async fn get_it(service: &Router, path: &str) -> Answer {
    get_with(service, path, &[]).await
}

pub async fn post_json(service: &Router, path: &str, body: impl Into<Body>) -> Answer {
    call(service, "POST", path, &[("content-type", "application/json")], body.into()).await
}
