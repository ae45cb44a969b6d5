//! A file per resource: its request, its answer and its handler stand together.

pub mod batch;
pub mod calibration;
pub mod calibrations;
pub mod contact_angles;
pub mod designs;
pub mod docs;
pub mod evaluations;
pub mod health;
mod inside;
pub mod lip;
pub mod liquid;
pub mod liquids;
pub mod lots;
pub mod metrics;
pub mod notice;
pub mod pours;
pub mod problems;
pub mod property;
pub mod quantity;
pub mod surface;
pub mod surfaces;
pub mod sweeps;
pub mod tolerances;
pub mod version;

use http::HeaderValue;

/// The policy of the service's own small pages: styled by their own style element, nothing loaded, nothing run.
const PAGE_POLICY: HeaderValue = HeaderValue::from_static(
    "default-src 'none'; style-src 'unsafe-inline'; frame-ancestors 'none'; base-uri 'none'; form-action 'none'",
);
