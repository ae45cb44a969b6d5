//! Owens, Wendt, Rabel & Kaelble: a dispersive and a polar component.

use super::angle::accept_angle;
use super::young::accept_energies;
use super::{Components, ModelAngle, SurfaceFault};

/// Owens & Wendt (1969), doi:10.1002/app.1969.070130815: γ (1 + cos θ) = 2√(γ_S^d γ^d) + 2√(γ_S^p γ^p), with γ = γ^d + γ^p.
///
/// # Errors
/// Energies and tension that are not physical.
pub fn owens_wendt(solid: &Components, liquid: &Components) -> Result<ModelAngle, SurfaceFault> {
    accept_energies(&[solid.dispersive, solid.polar])?;
    liquid.accept_as_liquid()?;
    ModelAngle::from_cosine(
        work_of_adhesion(solid, liquid) / liquid.total() - 1.0,
        // Unreachable for components that are not negative: the work of adhesion is not negative either.
        SurfaceFault::NoContact,
    )
}

/// Work of adhesion, N/m.
pub(super) fn work_of_adhesion(solid: &Components, liquid: &Components) -> f64 {
    2.0 * ((solid.dispersive * liquid.dispersive).sqrt() + (solid.polar * liquid.polar).sqrt())
}

/// A probe liquid's components and the angle it makes.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ComponentProbe {
    /// The liquid's components, N/m.
    pub liquid: Components,
    /// Contact angle, rad.
    pub angle: f64,
}

/// The solid's components (N/m) from the angles of two or more probe liquids; with more than two by least squares of cos θ (equal weights, so
/// that every angle counts alike whatever its liquid's tension). Best told apart with one liquid without, and one with a large polar component.
///
/// # Errors
/// [`SurfaceFault::TooFewProbes`], [`SurfaceFault::ProbesTooAlike`]; [`SurfaceFault::NegativeRoot`] when √γ_S^d or √γ_S^p comes out negative, which no
/// solid has; angles and tensions that are not physical.
pub fn owens_wendt_inverse(probes: &[ComponentProbe]) -> Result<Components, SurfaceFault> {
    if probes.len() < 2 {
        return Err(SurfaceFault::TooFewProbes { given: probes.len(), needed: 2 });
    }
    // Normal equations of Σ (a·√γ_S^d + b·√γ_S^p − (1 + cos θ))².
    let (mut aa, mut ab, mut bb, mut ay, mut by) = (0.0, 0.0, 0.0, 0.0, 0.0);
    for probe in probes {
        probe.liquid.accept_as_liquid()?;
        let tension = probe.liquid.total();
        let a = 2.0 * probe.liquid.dispersive.sqrt() / tension;
        let b = 2.0 * probe.liquid.polar.sqrt() / tension;
        let y = 1.0 + libm::cos(accept_angle(probe.angle)?);
        aa += a * a;
        ab += a * b;
        bb += b * b;
        ay += a * y;
        by += b * y;
    }
    let determinant = aa * bb - ab * ab;
    // sin² of the angle between the two columns; below 10⁻⁶ the split is noise (own judgement).
    if determinant.is_nan() || determinant <= 1e-6 * aa * bb {
        return Err(SurfaceFault::ProbesTooAlike);
    }
    let root_dispersive = (bb * ay - ab * by) / determinant;
    let root_polar = (aa * by - ab * ay) / determinant;
    for (root, component) in [(root_dispersive, "dispersive"), (root_polar, "polar")] {
        if root < 0.0 {
            return Err(SurfaceFault::NegativeRoot { component });
        }
    }
    Ok(Components { dispersive: root_dispersive * root_dispersive, polar: root_polar * root_polar })
}

#[cfg(test)]
mod tests {
    use super::{ComponentProbe, Components, SurfaceFault, owens_wendt, owens_wendt_inverse};
    use crate::physics::quantity::DEGREE;
    use crate::physics::surface::find_probe;

    fn liquid(id: &str) -> Components {
        find_probe(id).unwrap().components
    }

    #[test]
    fn inverse_undoes_forward_for_two_and_for_four_probes() {
        let solid = Components { dispersive: 0.0302, polar: 0.0071 };
        let probes = ["water", "diiodomethane", "formamide", "ethylene-glycol"].map(|id| {
            let liquid = liquid(id);
            ComponentProbe { liquid, angle: owens_wendt(&solid, &liquid).unwrap().angle }
        });
        for count in [2, 3, 4] {
            let found = owens_wendt_inverse(&probes[..count]).unwrap();
            assert!((found.dispersive - solid.dispersive).abs() < 1e-10, "{count}: {found:?}");
            assert!((found.polar - solid.polar).abs() < 1e-10, "{count}: {found:?}");
        }
    }

    #[test]
    fn refuses_what_it_cannot_tell_apart_and_negative_roots() {
        let probe = |id, degrees: f64| ComponentProbe { liquid: liquid(id), angle: degrees * DEGREE };
        assert_eq!(
            owens_wendt_inverse(&[probe("water", 80.0)]),
            Err(SurfaceFault::TooFewProbes { given: 1, needed: 2 })
        );
        assert_eq!(
            owens_wendt_inverse(&[probe("water", 80.0), probe("water", 82.0)]),
            Err(SurfaceFault::ProbesTooAlike)
        );
        assert_eq!(
            owens_wendt_inverse(&[probe("water", 125.0), probe("diiodomethane", 20.0)]),
            Err(SurfaceFault::NegativeRoot { component: "polar" })
        );
    }
}
