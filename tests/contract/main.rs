//! The committed contract is what the code says, and every example in it is answered.
#![allow(missing_docs, clippy::unwrap_used, clippy::expect_used, clippy::panic)]

use axum::body::Body;
use dribble_risk::service::{app, openapi_json, settings::Settings, state::ServiceState};
use http::{Request, StatusCode};
use http_body_util::BodyExt;
use serde_json::Value;
use tower::ServiceExt;

const COMMITTED: &str = include_str!("../../openapi/openapi.json");

#[test]
fn the_committed_document_is_up_to_date() {
    let now = openapi_json().unwrap();
    let differs = now.lines().zip(COMMITTED.lines()).position(|(a, b)| a != b);
    assert!(
        now == COMMITTED,
        "openapi/openapi.json is stale (first difference in line {differs:?}); write it anew: cargo run -- openapi > openapi/openapi.json"
    );
}

#[tokio::test]
async fn every_example_request_is_answered() {
    let document: Value = serde_json::from_str(COMMITTED).unwrap();
    let service = app(&ServiceState::new(Settings::default()).unwrap());
    let mut posted = 0;
    for (path, item) in document["paths"].as_object().unwrap() {
        let Some(content) = item["post"]["requestBody"]["content"].as_object() else { continue };
        for (media_type, form) in content {
            let schema = match form["schema"]["$ref"].as_str() {
                Some(reference) => document.pointer(&reference[1..]).unwrap(),
                None => &form["schema"],
            };
            let examples = schema["examples"].as_array().cloned().unwrap_or_default();
            assert!(!examples.is_empty(), "{path} has no example of a request");
            for example in examples {
                let request = Request::post(path)
                    .header("content-type", media_type)
                    .body(Body::from(example.to_string()))
                    .unwrap();
                let response = service.clone().oneshot(request).await.unwrap();
                let status = response.status();
                let body = response.into_body().collect().await.unwrap().to_bytes();
                assert_eq!(status, StatusCode::OK, "{path}: {body:?}");
                let answer: Value = serde_json::from_slice(&body).unwrap();
                let items = answer["results"].as_array().cloned().unwrap_or_default();
                assert!(items.iter().all(|item| item["result"].is_object()), "{path}: {answer}");
                posted += 1;
            }
        }
    }
    assert!(posted >= 2);
}
