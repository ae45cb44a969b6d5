//! Liquids: density, viscosity and surface tension, each with uncertainty, range, source and basis.

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
