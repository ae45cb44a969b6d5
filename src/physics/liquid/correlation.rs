//! A correlation's pedigree, and how it turns a computed value into a property with its uncertainty.

use super::Liquid;
use super::condition::{Component, Conditions};
use crate::physics::Basis;

/// One property at some conditions.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Property {
    /// The value, SI.
    pub value: f64,
    /// Its standard uncertainty, SI.
    pub standard_uncertainty: f64,
    /// Where the correlation comes from.
    pub source: &'static str,
    /// What the value rests on.
    pub basis: Basis,
    /// Where the correlation holds, in words.
    pub range: &'static str,
    /// Whether the conditions lie within that range. Outside, the uncertainty is widened.
    pub within_range: bool,
}

/// The three properties of a liquid at some conditions.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Properties {
    /// Density, kg/m³.
    pub density: Property,
    /// Dynamic viscosity, Pa·s.
    pub viscosity: Property,
    /// Surface tension, N/m.
    pub surface_tension: Property,
}

impl Properties {
    /// The values alone.
    #[must_use]
    pub const fn liquid(&self) -> Liquid {
        Liquid {
            density: self.density.value,
            viscosity: self.viscosity.value,
            surface_tension: self.surface_tension.value,
        }
    }
}

/// Temperature outside the stated range that adds the stated uncertainty once more, K (own judgement).
const TEMPERATURE_SCALE: f64 = 20.0;
/// Share of a component's stated span that does the same outside it (own judgement).
const COMPONENT_SCALE: f64 = 0.2;

/// Where a correlation is stated to hold.
#[derive(Debug, Clone, Copy)]
pub(super) struct Range {
    /// In words, for people.
    pub text: &'static str,
    /// Temperatures, °C.
    pub temperature_c: (f64, f64),
    /// Bounds of the composition, in the component's unit.
    pub component: Option<(Component, f64, f64)>,
}

impl Range {
    /// A range of temperature alone.
    pub const fn of_temperature(text: &'static str, low: f64, high: f64) -> Self {
        Self { text, temperature_c: (low, high), component: None }
    }

    /// The same, and a range of one component.
    pub const fn and(mut self, component: Component, low: f64, high: f64) -> Self {
        self.component = Some((component, low, high));
        self
    }

    /// How far outside: 0 within, growing evenly with the distance (in units of the two scales above).
    fn excess(&self, conditions: &Conditions) -> f64 {
        let (low, high) = self.temperature_c;
        let temperature = outside(conditions.temperature_c, low, high) / TEMPERATURE_SCALE;
        let component = self.component.map_or(0.0, |(component, low, high)| {
            outside(conditions.known(component), low, high) / (COMPONENT_SCALE * (high - low))
        });
        temperature + component
    }
}

/// Distance of `x` from the interval.
fn outside(x: f64, low: f64, high: f64) -> f64 {
    if x < low {
        low - x
    } else if x > high {
        x - high
    } else {
        0.0
    }
}

/// Pedigree of a correlation.
#[derive(Debug, Clone, Copy)]
pub(super) struct Correlation {
    pub source: &'static str,
    pub basis: Basis,
    /// Relative standard uncertainty within the range.
    pub relative_uncertainty: f64,
    pub range: Range,
}

impl Correlation {
    /// The property with the stated uncertainty, widened by u·(1 + excess) outside the range.
    pub fn give(&self, value: f64, conditions: &Conditions) -> Property {
        self.give_with(value, self.relative_uncertainty, conditions)
    }

    /// The same with a relative uncertainty that depends on the conditions.
    pub fn give_with(&self, value: f64, relative_uncertainty: f64, conditions: &Conditions) -> Property {
        let excess = self.range.excess(conditions);
        Property {
            value,
            standard_uncertainty: value * relative_uncertainty * (1.0 + excess),
            source: self.source,
            basis: self.basis,
            range: self.range.text,
            within_range: excess <= 0.0,
        }
    }
}

#[cfg(test)]
mod tests {
    use super::{Correlation, Range};
    use crate::physics::Basis;
    use crate::physics::liquid::condition::{Component, Conditions};

    const C: Correlation = Correlation {
        source: "none",
        basis: Basis::Estimate,
        relative_uncertainty: 0.01,
        range: Range::of_temperature("10 to 30 °C, 0 to 0.5", 10.0, 30.0).and(
            Component::MassFraction,
            0.0,
            0.5,
        ),
    };

    fn at(t: f64, w: f64) -> (f64, bool) {
        let p = C.give(100.0, &Conditions::at(t).with(Component::MassFraction, w));
        (p.standard_uncertainty, p.within_range)
    }

    #[test]
    fn uncertainty_widens_without_a_jump_and_is_flagged() {
        assert_eq!(at(10.0, 0.5), (1.0, true));
        let (just_outside, within) = at(30.0 + 1e-9, 0.5);
        assert!(!within && (just_outside - 1.0).abs() < 1e-9);
        assert!((at(50.0, 0.5).0 - 2.0).abs() < 1e-12);
        assert!((at(0.0, 0.6).0 - 2.5).abs() < 1e-12);
    }
}
