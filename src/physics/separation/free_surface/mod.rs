//! The reference solver: two-phase flow round the lip.
pub mod contact;
mod band;
mod barrier;
mod kernel;
pub mod lip;
pub mod lattice;
mod layout;
pub mod problem;
pub mod real;
pub mod setup;
mod sides;
pub mod stream;
mod wall;
