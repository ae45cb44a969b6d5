//! Water.

use super::CELSIUS_ZERO;
use super::condition::Conditions;
use super::correlation::{Correlation, Properties, Range};
use super::region::{Limit, Region};
use crate::physics::Basis;

/// Molar mass of water, g/mol (IAPWS).
pub(super) const MOLAR_MASS: f64 = 18.01528;

/// Boiling point that ends the region of water and of everything dilute in it, °C: at one atmosphere (99.97 °C) rather
/// than at 0.1 MPa (99.61 °C), rounded up so that a boiling kettle can be asked for.
pub(super) const BOILS_AT_C: f64 = 100.0;

/// Density of water (kg/m³) at one atmosphere, temperature in °C, 0 to 150 °C:
/// ρ = (a₀ + a₁t + … + a₅t⁵)/(1 + b t).
/// Kell 1975, doi:10.1021/je60064a005.
pub(super) fn density(t: f64) -> f64 {
    let numerator = 999.83952
        + t * (16.945176
            + t * (-7.9870401e-3 + t * (-46.170461e-6 + t * (105.56302e-9 + t * -280.54253e-12))));
    numerator / (1.0 + 16.879850e-3 * t)
}

/// Viscosity of water (Pa·s) at 0.1 MPa, temperature in °C, −20 to 110 °C:
/// μ/µPa·s = Σ aᵢ (T/300 K)^bᵢ.
/// IAPWS SR6-08(2011); Pátek et al. 2009, doi:10.1063/1.3043575.
pub(super) fn viscosity(t: f64) -> f64 {
    let ln_r = libm::log((t + CELSIUS_ZERO) / 300.0);
    1e-6 * (280.68 * libm::exp(-1.9 * ln_r)
        + 511.45 * libm::exp(-7.7 * ln_r)
        + 61.131 * libm::exp(-19.6 * ln_r)
        + 0.45903 * libm::exp(-40.0 * ln_r))
}

/// Surface tension of water (N/m) against its vapour, temperature in °C, −25 to 374 °C:
/// γ = B τ^1.256 (1 − 0.625 τ), τ = 1 − T/647.096 K, B = 235.8 mN/m.
/// IAPWS R1-76(2014).
pub(super) fn surface_tension(t: f64) -> f64 {
    let tau = 1.0 - (t + CELSIUS_ZERO) / 647.096;
    235.8e-3 * libm::pow(tau, 1.256) * (1.0 - 0.625 * tau)
}

const DENSITY: Correlation = Correlation {
    source: "Kell 1975",
    basis: Basis::Published,
    relative_uncertainty: 1e-5,
    range: Range::of_temperature("0 to 150 °C", 0.0, 150.0),
};
const VISCOSITY: Correlation = Correlation {
    source: "IAPWS SR6-08(2011)",
    basis: Basis::Published,
    relative_uncertainty: 0.01,
    range: Range::of_temperature("-20 to 110 °C", -20.0, 110.0),
};
const SURFACE_TENSION: Correlation = Correlation {
    source: "IAPWS R1-76(2014)",
    basis: Basis::Published,
    relative_uncertainty: 0.005,
    range: Range::of_temperature("-25 to 374 °C, pure water", -25.0, 374.0),
};

pub(super) fn region(_: &Conditions) -> Region {
    Region::between(Limit::Freezes(0.0), Limit::Boils(BOILS_AT_C))
}

pub(super) fn evaluate(at: &Conditions) -> Properties {
    let t = at.temperature_c;
    Properties {
        density: DENSITY.give(density(t), at),
        viscosity: VISCOSITY.give(viscosity(t), at),
        surface_tension: SURFACE_TENSION.give(surface_tension(t), at),
    }
}
