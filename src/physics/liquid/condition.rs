//! What a caller says about a liquid: its temperature and what it is made of.

use crate::physics::quantity::{self, Quantity};

/// A number, besides temperature, that some liquids need.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Component {
    /// Mass fraction of the dissolved or mixed-in substance.
    MassFraction,
    /// Salinity, g of salt per kg of sea water.
    Salinity,
    /// Fat content, % by mass.
    FatPercent,
    /// Kinematic viscosity at 40 °C, mm²/s.
    Viscosity40,
    /// Kinematic viscosity at 100 °C, mm²/s.
    Viscosity100,
    /// Density at 15 °C, kg/m³.
    Density15,
}

impl Component {
    /// Every component, in the order of the members of [`Conditions`].
    pub const ALL: [Self; 6] = [
        Self::MassFraction,
        Self::Salinity,
        Self::FatPercent,
        Self::Viscosity40,
        Self::Viscosity100,
        Self::Density15,
    ];

    /// The member that names this component in requests.
    #[must_use]
    pub const fn field(self) -> &'static str {
        match self {
            Self::MassFraction => "mass_fraction",
            Self::Salinity => "salinity_g_kg",
            Self::FatPercent => "fat_percent",
            Self::Viscosity40 => "viscosity_40c_mm2_s",
            Self::Viscosity100 => "viscosity_100c_mm2_s",
            Self::Density15 => "density_15c_kg_m3",
        }
    }

    /// The quantity behind this component: unit and the bounds that hold whatever the liquid.
    #[must_use]
    pub const fn quantity(self) -> Quantity {
        match self {
            Self::MassFraction => quantity::MASS_FRACTION,
            Self::Salinity => quantity::SALINITY,
            Self::FatPercent => quantity::FAT,
            Self::Viscosity40 => quantity::KINEMATIC_VISCOSITY_40,
            Self::Viscosity100 => quantity::KINEMATIC_VISCOSITY_100,
            Self::Density15 => quantity::DENSITY_15,
        }
    }
}

/// A component that a liquid of the catalogue needs, and the values this liquid accepts, in the component's unit.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Parameter {
    /// Which component.
    pub component: Component,
    /// Smallest accepted value.
    pub minimum: f64,
    /// Largest accepted value; what dissolves at a given temperature may be less.
    pub maximum: f64,
    /// A usual value, for examples and forms; never filled in for a caller.
    pub typical: f64,
}

/// Temperature and composition, in the caller's units; `None` is "not given".
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Conditions {
    /// Temperature, °C.
    pub temperature_c: f64,
    /// Mass fraction, 0 to 1.
    pub mass_fraction: Option<f64>,
    /// Salinity, g/kg.
    pub salinity_g_kg: Option<f64>,
    /// Fat content, % by mass.
    pub fat_percent: Option<f64>,
    /// Kinematic viscosity at 40 °C, mm²/s.
    pub viscosity_40c_mm2_s: Option<f64>,
    /// Kinematic viscosity at 100 °C, mm²/s.
    pub viscosity_100c_mm2_s: Option<f64>,
    /// Density at 15 °C, kg/m³.
    pub density_15c_kg_m3: Option<f64>,
}

impl Conditions {
    /// Only a temperature (°C), nothing said about composition.
    #[must_use]
    pub fn at(temperature_c: f64) -> Self {
        Self { temperature_c, ..Self::default() }
    }

    /// The same with one component given, in its unit.
    #[must_use]
    pub fn with(mut self, component: Component, value: f64) -> Self {
        self.set(component, value);
        self
    }

    /// What was given for a component, in its unit.
    #[must_use]
    pub const fn get(&self, component: Component) -> Option<f64> {
        match component {
            Component::MassFraction => self.mass_fraction,
            Component::Salinity => self.salinity_g_kg,
            Component::FatPercent => self.fat_percent,
            Component::Viscosity40 => self.viscosity_40c_mm2_s,
            Component::Viscosity100 => self.viscosity_100c_mm2_s,
            Component::Density15 => self.density_15c_kg_m3,
        }
    }

    /// Gives a value for a component, in its unit. Nothing is checked here.
    pub fn set(&mut self, component: Component, value: f64) {
        let member = match component {
            Component::MassFraction => &mut self.mass_fraction,
            Component::Salinity => &mut self.salinity_g_kg,
            Component::FatPercent => &mut self.fat_percent,
            Component::Viscosity40 => &mut self.viscosity_40c_mm2_s,
            Component::Viscosity100 => &mut self.viscosity_100c_mm2_s,
            Component::Density15 => &mut self.density_15c_kg_m3,
        };
        *member = Some(value);
    }

    /// A component that acceptance has already made sure of. Not a number when it was not given, so that a slip shows
    /// as a refused result and never as a plausible one.
    pub(super) fn known(&self, component: Component) -> f64 {
        self.get(component).unwrap_or(f64::NAN)
    }
}

#[cfg(test)]
mod tests {
    use super::{Component, Conditions};

    #[test]
    fn every_component_is_kept_apart() {
        let mut conditions = Conditions::at(20.0);
        for (value, component) in (1_u8..).zip(Component::ALL) {
            assert_eq!(conditions.get(component), None);
            conditions.set(component, f64::from(value));
        }
        for (value, component) in (1_u8..).zip(Component::ALL) {
            assert_eq!(conditions.get(component), Some(f64::from(value)), "{}", component.field());
        }
    }
}
