//! Coffee, tea, wort, juice, vinegar: water or sugar solution with a little more in it. They vary from batch to batch;
//! these are starting values with honest bands, and a measured liquid beats them.

use super::condition::Conditions;
use super::correlation::{Correlation, Properties, Range};
use super::region::{Limit, Region};
use super::{sucrose, water};
use crate::physics::Basis;

/// One beverage, as a multiple of the sugar solution of its dissolved solids. All numbers: from memory or own judgement.
struct Beverage {
    /// Mass fraction of dissolved sugar, or what acts like it.
    sugar: f64,
    /// Density and viscosity over those of the sugar solution.
    density_ratio: f64,
    viscosity_ratio: f64,
    /// Surface tension at 20 °C, mN/m: the middle of the reported range. It falls with temperature like water's.
    tension_20c: f64,
    freezes_c: f64,
    /// Relative standard uncertainties.
    uncertainty: [f64; 3],
    source: &'static str,
    /// Reported range of the surface tension, in words.
    tension_range: &'static str,
}

const COMPUTED: Range = Range::of_temperature("0 to 100 °C, typical strength; measure yours", 0.0, 100.0);

static COFFEE: Beverage = Beverage {
    sugar: 0.0,
    density_ratio: 1.005,
    viscosity_ratio: 1.05,
    tension_20c: 52.0,
    freezes_c: -0.2,
    uncertainty: [0.002, 0.05, 0.08],
    source: "water with 1.3 % solids",
    tension_range: "44 to 60 mN/m at 20 °C, by roast, oil and age; measure yours",
};

static TEA: Beverage = Beverage {
    sugar: 0.0,
    density_ratio: 1.001,
    viscosity_ratio: 1.01,
    tension_20c: 62.0,
    freezes_c: -0.1,
    uncertainty: [0.001, 0.03, 0.07],
    source: "water with 0.3 % solids",
    tension_range: "54 to 70 mN/m at 20 °C, without milk, by strength and age; measure yours",
};

static WORT: Beverage = Beverage {
    sugar: 0.12,
    density_ratio: 1.0,
    viscosity_ratio: 1.2,
    tension_20c: 47.0,
    freezes_c: -1.0,
    uncertainty: [0.004, 0.12, 0.07],
    source: "sucrose solution of 12 % extract, times 1.2 for dextrins and protein",
    tension_range: "41 to 53 mN/m at 20 °C; measure yours",
};

static JUICE: Beverage = Beverage {
    sugar: 0.11,
    density_ratio: 1.0,
    viscosity_ratio: 1.3,
    tension_20c: 55.0,
    freezes_c: -1.0,
    uncertainty: [0.005, 0.30, 0.09],
    source: "sucrose solution of 11 % solids, times 1.3 for acid, pectin and a little pulp",
    tension_range: "45 to 65 mN/m at 20 °C, by fruit and pulp; measure yours",
};

static VINEGAR: Beverage = Beverage {
    sugar: 0.0,
    density_ratio: 1.0075,
    viscosity_ratio: 1.10,
    tension_20c: 59.0,
    freezes_c: -1.6,
    uncertainty: [0.003, 0.04, 0.05],
    source: "water with 5 % acetic acid",
    tension_range: "53 to 65 mN/m at 20 °C for 4 to 7 % acid; measure yours",
};

impl Beverage {
    const fn region(&self) -> Region {
        Region::between(Limit::Freezes(self.freezes_c), Limit::Boils(water::BOILS_AT_C))
    }

    fn evaluate(&self, at: &Conditions) -> Properties {
        let t = at.temperature_c;
        let [density, viscosity, surface_tension] = self.uncertainty;
        let solids = |relative_uncertainty| Correlation {
            source: self.source,
            basis: Basis::Estimate,
            relative_uncertainty,
            range: COMPUTED,
        };
        let tension = Correlation {
            source: "middle of the reported range, from memory",
            range: Range { text: self.tension_range, ..COMPUTED },
            ..solids(surface_tension)
        };
        let tension_value =
            1e-3 * self.tension_20c * water::surface_tension(t) / water::surface_tension(20.0);
        Properties {
            density: solids(density).give(self.density_ratio * sucrose::density(t, self.sugar), at),
            viscosity: solids(viscosity).give(self.viscosity_ratio * sucrose::viscosity(t, self.sugar), at),
            surface_tension: tension.give(tension_value, at),
        }
    }
}

pub(super) fn coffee_region(_: &Conditions) -> Region {
    COFFEE.region()
}

pub(super) fn coffee(at: &Conditions) -> Properties {
    COFFEE.evaluate(at)
}

pub(super) fn tea_region(_: &Conditions) -> Region {
    TEA.region()
}

pub(super) fn tea(at: &Conditions) -> Properties {
    TEA.evaluate(at)
}

pub(super) fn wort_region(_: &Conditions) -> Region {
    WORT.region()
}

pub(super) fn wort(at: &Conditions) -> Properties {
    WORT.evaluate(at)
}

pub(super) fn juice_region(_: &Conditions) -> Region {
    JUICE.region()
}

pub(super) fn juice(at: &Conditions) -> Properties {
    JUICE.evaluate(at)
}

pub(super) fn vinegar_region(_: &Conditions) -> Region {
    VINEGAR.region()
}

pub(super) fn vinegar(at: &Conditions) -> Properties {
    VINEGAR.evaluate(at)
}
