//! Why an angle cannot be given.

use super::{State, States};

/// Why a contact angle, or a surface energy, cannot be given.
#[derive(Debug, Clone, Copy, PartialEq, thiserror::Error)]
pub enum SurfaceFault {
    /// The catalogue has no values for this material in this state.
    #[error("{material} has no values in the state {}; known: {known}", .state.as_str())]
    StateUnknown {
        /// Identifier of the material.
        material: &'static str,
        /// State that was asked for.
        state: State,
        /// States that have values.
        known: States,
    },
    /// Surface tension not positive and finite, or dispersive fraction outside 0 to 1.
    #[error("surface tension must be positive and the dispersive fraction between 0 and 1")]
    UnphysicalLiquid,
    /// A surface energy (or a component, or an interfacial energy) is negative or not finite.
    #[error("surface energies must be zero or positive")]
    UnphysicalEnergy,
    /// Angle not between 0 and π.
    #[error("{angle} rad is not an angle between 0 and π")]
    NotAnAngle {
        /// The offending value, rad.
        angle: f64,
    },
    /// A standard uncertainty is negative or not finite.
    #[error("a standard uncertainty must be zero or positive")]
    UnphysicalUncertainty,
    /// None of contact, advancing and receding angle was given.
    #[error("at least one of contact, advancing and receding angle is needed")]
    NoAngleGiven,
    /// The advancing angle given is smaller than the contact angle given.
    #[error("the advancing angle is smaller than the contact angle")]
    AdvancingBelowContact,
    /// The receding angle given is larger than the contact angle given.
    #[error("the receding angle is larger than the contact angle")]
    RecedingAboveContact,
    /// The receding angle given is larger than the advancing angle given.
    #[error("the receding angle is larger than the advancing angle")]
    RecedingAboveAdvancing,
    /// Young: γ_SL exceeds γ_SV by more than γ; no drop touches such a face.
    #[error(
        "the interfacial energies leave no contact: solid-liquid exceeds solid-vapour by more than the surface tension"
    )]
    NoContact,
    /// Wenzel's ratio below 1, or not finite.
    #[error("the roughness ratio must be 1 or more")]
    UnphysicalRoughness,
    /// Cassie–Baxter's fraction outside 0 (excluded) to 1.
    #[error("the solid fraction must be above 0 and at most 1")]
    UnphysicalSolidFraction,
    /// Wenzel's r·cos θ < −1: the liquid does not fill the roughness, it stands on its tips.
    #[error(
        "roughness {roughness_ratio} is beyond Wenzel's equation on this face: the liquid would stand on the tips"
    )]
    BeyondWenzel {
        /// Roughness ratio.
        roughness_ratio: f64,
    },
    /// Cassie–Baxter on a face with θ ≤ 90°: the liquid soaks into the texture instead of standing on its tips.
    #[error(
        "the smooth face must have a contact angle above 90° for liquid to stand on the tips of a texture"
    )]
    CompositeUnstable,
    /// Too few probe liquids for the components asked for.
    #[error("{given} probe angles given, {needed} needed")]
    TooFewProbes {
        /// Angles given.
        given: usize,
        /// Angles needed.
        needed: usize,
    },
    /// The probe liquids are too much alike to tell the components apart.
    #[error("the probe liquids are too much alike to tell the components apart")]
    ProbesTooAlike,
    /// The square root of a component comes out negative: the angles contradict the model.
    #[error(
        "the square root of the {component} component comes out negative: these angles contradict the model"
    )]
    NegativeRoot {
        /// Component whose root is negative.
        component: &'static str,
    },
    /// No surface energy gives this angle.
    #[error("no surface energy gives this angle with this liquid")]
    NoSuchEnergy,
}
