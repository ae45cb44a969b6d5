//! Ethanol–water mixtures, by mass fraction of ethanol.

use super::CELSIUS_ZERO;
use super::condition::{Component, Conditions};
use super::correlation::{Correlation, Properties, Range};
use super::region::{Limit, Region};
use super::table::interpolate;
use super::{organic, water};
use crate::physics::Basis;

/// Molar mass of ethanol, g/mol.
const MOLAR_MASS: f64 = 46.06844;

/// OIML R 22: coefficients of wᵏ (k = 0 …) at 20 °C, from pure water on.
const A: [f64; 12] = [
    998.20123,
    -192.9769495,
    389.1238958,
    -1668.103923,
    13522.15441,
    -88292.78388,
    306287.4042,
    -613838.1234,
    747017.2998,
    -547846.1354,
    223446.0334,
    -39032.85426,
];
/// OIML R 22: coefficients of (t − 20)ᵏ (k = 1 …), pure water.
const B: [f64; 6] = [-0.20618513, -0.0052682542, 3.6130013e-5, -3.8957702e-7, 7.169354e-9, -9.9739231e-11];
/// OIML R 22: coefficients of wᵏ (k = 1 …) for each power of (t − 20) from the first on.
const C: [&[f64]; 5] = [
    &[
        1.693443461530087e-1,
        -1.046914743455169e1,
        7.196353469546523e1,
        -7.047478054272792e2,
        3.924090430035045e3,
        -1.210164659068747e4,
        2.248646550400788e4,
        -2.605562982188164e4,
        1.852373922069467e4,
        -7.420201433430137e3,
        1.285617841998974e3,
    ],
    &[
        -1.193013005057010e-2,
        2.517399633803461e-1,
        -2.170575700536993,
        1.353034988843029e1,
        -5.029988758547014e1,
        1.096355666577570e2,
        -1.422753946421155e2,
        1.080435942856230e2,
        -4.414153236817392e1,
        7.442971530188783,
    ],
    &[
        -6.802995733503803e-4,
        1.876837790289664e-2,
        -2.002561813734156e-1,
        1.022992966719220,
        -2.895696483903638,
        4.810060584300675,
        -4.672147440794683,
        2.458043105903461,
        -5.411227621436812e-1,
    ],
    &[4.075376675622027e-6, -8.763058573471110e-6, 6.515031360099368e-6, -1.515784836987210e-6],
    &[-2.788074354782409e-8, 1.345612883493354e-8],
];

/// x times the polynomial with these coefficients.
fn without_constant(coefficients: &[f64], x: f64) -> f64 {
    coefficients.iter().rev().fold(0.0, |sum, c| (sum + c) * x)
}

fn oiml(t: f64, w: f64) -> f64 {
    let d = t - 20.0;
    let mixed = C.iter().rev().fold(0.0, |sum, row| (sum + without_constant(row, w)) * d);
    A[0] + without_constant(&A[1..], w) + without_constant(&B, d) + mixed
}

/// Temperatures to which OIML R 22 applies, °C.
const OIML_C: (f64, f64) = (-20.0, 40.0);

/// Density (kg/m³), temperature in °C, w mass fraction of ethanol 0 to 1, −20 to 40 °C:
/// ρ = Σ Aₖwᵏ + Σ Bₖ(t − 20)ᵏ + Σᵢ Σₖ Cᵢₖ wᵏ (t − 20)ⁱ.
/// OIML R 22 (1975).
///
/// Outside these temperatures (own judgement): above, the contraction on mixing is held as it is at 40 °C and the two pure
/// liquids expand; below, a straight line with the slope between −20 and −15 °C.
pub(super) fn density(t: f64, w: f64) -> f64 {
    let (low, high) = OIML_C;
    if t > high {
        return oiml(high, w) * unmixed_density(t, w) / unmixed_density(high, w);
    }
    if t < low {
        let at_low = oiml(low, w);
        return at_low + (at_low - oiml(low + 5.0, w)) * (low - t) / 5.0;
    }
    oiml(t, w)
}

/// Density of the two liquids side by side, kg/m³.
fn unmixed_density(t: f64, w: f64) -> f64 {
    1.0 / (w / organic::ETHANOL_DENSITY.at(t) + (1.0 - w) / water::density(t))
}

