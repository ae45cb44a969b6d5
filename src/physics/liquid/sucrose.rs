//! Sucrose solution, by mass fraction.

use super::condition::{Component, Conditions};
use super::correlation::{Correlation, Properties, Range};
use super::region::{Limit, Region};
use super::table::interpolate;
use super::water;
use crate::physics::Basis;

/// Coefficients of wʲ (j = 1, 2, …) for each power of (t − 20 °C)/100 °C.
const DENSITY_COEFFICIENTS: [[f64; 6]; 5] = [
    [385.1761, 135.3705, 40.9299, -3.9643, 13.4853, -17.2890],
    [-46.2720, -7.1720, 1.1597, 5.1126, 17.5254, 0.0],
    [59.7712, 7.2491, 12.3630, -35.4791, 0.0, 0.0],
    [-47.2207, -21.6977, 27.6301, 0.0, 0.0, 0.0],
    [18.3184, 12.3081, 0.0, 0.0, 0.0, 0.0],
];

/// Density (kg/m³), temperature in °C, w mass fraction, 0 to 80 °C, w 0 to 0.85:
/// ρ = ρ_w + Σᵢ Σⱼ cᵢⱼ wʲ ((t − 20)/100)ⁱ.
/// ICUMSA SPS-4 (Bubník et al. 1995, *Sugar Technologists Manual*).
pub(super) fn density(t: f64, w: f64) -> f64 {
    let tau = (t - 20.0) / 100.0;
    let horner = |coefficients: &[f64; 6]| coefficients.iter().rev().fold(0.0, |sum, c| (sum + c) * w);
    water::density(t) + DENSITY_COEFFICIENTS.iter().rev().fold(0.0, |sum, row| sum * tau + horner(row))
}

/// Below this mass fraction the viscosity is eased onto water's.
const EASED_BELOW: f64 = 0.10;

/// Viscosity (Pa·s), temperature in °C, w mass fraction, about 10 to 80 °C, w 0 to 0.75:
/// lg(μ/mPa·s) = 22.46 x − 0.114 + (30 − t)/(91 + t)·(1.1 + 43.1 x^1.25), x = S/(1900 − 18 S), S = 100 w.
/// Mathlouthi & Génotelle 1995 (in *Sucrose: Properties and Applications*, ch. 6).
///
/// That is 3.7 % high for water at 20 °C, so below w = 0.1 it is eased onto IAPWS water: times k^(1 − w/0.1), k the ratio
/// at w = 0 (own judgement).
pub(super) fn viscosity(t: f64, w: f64) -> f64 {
    let raw = mathlouthi_genotelle(t, w);
    if w >= EASED_BELOW {
        return raw;
    }
    raw * libm::pow(water::viscosity(t) / mathlouthi_genotelle(t, 0.0), 1.0 - w / EASED_BELOW)
}

fn mathlouthi_genotelle(t: f64, w: f64) -> f64 {
    let x = 100.0 * w / (1900.0 - 1800.0 * w);
    let steepness = (30.0 - t) / (91.0 + t);
    1e-3 * libm::exp10(22.46 * x - 0.114 + steepness * (1.1 + 43.1 * libm::pow(x, 1.25)))
}

/// Surface tension (N/m) of pure sucrose in water, temperature in °C, w mass fraction: γ = γ_w + 0.036 p + 0.00056 p²
/// mN/m, p = 100 w; a quadratic through handbook values at 25 °C up to w = 0.55 (from memory).
pub(super) fn surface_tension(t: f64, w: f64) -> f64 {
    let percent = 100.0 * w;
    water::surface_tension(t) + 1e-3 * percent * (0.036 + 0.00056 * percent)
}

/// Relative uncertainty of the viscosity: 5 %, rising to 15 % for strong and cold syrup. Between, a product of two
/// straight ramps, w 0.5 to 0.65 and 30 to 10 °C (own judgement).
fn viscosity_uncertainty(t: f64, w: f64) -> f64 {
    let strong = ((w - 0.5) / 0.15).clamp(0.0, 1.0);
    let cold = ((30.0 - t) / 20.0).clamp(0.0, 1.0);
    0.05 + 0.10 * strong * cold
}

/// Where ice begins to form, up to the eutectic (handbook values, from memory).
const FREEZING_W: [f64; 8] = [0.0, 0.1, 0.2, 0.3, 0.4, 0.5, 0.6, EUTECTIC.0];
const FREEZING_C: [f64; 8] = [0.0, -0.63, -1.47, -2.64, -4.45, -7.60, -12.5, EUTECTIC.1];
/// Mass fraction and temperature (°C) of the eutectic with ice (from memory).
const EUTECTIC: (f64, f64) = (0.624, -13.95);

