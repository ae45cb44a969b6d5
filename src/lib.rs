//! `dribble-risk`: will the liquid leave the lip, or run down the outside?
//!
//! The house has three storeys; each knows only those below it.
//!
//! * [`physics`]: what nature does. SI units and radians; no serde, no HTTP, no async, no clock, no globals.
//! * [`service`]: the HTTP face.
#![doc(html_no_source)]

pub mod analysis;
pub mod physics;
pub mod service;
