//! Milk and cream, by fat content.

use super::CELSIUS_ZERO;
use super::condition::{Component, Conditions};
use super::correlation::{Correlation, Properties, Range};
use super::region::{Limit, Region};
use super::water;
use crate::physics::Basis;

/// Density (kg/m³), temperature in °C, fat F and solids not fat N in % by mass, fitted 1 to 10 °C, usable to about 40 °C:
/// 100/ρ = F/(0.96666 − 0.001334 t) + N/(1.635 − 0.0026 t + 2·10⁻⁵ t²) + (100 − F − N)/ρ_w, g/cm³.
/// Watson & Tittsler 1961, Journal of Dairy Science 44, 416 (coefficients seen at second hand).
pub(super) fn density(t: f64, fat: f64, solids_not_fat: f64) -> f64 {
    let fat_volume = fat / (0.96666 - 0.001334 * t);
    let solids_volume = solids_not_fat / (1.635 + t * (-0.0026 + t * 2e-5));
    let water_volume = (100.0 - fat - solids_not_fat) / (1e-3 * water::density(t));
    1e5 / (fat_volume + solids_volume + water_volume)
}

/// Solids not fat of milk with 3.5 % fat, % by mass (common value); richer and leaner milk keeps the same serum.
fn solids_not_fat(fat: f64) -> f64 {
    8.8 * (100.0 - fat) / (100.0 - 3.5)
}

/// Highest temperature to which the viscosity was fitted, °C.
const VISCOSITY_HIGHEST_C: f64 = 30.0;

/// Viscosity (Pa·s), temperature in °C, fat F in % by mass, 0 to 30 °C, F 0 to 30:
/// ln(μ/mPa·s) = −8.9 + 0.1 F + 2721.5/T.
/// Bakshi & Smith 1984, Journal of Dairy Science 67, 1157.
///
/// Extrapolated as it stands, hot skimmed milk would be thinner than water; above 30 °C the ratio to water is held (own
/// judgement).
pub(super) fn viscosity(t: f64, fat: f64) -> f64 {
    let fitted = |t: f64| 1e-3 * libm::exp(-8.9 + 0.1 * fat + 2721.5 / (t + CELSIUS_ZERO));
    if t > VISCOSITY_HIGHEST_C {
        return fitted(VISCOSITY_HIGHEST_C) * water::viscosity(t) / water::viscosity(VISCOSITY_HIGHEST_C);
    }
    fitted(t)
}

/// Surface tension (N/m), temperature in °C, 18 to 135 °C, fat up to 4 %: γ = 1.8·10⁻⁴ t² − 0.163 t + 55.6 mN/m.
/// Bertsch 1983, Journal of Dairy Research 50, 259; standard deviation 2.1 mN/m.
pub(super) fn surface_tension(t: f64) -> f64 {
    1e-3 * (55.6 + t * (-0.163 + t * 1.8e-4))
}

const DENSITY: Correlation = Correlation {
    source: "Watson & Tittsler 1961",
    basis: Basis::Published,
    relative_uncertainty: 0.003,
    range: Range::of_temperature("1 to 40 °C (fitted 1 to 10 °C)", 1.0, 40.0),
};
const VISCOSITY: Correlation = Correlation {
    source: "Bakshi & Smith 1984",
    basis: Basis::Published,
    relative_uncertainty: 0.12,
    range: Range::of_temperature("0 to 30 °C, fat up to 30 %", 0.0, VISCOSITY_HIGHEST_C).and(
        Component::FatPercent,
        0.0,
        30.0,
    ),
};
const SURFACE_TENSION: Correlation = Correlation {
    source: "Bertsch 1983",
    basis: Basis::Published,
    relative_uncertainty: 0.04,
    range: Range::of_temperature("18 to 135 °C, fat up to 4 %", 18.0, 135.0).and(
        Component::FatPercent,
        0.0,
        4.0,
    ),
};

pub(super) fn region(_: &Conditions) -> Region {
    // Freezing point −0.53 °C (the figure by which added water is found), boiling 100.2 °C; from memory.
    Region::between(Limit::Freezes(-0.53), Limit::Boils(100.2))
}

pub(super) fn evaluate(at: &Conditions) -> Properties {
    let (t, fat) = (at.temperature_c, at.known(Component::FatPercent));
    Properties {
        density: DENSITY.give(density(t, fat, solids_not_fat(fat)), at),
        viscosity: VISCOSITY.give(viscosity(t, fat), at),
        surface_tension: SURFACE_TENSION.give(surface_tension(t), at),
    }
}

#[cfg(test)]
mod tests {
    use super::viscosity;
    use crate::physics::liquid::water;

    #[test]
    fn hot_skimmed_milk_is_not_thinner_than_water() {
        assert!(viscosity(95.0, 0.0) > water::viscosity(95.0));
        assert!((viscosity(30.0, 3.5) / viscosity(30.0 + 1e-9, 3.5) - 1.0).abs() < 1e-9);
    }
}
