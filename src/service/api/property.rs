//! Properties and angles in an answer: value, doubt, source, basis.

use serde::Serialize;
use utoipa::ToSchema;

use super::quantity::Number;
use crate::physics::{
    liquid::Property,
    quantity::{DEGREE, Quantity},
    surface::AngleEstimate,
};

/// A property with its doubt and what it rests on.
#[derive(Debug, Clone, Copy, Serialize, ToSchema)]
pub struct PropertyAnswer {
    /// The value, in the unit of the member's name.
    #[schema(value_type = f64)]
    pub value: Number,
    /// Its standard uncertainty, in the same unit.
    #[schema(value_type = f64)]
    pub standard_uncertainty: Number,
    /// Where it comes from.
    #[schema(example = "Kell 1975")]
    pub source: &'static str,
    /// What it rests on: `published`, `from memory`, `estimate`, `derived` or `given`.
    #[schema(example = "published")]
    pub basis: &'static str,
    /// Whether the conditions lie inside the range of the source.
    pub within_range: bool,
    /// The range of the source; empty for a given value.
    #[schema(example = "0 to 150 °C")]
    pub range: &'static str,
}

impl PropertyAnswer {
    /// `property` in the unit of `quantity`; `given`: the standard uncertainty (in that unit) of a value given by the caller.
    #[must_use]
    pub fn new(property: &Property, quantity: &Quantity, given: Option<f64>) -> Self {
        Self {
            value: Number(property.value / quantity.to_si),
            standard_uncertainty: Number(given.unwrap_or(property.standard_uncertainty / quantity.to_si)),
            source: property.source,
            basis: property.basis.as_str(),
            within_range: property.within_range,
            range: property.range,
        }
    }
}

/// An angle with its doubt and what it rests on.
#[derive(Debug, Clone, Copy, Serialize, ToSchema)]
pub struct AngleAnswer {
    /// The angle through the liquid, degrees.
    #[schema(value_type = f64, minimum = 0, maximum = 180)]
    pub value: Number,
    /// Its standard uncertainty, degrees.
    #[schema(value_type = f64)]
    pub standard_uncertainty: Number,
    /// Where it comes from.
    pub source: &'static str,
    /// What it rests on: `published`, `from memory`, `estimate`, `derived` or `given`.
    #[schema(example = "from memory")]
    pub basis: &'static str,
}

impl From<&AngleEstimate> for AngleAnswer {
    fn from(estimate: &AngleEstimate) -> Self {
        Self {
            value: Number(estimate.angle / DEGREE),
            standard_uncertainty: Number(estimate.standard_uncertainty / DEGREE),
            source: estimate.source,
            basis: estimate.basis.as_str(),
        }
    }
}
