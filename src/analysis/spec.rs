//! A question in the caller's units, with catalogue entries already found.

use super::{calibration::Calibration, field::Field};
use crate::physics::{
    liquid::{Conditions, Entry},
    separation::closed_form::CoefficientSet,
    surface::{Material, State},
};

/// One question: lip, surface, liquid, pour, and what the caller knows of their uncertainty. Numbers are in the caller's units, within the ranges of
/// [`crate::physics::quantity`].
#[derive(Debug, Clone, Copy)]
pub struct Spec {
    /// Cross-section of the lip.
    pub section: SectionSpec,
    /// Edge radius, mm.
    pub radius_mm: f64,
    /// Turn of the edge, degrees.
    pub turn_deg: f64,
    /// Slope of the floor, degrees.
    pub slope_deg: f64,
    /// Length of the floor, mm.
    pub length_mm: f64,
    /// What the lip is made of.
    pub surface: SurfaceSpec,
    /// What is poured.
    pub liquid: LiquidSpec,
    /// Pour rate, mL/s.
    pub flow_ml_s: f64,
    /// Whether the outer face is dry or wet.
    pub outer_face: OuterFace,
    /// Confidence of the verdict.
    pub confidence: f64,
    /// Standard uncertainties that the caller gives, in the field's unit.
    pub uncertainty: Uncertainties,
    /// Coefficients of the closed form.
    pub coefficients: &'static CoefficientSet,
    /// What bench pours have taught of them, if anything.
    pub calibration: Option<Calibration>,
}

/// Cross-section of the lip.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum SectionSpec {
    /// Wide straight lip.
    Sheet {
        /// Width, mm.
        width_mm: f64,
    },
    /// Pinched lip.
    Vee {
        /// Included angle, degrees.
        included_angle_deg: f64,
    },
    /// Open half-round channel.
    Trough {
        /// Diameter, mm.
        diameter_mm: f64,
    },
    /// Closed round spout.
    Tube {
        /// Bore, mm.
        bore_mm: f64,
    },
}

/// What the lip is made of.
#[derive(Debug, Clone, Copy)]
pub enum SurfaceSpec {
    /// A material of the catalogue in one of its states.
    Catalogue {
        /// The material.
        material: &'static Material,
        /// Its state.
        state: State,
    },
    /// Angles measured with this liquid; at least one is given.
    Measured {
        /// Static contact angle, degrees.
        contact_angle_deg: Option<f64>,
        /// Advancing angle, degrees.
        advancing_deg: Option<f64>,
        /// Receding angle, degrees.
        receding_deg: Option<f64>,
    },
    /// Estimated from surface energy.
    Estimated {
        /// Dispersive component, mN/m.
        dispersive_mn_m: f64,
        /// Polar component, mN/m.
        polar_mn_m: f64,
        /// Ratio of true to projected area.
        roughness_ratio: f64,
    },
}

/// What is poured.
#[derive(Debug, Clone, Copy)]
pub enum LiquidSpec {
    /// A liquid of the catalogue at these conditions, single properties overridden.
    Catalogue {
        /// The liquid.
        entry: &'static Entry,
        /// Temperature and composition.
        conditions: Conditions,
        /// Properties that the caller knows better.
        overrides: Overrides,
    },
    /// A liquid known by its measured properties.
    Measured {
        /// Density, kg/m³.
        density_kg_m3: f64,
        /// Dynamic viscosity, mPa·s.
        viscosity_mpa_s: f64,
        /// Surface tension, mN/m.
        surface_tension_mn_m: f64,
    },
}

/// Properties that replace the catalogue's.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Overrides {
    /// Density, kg/m³.
    pub density_kg_m3: Option<f64>,
    /// Dynamic viscosity, mPa·s.
    pub viscosity_mpa_s: Option<f64>,
    /// Surface tension, mN/m.
    pub surface_tension_mn_m: Option<f64>,
}

/// Whether the outer face below the edge is dry or already wet.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub enum OuterFace {
    /// Dry: the advancing angle counts.
    #[default]
    Dry,
    /// Wet: the receding angle counts.
    Wet,
}

/// Standard uncertainties given by the caller, by field, in the field's unit.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Uncertainties([f64; Field::COUNT]);

impl Default for Uncertainties {
    fn default() -> Self {
        Self([f64::NAN; Field::COUNT])
    }
}

impl Uncertainties {
    /// The standard uncertainty given for this field.
    #[must_use]
    pub fn get(&self, field: Field) -> Option<f64> {
        let value = self.0[field.index()];
        (!value.is_nan()).then_some(value)
    }

    /// Sets the standard uncertainty of this field.
    pub fn set(&mut self, field: Field, value: f64) {
        self.0[field.index()] = value;
    }
}
