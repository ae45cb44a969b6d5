//! The catalogue's angles are with water; this is what becomes of them with another liquid.
//!
//! **Dense faces.** Each of the three angles θ_i carries a work of adhesion γ(1 + cos θ_i). All three are scaled by the factor q by which a model of
//! the equilibrium says that the ratio of adhesion to tension changes from water to this liquid:
//!
//! 1 + cos θ_i' = q (1 + cos θ_i), q = [√(γ_S^d f) + √(γ_S^p (1 − f))] / [√(γ_S^d f_w) + √(γ_S^p (1 − f_w))] · √(γ_w/γ)
//!
//! after Owens & Wendt with the liquid's dispersive fraction f; where that is unknown q comes from Neumann's equation of state with the solid's total.
//! So water's own angles come back as a liquid comes near water (q = 1), the hysteresis stays the same share of the adhesion, the three stay
//! in order, and at the same f a lower tension never raises an angle. Own judgement, standing on the two published models.
//!
//! **Absorbent faces** drink any liquid: the angles stay as with water, and receding stays 0.
//!
//! **Composite (superhydrophobic) faces** keep their state with water's tension and lose it smoothly on the way down to 45 mN/m; without it they
//! are a rough fluorinated face, filled with liquid (Wenzel), on which a line hardly recedes (own judgement).
//!
//! **Liquids that leave a film** (protein, fat, surfactant, alcohol) recede at 5 ± 2.5° after the first wetting (common practice, no source).

use super::angle::angle_of;
use super::material::AngleBand;
use super::neumann::{adhesion_ratio, neumann_inverse};
use super::{
    AngleEstimate, Components, Finish, Material, State, SurfaceEnergy, SurfaceFault, SurfaceKind,
    WettingAngles,
};
use crate::physics::Basis;
use crate::physics::quantity::DEGREE;

/// The liquid as wetting sees it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct WettingLiquid {
    /// Surface tension, N/m.
    pub surface_tension: f64,
    /// Dispersive share of the surface tension, 0 to 1, where it is known.
    pub dispersive_fraction: Option<f64>,
    /// Holds protein, fat, surfactant or alcohol: a face once wetted stays wetted.
    pub leaves_film: bool,
    /// Water, at whatever temperature: the catalogue's angles apply as they are.
    pub is_water: bool,
}

/// Water at 20 °C: 72.8 = 21.8 + 51.0 mN/m (Owens & Wendt 1969).
pub const WATER: WettingLiquid = WettingLiquid {
    surface_tension: 72.8e-3,
    dispersive_fraction: Some(21.8 / 72.8),
    leaves_film: false,
    is_water: true,
};

/// Dispersive fraction of water.
const WATER_DISPERSIVE: f64 = 21.8 / 72.8;

impl WettingLiquid {
    /// Refuses tensions and fractions that no liquid has.
    pub(super) fn accept(&self) -> Result<(), SurfaceFault> {
        super::young::accept_tension(self.surface_tension)?;
        match self.dispersive_fraction {
            Some(f) if !(0.0..=1.0).contains(&f) => Err(SurfaceFault::UnphysicalLiquid),
            _ => Ok(()),
        }
    }

    /// Components of the surface tension, where they are known.
    pub(super) fn split(&self) -> Option<Components> {
        let fraction = self.dispersive_fraction.or(self.is_water.then_some(WATER_DISPERSIVE))?;
        Some(Components {
            dispersive: fraction * self.surface_tension,
            polar: (1.0 - fraction) * self.surface_tension,
        })
    }

    /// How far the liquid is from water: |ln(γ/γ_w)| + |f − f_w|; an unknown split counts 0.3 (own judgement).
    fn distance_from_water(&self) -> f64 {
        let split = self.dispersive_fraction.map_or(0.3, |f| (f - WATER_DISPERSIVE).abs());
        libm::log(self.surface_tension / WATER.surface_tension).abs() + split
    }
}

/// Largest standard uncertainty added by the step from water to another liquid: 12° (own judgement: what Owens & Wendt and Neumann miss by on
/// polymers with liquids of known angle).
const TRANSFER_DOUBT: f64 = 12.0 * DEGREE;
/// Distance from water at which half of that is added (own judgement).
const HALF_DISTANCE: f64 = 0.25;
/// Receding angle of a liquid that leaves a film, 0 to 10° (common practice, no source).
const FILM_RECEDING: f64 = 5.0 * DEGREE;
/// A quarter of that band.
const FILM_DOUBT: f64 = 2.5 * DEGREE;

