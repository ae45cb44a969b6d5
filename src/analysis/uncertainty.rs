//! Standard uncertainties of given numbers where the caller gives none.

use super::{field::Field, spec::Spec};

/// Standard uncertainty of `value` (both in the field's unit): the caller's, else what a drawing, a bench or a kitchen thermometer ordinarily
/// gives (own judgement; documented per field in the contract).
#[must_use]
pub fn standard_uncertainty(spec: &Spec, field: Field, value: f64) -> f64 {
    spec.uncertainty.get(field).unwrap_or_else(|| {
        let rule = default_rule(field);
        (rule.relative * value).abs().max(rule.at_least)
    })
}

/// A default: so much of the value, and at least so much.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct DefaultRule {
    /// Share of the value.
    pub relative: f64,
    /// Smallest standard uncertainty, in the field's unit.
    pub at_least: f64,
}

/// The default rule of this field.
#[must_use]
pub const fn default_rule(field: Field) -> DefaultRule {
    let (relative, at_least) = match field {
        Field::SheetWidth | Field::TroughDiameter | Field::TubeBore => (0.01, 0.0),
        Field::EdgeRadius => (0.05, 0.01),
        Field::VeeAngle | Field::Turn => (0.0, 1.0),
        Field::Slope => (0.0, 0.5),
        Field::RunLength => (0.02, 0.0),
        Field::MeasuredContact | Field::MeasuredAdvancing | Field::MeasuredReceding => (0.0, 3.0),
        Field::Dispersive | Field::Polar => (0.05, 0.5),
        Field::Roughness => (0.05, 0.0),
        Field::Temperature => (0.0, 1.0),
        Field::MassFraction | Field::Salinity => (0.01, 0.0),
        Field::Fat => (0.02, 0.0),
        Field::Viscosity40 | Field::Viscosity100 => (0.02, 0.0),
        Field::Density15 => (0.001, 0.0),
        Field::DensityOverride | Field::MeasuredDensity => (0.001, 0.0),
        Field::ViscosityOverride | Field::MeasuredViscosity => (0.02, 0.0),
        Field::SurfaceTensionOverride | Field::MeasuredSurfaceTension => (0.01, 0.0),
        Field::Flow => (0.03, 0.0),
    };
    DefaultRule { relative, at_least }
}
