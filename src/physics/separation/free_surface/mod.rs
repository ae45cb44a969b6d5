//! The reference solver: two-phase flow round the real lip, in two dimensions.
//!
//! # What is solved
//!
//! The Navier–Stokes equations of a liquid and a gas with a conservative Allen–Cahn interface:
//! ∇·u = 0, ρ(∂u/∂t + u·∇u) = −∇P + ∇·[ρν(∇u + ∇uᵀ)] + μ∇φ + (ρ − ρ_gas) G, ∂φ/∂t + ∇·(φu) = ∇·M(∇φ − 4φ(1 − φ) n/ξ),
//! by two lattice Boltzmann equations on one square grid (`kernel.rs`). Walls are halfway bounce-back with a contact angle (`wall.rs`).
//! The floor lies along the grid; a slope turns gravity.
//!
//! # How a threshold is found
//!
//! From a separated stream the surface tension is raised slowly at fixed Re and Fr; the critical Weber number is that at which the contact line has
//! run more than two film thicknesses down the outer wall ([`ramp`]). A film that thickens into a jump before the edge is told apart: it has choked.
//!
//! # Limits
//!
//! Two dimensions, no surfactant dynamics, a contact line that moves by diffusion over the interface's width (numerical slip), a gas of 1/50 of the
//! liquid's density, curved walls as stairs of cells. The grid's error is estimated from two grids.
//!
//! # Reproducibility
//!
//! Stencils only, no sums whose order depends on the threads, transcendental functions from `libm` alone, no fused multiply-add: the same case gives
//! the same bits on any machine with any number of threads.

mod band;
mod barrier;
pub mod contact;
mod kernel;
pub mod lattice;
mod layout;
pub mod lip;
pub mod outcome;
pub mod problem;
pub mod ramp;
pub mod real;
pub mod setup;
mod sides;
pub mod stream;
mod wall;
