//! The liquids that the service knows by name.

use super::condition::{Component, Parameter};
use super::entry::{Entry, Wetting};
use super::hazard::{FlashPoint, Hazard};
use super::{
    beverage, brine, ethanol, glycerol, glycol, honey, milk, mineral_oil, organic, sea_water, sucrose,
    surfactant, vegetable_oil, water,
};
use crate::physics::quantity::{FAT, KINEMATIC_VISCOSITY_40, KINEMATIC_VISCOSITY_100, SALINITY};

/// Every liquid of the catalogue, in the order in which it is shown.
#[must_use]
pub fn catalogue() -> &'static [Entry] {
    CATALOGUE
}

/// The liquid with this identifier.
#[must_use]
pub fn find(id: &str) -> Option<&'static Entry> {
    CATALOGUE.iter().find(|entry| entry.id == id)
}

const fn mass_fraction(maximum: f64, typical: f64) -> Parameter {
    Parameter { component: Component::MassFraction, minimum: 0.0, maximum, typical }
}

/// Dispersive share of water's surface tension, 21.8 of 72.8 mN/m (Owens & Wendt 1969; Fowkes).
/// Salt changes it little (own judgement).
const WATERY: Wetting = Wetting { dispersive_fraction: Some(21.8 / 72.8), leaves_film: false };
/// No known split, no film left.
const UNSPLIT: Wetting = Wetting { dispersive_fraction: None, leaves_film: false };
/// No known split, and it leaves a film of what it carries.
const FILMING: Wetting = Wetting { dispersive_fraction: None, leaves_film: true };
/// Vegetable oil: nearly dispersive, 32 of 33 mN/m (own judgement; polar ester groups lie inside).
const OILY: Wetting = Wetting { dispersive_fraction: Some(0.97), leaves_film: true };

/// What most entries start from.
const fn entry(id: &'static str, name: &'static str, family: &'static str) -> Entry {
    Entry {
        id,
        name,
        family,
        parameters: &[],
        wetting: UNSPLIT,
        hazards: &[],
        note: "",
        flash_point: FlashPoint::None,
        region: water::region,
        evaluate: water::evaluate,
    }
}

const BEVERAGE_NOTE: &str = "Varies from batch to batch: a starting value; measure yours.";
const FOOD: &[Hazard] = &[Hazard::FoodContact];
const FOOD_OIL: &[Hazard] = &[Hazard::FoodContact, Hazard::Slippery, Hazard::Combustible];
/// Smoke and flash points of vegetable oils lie at about 230 and 315 °C (from memory).
const VEGETABLE_FLASH: FlashPoint = FlashPoint::At(315.0);
const OIL_NOTE: &str = "Fresh, unheated oil; used frying oil is thicker.";

