//! The brink: how far the stream falls where the floor ends.

use crate::physics::lip::Section;

/// End-depth ratio y_brink/y_c of a level run with the air free beneath the nappe, ±5 %.
///
/// Flat 0.715 (Rouse 1936, Civil Engineering 6, 257); vee 0.795 (Rajaratnam & Muralidhar 1964); circle 0.74
/// (spread 0.725–0.76 of several authors); from memory.
#[must_use]
pub fn end_depth_ratio(section: &Section) -> f64 {
    match section {
        Section::Sheet { .. } => 0.715,
        Section::Vee { .. } => 0.795,
        Section::Trough { .. } | Section::Tube { .. } => 0.74,
    }
}

/// Depth at the brink over depth just before it, F²/(F² + c) with c = 1/r − 1: `froude_squared` F² ≥ 1 of the
/// approaching stream, `ratio` r its end-depth ratio at F = 1.
///
/// With r = 2/3 it is the momentum balance of a flat stream with no pressure at the brink, 2F²/(1 + 2F²)
/// (analytic; Rouse); the measured r stands for the pressure that is left there.
#[must_use]
pub fn brink_ratio(froude_squared: f64, ratio: f64) -> f64 {
    froude_squared / (froude_squared + (1.0 / ratio - 1.0))
}