/// Tension below which a composite face is filled: 45 mN/m (own judgement; milk, beer, detergent and oil, all below it or filming, wet such coats).
const FILLED_BELOW: f64 = 45.0e-3;
/// Surface energy of the fluorinated or silanised ground of a composite face, N/m (that of fluoropolymer; own judgement).
const GROUND: SurfaceEnergy =
    SurfaceEnergy { dispersive: 18.3e-3, polar: 0.8e-3, source: "as fluoropolymer (own judgement)" };
/// Roughness ratio of a filled composite face (own judgement).
const FILLED_ROUGHNESS: f64 = 1.5;
/// Receding angle on a filled composite face: 10° (own judgement: the line sticks).
const FILLED_RECEDING: f64 = 10.0 * DEGREE;
/// Excess of the advancing angle on a filled composite face: 10° (own judgement).
const FILLED_EXCESS: f64 = 10.0 * DEGREE;
/// Standard uncertainty added when a composite face is fully filled: 15° (own judgement).
const FILLED_DOUBT: f64 = 15.0 * DEGREE;

const BY_COMPONENTS: &str =
    "re-estimated from the angle with water by work of adhesion after Owens & Wendt 1969 (own judgement)";
const BY_TOTAL: &str = "re-estimated from the angle with water by Neumann's equation of state (Li & Neumann 1992), the liquid's split being unknown (own judgement)";
const ABSORBED: &str = "as with water: the face absorbs the liquid (own judgement)";
const COMPOSITE: &str = "re-estimated from the angle with water: a composite face fills with liquid as the tension falls (own judgement)";
pub(super) const FILM_SOURCE: &str =
    "0 to 10° after the first wetting: the liquid leaves a film (common practice, no source)";

impl Material {
    /// Contact, advancing and receding angle of this liquid on this material in this state.
    ///
    /// Water has the catalogue's angles; for other liquids they are re-estimated, with a wider band: 12° × d/(d + 0.25) in quadrature, d
    /// the distance from water |ln(γ/γ_w)| + |f − f_w| (see this file's head for the rules).
    ///
    /// # Errors
    /// [`SurfaceFault::StateUnknown`], and [`SurfaceFault::UnphysicalLiquid`].
    pub fn angles(&self, state: State, liquid: &WettingLiquid) -> Result<WettingAngles, SurfaceFault> {
        liquid.accept()?;
        let finish = self.state(state).ok_or(SurfaceFault::StateUnknown {
            material: self.id,
            state,
            known: self.states(),
        })?;
        let mut angles = if liquid.is_water {
            with_water(finish)
        } else {
            match self.kind {
                SurfaceKind::Dense => on_dense(finish, liquid)?,
                SurfaceKind::Absorbent => on_absorbent(finish, liquid),
                SurfaceKind::Composite => on_composite(finish, liquid)?,
            }
        };
        if liquid.leaves_film {
            angles.receding = film_left(angles.receding.angle, FILM_SOURCE);
        }
        Ok(angles)
    }
}

/// Receding angle once a film is left: 5° or what it was, whichever is smaller.
pub(super) fn film_left(receding: f64, source: &'static str) -> AngleEstimate {
    AngleEstimate {
        angle: receding.min(FILM_RECEDING),
        standard_uncertainty: FILM_DOUBT,
        source,
        basis: Basis::Estimate,
    }
}

fn with_water(finish: &Finish) -> WettingAngles {
    WettingAngles {
        contact: finish.contact.estimate(),
        advancing: finish.advancing.estimate(),
        receding: finish.receding.estimate(),
    }
}

fn transfer_doubt(liquid: &WettingLiquid) -> f64 {
    let distance = liquid.distance_from_water();
    TRANSFER_DOUBT * distance / (distance + HALF_DISTANCE)
}

fn re_estimated(band: &AngleBand, cosine: f64, doubt: f64, source: &'static str) -> AngleEstimate {
    AngleEstimate {
        angle: angle_of(cosine),
        standard_uncertainty: libm::hypot(band.estimate().standard_uncertainty, doubt),
        source,
        basis: Basis::Estimate,
    }
}

