//! What a lattice is made from: walls, sides, fluids, start.

use super::contact::ContactAngle;

/// What happens at the two sides of the lattice, left and right.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Ends {
    /// What leaves on one side enters on the other.
    Periodic,
    /// Film fed on the left, everything leaves on the right.
    Through(Feed),
    /// Both open (or closed by walls of the geometry).
    Open,
}

/// A film fed through the left side: a parabolic profile, zero at the floor and level at the surface.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Feed {
    /// Height of the floor, cells.
    pub floor: f64,
    /// Thickness, cells.
    pub thickness: f64,
    /// Mean speed, cells per step.
    pub speed: f64,
}

/// The two fluids and the forces on them, in lattice units: unit cell, unit step, liquid density 1.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Fluids {
    /// Density of the gas over that of the liquid.
    pub density_ratio: f64,
    /// Kinematic viscosity of the liquid.
    pub liquid_viscosity: f64,
    /// Kinematic viscosity of the gas.
    pub gas_viscosity: f64,
    /// Surface tension.
    pub surface_tension: f64,
    /// Width ξ of the interface, cells: φ = ½ − ½ tanh(2s/ξ).
    pub interface: f64,
    /// Mobility M of the phase field.
    pub mobility: f64,
    /// Gravity (x, y), acting on the excess of density over the gas.
    pub gravity: [f64; 2],
}

/// State of a point at the start, or of an imposed cell.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Seed {
    /// Phase, 1 in the liquid.
    pub phase: f64,
    /// Speed (x, y).
    pub velocity: [f64; 2],
}

/// Everything a [`super::lattice::Lattice`] is made from. Cell (i, j) stands at the point (i, j).
pub struct Setup<'a> {
    /// Columns: 2 more than a multiple of 16.
    pub columns: usize,
    /// Rows.
    pub rows: usize,
    /// Signed distance from the walls, positive in the fluid, cells.
    pub distance: &'a dyn Fn(f64, f64) -> f64,
    /// Cells whose state is imposed for good (a slot that feeds), if any.
    pub imposed: &'a dyn Fn(usize, usize) -> Option<Seed>,
    /// State at the start.
    pub start: &'a dyn Fn(f64, f64) -> Seed,
    /// Left and right.
    pub ends: Ends,
    /// Width of the layer of added viscosity along open sides, cells; 0 for none.
    pub sponge: usize,
    /// Fluids and forces.
    pub fluids: Fluids,
    /// Contact angle at the walls.
    pub contact: ContactAngle,
}
