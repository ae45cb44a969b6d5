//! Ethylene glycol and propylene glycol in water, by mass fraction up to 0.6.

use super::CELSIUS_ZERO;
use super::condition::{Component, Conditions};
use super::correlation::{Correlation, Properties, Range};
use super::region::{Limit, Region};
use super::table::interpolate;
use super::water;
use crate::physics::Basis;

/// Σᵢ Σⱼ cᵢⱼ (T − T̄)ⁱ (x − x̄)ʲ, the form of Melinder 2010 (*Properties of Secondary Working Fluids for Indirect Systems*,
/// International Institute of Refrigeration); T in K, x mass fraction.
struct Polynomial {
    /// T̄, K, and x̄.
    centre: (f64, f64),
    coefficients: [&'static [f64]; 4],
}

impl Polynomial {
    fn at(&self, t: f64, w: f64) -> f64 {
        let dt = t + CELSIUS_ZERO - self.centre.0;
        let dw = w - self.centre.1;
        let row = |c: &[f64]| c.iter().rev().fold(0.0, |sum, c| sum * dw + c);
        self.coefficients.iter().rev().fold(0.0, |sum, c| sum * dt + row(c))
    }
}

/// One glycol: polynomials for density (kg/m³) and ln viscosity (mPa·s), freezing curve, surface tension.
struct Glycol {
    density: Polynomial,
    ln_viscosity: Polynomial,
    /// Where ice begins to form, °C, at the mass fractions of [`FREEZING_W`].
    freezing_c: [f64; 7],
    /// Boiling point at 0.6, °C; below in proportion to the square of the mass fraction.
    boiling_at_strongest_c: f64,
    /// Surface tension of the pure glycol, mN/m: at 0 °C, and per °C.
    tension: (f64, f64),
    /// How much faster than in proportion the first glycol lowers the surface tension.
    sag: f64,
    surface_tension: Correlation,
}

/// Largest accepted mass fraction; the polynomials mean nothing beyond.
pub(super) const STRONGEST: f64 = 0.6;
const FREEZING_W: [f64; 7] = [0.0, 0.1, 0.2, 0.3, 0.4, 0.5, STRONGEST];

const ETHYLENE_CENTRE: (f64, f64) = (304.878, 0.308462);
const PROPYLENE_CENTRE: (f64, f64) = (305.8583, 0.307031);

static ETHYLENE: Glycol = Glycol {
    density: Polynomial {
        centre: ETHYLENE_CENTRE,
        coefficients: [
            &[1034.0, 131.1, 0.749, -106.2, -96.23, 489.1],
            &[-0.4781, -0.6876, 0.7855, 1.229, -7.211],
            &[-2.692e-3, 4.805e-3, -3.995e-3, -1.153e-2],
            &[4.725e-6, 1.690e-6, 4.982e-5],
        ],
    },
    ln_viscosity: Polynomial {
        centre: ETHYLENE_CENTRE,
        coefficients: [
            &[0.4705, 2.471, 0.03328, 1.659, 3.089, -18.65],
            &[-2.550e-2, -1.171e-2, 1.086e-2, 3.157e-3, 1.831e-2],
            &[1.782e-4, 1.052e-4, 1.051e-4, 4.063e-4],
            &[-7.669e-7, -1.634e-6, -6.475e-6],
        ],
    },
    // Melinder 2010 via a public library; at 0 pure water.
    freezing_c: [0.0, -3.36, -7.95, -14.58, -23.81, -35.99, -51.20],
    // From memory.
    boiling_at_strongest_c: 111.0,
    tension: (50.21, -0.089),
    sag: 0.35,
    surface_tension: Correlation {
        source: "interpolation between water and ethylene glycol (Jasper 1972)",
        basis: Basis::Estimate,
        relative_uncertainty: 0.05,
        range: RANGE,
    },
};

static PROPYLENE: Glycol = Glycol {
    density: Polynomial {
        centre: PROPYLENE_CENTRE,
        coefficients: [
            &[1018.0, 76.04, -24.98, -155.0, -113.1, 234.2],
            &[-0.5406, -0.9450, 0.2700, 2.829, -2.221],
            &[-2.666e-3, 5.541e-3, -4.018e-3, -7.175e-3],
            &[1.347e-5, -1.343e-5, 3.376e-5],
        ],
    },
    ln_viscosity: Polynomial {
        centre: PROPYLENE_CENTRE,
        coefficients: [
            &[0.6837, 3.328, 0.5453, -3.900, -1.587, 35.64],
            &[-3.045e-2, -3.984e-2, -8.6e-4, 0.1054, 4.475e-2],
            &[2.525e-4, 4.332e-4, -1.593e-4, -1.589e-3],
            &[-1.399e-6, -1.860e-6, -4.465e-7],
        ],
    },
    freezing_c: [0.0, -2.87, -7.17, -12.79, -20.57, -32.19, -50.00],
    boiling_at_strongest_c: 106.5,
    tension: (37.9, -0.065),
    sag: 1.0,
    surface_tension: Correlation {
        source: "interpolation between water and propylene glycol",
        basis: Basis::Estimate,
        relative_uncertainty: 0.10,
        range: RANGE,
    },
};

const RANGE: Range = Range::of_temperature("freezing to 100 °C, mass fraction up to 0.6", -60.0, 100.0);
const DENSITY: Correlation = Correlation {
    source: "Melinder 2010",
    basis: Basis::Published,
    relative_uncertainty: 0.001,
    range: RANGE,
};
const VISCOSITY: Correlation = Correlation { relative_uncertainty: 0.04, ..DENSITY };

impl Glycol {
    fn viscosity(&self, t: f64, w: f64) -> f64 {
        1e-3 * libm::exp(self.ln_viscosity.at(t, w))
    }

    /// γ = γ_w − (γ_w − γ_g) w [1 + s (1 − w)], s the sag (own estimate).
    fn surface_tension(&self, t: f64, w: f64) -> f64 {
        let water = water::surface_tension(t);
        let glycol = 1e-3 * (self.tension.0 + self.tension.1 * t);
        water - (water - glycol) * w * (1.0 + self.sag * (1.0 - w))
    }

    fn region(&self, at: &Conditions) -> Region {
        let w = at.known(Component::MassFraction);
        let share = w / STRONGEST;
        let boiling_c = water::BOILS_AT_C + (self.boiling_at_strongest_c - water::BOILS_AT_C) * share * share;
        let freezing_c = interpolate(&FREEZING_W, |i| self.freezing_c[i], w);
        Region::between(Limit::Freezes(freezing_c), Limit::Boils(boiling_c))
    }

    fn evaluate(&self, at: &Conditions) -> Properties {
        let (t, w) = (at.temperature_c, at.known(Component::MassFraction));
        Properties {
            density: DENSITY.give(self.density.at(t, w), at),
            viscosity: VISCOSITY.give(self.viscosity(t, w), at),
            surface_tension: self.surface_tension.give(self.surface_tension(t, w), at),
        }
    }
}

pub(super) fn ethylene_region(at: &Conditions) -> Region {
    ETHYLENE.region(at)
}

pub(super) fn ethylene(at: &Conditions) -> Properties {
    ETHYLENE.evaluate(at)
}

pub(super) fn propylene_region(at: &Conditions) -> Region {
    PROPYLENE.region(at)
}

pub(super) fn propylene(at: &Conditions) -> Properties {
    PROPYLENE.evaluate(at)
}