/// Temperature (°C) below which solutions of mass fraction w freeze.
pub(super) fn freezing_c(w: f64) -> f64 {
    interpolate(&FREEZING_W, |i| FREEZING_C[i], w.min(EUTECTIC.0))
}

/// Mass fraction of a saturated solution, temperature in °C, 0 to 100 °C:
/// 100 w = 64.447 + 0.08222 t + 1.6169·10⁻³ t² − 1.558·10⁻⁶ t³ − 4.63·10⁻⁸ t⁴.
/// Vavrinecz 1962 (from memory); below 0 °C a straight line to the eutectic (own judgement).
fn saturation(t: f64) -> f64 {
    let at_zero = 0.64447;
    if t < 0.0 {
        return at_zero + (EUTECTIC.0 - at_zero) * t / EUTECTIC.1;
    }
    at_zero + 1e-2 * t * (0.08222 + t * (1.6169e-3 + t * (-1.558e-6 + t * -4.63e-8)))
}

/// Boiling points at one atmosphere (handbook values, from memory).
const BOILING_W: [f64; 9] = [0.0, 0.1, 0.2, 0.3, 0.4, 0.5, 0.6, 0.7, 0.8];
const BOILING_C: [f64; 9] = [water::BOILS_AT_C, 100.1, 100.3, 100.6, 101.0, 101.8, 103.1, 105.3, 109.4];

/// Largest accepted mass fraction: beyond it nothing is known of the viscosity.
pub(super) const LARGEST: f64 = 0.80;

const DENSITY: Correlation = Correlation {
    source: "ICUMSA SPS-4, Bubník et al. 1995",
    basis: Basis::Published,
    relative_uncertainty: 0.0002,
    range: Range::of_temperature("0 to 80 °C, mass fraction up to 0.85", 0.0, 80.0).and(
        Component::MassFraction,
        0.0,
        0.85,
    ),
};
const VISCOSITY: Correlation = Correlation {
    source: "Mathlouthi & Génotelle 1995, eased onto water below 0.1",
    basis: Basis::Published,
    relative_uncertainty: 0.05,
    range: Range::of_temperature("10 to 80 °C, mass fraction up to 0.75", 10.0, 80.0).and(
        Component::MassFraction,
        0.0,
        0.75,
    ),
};
const SURFACE_TENSION: Correlation = Correlation {
    source: "quadratic through handbook values at 25 °C",
    basis: Basis::FromMemory,
    relative_uncertainty: 0.01,
    range: Range::of_temperature(
        "10 to 60 °C, mass fraction up to 0.55, pure sugar; impurities lower it by up to 10 %",
        10.0,
        60.0,
    )
    .and(Component::MassFraction, 0.0, 0.55),
};

pub(super) fn region(at: &Conditions) -> Region {
    let w = at.known(Component::MassFraction);
    let boiling_c = interpolate(&BOILING_W, |i| BOILING_C[i], w);
    Region {
        soluble_to: Some((Component::MassFraction, saturation(at.temperature_c))),
        ..Region::between(Limit::Freezes(freezing_c(w)), Limit::Boils(boiling_c))
    }
}

pub(super) fn evaluate(at: &Conditions) -> Properties {
    let (t, w) = (at.temperature_c, at.known(Component::MassFraction));
    Properties {
        density: DENSITY.give(density(t, w), at),
        viscosity: VISCOSITY.give_with(viscosity(t, w), viscosity_uncertainty(t, w), at),
        surface_tension: SURFACE_TENSION.give(surface_tension(t, w), at),
    }
}

#[cfg(test)]
mod tests {
    use super::{saturation, viscosity, viscosity_uncertainty};
    use crate::physics::liquid::water;

    #[test]
    fn dissolves_what_the_handbooks_say() {
        // 66.7 % at 20 °C, 70.3 % at 40 °C, 74.2 % at 60 °C (from memory).
        for (t, w) in [(20.0, 0.667), (40.0, 0.703), (60.0, 0.742), (-13.95, 0.624)] {
            assert!((saturation(t) - w).abs() < 0.003, "{t}: {}", saturation(t));
        }
    }

    #[test]
    fn viscosity_is_eased_onto_water() {
        assert!((viscosity(20.0, 0.0) / water::viscosity(20.0) - 1.0).abs() < 1e-12);
        assert!((viscosity(20.0, 0.1 - 1e-9) / viscosity(20.0, 0.1) - 1.0).abs() < 1e-7);
    }

    #[test]
    fn uncertainty_runs_from_five_to_fifteen_per_cent() {
        assert_eq!(viscosity_uncertainty(20.0, 0.4), 0.05);
        assert!((viscosity_uncertainty(5.0, 0.66) - 0.15).abs() < 1e-12);
    }
}
