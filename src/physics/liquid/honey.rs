//! Honey of 16 % moisture.

use super::CELSIUS_ZERO;
use super::condition::Conditions;
use super::correlation::{Correlation, Properties, Range};
use super::region::{Limit, Region};
use crate::physics::Basis;

/// Viscosity (Pa·s), temperature in °C, 14 to 70 °C: ln μ = −7.529 + 774.88/(T − 220 K), own fit of the
/// Vogel–Fulcher–Tammann form to a published table for clover honey of 16 % moisture (14 °C: 60 … 70 °C: 0.3 Pa·s).
pub(super) fn viscosity(t: f64) -> f64 {
    libm::exp(-7.529 + 774.88 / (t + CELSIUS_ZERO - 220.0))
}

/// Density (kg/m³), temperature in °C: 1421 − 0.6 (t − 20) (from memory).
fn density(t: f64) -> f64 {
    1421.0 - 0.6 * (t - 20.0)
}

/// Surface tension (N/m), temperature in °C: 55 mN/m at 20 °C, reported from 50 to 60 (from memory); slope as of sugar
/// solutions, −0.15 mN/(m·K) (own judgement).
fn surface_tension(t: f64) -> f64 {
    1e-3 * (55.0 - 0.15 * (t - 20.0))
}

const DENSITY: Correlation = Correlation {
    source: "handbook value, linear in temperature",
    basis: Basis::FromMemory,
    relative_uncertainty: 0.01,
    range: Range::of_temperature("10 to 60 °C, 16 % moisture", 10.0, 60.0),
};
const VISCOSITY: Correlation = Correlation {
    source: "fit to a published table for clover honey",
    basis: Basis::Published,
    relative_uncertainty: 0.40,
    range: Range::of_temperature(
        "14 to 70 °C, 16 % moisture, not crystallised; 1 % more moisture nearly halves it",
        14.0,
        70.0,
    ),
};
const SURFACE_TENSION: Correlation = Correlation {
    source: "reported 50 to 60 mN/m",
    basis: Basis::FromMemory,
    relative_uncertainty: 0.10,
    range: Range::of_temperature("10 to 60 °C", 10.0, 60.0),
};

pub(super) fn region(_: &Conditions) -> Region {
    // Colder it creeps rather than pours; hotter it spoils and dries (own judgement).
    Region::between(Limit::Computable(5.0), Limit::Computable(90.0))
}

pub(super) fn evaluate(at: &Conditions) -> Properties {
    let t = at.temperature_c;
    Properties {
        density: DENSITY.give(density(t), at),
        viscosity: VISCOSITY.give(viscosity(t), at),
        surface_tension: SURFACE_TENSION.give(surface_tension(t), at),
    }
}
