//! Cautions: where the liquid can hurt someone. They inform; they never replace local codes or licensed practice.

use super::{notice::Notice, spec::LiquidSpec};
use crate::physics::liquid::{Hazard, Properties};

/// From this temperature a splash can scald: water at 49 °C burns an adult's skin in about five minutes, at 60 °C in about five seconds (Moritz & Henriques 1947, from memory); 45 °C keeps
/// a margin for children (own judgement).
const SCALD_FROM_C: f64 = 45.0;

/// From this viscosity on a film on the floor is slippery whatever the liquid, Pa·s (own judgement).
const SLIPPERY_FROM: f64 = 0.03;

/// A caution with what it defers to.
macro_rules! deferring {
    ($what:literal) => {
        concat!($what, " Follow the supplier's safety data sheet, local codes and licensed practice; this answer replaces none of them.")
    };
}

/// The cautions for pouring `liquid`, whose properties are `properties`.
#[must_use]
pub fn cautions(liquid: &LiquidSpec, properties: &Properties) -> Vec<Notice> {
    let mut found = vec![Notice::new(
        "general",
        "A computed estimate for design. Confirm by pouring tests before release, and defer to local codes and licensed practice.",
    )];
    match liquid {
        LiquidSpec::Catalogue { entry, conditions, .. } => {
            if conditions.temperature_c >= SCALD_FROM_C {
                found.push(notice(Hazard::Scald, "/liquid/catalogue/temperature_c"));
            }
            found.extend(entry.hazards_at(conditions).map(|hazard| notice(hazard, "/liquid/catalogue/id")));
            let slippery = properties.viscosity.value >= SLIPPERY_FROM;
            if slippery && !found.iter().any(|n| n.code == Hazard::Slippery.code()) {
                found.push(notice(Hazard::Slippery, "/liquid/catalogue/id"));
            }
        }
        LiquidSpec::Measured { .. } => {
            found.push(Notice::at(
                "unknown_liquid",
                "/liquid/measured",
                deferring!("The service does not know what this liquid is: heat, fire, corrosion, poison and food contact are for you to judge."),
            ));
            if properties.viscosity.value >= SLIPPERY_FROM {
                found.push(notice(Hazard::Slippery, "/liquid/measured/viscosity_mpa_s"));
            }
        }
    }
    if !found.iter().any(|n| n.code == Hazard::Slippery.code()) {
        found.push(Notice::new(
            Hazard::Slippery.code(),
            "What dribbles ends on a floor: any spill can make it slippery.",
        ));
    }
    found
}

/// The caution for a hazard.
#[must_use]
pub fn notice(hazard: Hazard, pointer: &'static str) -> Notice {
    let what = match hazard {
        Hazard::Scald => deferring!("Hot enough to scald: a dribble runs towards the hand that pours."),
        Hazard::Flammable => deferring!(
            "Gives off vapour that can be ignited: keep away from flames, sparks and static charge."
        ),
        Hazard::Combustible => deferring!("Burns once well heated: keep away from flames and hot surfaces."),
        Hazard::Corrosive => {
            deferring!("Attacks skin, eyes or materials: a dribble must not reach the hand.")
        }
        Hazard::Irritant => deferring!("Irritates eyes or skin."),
        Hazard::Toxic => {
            deferring!("Poisonous when swallowed: keep it out of food and drink, and mark the vessel.")
        }
        Hazard::Slippery => deferring!("A spill of this liquid makes the floor slippery."),
        Hazard::FoodContact => {
            deferring!("Food: the lip's material and finish must be cleared for contact with food.")
        }
    };
    Notice::at(hazard.code(), pointer, what)
}
