//! Browsers of origins on the list may call; others get no leave.

use axum::body::Body;
use http::StatusCode;

use crate::ask::{call, get_with, service, state};

const LISTED: &str = "https://bench.example";

#[tokio::test]
async fn an_origin_on_the_list_may_call() {
    let service = service(&state(|settings| settings.cors_origin = vec![LISTED.parse().unwrap()]));
    let preflight = [("origin", LISTED), ("access-control-request-method", "POST")];
    let leave = call(&service, "OPTIONS", "/v1/test", &preflight, Body::empty()).await;
    assert_eq!(leave.status, StatusCode::NO_CONTENT);
    assert_eq!(leave.header("access-control-allow-origin"), LISTED);
    assert!(leave.header("access-control-allow-methods").contains("POST"));
    assert!(leave.header("access-control-allow-headers").contains("authorization"));

    for path in ["/version", "/nothing"] {
        let answer = get_with(&service, path, &[("origin", LISTED)]).await;
        assert_eq!(answer.header("access-control-allow-origin"), LISTED, "{path}");
        for header in ["x-request-id", "server-timing", "retry-after", "etag"] {
            assert!(answer.header("access-control-expose-headers").contains(header));
        }
        assert!(answer.headers.get_all("vary").iter().any(|value| value == "origin"));
        assert_eq!(answer.header("access-control-allow-credentials"), "");
    }
}

#[tokio::test]
async fn other_origins_get_no_leave() {
    let service = service(&state(|settings| settings.cors_origin = vec![LISTED.parse().unwrap()]));
    for origin in ["https://other.example", "https://bench.example.evil", "http://bench.example", "null"] {
        let preflight = [("origin", origin), ("access-control-request-method", "POST")];
        let refused = call(&service, "OPTIONS", "/v1/test", &preflight, Body::empty()).await;
        assert_eq!(refused.header("access-control-allow-origin"), "", "{origin}");
        let answer = get_with(&service, "/version", &[("origin", origin)]).await;
        assert_eq!(answer.header("access-control-allow-origin"), "", "{origin}");
    }
    let closed = crate::ask::service(&state(|_| {}));
    let answer = get_with(&closed, "/version", &[("origin", LISTED)]).await;
    assert_eq!(answer.header("access-control-allow-origin"), "");
}

#[tokio::test]
async fn a_star_lets_any_origin_in() {
    let service = service(&state(|settings| settings.cors_origin = vec!["*".parse().unwrap()]));
    let answer = get_with(&service, "/version", &[("origin", "https://any.example")]).await;
    assert_eq!(answer.header("access-control-allow-origin"), "https://any.example");
}