const VISCOSITY_C: [f64; 8] = [0.0, 10.0, 20.0, 30.0, 40.0, 50.0, 60.0, 70.0];
const VISCOSITY_W: [f64; 11] = [0.0, 0.1, 0.2, 0.3, 0.4, 0.5, 0.6, 0.7, 0.8, 0.9, 1.0];
/// Viscosity, mPa·s; a row for each temperature.
const VISCOSITY_MPA_S: [[f64; 11]; 8] = [
    [1.792, 3.311, 5.319, 6.94, 7.14, 6.58, 5.75, 4.762, 3.690, 2.732, 1.773],
    [1.308, 2.179, 3.165, 4.05, 4.39, 4.18, 3.77, 3.268, 2.710, 2.101, 1.466],
    [1.005, 1.538, 2.183, 2.71, 2.91, 2.87, 2.67, 2.370, 2.008, 1.610, 1.200],
    [0.801, 1.160, 1.553, 1.87, 2.02, 2.02, 1.93, 1.767, 1.531, 1.279, 1.003],
    [0.656, 0.907, 1.160, 1.368, 1.482, 1.499, 1.447, 1.344, 1.203, 1.035, 0.834],
    [0.549, 0.734, 0.907, 1.050, 1.132, 1.155, 1.127, 1.062, 0.968, 0.848, 0.702],
    [0.469, 0.609, 0.736, 0.834, 0.893, 0.913, 0.902, 0.856, 0.789, 0.704, 0.592],
    [0.406, 0.514, 0.608, 0.683, 0.727, 0.740, 0.729, 0.695, 0.650, 0.589, 0.504],
];

/// Viscosity (Pa·s), temperature in °C, w mass fraction of ethanol 0 to 1, 0 to 70 °C: the table of Bingham & Jackson
/// (1917, Bulletin of the Bureau of Standards 14), interpolated in ln μ, first in w, then in t. Beyond the table ln μ goes
/// on in a straight line over 1/T (own judgement).
pub(super) fn viscosity(t: f64, w: f64) -> f64 {
    let ln_at = |row: usize| interpolate(&VISCOSITY_W, |i| libm::log(VISCOSITY_MPA_S[row][i]), w);
    let end = t.clamp(VISCOSITY_C[0], VISCOSITY_C[7]);
    // The line that the interpolation draws beyond its ends, bent so that it is straight over 1/T.
    let t = end + (t - end) * (end + CELSIUS_ZERO) / (t + CELSIUS_ZERO);
    1e-3 * libm::exp(interpolate(&VISCOSITY_C, ln_at, t))
}

const TENSION_W: [f64; 14] =
    [0.0, 0.05, 0.10, 0.15, 0.20, 0.25, 0.30, 0.40, 0.50, 0.60, 0.70, 0.80, 0.90, 1.0];
/// Surface tension at 25 °C, mN/m.
const TENSION_25C: [f64; 14] =
    [72.01, 55.73, 47.53, 42.08, 37.97, 35.51, 32.98, 30.16, 27.96, 26.23, 25.01, 23.82, 22.72, 21.97];
/// Its slope, mN/(m·K).
const TENSION_SLOPE: [f64; 14] = [
    -0.161, -0.142, -0.129, -0.125, -0.116, -0.110, -0.106, -0.095, -0.090, -0.083, -0.081, -0.081, -0.083,
    -0.0832,
];

/// Surface tension (N/m), temperature in °C, w mass fraction of ethanol 0 to 1, 20 to 50 °C: table at 25 °C and its slope,
/// interpolated in w.
/// Vázquez, Alvarez & Navaza 1995, doi:10.1021/je00019a016 (rows from memory, the first one seen); the last row is
/// Jasper 1972, doi:10.1063/1.3253106, which agrees with reference libraries within 0.3 % where Vázquez's is 0.6 % low.
pub(super) fn surface_tension(t: f64, w: f64) -> f64 {
    let at_25 = libm::exp(interpolate(&TENSION_W, |i| libm::log(TENSION_25C[i]), w));
    1e-3 * (at_25 + interpolate(&TENSION_W, |i| TENSION_SLOPE[i], w) * (t - 25.0))
}

/// Where ice begins to form: Melinder 2010 via a public library. Stronger mixtures are liquid at −40 °C and below.
const FREEZING_W: [f64; 7] = [0.0, 0.1, 0.2, 0.3, 0.4, 0.5, 0.6];
const FREEZING_C: [f64; 7] = [0.0, -4.38, -11.12, -20.14, -29.53, -37.61, -44.91];

/// Boiling points at one atmosphere by mole fraction in the liquid (handbook values, from memory). Below 0.0190 they
/// end in water's.
const BOILING_X: [f64; 12] =
    [0.0, 0.0190, 0.0721, 0.0966, 0.1661, 0.2337, 0.3273, 0.3965, 0.5198, 0.6763, 0.8943, 1.0];
