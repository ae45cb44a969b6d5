//! The two-phase solver against known answers. Each test states the error that was measured when it was written, and its bound.
#![allow(missing_docs, clippy::unwrap_used, clippy::expect_used, clippy::panic)]
// Exact answers are compared within bounds, so the platform's own functions do here.
#![allow(clippy::disallowed_methods)]

mod angle;
mod bench;
mod capillary_wave;
mod drop;
mod film;
mod lip;
mod repeatability;
