//! The numeric fields of a question, by JSON Pointer: read, changed one at a time, and given uncertainties.

use super::spec::{LiquidSpec, SectionSpec, Spec, SurfaceSpec};
use crate::physics::{
    liquid::Component,
    quantity::{self, Quantity},
};

/// A numeric field of a question.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Field {
    /// Width of a sheet lip.
    SheetWidth,
    /// Included angle of a vee.
    VeeAngle,
    /// Diameter of a trough.
    TroughDiameter,
    /// Bore of a tube.
    TubeBore,
    /// Edge radius.
    EdgeRadius,
    /// Turn of the edge.
    Turn,
    /// Slope of the floor.
    Slope,
    /// Length of the floor.
    RunLength,
    /// Measured static contact angle.
    MeasuredContact,
    /// Measured advancing angle.
    MeasuredAdvancing,
    /// Measured receding angle.
    MeasuredReceding,
    /// Dispersive component of the surface energy.
    Dispersive,
    /// Polar component of the surface energy.
    Polar,
    /// Roughness ratio of the surface.
    Roughness,
    /// Temperature of a catalogue liquid.
    Temperature,
    /// Mass fraction of a catalogue liquid.
    MassFraction,
    /// Salinity of a catalogue liquid.
    Salinity,
    /// Fat content of a catalogue liquid.
    Fat,
    /// Kinematic viscosity at 40 °C of a catalogue liquid.
    Viscosity40,
    /// Kinematic viscosity at 100 °C of a catalogue liquid.
    Viscosity100,
    /// Density at 15 °C of a catalogue liquid.
    Density15,
    /// Density that overrides the catalogue's.
    DensityOverride,
    /// Viscosity that overrides the catalogue's.
    ViscosityOverride,
    /// Surface tension that overrides the catalogue's.
    SurfaceTensionOverride,
    /// Density of a measured liquid.
    MeasuredDensity,
    /// Viscosity of a measured liquid.
    MeasuredViscosity,
    /// Surface tension of a measured liquid.
    MeasuredSurfaceTension,
    /// Pour rate.
    Flow,
}

/// Every field with its pointer and quantity, in the order of a request and of [`Field`]'s variants.
const TABLE: &[(Field, &str, Quantity)] = &[
    (Field::SheetWidth, "/lip/section/sheet/width_mm", quantity::SHEET_WIDTH),
    (Field::VeeAngle, "/lip/section/vee/included_angle_deg", quantity::INCLUDED_ANGLE),
    (Field::TroughDiameter, "/lip/section/trough/diameter_mm", quantity::TROUGH_DIAMETER),
    (Field::TubeBore, "/lip/section/tube/bore_mm", quantity::TUBE_BORE),
    (Field::EdgeRadius, "/lip/edge/rounded/radius_mm", quantity::EDGE_RADIUS),
    (Field::Turn, "/lip/edge/rounded/turn_deg", quantity::TURN),
    (Field::Slope, "/lip/run/slope_deg", quantity::RUN_SLOPE),
    (Field::RunLength, "/lip/run/length_mm", quantity::RUN_LENGTH),
    (Field::MeasuredContact, "/surface/measured/contact_angle_deg", quantity::CONTACT_ANGLE),
    (Field::MeasuredAdvancing, "/surface/measured/advancing_deg", quantity::CONTACT_ANGLE),
    (Field::MeasuredReceding, "/surface/measured/receding_deg", quantity::CONTACT_ANGLE),
    (Field::Dispersive, "/surface/estimated/dispersive_mn_m", quantity::SURFACE_ENERGY),
    (Field::Polar, "/surface/estimated/polar_mn_m", quantity::SURFACE_ENERGY),
    (Field::Roughness, "/surface/estimated/roughness_ratio", quantity::ROUGHNESS_RATIO),
    (Field::Temperature, "/liquid/catalogue/temperature_c", quantity::TEMPERATURE),
    (Field::MassFraction, "/liquid/catalogue/mass_fraction", quantity::MASS_FRACTION),
    (Field::Salinity, "/liquid/catalogue/salinity_g_kg", quantity::SALINITY),
    (Field::Fat, "/liquid/catalogue/fat_percent", quantity::FAT),
    (Field::Viscosity40, "/liquid/catalogue/viscosity_40c_mm2_s", quantity::KINEMATIC_VISCOSITY_40),
    (Field::Viscosity100, "/liquid/catalogue/viscosity_100c_mm2_s", quantity::KINEMATIC_VISCOSITY_100),
    (Field::Density15, "/liquid/catalogue/density_15c_kg_m3", quantity::DENSITY_15),
    (Field::DensityOverride, "/liquid/catalogue/density_kg_m3", quantity::DENSITY),
    (Field::ViscosityOverride, "/liquid/catalogue/viscosity_mpa_s", quantity::VISCOSITY),
    (Field::SurfaceTensionOverride, "/liquid/catalogue/surface_tension_mn_m", quantity::SURFACE_TENSION),
    (Field::MeasuredDensity, "/liquid/measured/density_kg_m3", quantity::DENSITY),
    (Field::MeasuredViscosity, "/liquid/measured/viscosity_mpa_s", quantity::VISCOSITY),
    (Field::MeasuredSurfaceTension, "/liquid/measured/surface_tension_mn_m", quantity::SURFACE_TENSION),
    (Field::Flow, "/pour/flow_ml_s", quantity::FLOW),
];

