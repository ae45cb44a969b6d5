//! Where a substance is a pourable liquid: between freezing and boiling, and within its solubility.

use super::condition::Component;
use super::fault::ConditionFault;
use crate::physics::quantity::TEMPERATURE;

/// What ends the region at one side of the temperature scale, °C.
#[derive(Debug, Clone, Copy)]
pub(super) enum Limit {
    /// The first solid appears.
    Freezes(f64),
    /// It boils at 0.1 MPa.
    Boils(f64),
    /// Still a liquid, but nothing sensible can be computed beyond.
    Computable(f64),
}

impl Limit {
    const fn temperature_c(self) -> f64 {
        match self {
            Self::Freezes(t) | Self::Boils(t) | Self::Computable(t) => t,
        }
    }

    const fn fault(self, minimum_c: f64, maximum_c: f64) -> ConditionFault {
        match self {
            Self::Freezes(at_c) => ConditionFault::Freezes { at_c },
            Self::Boils(at_c) => ConditionFault::Boils { at_c },
            Self::Computable(_) => ConditionFault::TemperatureOutOfRange { minimum_c, maximum_c },
        }
    }
}

/// The region at a given composition.
#[derive(Debug, Clone, Copy)]
pub(super) struct Region {
    pub low: Limit,
    pub high: Limit,
    /// Saturation at the temperature asked for, in the component's unit.
    pub soluble_to: Option<(Component, f64)>,
    /// A contradiction between the components.
    pub inconsistent: Option<(Component, &'static str)>,
}

impl Region {
    pub const fn between(low: Limit, high: Limit) -> Self {
        Self { low, high, soluble_to: None, inconsistent: None }
    }

    /// Lowest and highest accepted temperature, °C.
    pub fn temperatures_c(&self) -> (f64, f64) {
        (
            self.low.temperature_c().max(TEMPERATURE.minimum),
            self.high.temperature_c().min(TEMPERATURE.maximum),
        )
    }

    /// What is wrong with this temperature, if anything.
    pub fn temperature_fault(&self, temperature_c: f64) -> Option<ConditionFault> {
        let (minimum_c, maximum_c) = self.temperatures_c();
        let outside = ConditionFault::TemperatureOutOfRange { minimum_c, maximum_c };
        if !TEMPERATURE.accepts(temperature_c) {
            Some(outside)
        } else if temperature_c < minimum_c {
            Some(self.low.fault(minimum_c, maximum_c))
        } else if temperature_c > maximum_c {
            Some(self.high.fault(minimum_c, maximum_c))
        } else {
            None
        }
    }
}
