//! Sodium chloride solution (brine), by mass fraction.

use super::CELSIUS_ZERO;
use super::condition::{Component, Conditions};
use super::correlation::{Correlation, Properties, Range};
use super::region::{Limit, Region};
use super::table::interpolate;
use super::water;
use crate::physics::Basis;

/// Molar mass of sodium chloride, g/mol.
const MOLAR_MASS: f64 = 58.4428;

/// Density (kg/m³), temperature in °C, w mass fraction, 0 to 140 °C, w ≤ 0.266: 1/ρ = (1 − w)/ρ_w + w/ρ_a with the
/// apparent density of the salt ρ_a = (c₀w + c₁) exp(10⁻⁶ (t + c₄)²)/(w + c₂ + c₃t).
/// Laliberté & Cooper 2004, doi:10.1021/je0498659 (coefficients via a public library).
pub(super) fn density(t: f64, w: f64) -> f64 {
    let shifted = t + 3317.34854426537;
    let apparent = (-0.00324112223655149 * w + 0.0636354335906616) * libm::exp(1e-6 * shifted * shifted)
        / (w + 1.01371399467365 + 0.0145951015210159 * t);
    1.0 / ((1.0 - w) / water::density(t) + w / apparent)
}

/// Viscosity (Pa·s), temperature in °C, w mass fraction, 5 to 154 °C, w ≤ 0.264: ln μ = (1 − w) ln μ_w + w ln μ_s with
/// the salt's share μ_s/mPa·s = exp[(v₁w^v₂ + v₃)/(v₄t + 1)]/(v₅w^v₆ + 1).
/// Laliberté 2007, doi:10.1021/je0604075 (coefficients via a public library).
pub(super) fn viscosity(t: f64, w: f64) -> f64 {
    let ln_salt = (16.221788633396 * libm::pow(w, 1.32293086770011) + 1.48485985010431)
        / (0.00746912559657377 * t + 1.0)
        - libm::log(30.7802007540575 * libm::pow(w, 2.05826852322558) + 1.0);
    let ln_water = libm::log(1e3 * water::viscosity(t));
    1e-3 * libm::exp((1.0 - w) * ln_water + w * ln_salt)
}

/// Surface tension (N/m), temperature in °C, w mass fraction, −10 to 200 °C, mole fraction x ≤ 0.145:
/// ln γ = x_w ln[γ_w + (232.54 − 0.245 T) x] + x ln[191.16 − 0.0747 T − 142.42 x_w], mN/m and K.
/// Dutcher, Wexler & Clegg 2010, doi:10.1021/jp105191z.
pub(super) fn surface_tension(t: f64, w: f64) -> f64 {
    let (salt, solvent) = (w / MOLAR_MASS, (1.0 - w) / water::MOLAR_MASS);
    let x = salt / (salt + solvent);
    let kelvin = t + CELSIUS_ZERO;
    let near_water = 1e3 * water::surface_tension(t) + (232.54 - 0.245 * kelvin) * x;
    let near_salt = 191.16 - 0.0747 * kelvin - 142.42 * (1.0 - x);
    1e-3 * libm::exp((1.0 - x) * libm::log(near_water) + x * libm::log(near_salt))
}

/// Mass fraction and temperature (°C) of the eutectic with ice (from memory).
const EUTECTIC: (f64, f64) = (0.233, -21.1);

/// Where ice begins to form, up to the eutectic: Melinder 2010 via a public library, eutectic from memory.
const FREEZING_W: [f64; 6] = [0.0, 0.05, 0.10, 0.15, 0.20, EUTECTIC.0];
const FREEZING_C: [f64; 6] = [0.0, -3.05, -6.55, -10.90, -16.46, EUTECTIC.1];

/// Where the salt (below 0.1 °C its dihydrate) no longer dissolves; handbook values, from memory.
const SATURATION_C: [f64; 7] = [EUTECTIC.1, 0.1, 20.0, 40.0, 60.0, 80.0, 110.0];
const SATURATION_W: [f64; 7] = [EUTECTIC.0, 0.2628, 0.2641, 0.2667, 0.2703, 0.2750, 0.2830];

/// Largest mass fraction that dissolves at any temperature.
pub(super) const SOLUBLE_TO: f64 = SATURATION_W[6];

/// Boiling point (°C): that of water raised by 0.512 K per mol/kg of ions, about right up to saturation, where
/// 108.7 °C is measured (from memory).
fn boiling_c(w: f64) -> f64 {
    water::BOILS_AT_C + 0.512 * 2.0 * w / (1.0 - w) * 1000.0 / MOLAR_MASS * (1.0 + w)
}

const DENSITY: Correlation = Correlation {
    source: "Laliberté & Cooper 2004",
    basis: Basis::Published,
    relative_uncertainty: 0.001,
    range: Range::of_temperature("0 to 140 °C, mass fraction up to 0.266", 0.0, 140.0).and(
        Component::MassFraction,
        0.0,
        0.266,
    ),
};
const VISCOSITY: Correlation = Correlation {
    source: "Laliberté 2007",
    basis: Basis::Published,
    relative_uncertainty: 0.02,
    range: Range::of_temperature("5 to 154 °C, mass fraction up to 0.264", 5.0, 154.0).and(
        Component::MassFraction,
        0.0,
        0.264,
    ),
};
const SURFACE_TENSION: Correlation = Correlation {
    source: "Dutcher et al. 2010",
    basis: Basis::Published,
    relative_uncertainty: 0.01,
    range: Range::of_temperature("-10 to 200 °C, up to saturation", -10.0, 200.0),
};

pub(super) fn region(at: &Conditions) -> Region {
    let w = at.known(Component::MassFraction);
    let freezing_c = interpolate(&FREEZING_W, |i| FREEZING_C[i], w.min(EUTECTIC.0));
    let saturation = interpolate(&SATURATION_C, |i| SATURATION_W[i], at.temperature_c);
    Region {
        soluble_to: Some((Component::MassFraction, saturation)),
        ..Region::between(Limit::Freezes(freezing_c), Limit::Boils(boiling_c(w)))
    }
}

pub(super) fn evaluate(at: &Conditions) -> Properties {
    let (t, w) = (at.temperature_c, at.known(Component::MassFraction));
    Properties {
        density: DENSITY.give(density(t, w), at),
        viscosity: VISCOSITY.give(viscosity(t, w), at),
        surface_tension: SURFACE_TENSION.give(surface_tension(t, w), at),
    }
}

#[cfg(test)]
mod tests {
    use super::{boiling_c, density, surface_tension, viscosity};
    use crate::physics::liquid::water;

    #[test]
    fn without_salt_it_is_water() {
        for t in [1.0, 20.0, 95.0] {
            assert!((density(t, 0.0) / water::density(t) - 1.0).abs() < 1e-14);
            assert!((viscosity(t, 0.0) / water::viscosity(t) - 1.0).abs() < 1e-14);
            assert!((surface_tension(t, 0.0) / water::surface_tension(t) - 1.0).abs() < 1e-14);
        }
    }

    #[test]
    fn saturated_brine_boils_near_108_7() {
        assert!((boiling_c(0.2825) - 108.7).abs() < 0.5, "{}", boiling_c(0.2825));
    }
}
