//! The lip: where the liquid leaves the vessel.

mod section;

pub use section::Section;

/// The edge that the stream turns over.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Edge {
    /// Radius of the rounding, m; 0 is ideally sharp.
    pub radius: f64,
    /// Turn from the floor's direction to the outer wall's, rad. The solid's wedge angle is π − turn.
    pub turn: f64,
}

/// The floor before the edge, in the attitude of this pour.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Run {
    /// Slope, rad, downhill positive.
    pub slope: f64,
    /// Length, m.
    pub length: f64,
}

/// A lip: cross-section across the stream, edge along it, floor before it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Lip {
    /// Cross-section seen against the stream.
    pub section: Section,
    /// The edge that the stream turns over.
    pub edge: Edge,
    /// The floor before the edge.
    pub run: Run,
}