fn cosine_of(band: &AngleBand) -> f64 {
    libm::cos(band.typical_deg * DEGREE)
}

fn on_dense(finish: &Finish, liquid: &WettingLiquid) -> Result<WettingAngles, SurfaceFault> {
    let (factor, source) = match (finish.surface_energy, liquid.dispersive_fraction) {
        (Some(energy), Some(fraction)) => {
            let adhesion = |f: f64| (energy.dispersive * f).sqrt() + (energy.polar * (1.0 - f)).sqrt();
            let tensions = (WATER.surface_tension / liquid.surface_tension).sqrt();
            (adhesion(fraction) / adhesion(WATER_DISPERSIVE) * tensions, BY_COMPONENTS)
        }
        (energy, _) => {
            let total = match energy {
                Some(energy) => energy.total(),
                None => neumann_inverse(finish.contact.typical_deg * DEGREE, WATER.surface_tension)?,
            };
            let here = adhesion_ratio(total, liquid.surface_tension);
            (here / adhesion_ratio(total, WATER.surface_tension), BY_TOTAL)
        }
    };
    let doubt = transfer_doubt(liquid);
    let moved = |band: &AngleBand| re_estimated(band, factor * (1.0 + cosine_of(band)) - 1.0, doubt, source);
    Ok(WettingAngles {
        contact: moved(&finish.contact),
        advancing: moved(&finish.advancing),
        receding: moved(&finish.receding),
    })
}

fn on_absorbent(finish: &Finish, liquid: &WettingLiquid) -> WettingAngles {
    let doubt = transfer_doubt(liquid);
    let kept = |band: &AngleBand| re_estimated(band, cosine_of(band), doubt, ABSORBED);
    WettingAngles {
        contact: kept(&finish.contact),
        advancing: kept(&finish.advancing),
        receding: kept(&finish.receding),
    }
}

fn on_composite(finish: &Finish, liquid: &WettingLiquid) -> Result<WettingAngles, SurfaceFault> {
    // Share of the composite state that is left, 1 at water's tension and above, 0 when filled; smooth at both ends.
    let span = (liquid.surface_tension - FILLED_BELOW) / (WATER.surface_tension - FILLED_BELOW);
    let kept = if liquid.leaves_film { 0.0 } else { smooth_step(span) };
    let ground = Components { dispersive: GROUND.dispersive, polar: GROUND.polar };
    let smooth = match liquid.split() {
        Some(split) => super::owens_wendt(&ground, &split)?,
        None => super::neumann(ground.total(), liquid.surface_tension)?,
    };
    let filled = FILLED_ROUGHNESS * libm::cos(smooth.angle);
    let filled_angle = angle_of(filled);
    let advancing = libm::cos((filled_angle + FILLED_EXCESS).min(core::f64::consts::PI));
    let receding = filled.clamp(libm::cos(FILLED_RECEDING), 1.0);
    let doubt = libm::hypot(transfer_doubt(liquid), FILLED_DOUBT * (1.0 - kept));
    // A filled texture never carries the liquid higher than the tips did.
    let between = |band: &AngleBand, filled: f64| {
        let carried = cosine_of(band);
        let cosine = kept * carried + (1.0 - kept) * filled.clamp(carried, 1.0);
        re_estimated(band, cosine, doubt, COMPOSITE)
    };
    Ok(WettingAngles {
        contact: between(&finish.contact, filled),
        advancing: between(&finish.advancing, advancing),
        receding: between(&finish.receding, receding),
    })
}

/// 3x² − 2x³ between 0 and 1, flat outside.
fn smooth_step(x: f64) -> f64 {
    let x = x.clamp(0.0, 1.0);
    x * x * (3.0 - 2.0 * x)
}

#[cfg(test)]
mod tests {
    use super::{DEGREE, WATER, WATER_DISPERSIVE, WettingLiquid};
    use crate::physics::surface::{State, SurfaceFault, WettingAngles, catalogue, find};
    use proptest::prelude::{any, prop_assert, proptest};

    fn liquid(surface_tension: f64, dispersive_fraction: Option<f64>) -> WettingLiquid {
        WettingLiquid { surface_tension, dispersive_fraction, leaves_film: false, is_water: false }
    }

    fn every_finish() -> impl Iterator<Item = (&'static crate::physics::surface::Material, State)> {
        catalogue().iter().flat_map(|m| m.states().iter().map(move |s| (m, s)))
    }

