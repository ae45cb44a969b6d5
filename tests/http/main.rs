//! The service as its callers meet it: in process through `app()`, and over real sockets.
#![allow(missing_docs, clippy::unwrap_used, clippy::expect_used, clippy::panic)]

mod ask;
mod batch;
mod bearer;
mod calibrations;
mod command_line;
mod contact_angles;
mod contract;
mod cross_origin;
mod designs;
mod evaluations;
mod lookups;
mod lots;
mod pictures;
mod pours;
mod problems;
mod properties;
mod readme;
mod round_trip;
mod server;
mod shell;
mod sockets;
mod sweeps;
mod tolerances;
