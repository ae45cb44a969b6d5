//! Look-ups carry a strong tag and are not sent twice.

use http::StatusCode;

use crate::ask::{get_it, get_with, service, state};

#[tokio::test]
async fn look_ups_carry_a_strong_tag_and_answer_304() {
    let service = service(&state(|_| {}));
    for path in ["/version", "/openapi.json", "/problems", "/docs/"] {
        let first = get_it(&service, path).await;
        let tag = first.header("etag");
        assert!(tag.starts_with('"') && tag.len() > 10, "{path}: {tag}");
        assert!(!first.header("cache-control").is_empty());
        for known in [tag, "*", &format!("\"other\", {tag}"), &format!("W/{tag}")] {
            let again = get_with(&service, path, &[("if-none-match", known)]).await;
            assert_eq!(again.status, StatusCode::NOT_MODIFIED, "{path} {known}");
            assert!(again.body.is_empty());
            assert_eq!(again.header("etag"), tag);
        }
        assert_eq!(get_with(&service, path, &[("if-none-match", "\"x\"")]).await.body, first.body);
    }
}

#[tokio::test]
async fn version_names_what_is_running() {
    let version = get_it(&service(&state(|_| {})), "/version").await.json();
    assert_eq!(version["version"], env!("CARGO_PKG_VERSION"));
    assert!(version["coefficients"].is_array() && version["catalogue_digest"].is_string());
}
