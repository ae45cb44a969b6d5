//! Washing-up liquid and what it makes of water.

use super::condition::Conditions;
use super::correlation::{Correlation, Properties, Range};
use super::region::{Limit, Region};
use super::water;
use crate::physics::Basis;

/// Surface tension (N/m), temperature in °C: 34 mN/m at 20 °C, the middle of 30 to 38 (from memory), falling by
/// 0.08 mN/(m·K) (own judgement). A fresh surface has not yet gathered its surfactant and lies nearer to water's.
fn surface_tension(t: f64) -> f64 {
    1e-3 * (34.0 - 0.08 * (t - 20.0))
}

const SURFACE_TENSION: Correlation = Correlation {
    source: "middle of the reported range, from memory",
    basis: Basis::FromMemory,
    relative_uncertainty: 0.15,
    range: Range::of_temperature(
        "10 to 60 °C, an aged surface: 30 to 38 mN/m; a surface younger than about 0.1 s is higher",
        10.0,
        60.0,
    ),
};

const SOLUTION: Correlation = Correlation {
    source: "as water",
    basis: Basis::Estimate,
    relative_uncertainty: 0.001,
    range: Range::of_temperature("0 to 100 °C, a few grams per litre", 0.0, 100.0),
};

pub(super) fn solution_region(_: &Conditions) -> Region {
    Region::between(Limit::Freezes(0.0), Limit::Boils(water::BOILS_AT_C))
}

/// Washing-up water: density and viscosity as water.
pub(super) fn solution(at: &Conditions) -> Properties {
    let t = at.temperature_c;
    Properties {
        density: SOLUTION.give(water::density(t), at),
        viscosity: SOLUTION.give_with(water::viscosity(t), 0.03, at),
        surface_tension: SURFACE_TENSION.give(surface_tension(t), at),
    }
}

const CONCENTRATE: Correlation = Correlation {
    source: "typical value",
    basis: Basis::Estimate,
    relative_uncertainty: 0.02,
    range: Range::of_temperature(
        "10 to 40 °C; made from 200 to 2000 mPa·s and often shear-thinning: measure yours",
        10.0,
        40.0,
    ),
};

pub(super) fn concentrate_region(_: &Conditions) -> Region {
    // Colder it gels or turns cloudy, hotter it separates (own judgement).
    Region::between(Limit::Computable(0.0), Limit::Computable(60.0))
}

/// The concentrate as sold: 1030 kg/m³ and 600 mPa·s at 20 °C, thinning by 4 % per kelvin (own judgement throughout).
pub(super) fn concentrate(at: &Conditions) -> Properties {
    let warmer = at.temperature_c - 20.0;
    Properties {
        density: CONCENTRATE.give(1030.0 - 0.4 * warmer, at),
        viscosity: CONCENTRATE.give_with(0.6 * libm::exp(-0.04 * warmer), 0.5, at),
        surface_tension: SURFACE_TENSION.give(surface_tension(at.temperature_c), at),
    }
}
