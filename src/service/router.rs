//! Every resource of the service, as one list.

use std::sync::Arc;

use axum::Router;
use axum::response::Redirect;
use axum::routing::get;
use utoipa::openapi::OpenApi;
use utoipa_axum::router::OpenApiRouter;
use utoipa_axum::routes;

use super::api::{
    batch, calibrations, contact_angles, designs, docs, evaluations, health, liquids, lots, metrics, pours,
    problems, surfaces, sweeps, tolerances, version,
};
use super::contract;
use super::layers::House;
use super::state::Shared;
use super::telemetry;

/// The list. A handler's name is its operation id.
fn resources() -> OpenApiRouter<Shared> {
    OpenApiRouter::with_openapi(contract::ground())
        .routes(routes!(evaluations::evaluate))
        .routes(routes!(batch::evaluate_batch))
        .routes(routes!(sweeps::sweep))
        .routes(routes!(designs::design))
        .routes(routes!(calibrations::calibrate))
        .routes(routes!(tolerances::tolerances))
        .routes(routes!(lots::lots))
        .routes(routes!(contact_angles::contact_angles))
        .routes(routes!(pours::pour))
        .routes(routes!(liquids::list_liquids))
        .routes(routes!(liquids::liquid))
        .routes(routes!(surfaces::list_surfaces))
        .routes(routes!(surfaces::surface))
        .routes(routes!(health::live))
        .routes(routes!(health::ready))
        .routes(routes!(metrics::metrics))
        .routes(routes!(version::version))
        .routes(routes!(problems::list_problems))
        .routes(routes!(problems::explain_problem))
}

/// The service as a router, testable without a socket.
pub fn app(state: &Shared) -> Router {
    app_with(state, Router::new())
}

/// The service with more routes under its base path: for tests, and for programs that embed it.
pub fn app_with(state: &Shared, more: Router<Shared>) -> Router {
    // Meters are kept once handed out, so the recorder must be there before the first request.
    telemetry::metrics_handle();
    let base_path = state.settings.base_path.as_str();
    let (resources, document) = described(base_path);
    let document = Arc::new(docs::Contract::new(&document));
    let inside = resources.merge(docs::routes(&document, base_path)).merge(more);
    let whole = if base_path.is_empty() {
        inside
    } else {
        let root = base_path.to_owned();
        Router::new()
            .route(&format!("{base_path}/"), get(async move || Redirect::permanent(&root)))
            .nest(base_path, inside)
    };
    whole.layer(House::new(state.clone())).with_state(state.clone())
}

fn described(base_path: &str) -> (Router<Shared>, OpenApi) {
    let (resources, mut document) = resources().split_for_parts();
    contract::complete(&mut document, base_path);
    (resources, document)
}

/// The OpenAPI document of a service at the root, as committed in `openapi/openapi.json`.
///
/// # Errors
/// None in practice: the document is made of strings, numbers and lists.
pub fn openapi_json() -> Result<String, serde_json::Error> {
    let (_, document) = described("");
    document.to_pretty_json().map(|text| text + "\n")
}
