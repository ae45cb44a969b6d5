//! `GET /version`: what is running.

use axum::response::Response;
use http::HeaderMap;
use serde::Serialize;
use utoipa::ToSchema;

use crate::physics::separation::closed_form::SETS;
use crate::service::fingerprint::{VERSION, catalogue_digest};
use crate::service::negotiation::{JSON, REVALIDATE, cacheable, choose};
use crate::service::problem::Problem;

/// What decides which results this service gives.
#[derive(Debug, Clone, Serialize, ToSchema)]
pub struct Version {
    /// The version of the service and of its model.
    #[schema(example = "0.1.0")]
    pub version: &'static str,
    /// The sets of model coefficients that can be asked for by name, the default first.
    #[schema(example = json!(["set-1"]))]
    pub coefficients: Vec<&'static str>,
    /// SHA-256 over the catalogue of liquids and surfaces.
    pub catalogue_digest: &'static str,
}

impl Version {
    /// What is running here.
    #[must_use]
    pub fn current() -> Self {
        Self {
            version: VERSION,
            coefficients: SETS.iter().rev().map(|set| set.id).collect(),
            catalogue_digest: catalogue_digest(),
        }
    }
}

/// Version, coefficient sets and the catalogue's digest.
#[utoipa::path(get, path = "/version", tag = "operation",
    responses((status = 200, description = "What is running", body = Version)))]
pub async fn version(headers: HeaderMap) -> Result<Response, Problem> {
    choose(&headers, &[JSON])?;
    let body = serde_json::to_vec(&Version::current())
        .map_err(|_| Problem::internal("The version could not be written."))?;
    Ok(cacheable(&headers, JSON, REVALIDATE, body))
}