static CATALOGUE: &[Entry] = &[
    Entry {
        wetting: WATERY,
        note: "Pure water. Hard or dirty water wets better than its surface tension suggests.",
        ..entry("water", "Water", "water")
    },
    Entry {
        parameters: &[Parameter {
            component: Component::Salinity,
            minimum: SALINITY.minimum,
            maximum: SALINITY.maximum,
            typical: 35.0,
        }],
        wetting: WATERY,
        region: sea_water::region,
        evaluate: sea_water::evaluate,
        ..entry("sea-water", "Sea water", "salt solutions")
    },
    Entry {
        parameters: &[mass_fraction(brine::SOLUBLE_TO, 0.10)],
        wetting: WATERY,
        region: brine::region,
        evaluate: brine::evaluate,
        ..entry("sodium-chloride-solution", "Sodium chloride solution (brine)", "salt solutions")
    },
    Entry {
        parameters: &[mass_fraction(sucrose::LARGEST, 0.30)],
        hazards: FOOD,
        note: "Surface tension is that of pure sugar; impurities lower it by up to 10 %. No supersaturated syrup.",
        region: sucrose::region,
        evaluate: sucrose::evaluate,
        ..entry("sucrose-solution", "Sucrose solution (sugar syrup)", "sugars")
    },
    Entry {
        hazards: FOOD,
        note: "16 % moisture, not crystallised. Viscosity depends steeply on moisture and temperature.",
        wetting: FILMING,
        region: honey::region,
        evaluate: honey::evaluate,
        ..entry("honey", "Honey", "sugars")
    },
    Entry {
        parameters: &[mass_fraction(1.0, 0.50)],
        hazards: &[Hazard::Slippery],
        note: "Takes up water from the air: 1 % of water thins pure glycerol by a fifth. \
               Strong mixtures are taken as supercooled below their melting point.",
        flash_point: FlashPoint::Mixture(|w| (w >= 1.0).then_some(glycerol::FLASH_POINT_C)),
        region: glycerol::region,
        evaluate: glycerol::evaluate,
        ..entry("glycerol-solution", "Glycerol and water", "alcohols and glycols")
    },
    Entry {
        parameters: &[mass_fraction(1.0, 0.40)],
        hazards: &[Hazard::Flammable, Hazard::Irritant],
        wetting: FILMING,
        note: "Alcohol evaporates first from a film and draws liquid up the wall.",
        flash_point: FlashPoint::Mixture(ethanol::flash_point_c),
        region: ethanol::region,
        evaluate: ethanol::evaluate,
        ..entry("ethanol-solution", "Ethanol and water", "alcohols and glycols")
    },
    Entry {
        parameters: &[mass_fraction(glycol::STRONGEST, 0.30)],
        hazards: &[Hazard::Toxic, Hazard::Slippery],
        note: "Without inhibitors. Up to a mass fraction of 0.6; pure ethylene glycol is an entry of its own.",
        region: glycol::ethylene_region,
        evaluate: glycol::ethylene,
        ..entry("ethylene-glycol-solution", "Ethylene glycol and water", "alcohols and glycols")
    },
    Entry {
        hazards: &[Hazard::Toxic, Hazard::Slippery, Hazard::Flammable],
        // 29.3 of 48.0 mN/m at 20 °C (from memory).
        wetting: Wetting { dispersive_fraction: Some(0.61), leaves_film: false },
        // From memory.
        flash_point: FlashPoint::At(111.0),
        region: organic::ethylene_glycol_region,
        evaluate: organic::ethylene_glycol,
        ..entry("ethylene-glycol", "Ethylene glycol, pure", "alcohols and glycols")
    },
    Entry {
        parameters: &[mass_fraction(glycol::STRONGEST, 0.30)],
        hazards: &[Hazard::Slippery],
        note: "Without inhibitors. Up to a mass fraction of 0.6.",
        region: glycol::propylene_region,
        evaluate: glycol::propylene,
        ..entry("propylene-glycol-solution", "Propylene glycol and water", "alcohols and glycols")
    },
    Entry {
        hazards: &[Hazard::Flammable, Hazard::Irritant],
        wetting: FILMING,
        // From memory, as is acetone's below.
        flash_point: FlashPoint::At(12.0),
        region: organic::isopropanol_region,
        evaluate: organic::isopropanol,
        ..entry("isopropanol", "Isopropanol", "alcohols and glycols")
    },
    Entry {
        hazards: &[Hazard::Flammable, Hazard::Irritant],
        flash_point: FlashPoint::At(-18.0),
        region: organic::acetone_region,
        evaluate: organic::acetone,
        ..entry("acetone", "Acetone", "solvents")
    },
    Entry {
        parameters: &[Parameter {
            component: Component::FatPercent,
            minimum: FAT.minimum,
            maximum: FAT.maximum,
            typical: 3.5,
        }],
        hazards: FOOD,
        wetting: FILMING,
        note: "Homogenised milk, and cream by its fat; no thickener, not cultured, not whipped.",
        region: milk::region,
        evaluate: milk::evaluate,
        ..entry("milk", "Milk or cream", "dairy")
    },
    Entry {
        hazards: FOOD_OIL,
        wetting: OILY,
        note: OIL_NOTE,
        flash_point: VEGETABLE_FLASH,
        region: vegetable_oil::olive_region,
        evaluate: vegetable_oil::olive,
        ..entry("olive-oil", "Olive oil", "oils")
    },
    Entry {
        hazards: FOOD_OIL,
        wetting: OILY,
        note: OIL_NOTE,
        flash_point: VEGETABLE_FLASH,
        region: vegetable_oil::sunflower_region,
        evaluate: vegetable_oil::sunflower,
        ..entry("sunflower-oil", "Sunflower oil", "oils")
    },
    Entry {
        hazards: FOOD_OIL,
        wetting: OILY,
        note: OIL_NOTE,
        flash_point: VEGETABLE_FLASH,
        region: vegetable_oil::rapeseed_region,
        evaluate: vegetable_oil::rapeseed,
        ..entry("rapeseed-oil", "Rapeseed oil", "oils")
    },
    Entry {
        parameters: &[
            Parameter {
                component: Component::Viscosity40,
                minimum: KINEMATIC_VISCOSITY_40.minimum,
                maximum: KINEMATIC_VISCOSITY_40.maximum,
                typical: 32.0,
            },
            Parameter {
                component: Component::Viscosity100,
                minimum: KINEMATIC_VISCOSITY_100.minimum,
                maximum: KINEMATIC_VISCOSITY_100.maximum,
                typical: 5.4,
            },
            Parameter {
                component: Component::Density15,
                minimum: mineral_oil::DENSITY_15.0,
                maximum: mineral_oil::DENSITY_15.1,
                typical: 870.0,
            },
        ],
        hazards: &[Hazard::Slippery, Hazard::Combustible],
        // Saturated hydrocarbons have dispersive forces only (Fowkes 1964).
        wetting: Wetting { dispersive_fraction: Some(1.0), leaves_film: true },
        note: "By the three numbers on the grade's data sheet. Below its pour point it does not pour at all.",
        region: mineral_oil::region,
        evaluate: mineral_oil::evaluate,
        ..entry("mineral-oil", "Mineral oil", "oils")
    },
    Entry {
        hazards: FOOD,
        wetting: FILMING,
        note: BEVERAGE_NOTE,
        region: beverage::coffee_region,
        evaluate: beverage::coffee,
        ..entry("coffee", "Coffee, black", "beverages")
    },
    Entry {
        hazards: FOOD,
        wetting: FILMING,
        note: BEVERAGE_NOTE,
        region: beverage::tea_region,
        evaluate: beverage::tea,
        ..entry("tea", "Tea, black", "beverages")
    },
    Entry {
        hazards: FOOD,
        wetting: FILMING,
        note: BEVERAGE_NOTE,
        region: beverage::wort_region,
        evaluate: beverage::wort,
        ..entry("wort", "Wort, 12 % extract", "beverages")
    },
    Entry {
        hazards: FOOD,
        wetting: FILMING,
        note: BEVERAGE_NOTE,
        region: beverage::juice_region,
        evaluate: beverage::juice,
        ..entry("juice", "Fruit juice, 11 % solids", "beverages")
    },
    Entry {
        hazards: &[Hazard::FoodContact, Hazard::Irritant, Hazard::Corrosive],
        note: BEVERAGE_NOTE,
        region: beverage::vinegar_region,
        evaluate: beverage::vinegar,
        ..entry("vinegar", "Vinegar, 5 % acid", "beverages")
    },
    Entry {
        hazards: &[Hazard::Slippery],
        wetting: FILMING,
        note: "Surface tension falls as a surface ages: a fast stream is nearer to water than this.",
        region: surfactant::solution_region,
        evaluate: surfactant::solution,
        ..entry("washing-up-solution", "Washing-up water", "surfactants")
    },
    Entry {
        hazards: &[Hazard::Slippery, Hazard::Irritant],
        wetting: FILMING,
        note: "As sold; viscosity differs tenfold between makes, and many thin under shear. Measure yours.",
        region: surfactant::concentrate_region,
        evaluate: surfactant::concentrate,
        ..entry("washing-up-liquid", "Washing-up liquid, undiluted", "surfactants")
    },
];

