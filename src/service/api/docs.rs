//! The contract and a page to read and try it: everything comes from the binary, nothing from elsewhere, and no
//! script stands in the page itself.

use std::sync::Arc;

use axum::Router;
use axum::extract::Path;
use axum::response::{IntoResponse, Redirect, Response};
use axum::routing::get;
use bytes::Bytes;
use http::{HeaderMap, HeaderValue, header};
use utoipa::openapi::OpenApi;
use utoipa_swagger_ui::Config;

use crate::service::negotiation::{JSON, LOOK_UP, REVALIDATE, cacheable, choose};
use crate::service::problem::Problem;
use crate::service::state::Shared;

/// The page runs its own scripts and styles; the viewer sets styles on elements and draws icons from data URLs.
const DOCS_POLICY: HeaderValue = HeaderValue::from_static(
    "default-src 'none'; script-src 'self'; style-src 'self' 'unsafe-inline'; img-src 'self' data:; font-src 'self' data:; connect-src 'self'; frame-ancestors 'none'; base-uri 'none'; form-action 'self'",
);

const PAGE: &str = r#"<!doctype html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta name="viewport" content="width=device-width">
<title>dribble-risk: the contract</title>
<link rel="stylesheet" href="swagger-ui.css">
<link rel="icon" href="data:,">
</head>
<body>
<div id="contract"><p>The contract is at <a href="../openapi.json">openapi.json</a>; this page needs JavaScript to show it.</p></div>
<script src="swagger-ui-bundle.js"></script>
<script src="start.js"></script>
</body>
</html>
"#;

const START: &str = r##""use strict";
window.ui = SwaggerUIBundle({
  url: "../openapi.json",
  dom_id: "#contract",
  deepLinking: true,
  tryItOutEnabled: true,
  validatorUrl: "none",
  presets: [SwaggerUIBundle.presets.apis],
  layout: "BaseLayout",
});
"##;

/// The OpenAPI document as it is sent.
#[derive(Debug)]
pub(in crate::service) struct Contract(Bytes);

impl Contract {
    pub(in crate::service) fn new(document: &OpenApi) -> Self {
        Self(document.to_json().unwrap_or_default().into())
    }
}

/// The contract, its page, and for now the way from the root to it. They are not operations of the contract.
pub(in crate::service) fn routes(contract: &Arc<Contract>, base_path: &str) -> Router<Shared> {
    let contract = Arc::clone(contract);
    let page = format!("{base_path}/docs/");
    let start = page.clone();
    Router::new()
        .route("/", get(move || async move { Redirect::temporary(&start) }))
        .route(
            "/openapi.json",
            get(move |headers: HeaderMap| async move {
                choose(&headers, &[JSON, "application/vnd.oai.openapi+json"])?;
                Ok::<_, Problem>(cacheable(&headers, JSON, REVALIDATE, contract.0.clone()))
            }),
        )
        .route("/docs", get(move || async move { Redirect::permanent(&page) }))
        .route("/docs/", get(|headers: HeaderMap| async move { file("", &headers) }))
        .route(
            "/docs/{file}",
            get(|Path(name): Path<String>, headers: HeaderMap| async move { file(&name, &headers) }),
        )
}

fn file(name: &str, headers: &HeaderMap) -> Response {
    let mut response = match name {
        "" => cacheable(headers, "text/html; charset=utf-8", LOOK_UP, PAGE),
        "start.js" => cacheable(headers, "text/javascript; charset=utf-8", LOOK_UP, START),
        "swagger-ui.css" => vendored(name, "text/css; charset=utf-8", headers),
        "swagger-ui-bundle.js" => vendored(name, "text/javascript; charset=utf-8", headers),
        _ => Problem::not_found("The documentation has no such file.").into_response(),
    };
    response.headers_mut().insert(header::CONTENT_SECURITY_POLICY, DOCS_POLICY);
    response
}

fn vendored(name: &str, media_type: &'static str, headers: &HeaderMap) -> Response {
    match utoipa_swagger_ui::serve(name, Arc::new(Config::default())) {
        Ok(Some(file)) => cacheable(headers, media_type, LOOK_UP, file.bytes.into_owned()),
        Ok(None) | Err(_) => Problem::internal("The documentation's viewer is missing.").into_response(),
    }
}