    fn three(angles: &WettingAngles) -> [f64; 3] {
        [angles.receding.angle, angles.contact.angle, angles.advancing.angle]
    }

    #[test]
    fn water_has_the_catalogues_angles_and_says_what_is_unknown() {
        let pp = find("pp").unwrap();
        let angles = pp.angles(State::Clean, &WATER).unwrap();
        assert!((angles.advancing.angle - 104.0 * DEGREE).abs() < 1e-12);
        assert!((angles.advancing.standard_uncertainty - 13.0 / 4.0 * DEGREE).abs() < 1e-12);
        let fault = pp.angles(State::Worn, &WATER).unwrap_err();
        assert_eq!(
            fault,
            SurfaceFault::StateUnknown { material: "pp", state: State::Worn, known: pp.states() }
        );
        assert_eq!(fault.to_string(), "pp has no values in the state worn; known: clean");
        assert_eq!(pp.angles(State::Clean, &liquid(0.0, None)), Err(SurfaceFault::UnphysicalLiquid));
        assert_eq!(pp.angles(State::Clean, &liquid(0.03, Some(1.1))), Err(SurfaceFault::UnphysicalLiquid));
    }

    #[test]
    fn a_liquid_like_water_has_nearly_its_angles() {
        for (material, state) in every_finish() {
            let water = three(&material.angles(state, &WATER).unwrap());
            for fraction in [None, Some(WATER_DISPERSIVE + 1e-6)] {
                let near = three(&material.angles(state, &liquid(72.8e-3 * (1.0 - 1e-6), fraction)).unwrap());
                for (a, b) in water.iter().zip(near) {
                    // An angle of 0 leaves it as the square root of the step.
                    assert!((a - b).abs() < 4e-3, "{} {a} {b}", material.id);
                }
            }
        }
    }

    /// Olive oil (32 mN/m, dispersive) spreads or nearly so on polyolefins, glass and steel and stands at 40 to 70° on PTFE: common
    /// knowledge of the trade, no source.
    #[test]
    fn oil_wets_all_but_fluoropolymer() {
        let oil = WettingLiquid { leaves_film: true, ..liquid(0.032, Some(0.97)) };
        let contact = |id: &str, state| find(id).unwrap().angles(state, &oil).unwrap().contact.angle / DEGREE;
        assert!(contact("pp", State::Clean) < 35.0);
        assert!(contact("soda-lime-glass", State::InUse) < 15.0);
        assert!(contact("stainless-polished", State::InUse) < 20.0);
        assert!((40.0..70.0).contains(&contact("ptfe", State::Clean)));
        assert!(contact("superhydrophobic-coating", State::Clean) < 90.0);
    }

    #[test]
    fn a_film_pulls_the_receding_angle_down() {
        for (material, state) in every_finish() {
            let film = WettingLiquid { leaves_film: true, ..liquid(0.047, None) };
            let angles = material.angles(state, &film).unwrap();
            assert!(angles.receding.angle <= 5.0 * DEGREE, "{}", material.id);
        }
    }

    proptest! {
        #[test]
        fn finite_in_order_uncertain_and_monotone(
            tension in 0.005..0.2f64, step in 0.0..0.05f64, fraction in 0.0..=1.0f64, known: bool, leaves_film in any::<bool>(),
        ) {
            let here = WettingLiquid { leaves_film, ..liquid(tension, known.then_some(fraction)) };
            let above = WettingLiquid { surface_tension: tension + step, ..here };
            for (material, state) in every_finish() {
                let low = material.angles(state, &here).unwrap();
                let high = material.angles(state, &above).unwrap();
                let angles = three(&low);
                prop_assert!(angles[0] >= 0.0 && angles[0] <= angles[1], "{} {angles:?}", material.id);
                prop_assert!(angles[1] <= angles[2] && angles[2] <= core::f64::consts::PI, "{} {angles:?}", material.id);
                for e in [low.contact, low.advancing, low.receding] {
                    prop_assert!(e.standard_uncertainty > 0.0 && e.standard_uncertainty < 1.0);
                }
                for (a, b) in angles.iter().zip(three(&high)) {
                    prop_assert!(*a <= b + 1e-9, "{}: {a} falls to {b}", material.id);
                }
            }
        }
    }
}
