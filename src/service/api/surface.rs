//! The surface in a request.

use super::quantity::{ContactAngle, RoughnessRatio, SurfaceEnergy, given};
use crate::{
    analysis::{fault::Fault, spec::SurfaceSpec},
    physics::surface::{State, catalogue, find},
    service::nearest::{nearest, quoted},
};
use serde::{Deserialize, Serialize};
use utoipa::ToSchema;

/// What the lip is made of: exactly one member names the way it is known.
#[derive(Debug, Clone, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum SurfaceRequest {
    /// A material of the catalogue.
    Catalogue(CatalogueSurface),
    /// Contact angles measured with this liquid.
    Measured(MeasuredSurface),
    /// Estimated from surface energy.
    Estimated(EstimatedSurface),
}

/// A material of the catalogue in one of its states.
#[derive(Debug, Clone, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct CatalogueSurface {
    /// Identifier, as in `GET /v1/surfaces`.
    #[schema(example = "porcelain-glazed")]
    pub id: String,
    /// Its state; `GET /v1/surfaces` says which states are known.
    pub state: StateRequest,
}

/// The state of a surface.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Deserialize, Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum StateRequest {
    /// As made, or freshly cleaned.
    Clean,
    /// Washed, handled or aged in air.
    InUse,
    /// Worn or fouled.
    Worn,
}

impl From<StateRequest> for State {
    fn from(state: StateRequest) -> Self {
        match state {
            StateRequest::Clean => Self::Clean,
            StateRequest::InUse => Self::InUse,
            StateRequest::Worn => Self::Worn,
        }
    }
}

/// Contact angles measured with this liquid; any one is enough. A missing advancing angle is taken as the contact angle + 10 ± 8°, a missing receding angle
/// as the contact angle − 20 ± 15°, within 0 to 180° (own judgement), and flagged. Default standard uncertainty of each: 3°.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct MeasuredSurface {
    /// Advancing angle: at it a dry face is wetted.
    #[serde(default, deserialize_with = "given", skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false)]
    pub advancing_deg: Option<ContactAngle>,
    /// Static contact angle.
    #[serde(default, deserialize_with = "given", skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false)]
    pub contact_angle_deg: Option<ContactAngle>,
    /// Receding angle: at it a wet face lets go.
    #[serde(default, deserialize_with = "given", skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false)]
    pub receding_deg: Option<ContactAngle>,
}

/// Angles estimated from surface energy: the last resort, with a wide band.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct EstimatedSurface {
    /// Dispersive component of the surface energy. Default standard uncertainty: 5 %, at least 0.5 mN/m.
    pub dispersive_mn_m: SurfaceEnergy,
    /// Polar component of the surface energy. Default standard uncertainty: 5 %, at least 0.5 mN/m.
    pub polar_mn_m: SurfaceEnergy,
    /// Ratio of true to projected area; default 1, smooth. Default standard uncertainty: 5 %.
    #[serde(default = "smooth")]
    pub roughness_ratio: RoughnessRatio,
}

const fn smooth() -> RoughnessRatio {
    RoughnessRatio::known(1.0)
}

impl SurfaceRequest {
    /// The surface with its catalogue entry found. `at` is the pointer of this member in the request.
    ///
    /// # Errors
    /// An identifier that the catalogue does not have, with the nearest ones it has.
    pub fn spec(&self, at: &str) -> Result<SurfaceSpec, Fault> {
        Ok(match self {
            Self::Catalogue(CatalogueSurface { id, state }) => {
                let material = find(id).ok_or_else(|| {
                    Fault::new(
                        format!("{at}/catalogue/id"),
                        "unknown_id",
                        format!("the catalogue has no surface {}; GET /v1/surfaces lists them", quoted(id)),
                    )
                    .choices(nearest(id, catalogue().iter().map(|m| m.id)))
                })?;
                SurfaceSpec::Catalogue { material, state: (*state).into() }
            }
            Self::Measured(m) => SurfaceSpec::Measured {
                contact_angle_deg: m.contact_angle_deg.map(ContactAngle::get),
                advancing_deg: m.advancing_deg.map(ContactAngle::get),
                receding_deg: m.receding_deg.map(ContactAngle::get),
            },
            Self::Estimated(e) => SurfaceSpec::Estimated {
                dispersive_mn_m: e.dispersive_mn_m.get(),
                polar_mn_m: e.polar_mn_m.get(),
                roughness_ratio: e.roughness_ratio.get(),
            },
        })
    }
}
