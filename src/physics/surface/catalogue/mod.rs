//! The catalogue of lip materials: angles that water makes at 20 to 25 °C, through the liquid, in degrees.
//!
//! Bands low..high are judged, not measured, unless a source is named; they are read as ± 2 standard uncertainties. For liquids with protein,
//! fat, surfactant or alcohol measured angles are to be preferred.

mod coating;
mod glass;
mod metal;
mod polymer;

use super::{AngleBand, Material, SurfaceEnergy};
use crate::physics::Basis;

const COUNT: usize =
    glass::MATERIALS.len() + metal::MATERIALS.len() + polymer::MATERIALS.len() + coating::MATERIALS.len();

static CATALOGUE: [Material; COUNT] = {
    let families: [&[Material]; 4] =
        [&glass::MATERIALS, &metal::MATERIALS, &polymer::MATERIALS, &coating::MATERIALS];
    let mut all = [glass::MATERIALS[0]; COUNT];
    let (mut at, mut family) = (0, 0);
    while family < families.len() {
        let mut i = 0;
        while i < families[family].len() {
            all[at] = families[family][i];
            (at, i) = (at + 1, i + 1);
        }
        family += 1;
    }
    all
};

/// All lip materials.
#[must_use]
pub fn catalogue() -> &'static [Material] {
    &CATALOGUE
}

/// The lip material with this identifier.
#[must_use]
pub fn find(id: &str) -> Option<&'static Material> {
    CATALOGUE.iter().find(|m| m.id == id)
}

const fn published(typical_deg: f64, low_deg: f64, high_deg: f64, source: &'static str) -> AngleBand {
    AngleBand { typical_deg, low_deg, high_deg, source, basis: Basis::Published }
}

const fn recalled(typical_deg: f64, low_deg: f64, high_deg: f64) -> AngleBand {
    AngleBand { typical_deg, low_deg, high_deg, source: "from memory", basis: Basis::FromMemory }
}

const fn estimated(typical_deg: f64, low_deg: f64, high_deg: f64, source: &'static str) -> AngleBand {
    AngleBand { typical_deg, low_deg, high_deg, source, basis: Basis::Estimate }
}

/// Components in mN/m.
const fn energy(dispersive: f64, polar: f64, source: &'static str) -> Option<SurfaceEnergy> {
    Some(SurfaceEnergy { dispersive: dispersive * 1e-3, polar: polar * 1e-3, source })
}

/// Fills in the material's own surface energy: the everyday state's, or the clean one's where only that is known.
const fn with_energy(mut material: Material) -> Material {
    material.surface_energy = match (material.in_use, material.clean) {
        (Some(finish), _) | (None, Some(finish)) => finish.surface_energy,
        (None, None) => None,
    };
    material
}

#[cfg(test)]
mod tests {
    use super::{catalogue, find};
    use crate::physics::surface::{State, SurfaceKind};

    #[test]
    fn identifiers_are_kebab_case_and_unique() {
        for (i, material) in catalogue().iter().enumerate() {
            assert!(
                material.id.chars().all(|c| c.is_ascii_lowercase() || c.is_ascii_digit() || c == '-'),
                "{}",
                material.id
            );
            assert!(catalogue()[..i].iter().all(|other| other.id != material.id), "{}", material.id);
            assert_eq!(find(material.id), Some(material));
        }
        assert_eq!(find("unobtainium"), None);
    }

    #[test]
    fn bands_hold_their_typical_value_and_angles_are_in_order() {
        for material in catalogue() {
            assert!(material.states().iter().count() > 0, "{}", material.id);
            for state in State::ALL {
                let Some(finish) = material.state(state) else { continue };
                for band in [finish.contact, finish.advancing, finish.receding] {
                    assert!(
                        band.low_deg <= band.typical_deg && band.typical_deg <= band.high_deg,
                        "{}",
                        material.id
                    );
                    assert!(band.low_deg >= 0.0 && band.high_deg <= 180.0, "{}", material.id);
                    assert!(!band.source.is_empty());
                }
                assert!(finish.receding.typical_deg <= finish.contact.typical_deg, "{}", material.id);
                assert!(finish.contact.typical_deg <= finish.advancing.typical_deg, "{}", material.id);
                // Dense faces have an energy, the others none.
                assert_eq!(
                    finish.surface_energy.is_some(),
                    material.kind == SurfaceKind::Dense,
                    "{}",
                    material.id
                );
            }
        }
    }

    /// The energies below are what re-estimation stands on; beyond 89.5 mN/m Neumann's equation is no longer monotone in the tension.
    #[test]
    fn energies_stay_where_neumanns_equation_is_monotone() {
        for energy in catalogue().iter().flat_map(|m| [m.clean, m.in_use, m.worn]).flatten() {
            if let Some(energy) = energy.surface_energy {
                assert!(energy.total() > 0.015 && energy.total() < 0.0895);
            }
        }
    }
}
