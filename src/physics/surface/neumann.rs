//! Neumann's equation of state: one total surface energy.

use super::young::{accept_energies, accept_tension};
use super::{ModelAngle, SurfaceFault};
use crate::physics::numerics::{Bracket, find_root};

/// β of the equation of state, (J/m²)⁻²: 0.0001247 (mJ/m²)⁻² (Li & Neumann 1992, J. Colloid Interface Sci. 148, 190, from memory; fitted by them to
/// angles of many liquids on smooth low-energy solids).
const BETA: f64 = 0.0001247e6;

/// Work of adhesion over twice the surface tension, √(γ_S/γ) exp(−β(γ − γ_S)²): half of 1 + cos θ.
pub(super) fn adhesion_ratio(total: f64, surface_tension: f64) -> f64 {
    let gap = surface_tension - total;
    (total / surface_tension).sqrt() * libm::exp(-BETA * gap * gap)
}

/// Li & Neumann (1992): cos θ = −1 + 2 √(γ_S/γ) exp(−β(γ − γ_S)²), from the solid's total surface energy and the liquid's
/// surface tension, N/m. Fitted for γ > γ_S; a liquid of lower tension than the solid's energy spreads.
///
/// # Errors
/// Energies and tension that are not physical.
pub fn neumann(total: f64, surface_tension: f64) -> Result<ModelAngle, SurfaceFault> {
    accept_tension(surface_tension)?;
    accept_energies(&[total])?;
    if surface_tension < total {
        return Ok(ModelAngle { angle: 0.0, spreads: true });
    }
    ModelAngle::from_cosine(2.0 * adhesion_ratio(total, surface_tension) - 1.0, SurfaceFault::NoContact)
}

/// Total surface energy (N/m) at which [`neumann`] gives this angle (rad) with a liquid of this surface tension (N/m).
///
/// # Errors
/// [`SurfaceFault::NotAnAngle`]; a tension that is not physical; [`SurfaceFault::NoSuchEnergy`] when the root is not found.
pub fn neumann_inverse(angle: f64, surface_tension: f64) -> Result<f64, SurfaceFault> {
    accept_tension(surface_tension)?;
    let wanted = 0.5 * (1.0 + libm::cos(super::angle::accept_angle(angle)?));
    let miss = |total: f64| adhesion_ratio(total, surface_tension) - wanted;
    let bracket = Bracket { low: (0.0, miss(0.0)), high: (surface_tension, miss(surface_tension)) };
    find_root(miss, bracket, 1e-12).ok_or(SurfaceFault::NoSuchEnergy)
}

#[cfg(test)]
mod tests {
    use super::{neumann, neumann_inverse};

    #[test]
    fn inverse_undoes_forward() {
        for millis in [8, 15, 20, 30, 45, 60, 72] {
            let total = f64::from(millis) * 1e-3;
            let angle = neumann(total, 0.0728).unwrap().angle;
            assert!((neumann_inverse(angle, 0.0728).unwrap() - total).abs() < 1e-7, "{total}");
        }
    }

    #[test]
    fn equal_energies_wet_and_lower_tensions_spread() {
        assert!(neumann(0.0728, 0.0728).is_ok_and(|m| m.angle < 1e-7 && !m.spreads));
        assert!(neumann(0.08, 0.0728).is_ok_and(|m| m.spreads));
    }
}
