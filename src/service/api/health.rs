//! Probes for an orchestrator: is the process alive, does it want work?

use axum::extract::State;
use axum::response::{IntoResponse, Response};
use http::header;
use serde::Serialize;
use utoipa::ToSchema;

use crate::service::negotiation::JSON;
use crate::service::problem::{Problem, ProblemKind};
use crate::service::state::Shared;

/// A probe's answer.
#[derive(Debug, Serialize, ToSchema)]
pub struct Health {
    /// What was found.
    #[schema(example = "ready")]
    pub status: &'static str,
}

fn healthy(body: &'static str) -> Response {
    ([(header::CONTENT_TYPE, JSON)], body).into_response()
}

/// Whether the process answers at all.
#[utoipa::path(get, path = "/health/live", tag = "operation",
    responses((status = 200, description = "The process answers", body = Health)))]
pub async fn live() -> Response {
    healthy(r#"{"status":"live"}"#)
}

/// Whether the service wants work: not while it is shutting down.
#[utoipa::path(get, path = "/health/ready", tag = "operation",
    responses((status = 200, description = "New work is welcome", body = Health)))]
pub async fn ready(State(state): State<Shared>) -> Result<Response, Problem> {
    if state.is_ready() {
        Ok(healthy(r#"{"status":"ready"}"#))
    } else {
        Err(Problem::new(ProblemKind::Overloaded, "The service is shutting down.").retry_after(5))
    }
}
