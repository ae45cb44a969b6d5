//! Pictures and tables of results, from plain data.
//!
//! Pictures are SVG, written by hand: a plotting crate gives neither hatching, nor dashes, nor alternative text, nor labels that keep out of each other's way,
//! and half of the pictures are drawings rather than plots. The same data give the same bytes.

mod axis;
mod bars;
mod contour;
mod course;
mod curve;
mod histogram;
mod lip;
mod map;
mod number;
mod page;
mod panels;
mod pen;
mod probability;
mod stack;
mod svg;
mod sweep;
mod text;
mod vessel;
mod zone;

pub use axis::{Axis, Scale};
pub use bars::{Bar, BarChart, MOST_BARS, bars};
pub use course::course;
pub use curve::{Curve, CurveChart, CurvePoint, MOST_CURVES, Mark, curve};
pub use histogram::{Histogram, Limit, Side, histogram};
pub use lip::{Between, LipPicture, lip};
pub use map::{Boundary, Dark, MOST_MAP_POINTS, MapChart, map, round_levels};
pub(in crate::service) use number::{percent, significant, with_unit};
pub use page::Heading;
pub use panels::{Panel, Panels, Span, panels};
pub use probability::{ProbabilityChart, Seen, probability};
pub use stack::stack;
pub use sweep::{Asked, Drawn, FEW, NotDrawable, SweepAxis, SweepTable, drawable, sweep, sweep_picture};
pub use vessel::{MOST_MOMENTS, VesselMoment, VesselPicture, VesselStream, vessel};

/// The media type of the pictures.
pub const SVG: &str = "image/svg+xml";
