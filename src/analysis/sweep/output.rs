//! What can be asked of each point of a sweep.

use super::{
    lanes::{Judged, LANES, Lane},
    point::Point,
};
use crate::physics::{
    quantity::{self, DEGREE},
    separation::deflection::{Deflection, deflection},
};

/// One output of a point.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Output {
    /// Weber number over critical Weber number.
    SafetyFactor,
    /// Low end of its interval at the base's confidence.
    SafetyFactorLow,
    /// High end of it.
    SafetyFactorHigh,
    /// Degree of belief that the lip dribbles.
    DribbleProbability,
    /// The verdict.
    Verdict,
    /// ln(safety factor).
    Margin,
    /// Its standard uncertainty.
    MarginStandardUncertainty,
    /// Weber number.
    Weber,
    /// Critical Weber number.
    CriticalWeber,
    /// Reynolds number.
    Reynolds,
    /// Froude number.
    Froude,
    /// Bond number of the edge.
    Bond,
    /// Capillary number.
    Capillary,
    /// What rules the stream.
    Regime,
    /// Thickness of the approach film.
    Thickness,
    /// Its mean speed.
    Speed,
    /// Thickness at the brink.
    BrinkThickness,
    /// Deflection of the stream from the floor's direction.
    Deflection,
    /// Low end of its interval.
    DeflectionLow,
    /// High end of it.
    DeflectionHigh,
    /// A slowing pour starts to dribble here.
    OnsetFlow,
    /// A wetted lip clears above this.
    RecoveryFlow,
    /// Density of the liquid.
    Density,
    /// Dynamic viscosity of the liquid.
    Viscosity,
    /// Surface tension of the liquid.
    SurfaceTension,
    /// The contact angle that counts.
    ContactAngle,
}

/// Every output: name, unit, meaning.
const TABLE: &[(Output, &str, &str, &str)] = &[
    (Output::SafetyFactor, "safety_factor", "", "Weber number over critical Weber number"),
    (Output::SafetyFactorLow, "safety_factor_low", "", "low end of its interval at the base's confidence"),
    (Output::SafetyFactorHigh, "safety_factor_high", "", "high end of its interval at the base's confidence"),
    (Output::DribbleProbability, "dribble_probability", "", "degree of belief that this lip dribbles"),
    (Output::Verdict, "verdict", "", "clean, marginal or dribbles"),
    (Output::Margin, "margin", "", "natural logarithm of the safety factor"),
    (
        Output::MarginStandardUncertainty,
        "margin_standard_uncertainty",
        "",
        "standard uncertainty of the margin",
    ),
    (Output::Weber, "weber", "", "Weber number of the approach film"),
    (Output::CriticalWeber, "critical_weber", "", "Weber number below which the stream clings"),
    (Output::Reynolds, "reynolds", "", "Reynolds number of the approach film"),
    (Output::Froude, "froude", "", "Froude number of the approach film"),
    (Output::Bond, "bond", "", "Bond number of the edge"),
    (Output::Capillary, "capillary", "", "capillary number of the approach film"),
    (Output::Regime, "regime", "", "inertial, transitional, capillary or viscous"),
    (Output::Thickness, "thickness_mm", "mm", "thickness of the approach film"),
    (Output::Speed, "speed_m_s", "m/s", "mean speed of the approach film"),
    (Output::BrinkThickness, "brink_thickness_mm", "mm", "thickness at the brink"),
    (
        Output::Deflection,
        "deflection_deg",
        "deg",
        "deflection of the stream from the floor's direction; none once attached",
    ),
    (Output::DeflectionLow, "deflection_low_deg", "deg", "low end of the deflection's interval"),
    (Output::DeflectionHigh, "deflection_high_deg", "deg", "high end of the deflection's interval"),
    (Output::OnsetFlow, "onset_flow_ml_s", "mL/s", "pour rate at which a slowing pour starts to dribble"),
    (Output::RecoveryFlow, "recovery_flow_ml_s", "mL/s", "pour rate above which a wetted lip clears"),
    (Output::Density, "density_kg_m3", "kg/m³", "density of the liquid"),
    (Output::Viscosity, "viscosity_mpa_s", "mPa·s", "dynamic viscosity of the liquid"),
    (Output::SurfaceTension, "surface_tension_mn_m", "mN/m", "surface tension of the liquid"),
    (Output::ContactAngle, "contact_angle_deg", "deg", "contact angle that counts for this outer face"),
];

impl Output {
    /// Every output.
    pub fn all() -> impl Iterator<Item = Self> {
        TABLE.iter().map(|row| row.0)
    }

    /// The output of this name.
    #[must_use]
    pub fn named(name: &str) -> Option<Self> {
        TABLE.iter().find(|row| row.1 == name).map(|row| row.0)
    }

