//! One liquid of the catalogue.

use super::condition::{Component, Conditions, Parameter};
use super::correlation::Properties;
use super::fault::ConditionFault;
use super::hazard::{FLAMMABLE_UP_TO_C, FlashPoint, Hazard};
use super::region::Region;
use crate::physics::quantity::{DENSITY, SURFACE_TENSION, TEMPERATURE, VISCOSITY};

/// How a liquid behaves on a solid, beyond its three properties.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Wetting {
    /// Dispersive share of the surface tension (Owens–Wendt), 0 to 1, where known.
    pub dispersive_fraction: Option<f64>,
    /// Leaves protein, fat, surfactant or alcohol behind: after the first wetting the receding angle is near 0.
    pub leaves_film: bool,
}

/// One liquid of the catalogue: what it is, what it needs to be told, and its correlations.
#[derive(Debug, Clone, Copy)]
pub struct Entry {
    /// Identifier, kebab-case.
    pub id: &'static str,
    /// Name for people.
    pub name: &'static str,
    /// Family of liquids it belongs to.
    pub family: &'static str,
    /// What it needs besides the temperature; every one of them must be given.
    pub parameters: &'static [Parameter],
    /// Behaviour on solids.
    pub wetting: Wetting,
    /// Every hazard it can have at any composition; [`Entry::hazards_at`] says which hold.
    pub hazards: &'static [Hazard],
    /// What to know before relying on the numbers; may be empty.
    pub note: &'static str,
    pub(super) flash_point: FlashPoint,
    pub(super) region: fn(&Conditions) -> Region,
    pub(super) evaluate: fn(&Conditions) -> Properties,
}

impl Entry {
    /// Density, viscosity and surface tension at these conditions.
    ///
    /// # Errors
    /// Every fault of the conditions: components missing, unknown to this liquid, outside what it accepts or
    /// contradicting each other; frozen, boiling, not dissolved; or a value that no liquid of the service may have.
    pub fn properties(&self, conditions: &Conditions) -> Result<Properties, Vec<ConditionFault>> {
        let faults = self.faults(conditions);
        if !faults.is_empty() {
            return Err(faults);
        }
        let properties = (self.evaluate)(conditions);
        let faults = bounds_faults(&properties);
        if faults.is_empty() { Ok(properties) } else { Err(faults) }
    }

    /// Lowest and highest temperature (°C) at which the liquid is accepted at this composition: from freezing to
    /// boiling, or as far as anything can be computed. `None` when the composition itself is at fault.
    /// A solution may be accepted over less than this, by its solubility.
    #[must_use]
    pub fn temperatures_c(&self, conditions: &Conditions) -> Option<(f64, f64)> {
        let mut faults = Vec::new();
        self.component_faults(conditions, &mut faults);
        faults.is_empty().then(|| (self.region)(conditions).temperatures_c())
    }

    /// Flash point (closed cup), °C, where it has one and it is known.
    #[must_use]
    pub fn flash_point_c(&self, conditions: &Conditions) -> Option<f64> {
        self.flash_point.at(conditions)
    }

    /// The hazards at these conditions. A liquid is flammable when its flash point is at most 60 °C or when it is as
    /// hot as its flash point.
    pub fn hazards_at(&self, conditions: &Conditions) -> impl Iterator<Item = Hazard> + use<> {
        let flash_point = self.flash_point_c(conditions);
        let temperature_c = conditions.temperature_c;
        self.hazards.iter().copied().filter(move |hazard| {
            *hazard != Hazard::Flammable
                || flash_point.is_some_and(|t| t <= FLAMMABLE_UP_TO_C || temperature_c >= t)
        })
    }

    fn faults(&self, conditions: &Conditions) -> Vec<ConditionFault> {
        let mut faults = Vec::new();
        self.component_faults(conditions, &mut faults);
        if !faults.is_empty() {
            // Without a valid composition only the outermost bounds of the temperature can be judged.
            if !TEMPERATURE.accepts(conditions.temperature_c) {
                faults.push(ConditionFault::TemperatureOutOfRange {
                    minimum_c: TEMPERATURE.minimum,
                    maximum_c: TEMPERATURE.maximum,
                });
            }
            return faults;
        }
        let region = (self.region)(conditions);
        if let Some((component, reason)) = region.inconsistent {
            faults.push(ConditionFault::Inconsistent { component, reason });
        }
        if let Some(fault) = region.temperature_fault(conditions.temperature_c) {
            faults.push(fault);
        }
        if let Some((component, maximum)) = region.soluble_to
            && conditions.known(component) > maximum
        {
            faults.push(ConditionFault::Insoluble { component, maximum });
        }
        faults
    }

    fn component_faults(&self, conditions: &Conditions, faults: &mut Vec<ConditionFault>) {
        for component in Component::ALL {
            let parameter = self.parameters.iter().find(|p| p.component == component);
            match (parameter, conditions.get(component)) {
                (None, None) => {}
                (None, Some(_)) => faults.push(ConditionFault::NotTaken { component }),
                (Some(_), None) => faults.push(ConditionFault::Missing { component }),
                (Some(&Parameter { minimum, maximum, .. }), Some(value)) => {
                    if !(value >= minimum && value <= maximum) {
                        faults.push(ConditionFault::OutOfRange { component, minimum, maximum });
                    }
                }
            }
        }
    }
}

/// What of the properties the service would accept for no liquid.
fn bounds_faults(properties: &Properties) -> Vec<ConditionFault> {
    let mut faults = Vec::new();
    for (quantity, property) in [
        (DENSITY, properties.density),
        (VISCOSITY, properties.viscosity),
        (SURFACE_TENSION, properties.surface_tension),
    ] {
        if !quantity.accepts(property.value / quantity.to_si) {
            faults.push(ConditionFault::PropertyOutOfBounds {
                property: quantity.name,
                minimum: quantity.minimum,
                maximum: quantity.maximum,
                unit: quantity.unit,
            });
        }
    }
    faults
}
