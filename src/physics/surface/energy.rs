//! Angles from surface energies: the last resort.

use super::angle::angle_of;
use super::measured::around_contact;
use super::neumann::neumann;
use super::owens_wendt::owens_wendt;
use super::texture::accept_roughness;
use super::transfer::{FILM_SOURCE, film_left};
use super::young::{accept_energies, accept_tension};
use super::{AngleEstimate, SurfaceFault, WettingAngles, WettingLiquid};
use crate::physics::Basis;
use crate::physics::quantity::DEGREE;

/// Dispersive and polar components of a surface energy or surface tension, N/m.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Components {
    /// Dispersive component.
    pub dispersive: f64,
    /// Polar component.
    pub polar: f64,
}

impl Components {
    /// Their sum.
    #[must_use]
    pub fn total(&self) -> f64 {
        self.dispersive + self.polar
    }

    pub(super) fn accept_as_liquid(&self) -> Result<(), SurfaceFault> {
        accept_energies(&[self.dispersive, self.polar]).map_err(|_| SurfaceFault::UnphysicalLiquid)?;
        accept_tension(self.total())
    }
}

/// Standard uncertainty of an equilibrium angle from Owens & Wendt: 10° (own judgement; published splits of one polymer differ by so much).
const OWENS_WENDT_DOUBT: f64 = 10.0 * DEGREE;
/// Standard uncertainty of an equilibrium angle from Neumann's equation of state with a total energy only: 12° (own judgement).
const NEUMANN_DOUBT: f64 = 12.0 * DEGREE;
/// Additional standard uncertainty per unit of roughness ratio above 1: 10° (own judgement; the ratio itself is rarely known).
const ROUGHNESS_DOUBT: f64 = 10.0 * DEGREE;

const COMPONENTS: &str = "Owens & Wendt 1969 with Wenzel 1936, from the surface energy given";
const TOTAL: &str =
    "Neumann's equation of state (Li & Neumann 1992) with Wenzel 1936, from the total surface energy given";
const RULE: &str = "from the equilibrium angle: advancing 10 ± 8° above it, receding 20 ± 15° below it, within 0 to 180° (own judgement)";

/// The three angles from a solid's surface energy (N/m) and roughness ratio (≥ 1).
///
/// Owens & Wendt where the liquid's split is known, else Neumann on the total; then Wenzel. The result is one equilibrium angle: advancing and
/// receding angle follow by the rule of [`super::from_measured`] with its doubt added. A liquid that leaves a film recedes at 5 ± 2.5°.
///
/// # Errors
/// [`SurfaceFault::BeyondWenzel`] when r cos θ < −1: give measured angles then; energies, roughness and liquid that are not physical.
pub fn from_energy(
    dispersive: f64,
    polar: f64,
    roughness_ratio: f64,
    liquid: &WettingLiquid,
) -> Result<WettingAngles, SurfaceFault> {
    liquid.accept()?;
    accept_energies(&[dispersive, polar])?;
    accept_roughness(roughness_ratio)?;
    let solid = Components { dispersive, polar };
    let (smooth, doubt, source) = match liquid.split() {
        Some(split) => (owens_wendt(&solid, &split)?, OWENS_WENDT_DOUBT, COMPONENTS),
        None => (neumann(solid.total(), liquid.surface_tension)?, NEUMANN_DOUBT, TOTAL),
    };
    let cosine = roughness_ratio * libm::cos(smooth.angle);
    if cosine < -1.0 {
        return Err(SurfaceFault::BeyondWenzel { roughness_ratio });
    }
    let contact = AngleEstimate {
        angle: angle_of(cosine),
        standard_uncertainty: libm::hypot(doubt, ROUGHNESS_DOUBT * (roughness_ratio - 1.0)),
        source,
        basis: Basis::Estimate,
    };
    let mut angles = around_contact(&contact, RULE);
    if liquid.leaves_film {
        angles.receding = film_left(angles.receding.angle, FILM_SOURCE);
    }
    Ok(angles)
}

#[cfg(test)]
mod tests {
    use super::from_energy;
    use crate::physics::quantity::DEGREE;
    use crate::physics::surface::{SurfaceFault, WATER, WettingLiquid};
    use proptest::prelude::{any, prop_assert, proptest};

    #[test]
    fn water_on_a_polymer_and_beyond_wenzel() {
        // PMMA after Owens & Wendt: 80°.
        let angles = from_energy(0.0359, 0.0043, 1.0, &WATER).unwrap();
        assert!((angles.contact.angle - 80.0 * DEGREE).abs() < 1.0 * DEGREE);
        assert!(angles.contact.standard_uncertainty >= 10.0 * DEGREE);
        assert_eq!(
            from_energy(0.0186, 0.0005, 4.0, &WATER),
            Err(SurfaceFault::BeyondWenzel { roughness_ratio: 4.0 })
        );
        assert!(from_energy(-0.01, 0.0, 1.0, &WATER).is_err());
        // No surface energy at all: no adhesion.
        assert!(from_energy(0.0, 0.0, 1.0, &WATER).is_ok_and(|a| a.contact.angle > 179.9 * DEGREE));
    }

    proptest! {
        #[test]
        fn always_in_order(
            dispersive in 0.0..0.5f64, polar in 0.0..0.5f64, roughness in 1.0..20.0f64,
            tension in 0.005..0.2f64, fraction in 0.0..=1.0f64, known: bool, leaves_film in any::<bool>(),
        ) {
            let liquid = WettingLiquid {
                surface_tension: tension,
                dispersive_fraction: known.then_some(fraction),
                leaves_film,
                is_water: false,
            };
            match from_energy(dispersive, polar, roughness, &liquid) {
                Ok(angles) => {
                    prop_assert!(angles.receding.angle >= 0.0 && angles.receding.angle <= angles.contact.angle);
                    prop_assert!(angles.contact.angle <= angles.advancing.angle);
                    prop_assert!(angles.advancing.angle <= core::f64::consts::PI);
                    prop_assert!(angles.receding.standard_uncertainty > 0.0);
                }
                Err(fault) => {
                    let beyond = matches!(fault, SurfaceFault::BeyondWenzel { .. });
                    prop_assert!(beyond, "{fault}");
                }
            }
        }
    }
}
