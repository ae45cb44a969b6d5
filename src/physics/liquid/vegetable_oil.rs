//! Olive, sunflower and rapeseed oil.

use super::condition::Conditions;
use super::correlation::{Correlation, Properties, Range};
use super::region::{Limit, Region};
use super::walther::WaltherLine;
use crate::physics::Basis;

/// One oil: density ρ₀ − k t (kg/m³, °C), ASTM D341 line, surface tension γ₂₀ + s (t − 20 °C).
struct VegetableOil {
    /// ρ₀ and k.
    density: (f64, f64),
    density_correlation: Correlation,
    /// Kinematic viscosities at 40 and 100 °C, mm²/s.
    viscosity: (f64, f64),
    viscosity_source: &'static str,
    /// γ₂₀, mN/m.
    surface_tension: f64,
    /// Where it sets, °C (from memory; olive oil clouds well above).
    sets_c: f64,
}

const DENSITY: Correlation = Correlation {
    source: "Esteban et al. 2012",
    basis: Basis::Published,
    relative_uncertainty: 0.003,
    range: Range::of_temperature("10 to 140 °C", 10.0, 140.0),
};
const VISCOSITY: Correlation = Correlation {
    source: "ASTM D341 line",
    basis: Basis::Published,
    relative_uncertainty: 0.10,
    range: Range::of_temperature("0 to 100 °C, fresh oil", 0.0, 100.0),
};
const SURFACE_TENSION: Correlation = Correlation {
    source: "handbook value, linear in temperature",
    basis: Basis::FromMemory,
    relative_uncertainty: 0.05,
    range: Range::of_temperature("10 to 80 °C", 10.0, 80.0),
};
/// Slope of the surface tension, mN/(m·K) (from memory).
const TENSION_SLOPE: f64 = -0.075;
/// Highest temperature at which anything is computed, °C: frying oil (own judgement).
const COMPUTABLE_TO_C: f64 = 200.0;

static OLIVE: VegetableOil = VegetableOil {
    density: (926.8, 0.70),
    density_correlation: Correlation {
        source: "linear fit to published measurements, seen at second hand",
        ..DENSITY
    },
    viscosity: (42.0, 8.8),
    viscosity_source: "ASTM D341 line through Rescorla & Carnahan 1936",
    surface_tension: 32.5,
    sets_c: -6.0,
};

static SUNFLOWER: VegetableOil = VegetableOil {
    density: (931.0, 0.64145),
    density_correlation: DENSITY,
    viscosity: (32.0, 7.8),
    viscosity_source: "ASTM D341 line through Ryan et al. 1984",
    surface_tension: 33.5,
    sets_c: -17.0,
};

static RAPESEED: VegetableOil = VegetableOil {
    density: (931.5, 0.65),
    density_correlation: Correlation {
        source: "linear, low-erucic oil",
        basis: Basis::FromMemory,
        ..DENSITY
    },
    viscosity: (37.0, 8.2),
    viscosity_source: "ASTM D341 line through Lang et al. 1992, Labeckas 2006, Acaroglu 2001",
    surface_tension: 33.5,
    sets_c: -10.0,
};

impl VegetableOil {
    const fn region(&self) -> Region {
        Region::between(Limit::Freezes(self.sets_c), Limit::Computable(COMPUTABLE_TO_C))
    }

    fn evaluate(&self, at: &Conditions) -> Properties {
        let t = at.temperature_c;
        let density = self.density.0 - self.density.1 * t;
        let line = WaltherLine::through(self.viscosity.0, self.viscosity.1);
        let viscosity = Correlation { source: self.viscosity_source, ..VISCOSITY };
        Properties {
            density: self.density_correlation.give(density, at),
            viscosity: viscosity.give(1e-6 * line.at(t) * density, at),
            surface_tension: SURFACE_TENSION
                .give(1e-3 * (self.surface_tension + TENSION_SLOPE * (t - 20.0)), at),
        }
    }
}

pub(super) fn olive_region(_: &Conditions) -> Region {
    OLIVE.region()
}

pub(super) fn olive(at: &Conditions) -> Properties {
    OLIVE.evaluate(at)
}

pub(super) fn sunflower_region(_: &Conditions) -> Region {
    SUNFLOWER.region()
}

pub(super) fn sunflower(at: &Conditions) -> Properties {
    SUNFLOWER.evaluate(at)
}

pub(super) fn rapeseed_region(_: &Conditions) -> Region {
    RAPESEED.region()
}

pub(super) fn rapeseed(at: &Conditions) -> Properties {
    RAPESEED.evaluate(at)
}
