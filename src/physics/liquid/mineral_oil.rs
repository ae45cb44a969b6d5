//! Mineral oil by its grade: kinematic viscosities at 40 and 100 °C and density at 15 °C, as its data sheet gives them.

use super::condition::{Component, Conditions};
use super::correlation::{Correlation, Properties, Range};
use super::region::{Limit, Region};
use super::walther::WaltherLine;
use crate::physics::Basis;

/// Density (kg/m³) from that at 15 °C, temperature in °C: ρ = ρ₁₅ exp[−α Δ (1 + 0.8 α Δ)], Δ = t − 15, α = 0.6278/ρ₁₅.
/// API MPMS 11.1 / ASTM D1250, lubricating oils.
pub(super) fn density(t: f64, density_15: f64) -> f64 {
    let expansion = 0.6278 / density_15 * (t - 15.0);
    density_15 * libm::exp(-expansion * (1.0 + 0.8 * expansion))
}

/// Surface tension (N/m), temperature in °C: 30.0 − 0.075 (t − 20) mN/m (from memory).
pub(super) fn surface_tension(t: f64) -> f64 {
    1e-3 * (30.0 - 0.075 * (t - 20.0))
}

const DENSITY: Correlation =
    Correlation {
        source: "API MPMS 11.1 / ASTM D1250, lubricating oils",
        basis: Basis::Published,
        relative_uncertainty: 0.005,
        range: Range::of_temperature("-40 to 150 °C, density at 15 °C from 800 to 1164 kg/m³", -40.0, 150.0)
            .and(Component::Density15, 800.0, 1164.0),
    };
const VISCOSITY: Correlation = Correlation {
    source: "ASTM D341 line through the given viscosities",
    basis: Basis::Published,
    relative_uncertainty: 0.10,
    range: Range::of_temperature(
        "0 to 120 °C, above the pour point, viscosity at 100 °C of 2 mm²/s or more",
        0.0,
        120.0,
    )
    .and(Component::Viscosity100, 2.0, 1000.0),
};
const SURFACE_TENSION: Correlation = Correlation {
    source: "typical value, linear in temperature",
    basis: Basis::FromMemory,
    relative_uncertainty: 0.08,
    range: Range::of_temperature("0 to 100 °C, no additives that foam or wet", 0.0, 100.0),
};

/// Densities at 15 °C accepted for an oil, kg/m³ (own judgement).
pub(super) const DENSITY_15: (f64, f64) = (700.0, 1200.0);

pub(super) fn region(at: &Conditions) -> Region {
    let falls = at.known(Component::Viscosity40) > at.known(Component::Viscosity100);
    let reason = "the viscosity at 40 °C must exceed that at 100 °C";
    Region {
        inconsistent: (!falls).then_some((Component::Viscosity100, reason)),
        // The pour point is the grade's own and is not asked for.
        ..Region::between(Limit::Computable(-40.0), Limit::Computable(250.0))
    }
}

pub(super) fn evaluate(at: &Conditions) -> Properties {
    let t = at.temperature_c;
    let density = density(t, at.known(Component::Density15));
    let line = WaltherLine::through(at.known(Component::Viscosity40), at.known(Component::Viscosity100));
    Properties {
        density: DENSITY.give(density, at),
        viscosity: VISCOSITY.give(1e-6 * line.at(t) * density, at),
        surface_tension: SURFACE_TENSION.give(surface_tension(t), at),
    }
}
