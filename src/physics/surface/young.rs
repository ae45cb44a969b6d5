//! Young's equation.

use super::{ModelAngle, SurfaceFault};

/// Young (1805), doi:10.1098/rstl.1805.0005: γ_SV = γ_SL + γ cos θ, from the energies (N/m) of the solid against vapour and against liquid
/// and the liquid's surface tension.
///
/// # Errors
/// [`SurfaceFault::NoContact`] when cos θ would be below −1; energies and tension that are not physical.
pub fn young(solid_vapour: f64, solid_liquid: f64, surface_tension: f64) -> Result<ModelAngle, SurfaceFault> {
    accept_tension(surface_tension)?;
    accept_energies(&[solid_vapour, solid_liquid])?;
    ModelAngle::from_cosine((solid_vapour - solid_liquid) / surface_tension, SurfaceFault::NoContact)
}

/// Refuses a tension that is not positive and finite.
pub(super) fn accept_tension(surface_tension: f64) -> Result<(), SurfaceFault> {
    if surface_tension > 0.0 && surface_tension.is_finite() {
        Ok(())
    } else {
        Err(SurfaceFault::UnphysicalLiquid)
    }
}

/// Refuses energies that are negative or not finite.
pub(super) fn accept_energies(energies: &[f64]) -> Result<(), SurfaceFault> {
    if energies.iter().all(|e| *e >= 0.0 && e.is_finite()) {
        Ok(())
    } else {
        Err(SurfaceFault::UnphysicalEnergy)
    }
}

#[cfg(test)]
mod tests {
    use super::{SurfaceFault, young};

    #[test]
    fn a_right_angle_when_both_energies_agree() {
        let found = young(0.03, 0.03, 0.0728).unwrap();
        assert!((found.angle - core::f64::consts::FRAC_PI_2).abs() < 1e-15 && !found.spreads);
    }

    #[test]
    fn spreads_past_one_and_refuses_below_minus_one() {
        assert!(young(0.12, 0.03, 0.0728).is_ok_and(|m| m.spreads && m.angle == 0.0));
        assert_eq!(young(0.01, 0.10, 0.0728), Err(SurfaceFault::NoContact));
        assert_eq!(young(0.01, f64::NAN, 0.0728), Err(SurfaceFault::UnphysicalEnergy));
        assert_eq!(young(0.01, 0.0, 0.0), Err(SurfaceFault::UnphysicalLiquid));
    }
}
