//! Every entry over its whole accepted region, and well beyond.

use proptest::prelude::{Strategy, any, prop, prop_assert, prop_oneof, proptest};

use super::{Component, Conditions, Entry, Properties, catalogue, find};
use crate::physics::quantity::{DENSITY, SURFACE_TENSION, VISCOSITY};

/// Steps between the smallest and largest value of a parameter, and between −60 and 270 °C.
const PARAMETER_STEPS: u32 = 12;
const TEMPERATURE_STEPS: u32 = 330;

/// Every composition on a grid over the parameters of the entry.
fn compositions(entry: &Entry) -> Vec<Conditions> {
    entry.parameters.iter().fold(vec![Conditions::default()], |so_far, p| {
        so_far
            .iter()
            .flat_map(|at| {
                (0..=PARAMETER_STEPS).map(move |k| {
                    let share = f64::from(k) / f64::from(PARAMETER_STEPS);
                    // Viscosities span decades: step evenly in their logarithm.
                    let value = if matches!(p.component, Component::Viscosity40 | Component::Viscosity100) {
                        p.minimum * libm::pow(p.maximum / p.minimum, share)
                    } else {
                        p.minimum + (p.maximum - p.minimum) * share
                    };
                    at.with(p.component, value.clamp(p.minimum, p.maximum))
                })
            })
            .collect()
    })
}

fn sound(properties: &Properties) -> bool {
    [
        (DENSITY, properties.density),
        (VISCOSITY, properties.viscosity),
        (SURFACE_TENSION, properties.surface_tension),
    ]
    .iter()
    .all(|(quantity, p)| {
        p.value.is_finite()
            && p.value > 0.0
            && quantity.accepts(p.value / quantity.to_si)
            && p.standard_uncertainty.is_finite()
            && p.standard_uncertainty > 0.0
            && !p.source.is_empty()
            && !p.range.is_empty()
    })
}

#[test]
fn what_is_accepted_is_sound_and_thins_when_heated() {
    for entry in catalogue() {
        let mut accepted = 0;
        for composition in compositions(entry) {
            let mut previous: Option<Properties> = None;
            for k in 0..=TEMPERATURE_STEPS {
                let at = Conditions { temperature_c: f64::from(k) - 60.0, ..composition };
                let Ok(properties) = entry.properties(&at) else {
                    continue;
                };
                accepted += 1;
                assert!(sound(&properties), "{}: {at:?} {properties:?}", entry.id);
                let (low, high) = entry.temperatures_c(&at).unwrap();
                assert!(low <= at.temperature_c && at.temperature_c <= high, "{}: {at:?}", entry.id);
                if let Some(previous) = previous {
                    let (cold, warm) = (previous.liquid(), properties.liquid());
                    assert!(warm.viscosity < cold.viscosity, "{}: {at:?} {cold:?} {warm:?}", entry.id);
                    // Water is densest at 4 °C; nothing gains more than that when heated by 1 K.
                    assert!(warm.density < cold.density * 1.0001, "{}: {at:?} {cold:?} {warm:?}", entry.id);
                }
                previous = Some(properties);
            }
        }
        assert!(accepted > 30, "{}: {accepted}", entry.id);
    }
}

#[test]
fn uncertainty_is_never_less_than_stated_within_range() {
    for entry in catalogue() {
        for composition in compositions(entry) {
            for k in 0..=TEMPERATURE_STEPS {
                let at = Conditions { temperature_c: f64::from(k) - 60.0, ..composition };
                if let Ok(p) = entry.properties(&at) {
                    for p in [p.density, p.viscosity, p.surface_tension] {
                        assert!(p.standard_uncertainty >= 0.9999e-5 * p.value, "{}: {at:?} {p:?}", entry.id);
                        assert!(p.standard_uncertainty <= 10.0 * p.value, "{}: {at:?} {p:?}", entry.id);
                    }
                }
            }
        }
    }
}

/// Relative change of viscosity per kelvin at 20 °C.
fn sensitivity(id: &str, mass_fraction: Option<f64>) -> f64 {
    let ln_viscosity = |temperature_c| {
        let at = Conditions { temperature_c, mass_fraction, ..Conditions::default() };
        libm::log(find(id).unwrap().properties(&at).unwrap().viscosity.value)
    };
    (ln_viscosity(20.5) - ln_viscosity(19.5)) * 100.0
}

#[test]
fn viscosity_changes_per_kelvin_as_the_design_says() {
    for (id, w, percent, rounding) in [
        // The true slope is −2.4497 %: the design's figure is rounded twice, 0.0003 too far.
        ("water", None, -2.5, 0.0504),
        ("olive-oil", None, -4.6, 0.05),
        ("sucrose-solution", Some(0.6), -6.2, 0.05),
        ("glycerol-solution", Some(1.0), -9.2, 0.05),
        ("honey", None, -14.0, 0.5),
    ] {
        let found = sensitivity(id, w);
        assert!((found - percent).abs() <= rounding, "{id}: {found}");
    }
}

/// A number as a hostile caller might send it.
fn number() -> impl Strategy<Value = f64> {
    prop_oneof![
        any::<f64>(),
        -60.0..300.0_f64,
        0.0..1.0_f64,
        prop::sample::select(vec![f64::NAN, f64::INFINITY, f64::NEG_INFINITY, 0.0, -0.0, 1.0, 1e308, -1e308]),
    ]
}

proptest! {
    #[test]
    fn anything_gives_sound_properties_or_faults(
        temperature_c in number(),
        given in prop::array::uniform6(prop::option::of(number())),
    ) {
        let mut at = Conditions::at(temperature_c);
        for (component, value) in Component::ALL.into_iter().zip(given) {
            if let Some(value) = value {
                at.set(component, value);
            }
        }
        for entry in catalogue() {
            // As given, and without what this liquid does not take.
            let mut own = Conditions::at(temperature_c);
            for p in entry.parameters {
                own.set(p.component, at.get(p.component).unwrap_or(p.typical));
            }
            for at in [at, own] {
                match entry.properties(&at) {
                    Ok(properties) => prop_assert!(sound(&properties), "{}: {at:?} {properties:?}", entry.id),
                    Err(faults) => prop_assert!(!faults.is_empty() && faults.iter().all(|f| !f.to_string().is_empty())),
                }
                prop_assert!(entry.hazards_at(&at).count() <= entry.hazards.len());
            }
        }
    }
}
