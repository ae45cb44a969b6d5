//! Glycerol–water mixtures, by mass fraction of glycerol.

use super::condition::{Component, Conditions};
use super::correlation::{Correlation, Properties, Range};
use super::region::{Limit, Region};
use super::table::interpolate;
use super::water;
use crate::physics::Basis;

/// Density (kg/m³), temperature in °C, w mass fraction of glycerol 0 to 1, fitted 15 to 30 °C:
/// ρ = κ [ρ_w + (ρ_g − ρ_w) φ], ρ_g = 1273.3 − 0.6121 t, ρ_w = 1000 (1 − (|t − 3.98|/615)^1.71), φ the volume fraction,
/// contraction κ = 1 + a sin(π w^1.31)^0.81, a = 1.78·10⁻⁶ t² − 1.82·10⁻⁴ t + 1.41·10⁻².
/// Volk & Kähler 2018, doi:10.1007/s00348-018-2527-y.
pub(super) fn density(t: f64, w: f64) -> f64 {
    let glycerol = 1273.3 - 0.6121 * t;
    let water = 1000.0 * (1.0 - libm::pow((t - 3.98).abs() / 615.0, 1.71));
    let volume = (w / glycerol) / (w / glycerol + (1.0 - w) / water);
    let a = 1.41e-2 + t * (-1.82e-4 + t * 1.78e-6);
    // At w = 1 rounding may leave the sine a hair below zero.
    let bulge = libm::sin(core::f64::consts::PI * libm::pow(w, 1.31)).max(0.0);
    (1.0 + a * libm::pow(bulge, 0.81)) * (water + (glycerol - water) * volume)
}

/// Viscosity (Pa·s), temperature in °C, w mass fraction of glycerol 0 to 1, 0 to 100 °C: μ = μ_w^α μ_g^(1−α),
/// α = 1 − w + a b w (1 − w)/[a w + b (1 − w)], a = 0.705 − 0.0017 t, b = (4.9 + 0.036 t) a^2.5,
/// μ_w = 1.790 exp[(−1230 − t) t/(36100 + 360 t)] mPa·s, μ_g = 12100 exp[(−1233 + t) t/(9900 + 70 t)] mPa·s.
/// Cheng 2008, doi:10.1021/ie071349z; its own water term is kept (within 1.6 % of IAPWS below 60 °C).
pub(super) fn viscosity(t: f64, w: f64) -> f64 {
    let ln_water = libm::log(1.790e-3) + (-1230.0 - t) * t / (36100.0 + 360.0 * t);
    let ln_glycerol = libm::log(12.100) + (-1233.0 + t) * t / (9900.0 + 70.0 * t);
    let a = 0.705 - 0.0017 * t;
    let b = (4.9 + 0.036 * t) * (a * a * a.sqrt());
    let alpha = 1.0 - w + a * b * w * (1.0 - w) / (a * w + b * (1.0 - w));
    libm::exp(alpha * ln_water + (1.0 - alpha) * ln_glycerol)
}

/// Surface tension (N/m), temperature in °C: linear in mass fraction between water and glycerol, the latter
/// 63.4 − 0.09 (t − 20) mN/m (from memory).
pub(super) fn surface_tension(t: f64, w: f64) -> f64 {
    let glycerol = 63.4e-3 - 0.09e-3 * (t - 20.0);
    water::surface_tension(t) * (1.0 - w) + glycerol * w
}

/// Mass fraction of the eutectic with ice (Lane 1925, from memory). Stronger mixtures ought to deposit glycerol below
/// its melting curve (18 °C for pure glycerol) but in practice supercool and stay liquid.
const EUTECTIC: f64 = 0.667;
/// Where ice begins to form: Melinder 2010 via a public library up to 0.6, eutectic Lane 1925 (from memory).
const FREEZING_W: [f64; 8] = [0.0, 0.1, 0.2, 0.3, 0.4, 0.5, 0.6, EUTECTIC];
const FREEZING_C: [f64; 8] = [0.0, -2.31, -5.55, -9.76, -15.33, -23.19, -34.89, -46.5];
/// Lowest temperature at which supercooled strong mixtures are computed, °C (own judgement).
const SUPERCOOLED_TO_C: f64 = -20.0;

/// Boiling points at one atmosphere (handbook values, from memory).
const BOILING_W: [f64; 10] = [0.0, 0.1, 0.2, 0.3, 0.4, 0.5, 0.6, 0.7, 0.8, 0.9];
const BOILING_C: [f64; 10] =
    [water::BOILS_AT_C, 100.9, 101.8, 102.8, 104.0, 106.0, 109.0, 113.6, 121.0, 138.0];
/// Highest temperature at which anything is computed, °C (own judgement: 50 K beyond the viscosity's range).
const COMPUTABLE_TO_C: f64 = 150.0;

/// Flash point (closed cup) of pure glycerol, °C (from memory). Water takes it away.
pub(super) const FLASH_POINT_C: f64 = 160.0;

const DENSITY: Correlation = Correlation {
    source: "Volk & Kähler 2018",
    basis: Basis::Published,
    relative_uncertainty: 0.001,
    range: Range::of_temperature("15 to 30 °C", 15.0, 30.0),
};
const VISCOSITY: Correlation = Correlation {
    source: "Cheng 2008",
    basis: Basis::Published,
    relative_uncertainty: 0.10,
    range: Range::of_temperature("0 to 100 °C", 0.0, 100.0),
};
const SURFACE_TENSION: Correlation = Correlation {
    source: "linear in mass fraction between water and glycerol",
    basis: Basis::FromMemory,
    relative_uncertainty: 0.03,
    range: Range::of_temperature("10 to 80 °C", 10.0, 80.0),
};

pub(super) fn region(at: &Conditions) -> Region {
    let w = at.known(Component::MassFraction);
    let low = if w < EUTECTIC {
        Limit::Freezes(interpolate(&FREEZING_W, |i| FREEZING_C[i], w))
    } else {
        Limit::Computable(SUPERCOOLED_TO_C)
    };
    let boiling_c = interpolate(&BOILING_W, |i| BOILING_C[i], w);
    let high = if boiling_c < COMPUTABLE_TO_C {
        Limit::Boils(boiling_c)
    } else {
        Limit::Computable(COMPUTABLE_TO_C)
    };
    Region::between(low, high)
}

pub(super) fn evaluate(at: &Conditions) -> Properties {
    let (t, w) = (at.temperature_c, at.known(Component::MassFraction));
    Properties {
        density: DENSITY.give(density(t, w), at),
        viscosity: VISCOSITY.give(viscosity(t, w), at),
        surface_tension: SURFACE_TENSION.give(surface_tension(t, w), at),
    }
}
