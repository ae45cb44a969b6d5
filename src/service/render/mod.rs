//! Pictures and tables of results, from plain data.
//!
//! Pictures are SVG, written by hand: a plotting crate gives neither hatching, nor dashes, nor alternative text, nor labels that keep out of each other's way,
//! and half of the pictures are drawings rather than plots. The same data give the same bytes.

mod axis;
mod contour;
mod curve;
mod lip;
mod map;
mod number;
mod page;
mod pen;
mod svg;
mod text;
mod zone;

pub use axis::{Axis, Scale};
pub use curve::{Curve, CurveChart, CurvePoint, MOST_CURVES, Mark, curve};
pub use lip::{Between, LipPicture, lip};
pub use map::{Boundary, Dark, MOST_MAP_POINTS, MapChart, map, round_levels};
pub use page::Heading;

/// The media type of the pictures.
pub const SVG: &str = "image/svg+xml";