impl Field {
    /// How many fields there are.
    pub const COUNT: usize = TABLE.len();

    /// Every field, in the order of a request.
    pub fn all() -> impl Iterator<Item = Self> {
        TABLE.iter().map(|row| row.0)
    }

    /// The field that this pointer names.
    #[must_use]
    pub fn at(pointer: &str) -> Option<Self> {
        TABLE.iter().find(|row| row.1 == pointer).map(|row| row.0)
    }

    /// Its place in [`Field::all`].
    #[must_use]
    pub fn index(self) -> usize {
        self as usize
    }

    /// Its JSON Pointer in an evaluation request.
    #[must_use]
    pub fn pointer(self) -> &'static str {
        TABLE[self.index()].1
    }

    /// What it is, with unit and accepted range.
    #[must_use]
    pub fn quantity(self) -> Quantity {
        TABLE[self.index()].2
    }

    /// The last part of its pointer: the member's name.
    #[must_use]
    pub fn member(self) -> &'static str {
        self.pointer().rsplit('/').next().unwrap_or_default()
    }

    /// The field that holds this component of a catalogue liquid.
    #[must_use]
    pub const fn of(component: Component) -> Self {
        match component {
            Component::MassFraction => Self::MassFraction,
            Component::Salinity => Self::Salinity,
            Component::FatPercent => Self::Fat,
            Component::Viscosity40 => Self::Viscosity40,
            Component::Viscosity100 => Self::Viscosity100,
            Component::Density15 => Self::Density15,
        }
    }

    /// Its value in this question, in the caller's unit; `None` where the question has no such field, or leaves it out.
    #[must_use]
    pub fn get(self, spec: &Spec) -> Option<f64> {
        let mut copy = *spec;
        self.slot(&mut copy).and_then(|slot| slot.get())
    }

    /// Sets it, in the caller's unit. Gives `false` where the question has no such field. The range is not checked here.
    pub fn set(self, spec: &mut Spec, value: f64) -> bool {
        self.slot(spec).map(|slot| slot.set(value)).is_some()
    }

    fn slot(self, spec: &mut Spec) -> Option<Slot<'_>> {
        use Field as F;
        use Slot::{Optional, Required};
        Some(match (self, &mut spec.section, &mut spec.surface, &mut spec.liquid) {
            (F::SheetWidth, SectionSpec::Sheet { width_mm }, ..) => Required(width_mm),
            (F::VeeAngle, SectionSpec::Vee { included_angle_deg }, ..) => Required(included_angle_deg),
            (F::TroughDiameter, SectionSpec::Trough { diameter_mm }, ..) => Required(diameter_mm),
            (F::TubeBore, SectionSpec::Tube { bore_mm }, ..) => Required(bore_mm),
            (F::EdgeRadius, ..) => Required(&mut spec.radius_mm),
            (F::Turn, ..) => Required(&mut spec.turn_deg),
            (F::Slope, ..) => Required(&mut spec.slope_deg),
            (F::RunLength, ..) => Required(&mut spec.length_mm),
            (F::Flow, ..) => Required(&mut spec.flow_ml_s),
            (F::MeasuredContact, _, SurfaceSpec::Measured { contact_angle_deg, .. }, _) => {
                Optional(contact_angle_deg)
            }
            (F::MeasuredAdvancing, _, SurfaceSpec::Measured { advancing_deg, .. }, _) => {
                Optional(advancing_deg)
            }
            (F::MeasuredReceding, _, SurfaceSpec::Measured { receding_deg, .. }, _) => Optional(receding_deg),
            (F::Dispersive, _, SurfaceSpec::Estimated { dispersive_mn_m, .. }, _) => {
                Required(dispersive_mn_m)
            }
            (F::Polar, _, SurfaceSpec::Estimated { polar_mn_m, .. }, _) => Required(polar_mn_m),
            (F::Roughness, _, SurfaceSpec::Estimated { roughness_ratio, .. }, _) => Required(roughness_ratio),
            (F::Temperature, _, _, LiquidSpec::Catalogue { conditions, .. }) => {
                Required(&mut conditions.temperature_c)
            }
            (F::MassFraction, _, _, LiquidSpec::Catalogue { conditions, .. }) => {
                Optional(&mut conditions.mass_fraction)
            }
            (F::Salinity, _, _, LiquidSpec::Catalogue { conditions, .. }) => {
                Optional(&mut conditions.salinity_g_kg)
            }
            (F::Fat, _, _, LiquidSpec::Catalogue { conditions, .. }) => Optional(&mut conditions.fat_percent),
            (F::Viscosity40, _, _, LiquidSpec::Catalogue { conditions, .. }) => {
                Optional(&mut conditions.viscosity_40c_mm2_s)
            }
            (F::Viscosity100, _, _, LiquidSpec::Catalogue { conditions, .. }) => {
                Optional(&mut conditions.viscosity_100c_mm2_s)
            }
            (F::Density15, _, _, LiquidSpec::Catalogue { conditions, .. }) => {
                Optional(&mut conditions.density_15c_kg_m3)
            }
            (F::DensityOverride, _, _, LiquidSpec::Catalogue { overrides, .. }) => {
                Optional(&mut overrides.density_kg_m3)
            }
            (F::ViscosityOverride, _, _, LiquidSpec::Catalogue { overrides, .. }) => {
                Optional(&mut overrides.viscosity_mpa_s)
            }
            (F::SurfaceTensionOverride, _, _, LiquidSpec::Catalogue { overrides, .. }) => {
                Optional(&mut overrides.surface_tension_mn_m)
            }
            (F::MeasuredDensity, _, _, LiquidSpec::Measured { density_kg_m3, .. }) => Required(density_kg_m3),
            (F::MeasuredViscosity, _, _, LiquidSpec::Measured { viscosity_mpa_s, .. }) => {
                Required(viscosity_mpa_s)
            }
            (F::MeasuredSurfaceTension, _, _, LiquidSpec::Measured { surface_tension_mn_m, .. }) => {
                Required(surface_tension_mn_m)
            }
            _ => return None,
        })
    }
}

enum Slot<'a> {
    Required(&'a mut f64),
    Optional(&'a mut Option<f64>),
}

impl Slot<'_> {
    fn get(&self) -> Option<f64> {
        match self {
            Self::Required(value) => Some(**value),
            Self::Optional(value) => **value,
        }
    }

    fn set(self, new: f64) {
        match self {
            Self::Required(value) => *value = new,
            Self::Optional(value) => *value = Some(new),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_table_stands_in_the_order_of_the_variants() {
        for (i, row) in TABLE.iter().enumerate() {
            assert_eq!(row.0.index(), i, "{}", row.1);
            assert_eq!(Field::at(row.1), Some(row.0));
        }
        assert_eq!(Field::Flow.index() + 1, Field::COUNT);
        assert_eq!(Field::at("/lip/edge/rounded"), None);
        assert_eq!(Field::EdgeRadius.member(), "radius_mm");
    }
}
