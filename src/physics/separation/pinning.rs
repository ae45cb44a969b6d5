//! Pinning of the contact line at the edge: static, informative, never softening a verdict.

use crate::physics::lip::Edge;

/// What the edge itself can hold.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Pinning {
    /// Whether the line stays at the edge whatever the liquid does statically (the limit reaches 180°).
    pub edge_holds: bool,
    /// Largest contact angle against the floor at which the line stays at the edge, rad, at most π.
    pub limit: f64,
    /// Whether the edge is sharp enough for the limit to hold as it stands.
    pub sharp: bool,
}

/// An edge counts as sharp when its radius is at most this share of the film's thickness and of the capillary length (own judgement).
const SHARP_SHARE: f64 = 0.1;

/// Gibbs' condition (Oliver, Huh & Mason 1977, J. Colloid Interface Sci. 59, 568): at an edge with solid wedge angle φ = 180° − turn the line stays
/// while θ ≤ θ_A + (180° − φ) = θ_A + turn. An undercut adds to the barrier degree for degree. An upper bound: momentum, vibration or a wet outer face defeat it,
/// and an edge radius spreads the barrier over the arc.
///
/// `advancing` in rad; `thickness` and `capillary_length` in m.
#[must_use]
pub fn pinning(edge: &Edge, advancing: f64, thickness: f64, capillary_length: f64) -> Pinning {
    let limit = (advancing + edge.turn).min(core::f64::consts::PI);
    let sharp = edge.radius <= SHARP_SHARE * thickness.min(capillary_length);
    Pinning { edge_holds: sharp && limit >= core::f64::consts::PI, limit, sharp }
}
