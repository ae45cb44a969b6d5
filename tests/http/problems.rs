//! Every failure is a problem document, the router's and the framework's own included.

use std::time::Duration;

use axum::body::Body;
use dribble_risk::service::problem::ProblemKind;
use http::StatusCode;
use http_body_util::StreamBody;

use crate::ask::{call, get_it, get_with, post_json, service, state};

#[tokio::test]
async fn statuses_of_the_router_and_the_framework() {
    let service = service(&state(|_| {}));
    let missing = get_it(&service, "/v1/nothing").await;
    assert_eq!(missing.status, StatusCode::NOT_FOUND);
    let document = missing.problem();
    assert_eq!(document["type"], "/problems/not-found");
    assert_eq!(document["instance"], "/v1/nothing");

    let method = call(&service, "DELETE", "/version", &[], Body::empty()).await;
    assert_eq!(method.status, StatusCode::METHOD_NOT_ALLOWED);
    assert_eq!(method.header("allow"), "GET,HEAD");
    assert!(method.problem()["detail"].as_str().unwrap().contains("DELETE"));

    let teapot = get_it(&service, "/test/teapot").await;
    assert_eq!(teapot.problem()["type"], "about:blank");

    let page = get_it(&service, "/docs/nothing.js").await;
    assert_eq!(page.problem()["type"], "/problems/not-found");
}

#[tokio::test]
async fn statuses_of_negotiation() {
    let service = service(&state(|_| {}));
    let unacceptable = get_with(&service, "/version", &[("accept", "image/png")]).await;
    assert_eq!(unacceptable.status, StatusCode::NOT_ACCEPTABLE);
    assert!(unacceptable.problem()["detail"].as_str().unwrap().contains("application/json"));

    for declared in ["text/plain", "application/xml", "multipart/form-data"] {
        let media = call(&service, "POST", "/test/count", &[("content-type", declared)], "{}".into()).await;
        assert_eq!(media.status, StatusCode::UNSUPPORTED_MEDIA_TYPE, "{declared}");
        assert!(media.problem()["detail"].as_str().unwrap().contains(declared));
    }
    let gzip = call(&service, "POST", "/test/count", &[("content-encoding", "gzip")], "{}".into()).await;
    assert_eq!(gzip.status, StatusCode::UNSUPPORTED_MEDIA_TYPE);
    for good in [&[][..], &[("content-type", "application/vnd.lip+json; charset=utf-8")]] {
        assert_eq!(call(&service, "POST", "/test/count", good, "{}".into()).await.status, StatusCode::OK);
    }
}

#[tokio::test]
async fn statuses_of_the_body() {
    let service = service(&state(|settings| settings.max_body_bytes = 100.try_into().unwrap()));
    let broken = post_json(&service, "/test/count", "{\"a\" 1}").await;
    assert_eq!(broken.status, StatusCode::BAD_REQUEST);
    assert_eq!(broken.problem()["type"], "/problems/not-json");
    assert_eq!(broken.problem()["detail"], "Line 1, column 6: expected `:`.");

    let invalid = post_json(&service, "/test/count", "[1e999]").await;
    assert_eq!(invalid.status, StatusCode::UNPROCESSABLE_ENTITY);
    let errors = invalid.problem()["errors"].clone();
    assert_eq!(errors.as_array().unwrap().len(), 2, "all faults, not the first: {errors}");
    assert_eq!(errors[0]["pointer"], "/0");
    assert_eq!(errors[0]["code"], "not_finite");

    let declared = post_json(&service, "/test/count", "x".repeat(101)).await;
    assert_eq!(declared.status, StatusCode::PAYLOAD_TOO_LARGE);
    assert!(declared.problem()["detail"].as_str().unwrap().contains("100 bytes"));
    assert_eq!(post_json(&service, "/test/count", format!("{:100}", "{}")).await.body, "100");

    let pieces = (0..30).map(|_| Ok::<_, std::io::Error>(http_body::Frame::data("12345678".into())));
    let streamed: StreamBody<_> = StreamBody::new(Pieces(pieces.collect()));
    let undeclared = post_json(&service, "/test/count", Body::new(streamed)).await;
    assert_eq!(undeclared.status, StatusCode::PAYLOAD_TOO_LARGE);
    undeclared.problem();
}

type Piece = Result<http_body::Frame<bytes::Bytes>, std::io::Error>;

