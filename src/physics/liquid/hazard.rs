//! Hazards of the liquids themselves.

use super::condition::{Component, Conditions};

/// A hazard to warn of. Defer to local codes and the supplier's safety data sheet.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Hazard {
    /// Hot enough to scald or burn. No entry names it: it follows from the temperature.
    Scald,
    /// Gives off vapour that can be ignited.
    Flammable,
    /// Burns once well heated, though it does not ignite at room temperature.
    Combustible,
    /// Attacks skin, eyes or materials.
    Corrosive,
    /// Irritates eyes or skin.
    Irritant,
    /// Poisonous when swallowed.
    Toxic,
    /// A spill makes the floor slippery.
    Slippery,
    /// Food: rules for materials in contact with food apply to the lip.
    FoodContact,
}

impl Hazard {
    /// The stable word for this hazard.
    #[must_use]
    pub const fn code(self) -> &'static str {
        match self {
            Self::Scald => "scald",
            Self::Flammable => "flammable",
            Self::Combustible => "combustible",
            Self::Corrosive => "corrosive",
            Self::Irritant => "irritant",
            Self::Toxic => "toxic",
            Self::Slippery => "slip",
            Self::FoodContact => "food_contact",
        }
    }
}

/// Flash point (closed cup) of an entry.
#[derive(Debug, Clone, Copy)]
pub(super) enum FlashPoint {
    /// It has none, or none is known.
    None,
    /// One temperature, °C.
    At(f64),
    /// Depends on the mass fraction; `None` where the mixture has none below boiling.
    Mixture(fn(f64) -> Option<f64>),
}

impl FlashPoint {
    /// Flash point at these conditions, °C. `None` also when the mass fraction is not given.
    pub fn at(self, conditions: &Conditions) -> Option<f64> {
        match self {
            Self::None => None,
            Self::At(t) => Some(t),
            Self::Mixture(f) => conditions.get(Component::MassFraction).and_then(f),
        }
    }
}

/// Flash point up to which a liquid counts as flammable however cold it is, °C
/// (upper limit of category 3 in the Globally Harmonized System, chapter 2.6).
pub(super) const FLAMMABLE_UP_TO_C: f64 = 60.0;
