//! The HTTP face: parses bytes into requests, hands them to the storeys below, and renders what comes back.
//!
//! A request's way in: [`run`] accepts the connection → [`layers`] (one hand-written layer: request id, CORS,
//! bearer token, load shedding, body limit, deadline, panics, problem documents, metrics, the access line) →
//! [`router`] → a handler in [`api`]. Every error a caller can see is one of [`problem::ProblemKind`]'s list.

pub mod api;
pub mod body;
pub mod contract;
pub mod events;
pub mod explain;
pub mod fingerprint;
pub mod heavy;
pub mod layers;
pub mod nearest;
pub mod negotiation;
pub mod problem;
pub mod render;
pub mod router;
pub mod run;
pub mod settings;
pub mod state;
pub mod table;
pub mod telemetry;

pub use router::{app, openapi_json};