struct Pieces(std::collections::VecDeque<Piece>);

impl futures_core::Stream for Pieces {
    type Item = Piece;

    fn poll_next(
        mut self: std::pin::Pin<&mut Self>,
        _: &mut std::task::Context<'_>,
    ) -> std::task::Poll<Option<Piece>> {
        std::task::Poll::Ready(self.0.pop_front())
    }
}

#[tokio::test]
async fn a_panic_is_a_problem_and_the_service_goes_on() {
    let service = service(&state(|_| {}));
    for path in ["/test/panic", "/test/later-panic"] {
        let failed =
            get_with(&service, path, &[("x-request-id", "mine-1"), ("accept-encoding", "gzip")]).await;
        assert_eq!(failed.status, StatusCode::INTERNAL_SERVER_ERROR);
        let document = failed.problem();
        assert!(
            !document["detail"].as_str().unwrap().contains("as the test asked"),
            "inner matters stay inside"
        );
        assert_eq!(failed.header("x-request-id"), "mine-1");
        assert_eq!(get_it(&service, "/health/live").await.status, StatusCode::OK);
    }
}

#[tokio::test]
async fn work_that_takes_too_long_is_given_up() {
    let service = service(&state(|settings| settings.request_timeout_s = "0.05".parse().unwrap()));
    let late = get_it(&service, "/test/never").await;
    assert_eq!(late.status, StatusCode::GATEWAY_TIMEOUT);
    assert_eq!(late.problem()["type"], "/problems/timed-out");
}

#[tokio::test]
async fn more_than_the_most_in_flight_are_turned_away_but_probes_get_through() {
    let shared = state(|settings| settings.max_in_flight = 1.try_into().unwrap());
    let service = service(&shared);
    let first = tokio::spawn({
        let service = service.clone();
        async move { get_it(&service, "/test/pause").await }
    });
    while shared.in_flight() == 0 {
        tokio::time::sleep(Duration::from_millis(1)).await;
    }
    let second = get_it(&service, "/version").await;
    assert_eq!(second.status, StatusCode::SERVICE_UNAVAILABLE);
    assert_eq!(second.header("retry-after"), "1");
    second.problem();
    assert_eq!(get_it(&service, "/health/ready").await.status, StatusCode::OK);
    assert!(String::from_utf8_lossy(&get_it(&service, "/metrics").await.body).contains("in_flight 1"));
    assert_eq!(first.await.unwrap().body, "rested");
    assert_eq!(get_it(&service, "/version").await.status, StatusCode::OK);
    assert_eq!(shared.in_flight(), 0);
}

#[tokio::test]
async fn headers_of_a_problem_are_kept() {
    let busy = get_it(&service(&state(|_| {})), "/test/busy").await;
    assert_eq!(busy.header("retry-after"), "7");
    assert_eq!(busy.problem()["type"], "/problems/internal-error");
}

#[tokio::test]
async fn every_type_leads_to_its_page() {
    let service = service(&state(|settings| settings.base_path = "/lips".parse().unwrap()));
    let named = get_it(&service, "/lips/nothing").await.problem()["type"].clone();
    assert_eq!(named, "/lips/problems/not-found");
    let index = get_it(&service, "/lips/problems").await;
    for kind in ProblemKind::ALL {
        let path = format!("/lips/problems/{}", kind.slug());
        assert!(
            String::from_utf8_lossy(&index.body).contains(&format!("\"{path}\"")),
            "{path} is in the index"
        );
        let page = get_it(&service, &path).await;
        assert_eq!(page.status, StatusCode::OK, "{path}");
        assert!(page.header("content-type").starts_with("text/html"));
        let text = String::from_utf8_lossy(&page.body).into_owned();
        assert!(text.contains(kind.title()) && text.contains(kind.remedy()), "{path}");
        let data = get_with(&service, &path, &[("accept", "application/json")]).await.json();
        assert_eq!(data["type"], path);
        assert_eq!(data["status"], kind.status().as_u16());
    }
    let unknown = get_it(&service, "/lips/problems/no-such").await;
    assert_eq!(unknown.status, StatusCode::NOT_FOUND);
    unknown.problem();
    let page = get_it(&service, "/lips/problems").await;
    assert!(page.header("content-security-policy").contains("default-src 'none'"));
}
