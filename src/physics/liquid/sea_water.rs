//! Sea water, by salinity in g/kg (practical salinity is taken as equal to it: they differ by 0.5 %).

use super::condition::{Component, Conditions};
use super::correlation::{Correlation, Properties, Range};
use super::region::{Limit, Region};
use super::water;
use crate::physics::Basis;

/// Highest temperature to which the equation of state was fitted, °C.
const EOS_HIGHEST_C: f64 = 40.0;

/// Density of sea water (kg/m³) at one atmosphere, temperature in °C, salinity S in g/kg:
/// ρ = ρ_w + A S + B S^1.5 + C S², A and B polynomials in t.
/// UNESCO EOS-80, −2 to 40 °C, S 0 to 42; Millero & Poisson 1981, doi:10.1016/0198-0149(81)90122-9.
///
/// Above 40 °C, where the polynomials run away (0.9 % at 100 °C), what the salt adds to pure water is held as it is at
/// 40 °C (own judgement; it then changes by 1 % only).
pub(super) fn density(t: f64, salinity: f64) -> f64 {
    if t > EOS_HIGHEST_C {
        return water::density(t) + eos80(EOS_HIGHEST_C, salinity) - water::density(EOS_HIGHEST_C);
    }
    eos80(t, salinity)
}

fn eos80(t: f64, salinity: f64) -> f64 {
    let pure = 999.842594
        + t * (6.793952e-2 + t * (-9.095290e-3 + t * (1.001685e-4 + t * (-1.120083e-6 + t * 6.536332e-9))));
    let a = 0.824493 + t * (-4.0899e-3 + t * (7.6438e-5 + t * (-8.2467e-7 + t * 5.3875e-9)));
    let b = -5.72466e-3 + t * (1.0227e-4 + t * -1.6546e-6);
    pure + salinity * (a + b * salinity.sqrt() + 4.8314e-4 * salinity)
}

/// Viscosity of sea water (Pa·s), temperature in °C, salinity in g/kg, 0 to 180 °C and 0 to 150 g/kg:
/// μ = μ_w (1 + A s + B s²), s = S/1000, μ_w = 4.2844·10⁻⁵ + 1/(0.157 (t + 64.993)² − 91.296).
/// Sharqawy, Lienhard & Zubair 2010, eqs 22 and 23, doi:10.5004/dwt.2010.1079.
pub(super) fn viscosity(t: f64, salinity: f64) -> f64 {
    let s = 1e-3 * salinity;
    let a = 1.541 + t * (1.998e-2 + t * -9.52e-5);
    let b = 7.974 + t * (-7.561e-2 + t * 4.724e-4);
    let shifted = t + 64.993;
    let pure = 4.2844e-5 + 1.0 / (0.157 * shifted * shifted - 91.296);
    pure * (1.0 + s * (a + b * s))
}

/// Surface tension of sea water (N/m), temperature in °C, salinity in g/kg, 1 to 92 °C and 0 to 131 g/kg:
/// γ = γ_w (1 + 3.766·10⁻⁴ S + 2.347·10⁻⁶ S t).
/// Nayar et al. 2014, doi:10.1063/1.4899037.
pub(super) fn surface_tension(t: f64, salinity: f64) -> f64 {
    water::surface_tension(t) * (1.0 + salinity * (3.766e-4 + 2.347e-6 * t))
}

/// Freezing point of sea water (°C), salinity in g/kg, fitted to 4 to 40 g/kg:
/// t_f = −0.0575 S + 1.710523·10⁻³ S^1.5 − 2.154996·10⁻⁴ S².
/// Millero 1978, as in UNESCO 1983 (from memory). At 150 g/kg it lies within 0.6 K of sodium chloride's.
fn freezing_c(salinity: f64) -> f64 {
    salinity * (-0.0575 + 1.710523e-3 * salinity.sqrt() - 2.154996e-4 * salinity)
}

/// Boiling point (°C): that of water raised by 0.512 K per mol/kg of ions, mean molar mass of an ion 31.4 g/mol
/// (ideal dilute solution; from memory).
fn boiling_c(salinity: f64) -> f64 {
    water::BOILS_AT_C + 0.512 * 1000.0 / 31.4 * salinity / (1000.0 - salinity)
}

const DENSITY: Correlation = Correlation {
    source: "UNESCO EOS-80, Millero & Poisson 1981",
    basis: Basis::Published,
    relative_uncertainty: 0.001,
    range: Range::of_temperature("-2 to 40 °C, 0 to 42 g/kg", -2.0, 40.0).and(Component::Salinity, 0.0, 42.0),
};
const VISCOSITY: Correlation = Correlation {
    source: "Sharqawy et al. 2010",
    basis: Basis::Published,
    relative_uncertainty: 0.015,
    range: Range::of_temperature("0 to 180 °C, 0 to 150 g/kg", 0.0, 180.0).and(
        Component::Salinity,
        0.0,
        150.0,
    ),
};
const SURFACE_TENSION: Correlation = Correlation {
    source: "Nayar et al. 2014",
    basis: Basis::Published,
    relative_uncertainty: 0.006,
    range: Range::of_temperature("1 to 92 °C, 0 to 131 g/kg", 1.0, 92.0).and(Component::Salinity, 0.0, 131.0),
};

pub(super) fn region(at: &Conditions) -> Region {
    let salinity = at.known(Component::Salinity);
    Region::between(Limit::Freezes(freezing_c(salinity)), Limit::Boils(boiling_c(salinity)))
}

pub(super) fn evaluate(at: &Conditions) -> Properties {
    let (t, salinity) = (at.temperature_c, at.known(Component::Salinity));
    Properties {
        density: DENSITY.give(density(t, salinity), at),
        viscosity: VISCOSITY.give(viscosity(t, salinity), at),
        surface_tension: SURFACE_TENSION.give(surface_tension(t, salinity), at),
    }
}

#[cfg(test)]
mod tests {
    use super::{boiling_c, density, freezing_c};

    #[test]
    fn freezes_and_boils_where_sea_water_does() {
        assert!((freezing_c(35.0) + 1.92).abs() < 0.01, "{}", freezing_c(35.0));
        assert!((boiling_c(35.0) - 100.55).abs() < 0.1, "{}", boiling_c(35.0));
    }

    #[test]
    fn density_goes_on_beyond_forty_degrees_without_a_jump() {
        assert!((density(40.0, 35.0) - density(40.0 + 1e-9, 35.0)).abs() < 1e-6);
    }
}
