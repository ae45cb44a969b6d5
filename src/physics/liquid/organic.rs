//! Pure organic liquids: acetone, isopropanol, ethylene glycol.

use super::CELSIUS_ZERO;
use super::condition::Conditions;
use super::correlation::{Correlation, Properties, Range};
use super::region::{Limit, Region};
use crate::physics::Basis;

/// Saturated liquid density by DIPPR equation 105: ρ = M C₁/C₂^[1 + (1 − T/C₃)^C₄], C₁ in kmol/m³ divided by 1000 here,
/// T and C₃ in K. Coefficients: Perry's Chemical Engineers' Handbook, 8th ed., table 2-32, via a public library.
pub(super) struct Dippr105 {
    coefficients: [f64; 4],
    /// M, g/mol.
    molar_mass: f64,
}

impl Dippr105 {
    /// Density (kg/m³) at a temperature in °C.
    pub fn at(&self, t: f64) -> f64 {
        let [c1, c2, c3, c4] = self.coefficients;
        let exponent = 1.0 + libm::pow(1.0 - (t + CELSIUS_ZERO) / c3, c4);
        1e-3 * self.molar_mass * c1 / libm::pow(c2, exponent)
    }
}

/// Viscosity by lg(μ/mPa·s) = A + B/(C − T), T in K. Viswanath & Natarajan 1989 (*Data Book on the Viscosity of Liquids*),
/// via a public library.
struct ViswanathNatarajan {
    coefficients: [f64; 3],
}

impl ViswanathNatarajan {
    fn at(&self, t: f64) -> f64 {
        let [a, b, c] = self.coefficients;
        1e-3 * libm::exp10(a + b / (c - (t + CELSIUS_ZERO)))
    }
}

/// Surface tension, N/m.
enum SurfaceTension {
    /// γ/(mN/m) = a − b t, t in °C. Jasper 1972, doi:10.1063/1.3253106.
    Jasper(f64, f64),
    /// γ = s (1 − T/T_c)ⁿ, N/m and K. Mulero & Cachadiña 2012, doi:10.1063/1.4768782.
    MuleroCachadina { s: f64, critical: f64, n: f64 },
}

impl SurfaceTension {
    fn at(&self, t: f64) -> f64 {
        match *self {
            Self::Jasper(a, b) => 1e-3 * (a - b * t),
            Self::MuleroCachadina { s, critical, n } => s * libm::pow(1.0 - (t + CELSIUS_ZERO) / critical, n),
        }
    }
}

/// One pure liquid.
struct Organic {
    density: Dippr105,
    viscosity: ViswanathNatarajan,
    surface_tension: SurfaceTension,
    surface_tension_correlation: Correlation,
    viscosity_correlation: Correlation,
    /// Melting and boiling point, °C (handbook values, from memory).
    melts_c: f64,
    boils_c: f64,
}

impl Organic {
    const fn region(&self) -> Region {
        Region::between(Limit::Freezes(self.melts_c), Limit::Boils(self.boils_c))
    }

    fn evaluate(&self, at: &Conditions) -> Properties {
        let t = at.temperature_c;
        Properties {
            density: DENSITY.give(self.density.at(t), at),
            viscosity: self.viscosity_correlation.give(self.viscosity.at(t), at),
            surface_tension: self.surface_tension_correlation.give(self.surface_tension.at(t), at),
        }
    }
}

const DENSITY: Correlation = Correlation {
    source: "DIPPR 105 (Perry 8e)",
    basis: Basis::Published,
    relative_uncertainty: 0.003,
    range: Range::of_temperature("melting point to near the critical point", -60.0, 250.0),
};
const VISCOSITY: Correlation = Correlation {
    source: "Viswanath & Natarajan 1989",
    basis: Basis::Published,
    relative_uncertainty: 0.03,
    range: Range::of_temperature("-40 °C to the boiling point", -60.0, 100.0),
};
const SURFACE_TENSION: Correlation = Correlation {
    source: "Jasper 1972",
    basis: Basis::Published,
    relative_uncertainty: 0.02,
    range: Range::of_temperature("10 to 80 °C", 10.0, 80.0),
};

static ACETONE: Organic = Organic {
    density: Dippr105 { coefficients: [1233.2, 0.25886, 508.2, 0.2913], molar_mass: 58.07914 },
    viscosity: ViswanathNatarajan { coefficients: [-1.6125, -298.48, 26.203] },
    // Jasper's line for acetone lies 2.9 to 4.5 % higher than reference libraries.
    surface_tension: SurfaceTension::MuleroCachadina { s: 0.0633, critical: 508.1, n: 1.16 },
    surface_tension_correlation: Correlation {
        source: "Mulero & Cachadiña 2012",
        range: Range::of_temperature("-91 to 80 °C", -91.0, 80.0),
        ..SURFACE_TENSION
    },
    viscosity_correlation: VISCOSITY,
    melts_c: -94.7,
    boils_c: 56.1,
};

static ISOPROPANOL: Organic = Organic {
    density: Dippr105 { coefficients: [1179.9, 0.2644, 508.3, 0.24653], molar_mass: 60.09502 },
    viscosity: ViswanathNatarajan { coefficients: [-3.305, -1009.2, 18.917] },
    surface_tension: SurfaceTension::Jasper(22.90, 0.0789),
    surface_tension_correlation: SURFACE_TENSION,
    viscosity_correlation: VISCOSITY,
    melts_c: -88.0,
    boils_c: 82.3,
};

static ETHYLENE_GLYCOL: Organic = Organic {
    density: Dippr105 { coefficients: [1315.0, 0.25125, 720.0, 0.21868], molar_mass: 62.06784 },
    viscosity: ViswanathNatarajan { coefficients: [-1.5448, -417.05, 146.53] },
    surface_tension: SurfaceTension::Jasper(50.21, 0.089),
    surface_tension_correlation: Correlation {
        range: Range::of_temperature("10 to 140 °C", 10.0, 140.0),
        ..SURFACE_TENSION
    },
    viscosity_correlation: Correlation {
        range: Range::of_temperature("-10 to 100 °C", -10.0, 100.0),
        ..VISCOSITY
    },
    melts_c: -13.0,
    boils_c: 197.3,
};

/// Density of pure ethanol; what mixtures with water expand like above 40 °C.
pub(super) static ETHANOL_DENSITY: Dippr105 =
    Dippr105 { coefficients: [1628.8, 0.27469, 514.0, 0.23178], molar_mass: 46.06844 };

pub(super) fn acetone_region(_: &Conditions) -> Region {
    ACETONE.region()
}

pub(super) fn acetone(at: &Conditions) -> Properties {
    ACETONE.evaluate(at)
}

pub(super) fn isopropanol_region(_: &Conditions) -> Region {
    ISOPROPANOL.region()
}

pub(super) fn isopropanol(at: &Conditions) -> Properties {
    ISOPROPANOL.evaluate(at)
}

pub(super) fn ethylene_glycol_region(_: &Conditions) -> Region {
    ETHYLENE_GLYCOL.region()
}

pub(super) fn ethylene_glycol(at: &Conditions) -> Properties {
    ETHYLENE_GLYCOL.evaluate(at)
}
