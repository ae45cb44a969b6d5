//! `GET /metrics`, for Prometheus.

use axum::extract::State;
use axum::response::{IntoResponse, Response};
use http::header;

use crate::service::state::Shared;
use crate::service::telemetry::metrics_handle;

/// Counts and durations of the requests answered, in the Prometheus text format.
#[utoipa::path(get, path = "/metrics", tag = "operation",
    responses((status = 200, description = "The metrics", body = String, content_type = "text/plain")))]
pub async fn metrics(State(state): State<Shared>) -> Response {
    let handle = metrics_handle();
    #[expect(clippy::cast_precision_loss, reason = "a count of requests is far below 2^53")]
    metrics::gauge!("http_requests_in_flight").set(state.in_flight() as f64);
    ([(header::CONTENT_TYPE, "text/plain; version=0.0.4; charset=utf-8")], handle.render()).into_response()
}
