//! What roughness and texture do to a contact angle.

use super::angle::accept_angle;
use super::{ModelAngle, SurfaceFault};

/// Wenzel (1936), doi:10.1021/ie50320a024: cos θ* = r cos θ, with the true over the projected area r ≥ 1 and the smooth face's
/// angle θ (rad). Holds when the liquid fills the roughness, and the roughness is small against the drop.
///
/// # Errors
/// [`SurfaceFault::BeyondWenzel`] when r cos θ < −1; an angle or a ratio that is not physical.
pub fn wenzel(angle: f64, roughness_ratio: f64) -> Result<ModelAngle, SurfaceFault> {
    let cosine = libm::cos(accept_angle(angle)?);
    accept_roughness(roughness_ratio)?;
    ModelAngle::from_cosine(roughness_ratio * cosine, SurfaceFault::BeyondWenzel { roughness_ratio })
}

/// Cassie & Baxter (1944), doi:10.1039/tf9444000546, flat-topped texture: cos θ* = f (1 + cos θ) − 1, with the fraction f of the projected area where
/// liquid touches solid and the smooth face's angle θ (rad).
///
/// # Errors
/// [`SurfaceFault::CompositeUnstable`] when θ ≤ 90° (the liquid soaks in); an angle or a fraction that is not physical.
pub fn cassie_baxter(angle: f64, solid_fraction: f64) -> Result<ModelAngle, SurfaceFault> {
    let cosine = libm::cos(accept_angle(angle)?);
    accept_solid_fraction(solid_fraction)?;
    if angle <= core::f64::consts::FRAC_PI_2 {
        return Err(SurfaceFault::CompositeUnstable);
    }
    ModelAngle::from_cosine(solid_fraction * (1.0 + cosine) - 1.0, SurfaceFault::CompositeUnstable)
}

/// Smooth-face angle (rad) at which Wenzel's and Cassie–Baxter's states have the same energy: cos θ_c = (f − 1)/(r − f). Above it the
/// liquid stands on the tips for good, below it the texture ends up filled (Bico, Thiele & Quéré 2002, doi:10.1016/S0927-7757(02)00061-4).
///
/// # Errors
/// A roughness ratio or a solid fraction that is not physical, or a flat face (r = f = 1), which has no crossover.
pub fn crossover_angle(roughness_ratio: f64, solid_fraction: f64) -> Result<f64, SurfaceFault> {
    accept_roughness(roughness_ratio)?;
    accept_solid_fraction(solid_fraction)?;
    if roughness_ratio > solid_fraction {
        // r ≥ 1 ≥ f keeps the ratio between −1 and 0.
        Ok(libm::acos((solid_fraction - 1.0) / (roughness_ratio - solid_fraction)))
    } else {
        Err(SurfaceFault::UnphysicalRoughness)
    }
}

/// Refuses ratios below 1.
pub(super) fn accept_roughness(roughness_ratio: f64) -> Result<(), SurfaceFault> {
    if roughness_ratio >= 1.0 && roughness_ratio.is_finite() {
        Ok(())
    } else {
        Err(SurfaceFault::UnphysicalRoughness)
    }
}

fn accept_solid_fraction(solid_fraction: f64) -> Result<(), SurfaceFault> {
    if solid_fraction > 0.0 && solid_fraction <= 1.0 {
        Ok(())
    } else {
        Err(SurfaceFault::UnphysicalSolidFraction)
    }
}

#[cfg(test)]
mod tests {
    use super::{SurfaceFault, cassie_baxter, crossover_angle, wenzel};
    use crate::physics::quantity::DEGREE;

    #[test]
    fn a_smooth_and_fully_touching_face_keeps_its_angle() {
        let angle = 104.0 * DEGREE;
        assert!((wenzel(angle, 1.0).unwrap().angle - angle).abs() < 1e-14);
        assert!((cassie_baxter(angle, 1.0).unwrap().angle - angle).abs() < 1e-14);
    }

    #[test]
    fn both_states_agree_at_the_crossover() {
        let at = crossover_angle(2.0, 0.2).unwrap();
        assert!((wenzel(at, 2.0).unwrap().angle - cassie_baxter(at, 0.2).unwrap().angle).abs() < 1e-12);
        assert!(crossover_angle(1.0, 1.0).is_err());
    }

    #[test]
    fn refuses_where_the_state_does_not_exist() {
        let beyond = Err(SurfaceFault::BeyondWenzel { roughness_ratio: 3.0 });
        assert_eq!(wenzel(115.0 * DEGREE, 3.0), beyond);
        assert_eq!(cassie_baxter(80.0 * DEGREE, 0.3), Err(SurfaceFault::CompositeUnstable));
        assert!(wenzel(40.0 * DEGREE, 2.0).is_ok_and(|m| m.spreads));
        assert_eq!(wenzel(1.0, 0.9), Err(SurfaceFault::UnphysicalRoughness));
        assert_eq!(cassie_baxter(2.0, 0.0), Err(SurfaceFault::UnphysicalSolidFraction));
    }
}
