//! The liquid in a request.

use super::quantity::{
    Density, Density15, Fat, KinematicViscosity40, KinematicViscosity100, MassFraction, Salinity,
    SurfaceTension, Temperature, Viscosity, given,
};
use crate::{
    analysis::{
        fault::Fault,
        spec::{LiquidSpec, Overrides},
    },
    physics::liquid::{Conditions, catalogue, find},
    service::nearest::{nearest, quoted},
};
use serde::{Deserialize, Serialize};
use utoipa::ToSchema;

/// What is poured: exactly one member names the way it is known.
#[derive(Debug, Clone, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(rename_all = "snake_case")]
pub enum LiquidRequest {
    /// A liquid of the catalogue.
    Catalogue(CatalogueLiquid),
    /// A liquid known by its measured properties.
    Measured(MeasuredLiquid),
}

/// A liquid of the catalogue at these conditions. Which of the components a liquid needs, `GET /v1/liquids` says. Properties given here replace the catalogue's.
#[derive(Debug, Clone, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct CatalogueLiquid {
    /// Density at 15 °C (mineral oil). Default standard uncertainty: 0.1 %.
    #[serde(default, deserialize_with = "given", skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false)]
    pub density_15c_kg_m3: Option<Density15>,
    /// Density that replaces the catalogue's. Default standard uncertainty: 0.1 %.
    #[serde(default, deserialize_with = "given", skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false)]
    pub density_kg_m3: Option<Density>,
    /// Fat content by mass (milk, cream). Default standard uncertainty: 2 %.
    #[serde(default, deserialize_with = "given", skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false)]
    pub fat_percent: Option<Fat>,
    /// Identifier, as in `GET /v1/liquids`.
    #[schema(example = "sucrose-solution")]
    pub id: String,
    /// Mass fraction of the solute. Default standard uncertainty: 1 %.
    #[serde(default, deserialize_with = "given", skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false)]
    pub mass_fraction: Option<MassFraction>,
    /// Salinity (sea water). Default standard uncertainty: 1 %.
    #[serde(default, deserialize_with = "given", skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false)]
    pub salinity_g_kg: Option<Salinity>,
    /// Surface tension that replaces the catalogue's. Default standard uncertainty: 1 %.
    #[serde(default, deserialize_with = "given", skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false)]
    pub surface_tension_mn_m: Option<SurfaceTension>,
    /// Temperature; default 20 °C. Default standard uncertainty: 1 °C.
    #[serde(default = "room_temperature")]
    pub temperature_c: Temperature,
    /// Kinematic viscosity at 100 °C (mineral oil). Default standard uncertainty: 2 %.
    #[serde(default, deserialize_with = "given", skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false)]
    pub viscosity_100c_mm2_s: Option<KinematicViscosity100>,
    /// Kinematic viscosity at 40 °C (mineral oil). Default standard uncertainty: 2 %.
    #[serde(default, deserialize_with = "given", skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false)]
    pub viscosity_40c_mm2_s: Option<KinematicViscosity40>,
    /// Dynamic viscosity that replaces the catalogue's. Default standard uncertainty: 2 %.
    #[serde(default, deserialize_with = "given", skip_serializing_if = "Option::is_none")]
    #[schema(nullable = false)]
    pub viscosity_mpa_s: Option<Viscosity>,
}

const fn room_temperature() -> Temperature {
    Temperature::known(20.0)
}

/// A liquid known by its measured properties.
#[derive(Debug, Clone, Copy, PartialEq, Deserialize, Serialize, ToSchema)]
#[serde(deny_unknown_fields)]
pub struct MeasuredLiquid {
    /// Density. Default standard uncertainty: 0.1 %.
    pub density_kg_m3: Density,
    /// Surface tension. Default standard uncertainty: 1 %.
    pub surface_tension_mn_m: SurfaceTension,
    /// Dynamic viscosity. Default standard uncertainty: 2 %.
    pub viscosity_mpa_s: Viscosity,
}

impl LiquidRequest {
    /// The liquid with its catalogue entry found. `at` is the pointer of this member in the request.
    ///
    /// # Errors
    /// An identifier that the catalogue does not have, with the nearest ones it has.
    pub fn spec(&self, at: &str) -> Result<LiquidSpec, Fault> {
        Ok(match self {
            Self::Catalogue(liquid) => LiquidSpec::Catalogue {
                entry: find(&liquid.id).ok_or_else(|| {
                    let detail = format!(
                        "the catalogue has no liquid {}; GET /v1/liquids lists them",
                        quoted(&liquid.id)
                    );
                    Fault::new(format!("{at}/catalogue/id"), "unknown_id", detail)
                        .choices(nearest(&liquid.id, catalogue().iter().map(|entry| entry.id)))
                })?,
                conditions: Conditions {
                    temperature_c: liquid.temperature_c.get(),
                    mass_fraction: liquid.mass_fraction.map(MassFraction::get),
                    salinity_g_kg: liquid.salinity_g_kg.map(Salinity::get),
                    fat_percent: liquid.fat_percent.map(Fat::get),
                    viscosity_40c_mm2_s: liquid.viscosity_40c_mm2_s.map(KinematicViscosity40::get),
                    viscosity_100c_mm2_s: liquid.viscosity_100c_mm2_s.map(KinematicViscosity100::get),
                    density_15c_kg_m3: liquid.density_15c_kg_m3.map(Density15::get),
                },
                overrides: Overrides {
                    density_kg_m3: liquid.density_kg_m3.map(Density::get),
                    viscosity_mpa_s: liquid.viscosity_mpa_s.map(Viscosity::get),
                    surface_tension_mn_m: liquid.surface_tension_mn_m.map(SurfaceTension::get),
                },
            },
            Self::Measured(liquid) => LiquidSpec::Measured {
                density_kg_m3: liquid.density_kg_m3.get(),
                viscosity_mpa_s: liquid.viscosity_mpa_s.get(),
                surface_tension_mn_m: liquid.surface_tension_mn_m.get(),
            },
        })
    }
}