    const fn row(self) -> &'static (Self, &'static str, &'static str, &'static str) {
        &TABLE[self as usize]
    }

    /// Its name: that of its column, with the unit in it.
    #[must_use]
    pub const fn name(self) -> &'static str {
        self.row().1
    }

    /// Its unit; empty for ratios, counts and words.
    #[must_use]
    pub const fn unit(self) -> &'static str {
        self.row().2
    }

    /// What it is.
    #[must_use]
    pub const fn meaning(self) -> &'static str {
        self.row().3
    }

    /// Whether it is a word rather than a number.
    #[must_use]
    pub const fn is_word(self) -> bool {
        matches!(self, Self::Verdict | Self::Regime)
    }

    /// Whether points are judged side by side for it: it takes nothing but a judgement and the Weber number.
    pub(super) const fn is_of_judgement(self) -> bool {
        matches!(
            self,
            Self::SafetyFactor
                | Self::SafetyFactorLow
                | Self::SafetyFactorHigh
                | Self::DribbleProbability
                | Self::Verdict
                | Self::Margin
                | Self::MarginStandardUncertainty
                | Self::Weber
                | Self::CriticalWeber
        )
    }

    /// The numbers of points judged side by side; nothing for a word.
    pub(super) fn lane(
        self,
        weber: &Lane,
        judged: &Judged,
        two_sided: f64,
        numbers: &mut Vec<f64>,
        run: usize,
    ) {
        let Judged { critical_weber, margin, standard_uncertainty, dribble_probability } = judged;
        let mut each = |number: &dyn Fn(usize) -> f64| numbers.extend((0..run.min(LANES)).map(number));
        match self {
            Self::SafetyFactor => each(&|i| weber[i] / critical_weber[i]),
            Self::SafetyFactorLow => each(&|i| libm::exp(margin[i] - two_sided * standard_uncertainty[i])),
            Self::SafetyFactorHigh => each(&|i| libm::exp(margin[i] + two_sided * standard_uncertainty[i])),
            Self::DribbleProbability => numbers.extend(dribble_probability.iter().take(run)),
            Self::Margin => numbers.extend(margin.iter().take(run)),
            Self::MarginStandardUncertainty => numbers.extend(standard_uncertainty.iter().take(run)),
            Self::Weber => numbers.extend(weber.iter().take(run)),
            Self::CriticalWeber => numbers.extend(critical_weber.iter().take(run)),
            _ => {}
        }
    }

    /// The number at this point; NaN where there is none.
    #[inline]
    pub(super) fn number(self, point: &Point<'_>) -> f64 {
        let judged = &point.judged;
        let half = || point.two_sided * judged.standard_uncertainty;
        let mm = 1e3;
        match self {
            Self::SafetyFactor => point.parts.stream.approach.numbers.weber / judged.threshold.critical_weber,
            Self::SafetyFactorLow => libm::exp(judged.margin - half()),
            Self::SafetyFactorHigh => libm::exp(judged.margin + half()),
            Self::DribbleProbability => judged.dribble_probability,
            Self::Margin => judged.margin,
            Self::MarginStandardUncertainty => judged.standard_uncertainty,
            Self::Weber => point.parts.stream.approach.numbers.weber,
            Self::CriticalWeber => judged.threshold.critical_weber,
            Self::Reynolds => point.parts.stream.approach.numbers.reynolds,
            Self::Froude => point.parts.stream.approach.numbers.froude,
            Self::Bond => point.numbers().bond,
            Self::Capillary => point.parts.stream.approach.numbers.capillary,
            Self::Thickness => point.parts.stream.approach.stream.thickness * mm,
            Self::Speed => point.parts.stream.approach.stream.speed,
            Self::BrinkThickness => point.parts.stream.approach.stream.brink_thickness * mm,
            Self::Deflection => bend(point).map_or(f64::NAN, |d| d.angle / DEGREE),
            Self::DeflectionLow => bend(point)
                .map_or(f64::NAN, |d| (d.angle - point.two_sided * d.standard_uncertainty).max(0.0) / DEGREE),
            Self::DeflectionHigh => bend(point).map_or(f64::NAN, |d| {
                (d.angle + point.two_sided * d.standard_uncertainty).min(point.turn()) / DEGREE
            }),
            Self::OnsetFlow => point.flow_limits().and_then(|f| f.onset).map_or(f64::NAN, ml_s),
            Self::RecoveryFlow => point.flow_limits().and_then(|f| f.recovery).map_or(f64::NAN, ml_s),
            Self::Density => point.parts.condition.liquid.density,
            Self::Viscosity => point.parts.condition.liquid.viscosity / quantity::VISCOSITY.to_si,
            Self::SurfaceTension => {
                point.parts.condition.liquid.surface_tension / quantity::SURFACE_TENSION.to_si
            }
            Self::ContactAngle => point.parts.condition.contact_angle / DEGREE,
            Self::Verdict | Self::Regime => f64::NAN,
        }
    }

    /// The word at this point.
    pub(super) fn word(self, point: &Point<'_>) -> Option<&'static str> {
        match self {
            Self::Verdict => Some(point.judged.verdict.as_str()),
            Self::Regime => Some(point.parts.stream.approach.numbers.regime().as_str()),
            _ => None,
        }
    }
}

fn ml_s(flow: f64) -> f64 {
    flow / quantity::FLOW.to_si
}

fn bend(point: &Point<'_>) -> Option<Deflection> {
    let factor = Output::SafetyFactor.number(point);
    deflection(&point.numbers(), point.turn(), factor, point.judged.standard_uncertainty)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_table_stands_in_the_order_of_the_variants() {
        for (i, row) in TABLE.iter().enumerate() {
            assert_eq!(row.0 as usize, i, "{}", row.1);
            assert_eq!(Output::named(row.1), Some(row.0));
        }
        assert_eq!(Output::ContactAngle as usize + 1, TABLE.len());
    }
}