const BOILING_C: [f64; 12] =
    [water::BOILS_AT_C, 95.5, 89.0, 86.7, 84.1, 82.7, 81.5, 80.7, 79.7, 78.74, 78.15, 78.29];

fn boiling_c(w: f64) -> f64 {
    let (ethanol, water) = (w / MOLAR_MASS, (1.0 - w) / water::MOLAR_MASS);
    interpolate(&BOILING_X, |i| BOILING_C[i], ethanol / (ethanol + water))
}

/// Flash points, closed cup (safety-data tables, from memory; ± 3 K).
const FLASH_W: [f64; 11] = [0.05, 0.1, 0.2, 0.3, 0.4, 0.5, 0.6, 0.7, 0.8, 0.9, 1.0];
const FLASH_C: [f64; 11] = [62.0, 49.0, 36.0, 29.0, 26.0, 24.0, 22.0, 21.0, 19.0, 17.0, 13.0];

/// Flash point (closed cup), °C; none is tabulated below a mass fraction of 0.05.
pub(super) fn flash_point_c(w: f64) -> Option<f64> {
    (FLASH_W[0]..=1.0).contains(&w).then(|| interpolate(&FLASH_W, |i| FLASH_C[i], w))
}

const DENSITY: Correlation = Correlation {
    source: "OIML R 22 (1975)",
    basis: Basis::Published,
    relative_uncertainty: 0.0005,
    range: Range::of_temperature("-20 to 40 °C", OIML_C.0, OIML_C.1),
};
const VISCOSITY: Correlation = Correlation {
    source: "Bingham & Jackson 1917, table interpolated",
    basis: Basis::Published,
    relative_uncertainty: 0.07,
    range: Range::of_temperature("0 to 70 °C", 0.0, 70.0),
};
const SURFACE_TENSION: Correlation = Correlation {
    source: "Vázquez et al. 1995, pure ethanol by Jasper 1972",
    basis: Basis::FromMemory,
    relative_uncertainty: 0.03,
    range: Range::of_temperature("20 to 50 °C", 20.0, 50.0),
};

pub(super) fn region(at: &Conditions) -> Region {
    let w = at.known(Component::MassFraction);
    let freezing_c = interpolate(&FREEZING_W, |i| FREEZING_C[i], w.min(FREEZING_W[6]));
    Region::between(Limit::Freezes(freezing_c), Limit::Boils(boiling_c(w)))
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
    use super::{OIML_C, boiling_c, density, flash_point_c, viscosity};
    use crate::physics::liquid::{organic, water};

    #[test]
    fn density_goes_on_beyond_its_table_without_a_jump_and_towards_the_pure_liquids() {
        for w in [0.0, 0.3, 0.7, 1.0] {
            for t in [OIML_C.0, OIML_C.1] {
                assert!((density(t - 1e-9, w) - density(t + 1e-9, w)).abs() < 1e-6);
            }
        }
        assert!((density(75.0, 1.0) / organic::ETHANOL_DENSITY.at(75.0) - 1.0).abs() < 0.002);
        assert!((density(95.0, 0.0) / water::density(95.0) - 1.0).abs() < 1e-4);
    }

    #[test]
    fn viscosity_goes_on_beyond_its_table_without_a_jump() {
        for w in [0.0, 0.35, 1.0] {
            for t in [0.0, 70.0] {
                let (before, after) = (viscosity(t - 1e-6, w), viscosity(t + 1e-6, w));
                assert!(before > after && before / after - 1.0 < 1e-6, "{before} {after}");
            }
        }
        // Water at 95 °C: 0.297 mPa·s (IAPWS); ethanol at −40 °C: about 4.8 mPa·s (handbook, from memory).
        assert!((viscosity(95.0, 0.0) / 0.297e-3 - 1.0).abs() < 0.05, "{}", viscosity(95.0, 0.0));
        assert!((viscosity(-40.0, 1.0) / 4.8e-3 - 1.0).abs() < 0.2, "{}", viscosity(-40.0, 1.0));
    }

    #[test]
    fn boils_between_the_pure_liquids_and_flashes_earlier_when_stronger() {
        assert!((boiling_c(0.0) - 100.0).abs() < 1e-9 && (boiling_c(1.0) - 78.29).abs() < 1e-9);
        assert!((boiling_c(0.955) - 78.15).abs() < 0.1, "azeotrope");
        assert_eq!(flash_point_c(0.02), None);
        assert!(flash_point_c(0.4).unwrap() > flash_point_c(0.7).unwrap());
    }
}