#[cfg(test)]
mod tests {
    use super::{catalogue, find};
    use crate::physics::liquid::condition::{Component, Conditions};
    use crate::physics::liquid::{ConditionFault, Hazard};

    #[test]
    fn identifiers_are_kebab_case_and_unique() {
        assert!(catalogue().len() >= 20);
        for (index, entry) in catalogue().iter().enumerate() {
            assert!(entry.id.bytes().all(|b| b.is_ascii_lowercase() || b == b'-'), "{}", entry.id);
            assert!(catalogue()[..index].iter().all(|other| other.id != entry.id), "{}", entry.id);
            assert!(find(entry.id).is_some_and(|found| found.name == entry.name));
        }
        assert!(find("Water").is_none() && find("").is_none());
    }

    #[test]
    fn typical_conditions_are_accepted_and_parameters_lie_within_their_quantity() {
        for entry in catalogue() {
            let mut at = Conditions::at(20.0);
            for p in entry.parameters {
                let quantity = p.component.quantity();
                assert!(quantity.accepts(p.minimum) && quantity.accepts(p.maximum), "{}", entry.id);
                assert!(p.minimum <= p.typical && p.typical <= p.maximum, "{}", entry.id);
                at.set(p.component, p.typical);
            }
            assert!(entry.properties(&at).is_ok(), "{}: {:?}", entry.id, entry.properties(&at));
        }
    }

