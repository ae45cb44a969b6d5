//! Why a liquid has no properties at the conditions asked for.

use super::condition::Component;

/// One thing wrong with the conditions asked for. Numbers are in the caller's units.
#[derive(Debug, Clone, Copy, PartialEq, thiserror::Error)]
pub enum ConditionFault {
    /// The liquid needs this component and it was not given.
    #[error("{} is needed for this liquid", .component.field())]
    Missing {
        /// What is needed.
        component: Component,
    },
    /// The liquid has no such component.
    #[error("this liquid does not take {}", .component.field())]
    NotTaken {
        /// What was given in vain.
        component: Component,
    },
    /// Not a number, or outside what this liquid accepts.
    #[error("{} must be between {minimum} and {maximum} for this liquid", .component.field())]
    OutOfRange {
        /// Which component.
        component: Component,
        /// Smallest accepted value.
        minimum: f64,
        /// Largest accepted value.
        maximum: f64,
    },
    /// Not a number, or outside the temperatures at which this liquid is computed.
    #[error("temperature must be between {minimum_c:.1} and {maximum_c:.1} °C for this liquid")]
    TemperatureOutOfRange {
        /// Lowest accepted temperature, °C.
        minimum_c: f64,
        /// Highest accepted temperature, °C.
        maximum_c: f64,
    },
    /// At this composition the liquid begins to freeze at a higher temperature.
    #[error("it begins to freeze at {at_c:.1} °C")]
    Freezes {
        /// Temperature at which the first solid appears, °C.
        at_c: f64,
    },
    /// At this composition the liquid boils at a lower temperature (0.1 MPa).
    #[error("it boils at {at_c:.1} °C")]
    Boils {
        /// Boiling temperature, °C.
        at_c: f64,
    },
    /// More than dissolves at this temperature.
    #[error("at this temperature no more than {maximum:.3} dissolves ({})", .component.field())]
    Insoluble {
        /// Which component.
        component: Component,
        /// Saturation at this temperature, in the component's unit.
        maximum: f64,
    },
    /// Two given numbers contradict each other.
    #[error("{}: {reason}", .component.field())]
    Inconsistent {
        /// The component to look at.
        component: Component,
        /// What contradicts what.
        reason: &'static str,
    },
    /// The correlation gives a value that the service does not accept for any liquid: too stiff to pour, for instance.
    #[error("here its {property} would lie outside {minimum} to {maximum} {unit}, beyond what is computed")]
    PropertyOutOfBounds {
        /// Which property.
        property: &'static str,
        /// Smallest accepted value.
        minimum: f64,
        /// Largest accepted value.
        maximum: f64,
        /// Unit of the bounds.
        unit: &'static str,
    },
}

impl ConditionFault {
    /// The component that the fault is about; `None` means the temperature.
    #[must_use]
    pub const fn component(&self) -> Option<Component> {
        match *self {
            Self::Missing { component }
            | Self::NotTaken { component }
            | Self::OutOfRange { component, .. }
            | Self::Insoluble { component, .. }
            | Self::Inconsistent { component, .. } => Some(component),
            Self::TemperatureOutOfRange { .. }
            | Self::Freezes { .. }
            | Self::Boils { .. }
            | Self::PropertyOutOfBounds { .. } => None,
        }
    }
}
