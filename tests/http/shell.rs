//! What every answer carries, and what the shell adds around the resources.

use axum::body::Body;
use http::StatusCode;

use crate::ask::{call, get_it, get_with, service, state};

#[tokio::test]
async fn every_answer_carries_the_common_headers() {
    let service = service(&state(|_| {}));
    for path in ["/health/live", "/version", "/nothing", "/docs/"] {
        let answer = get_it(&service, path).await;
        assert!(answer.header("x-request-id").len() > 10, "{path}");
        let timing =
            answer.header("server-timing").strip_prefix("total;dur=").unwrap().parse::<f64>().unwrap();
        assert!(timing >= 0.0);
        assert_eq!(answer.header("x-content-type-options"), "nosniff");
        assert_eq!(answer.header("referrer-policy"), "no-referrer");
        assert!(answer.header("content-security-policy").starts_with("default-src 'none'"), "{path}");
    }
}

#[tokio::test]
async fn the_callers_request_id_comes_back_if_it_is_safe() {
    let service = service(&state(|_| {}));
    let echoed = get_with(&service, "/health/live", &[("x-request-id", "line-3/lot.17")]).await;
    assert_eq!(echoed.header("x-request-id"), "line-3/lot.17");
    let replaced = get_with(&service, "/health/live", &[("x-request-id", "two words")]).await;
    assert_ne!(replaced.header("x-request-id"), "two words");
}

#[tokio::test]
async fn head_and_options_work_everywhere() {
    let service = service(&state(|_| {}));
    let full = get_it(&service, "/version").await;
    let head = call(&service, "HEAD", "/version", &[], Body::empty()).await;
    assert_eq!(head.status, StatusCode::OK);
    assert!(head.body.is_empty());
    assert_eq!(head.header("content-length"), full.body.len().to_string());
    assert_eq!(head.header("etag"), full.header("etag"));
    let missing = call(&service, "HEAD", "/nothing", &[], Body::empty()).await;
    assert_eq!(missing.status, StatusCode::NOT_FOUND);
    assert!(missing.body.is_empty());

    let options = call(&service, "OPTIONS", "/version", &[], Body::empty()).await;
    assert_eq!(options.status, StatusCode::NO_CONTENT);
    assert_eq!(options.header("allow"), "GET,HEAD");
    assert_eq!(call(&service, "OPTIONS", "/nothing", &[], Body::empty()).await.status, StatusCode::NOT_FOUND);
}

#[tokio::test]
async fn only_large_answers_are_compressed_and_problems_never() {
    let service = service(&state(|_| {}));
    let gzip = [("accept-encoding", "br, gzip")];
    let large = get_with(&service, "/test/large", &gzip).await;
    assert_eq!(large.header("content-encoding"), "gzip");
    assert!(large.body.len() < 20_000);
    assert_eq!(get_it(&service, "/test/large").await.body.len(), 200_000);
    assert_eq!(get_with(&service, "/version", &gzip).await.header("content-encoding"), "");
    let problem = get_with(&service, "/nothing", &gzip).await;
    assert_eq!(problem.header("content-encoding"), "");
    problem.problem();

    let script = "/docs/swagger-ui-bundle.js";
    let plain = get_it(&service, script).await;
    let packed = get_with(&service, script, &gzip).await;
    assert_ne!(plain.header("etag"), packed.header("etag"), "a strong tag belongs to one encoding");
    for tag in [plain.header("etag"), packed.header("etag")] {
        let again = get_with(&service, script, &[("if-none-match", tag), gzip[0]]).await;
        assert_eq!(again.status, StatusCode::NOT_MODIFIED, "{tag}");
    }
}

#[tokio::test]
async fn under_a_base_path_everything_moves() {
    let service = service(&state(|settings| settings.base_path = "/plant/lips".parse().unwrap()));
    assert_eq!(get_it(&service, "/plant/lips/health/live").await.status, StatusCode::OK);
    assert_eq!(get_it(&service, "/health/live").await.status, StatusCode::NOT_FOUND);
    assert_eq!(get_it(&service, "/plant/lips/").await.header("location"), "/plant/lips");
    assert_eq!(get_it(&service, "/plant/lips").await.header("location"), "/plant/lips/docs/");
    assert_eq!(get_it(&service, "/plant/lips/docs").await.header("location"), "/plant/lips/docs/");
    assert_eq!(get_it(&service, "/plant/lips/docs/swagger-ui.css").await.status, StatusCode::OK);
    let contract = get_it(&service, "/plant/lips/openapi.json").await.json();
    assert_eq!(contract["servers"][0]["url"], "/plant/lips");
    assert!(contract["paths"]["/version"].is_object(), "paths are relative to the server");
    let metrics = get_it(&service, "/plant/lips/metrics").await;
    assert!(!String::from_utf8_lossy(&metrics.body).contains("/plant/"), "routes are named without it");
}

#[tokio::test]
async fn metrics_count_by_route_method_and_status() {
    let service = service(&state(|_| {}));
    for slug in ["no-such-a", "no-such-b"] {
        call(&service, "HEAD", &format!("/problems/{slug}"), &[], Body::empty()).await;
    }
    let answer = get_it(&service, "/metrics").await;
    assert!(answer.header("content-type").starts_with("text/plain"));
    let text = String::from_utf8_lossy(&answer.body).into_owned();
    let line = r#"http_requests_total{route="/problems/{slug}",method="HEAD",status="404"} 2"#;
    assert!(text.contains(line), "{text}");
    assert!(text.contains(
        r#"http_request_duration_seconds_bucket{route="/problems/{slug}",method="HEAD",le="0.0001"}"#
    ));
    assert!(!text.contains("no-such-a"), "paths are not labels");
}

#[tokio::test]
async fn the_docs_load_nothing_from_elsewhere_and_run_no_inline_script() {
    let service = service(&state(|_| {}));
    let page = get_it(&service, "/docs/").await;
    let text = String::from_utf8_lossy(&page.body).into_owned();
    assert!(!text.contains("http://") && !text.contains("https://"));
    for script in text.split("<script").skip(1) {
        assert!(script.contains(" src=\"") && script.contains("></script>"), "{script}");
    }
    for attribute in ["src=\"", "stylesheet\" href=\""] {
        for file in text.split(attribute).skip(1).map(|rest| rest.split('"').next().unwrap()) {
            assert_eq!(get_it(&service, &format!("/docs/{file}")).await.status, StatusCode::OK, "{file}");
        }
    }
    let start = get_it(&service, "/docs/start.js").await;
    let start = String::from_utf8_lossy(&start.body).into_owned();
    assert!(start.contains(r#"validatorUrl: "none""#) && start.contains(r#""../openapi.json""#));
    assert!(page.header("content-security-policy").contains("script-src 'self';"));
}