    #[test]
    fn all_faults_come_at_once() {
        let sugar = find("sucrose-solution").unwrap();
        let at = Conditions::at(f64::NAN).with(Component::MassFraction, 1.5).with(Component::Salinity, 3.0);
        let faults = sugar.properties(&at).unwrap_err();
        assert_eq!(faults.len(), 3, "{faults:?}");
        let missing = sugar.properties(&Conditions::at(20.0)).unwrap_err();
        assert_eq!(missing, [ConditionFault::Missing { component: Component::MassFraction }]);
        let hot = sugar.properties(&Conditions::at(-30.0).with(Component::MassFraction, 0.7)).unwrap_err();
        assert_eq!(hot.len(), 2, "freezes and does not dissolve: {hot:?}");
    }

    #[test]
    fn refuses_what_is_not_a_liquid_and_says_so() {
        let text = |id: &str, at: Conditions| {
            let faults = find(id).unwrap().properties(&at).unwrap_err();
            faults.iter().map(ToString::to_string).collect::<Vec<_>>().join("; ")
        };
        let w = |t, w| Conditions::at(t).with(Component::MassFraction, w);
        assert_eq!(text("water", Conditions::at(-5.0)), "it begins to freeze at 0.0 °C");
        assert_eq!(text("acetone", Conditions::at(60.0)), "it boils at 56.1 °C");
        assert!(
            text("sucrose-solution", w(20.0, 0.75)).contains("no more than 0.667 dissolves (mass_fraction)")
        );
        assert!(text("ethanol-solution", w(-25.0, 0.2)).contains("freeze at -11.1 °C"));
        let oil = Conditions::at(20.0)
            .with(Component::Viscosity40, 10.0)
            .with(Component::Viscosity100, 10.0)
            .with(Component::Density15, 870.0);
        assert!(text("mineral-oil", oil).contains("must exceed"));
    }

    #[test]
    fn ethanol_is_flammable_when_strong_or_hot_enough() {
        let flammable = |t, w| {
            let at = Conditions::at(t).with(Component::MassFraction, w);
            find("ethanol-solution").unwrap().hazards_at(&at).any(|h| h == Hazard::Flammable)
        };
        assert!(flammable(5.0, 0.4) && flammable(80.0, 0.05));
        assert!(!flammable(20.0, 0.05) && !flammable(20.0, 0.03));
    }
}
