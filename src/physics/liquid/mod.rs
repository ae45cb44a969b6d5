//! Liquids: density, viscosity and surface tension at about 0.1 MPa, each with uncertainty, range, source and basis.
//!
//! [`find`] gives an [`Entry`] of the catalogue by its identifier; [`Entry::properties`] gives the numbers at some
//! [`Conditions`], or every reason why there are none. A family of liquids is a file; each formula stands there with
//! its source. Outside the range a source states, a value is computed where the liquid still is one (flagged by
//! [`Property::within_range`], with an uncertainty that grows with the distance) and refused where it is not: frozen,
//! boiling, beyond solubility.
//!
//! Digital object identifiers in these files are written from memory.

mod beverage;
mod brine;
mod catalogue;
mod condition;
mod correlation;
mod entry;
mod ethanol;
mod fault;
mod glycerol;
mod glycol;
mod hazard;
mod honey;
mod milk;
mod mineral_oil;
mod organic;
#[cfg(test)]
mod ported;
mod region;
mod sea_water;
mod sucrose;
mod surfactant;
#[cfg(test)]
mod sweep;
mod table;
mod vegetable_oil;
mod walther;
mod water;

pub use catalogue::{catalogue, find};
pub use condition::{Component, Conditions, Parameter};
pub use correlation::{Properties, Property};
pub use entry::{Entry, Wetting};
pub use fault::ConditionFault;
pub use hazard::Hazard;

/// Zero of the Celsius scale, K (exact by definition).
const CELSIUS_ZERO: f64 = 273.15;

/// The three numbers that a pour depends on, SI.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Liquid {
    /// Density, kg/m³.
    pub density: f64,
    /// Dynamic viscosity, Pa·s.
    pub viscosity: f64,
    /// Surface tension, N/m.
    pub surface_tension: f64,
}

impl Liquid {
    /// Kinematic viscosity μ/ρ, m²/s.
    #[must_use]
    pub fn kinematic_viscosity(&self) -> f64 {
        self.viscosity / self.density
    }

    /// Capillary length √(γ/ρg), m.
    #[must_use]
    pub fn capillary_length(&self) -> f64 {
        (self.surface_tension / (self.density * super::GRAVITY)).sqrt()
    }
}
