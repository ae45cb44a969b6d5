//! The lip in a request.

use super::quantity::{
    EdgeRadius, IncludedAngle, RunLength, RunSlope, SheetWidth, TroughDiameter, TubeBore, Turn,
};
use crate::analysis::spec::SectionSpec;
use serde::{Deserialize, Serialize};
use utoipa::ToSchema;

/// Where the liquid leaves the vessel.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct LipRequest {
    /// The edge that the stream turns over.
    pub edge: EdgeRequest,
    /// The floor before the edge, in the attitude of this pour; default level.
    #[serde(default)]
    pub run: RunRequest,
    /// Cross-section of the lip, seen against the stream.
    pub section: SectionRequest,
}

/// The edge that the stream turns over: exactly one member names its kind.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum EdgeRequest {
    /// A rounding between the floor and the outer wall.
    Rounded(RoundedEdge),
}

/// A rounded edge.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct RoundedEdge {
    /// Radius of the rounding that the stream turns over; 0 = ideally sharp. Default standard uncertainty: 5 %, at least 0.01 mm.
    pub radius_mm: EdgeRadius,
    /// Angle from the floor's direction to the outer wall's; solid wedge angle = 180 − turn; 180 folds right back. Default standard uncertainty: 1°.
    pub turn_deg: Turn,
}

/// The floor before the edge.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct RunRequest {
    /// Length of the floor before the edge; default 0. Default standard uncertainty: 2 %.
    #[serde(default = "no_length")]
    pub length_mm: RunLength,
    /// Slope of the floor, downhill positive; default level, 0. Default standard uncertainty: 0.5°.
    #[serde(default = "level")]
    pub slope_deg: RunSlope,
}

impl Default for RunRequest {
    fn default() -> Self {
        Self { length_mm: no_length(), slope_deg: level() }
    }
}

const fn no_length() -> RunLength {
    RunLength::known(0.0)
}

const fn level() -> RunSlope {
    RunSlope::known(0.0)
}

/// Cross-section of the lip: exactly one member names its kind.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum SectionRequest {
    /// Wide straight lip.
    Sheet(SheetSection),
    /// Pinched beaker lip.
    Vee(VeeSection),
    /// Open half-round channel.
    Trough(TroughSection),
    /// Closed round spout.
    Tube(TubeSection),
}

/// Wide straight lip.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct SheetSection {
    /// Width of the lip. Default standard uncertainty: 1 %.
    pub width_mm: SheetWidth,
}

/// Pinched beaker lip.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct VeeSection {
    /// Full included angle. Default standard uncertainty: 1°.
    pub included_angle_deg: IncludedAngle,
}

/// Open half-round channel; above half depth its walls are taken to go on vertically.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct TroughSection {
    /// Diameter. Default standard uncertainty: 1 %.
    pub diameter_mm: TroughDiameter,
}

/// Closed round spout, full or part full.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct TubeSection {
    /// Bore. Default standard uncertainty: 1 %.
    pub bore_mm: TubeBore,
}

impl From<SectionRequest> for SectionSpec {
    fn from(section: SectionRequest) -> Self {
        match section {
            SectionRequest::Sheet(s) => Self::Sheet { width_mm: s.width_mm.get() },
            SectionRequest::Vee(v) => Self::Vee { included_angle_deg: v.included_angle_deg.get() },
            SectionRequest::Trough(t) => Self::Trough { diameter_mm: t.diameter_mm.get() },
            SectionRequest::Tube(t) => Self::Tube { bore_mm: t.bore_mm.get() },
        }
    }
}
