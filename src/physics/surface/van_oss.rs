//! Van Oss, Chaudhury & Good: a Lifshitz–van der Waals, an electron-acceptor and an electron-donor component.

use super::angle::accept_angle;
use super::young::{accept_energies, accept_tension};
use super::{ModelAngle, SurfaceFault};

/// Components of a surface energy after van Oss, Chaudhury & Good, N/m: γ = γ^LW + 2√(γ⁺ γ⁻).
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct AcidBase {
    /// Lifshitz–van der Waals component γ^LW.
    pub lifshitz: f64,
    /// Electron-acceptor component γ⁺.
    pub plus: f64,
    /// Electron-donor component γ⁻.
    pub minus: f64,
}

impl AcidBase {
    /// Acid–base part 2√(γ⁺ γ⁻), N/m.
    #[must_use]
    pub fn acid_base(&self) -> f64 {
        2.0 * (self.plus * self.minus).sqrt()
    }

    /// Total surface energy, N/m.
    #[must_use]
    pub fn total(&self) -> f64 {
        self.lifshitz + self.acid_base()
    }

    fn accept_as_liquid(&self) -> Result<(), SurfaceFault> {
        accept_energies(&[self.lifshitz, self.plus, self.minus])
            .map_err(|_| SurfaceFault::UnphysicalLiquid)?;
        accept_tension(self.total())
    }
}

/// Van Oss, Chaudhury & Good (1988), doi:10.1021/cr00088a006: γ (1 + cos θ) = 2√(γ_S^LW γ^LW) + 2√(γ_S⁺ γ⁻) + 2√(γ_S⁻ γ⁺).
///
/// # Errors
/// Energies and tension that are not physical.
pub fn van_oss(solid: &AcidBase, liquid: &AcidBase) -> Result<ModelAngle, SurfaceFault> {
    accept_energies(&[solid.lifshitz, solid.plus, solid.minus])?;
    liquid.accept_as_liquid()?;
    let work = 2.0
        * ((solid.lifshitz * liquid.lifshitz).sqrt()
            + (solid.plus * liquid.minus).sqrt()
            + (solid.minus * liquid.plus).sqrt());
    // The work is not negative, so that the cosine cannot fall below −1.
    ModelAngle::from_cosine(work / liquid.total() - 1.0, SurfaceFault::NoContact)
}

/// A probe liquid's components and the angle it makes.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct AcidBaseProbe {
    /// The liquid's components, N/m.
    pub liquid: AcidBase,
    /// Contact angle, rad.
    pub angle: f64,
}

/// The solid's components (N/m) from the angles of three or more probe liquids, at least two of them polar; with more than three by least
/// squares of cos θ with equal weights.
///
/// # Errors
/// [`SurfaceFault::TooFewProbes`], [`SurfaceFault::ProbesTooAlike`]; [`SurfaceFault::NegativeRoot`] when a root comes out negative, which no solid has;
/// angles and tensions that are not physical.
pub fn van_oss_inverse(probes: &[AcidBaseProbe]) -> Result<AcidBase, SurfaceFault> {
    if probes.len() < 3 {
        return Err(SurfaceFault::TooFewProbes { given: probes.len(), needed: 3 });
    }
    let mut columns = [[0.0; 3]; 3];
    let mut right = [0.0; 3];
    for probe in probes {
        probe.liquid.accept_as_liquid()?;
        let tension = probe.liquid.total();
        let row =
            [probe.liquid.lifshitz, probe.liquid.minus, probe.liquid.plus].map(|c| 2.0 * c.sqrt() / tension);
        let y = 1.0 + libm::cos(accept_angle(probe.angle)?);
        for i in 0..3 {
            for j in 0..3 {
                columns[i][j] += row[i] * row[j];
            }
            right[i] += row[i] * y;
        }
    }
    let determinant = determinant(&columns);
    // Against the determinant of orthogonal columns of the same lengths; below 10⁻⁷ the split is noise (own judgement).
    if determinant.is_nan() || determinant <= 1e-7 * columns[0][0] * columns[1][1] * columns[2][2] {
        return Err(SurfaceFault::ProbesTooAlike);
    }
    let mut roots = [0.0; 3];
    for (i, component) in ["Lifshitz–van der Waals", "electron-acceptor", "electron-donor"].iter().enumerate()
    {
        let mut replaced = columns;
        for j in 0..3 {
            replaced[j][i] = right[j];
        }
        roots[i] = self::determinant(&replaced) / determinant;
        if roots[i] < 0.0 {
            return Err(SurfaceFault::NegativeRoot { component });
        }
    }
    let [lifshitz, plus, minus] = roots.map(|r| r * r);
    Ok(AcidBase { lifshitz, plus, minus })
}

fn determinant(m: &[[f64; 3]; 3]) -> f64 {
    m[0][0] * (m[1][1] * m[2][2] - m[1][2] * m[2][1]) - m[0][1] * (m[1][0] * m[2][2] - m[1][2] * m[2][0])
        + m[0][2] * (m[1][0] * m[2][1] - m[1][1] * m[2][0])
}

#[cfg(test)]
mod tests {
    use super::{AcidBase, AcidBaseProbe, SurfaceFault, van_oss, van_oss_inverse};
    use crate::physics::quantity::DEGREE;
    use crate::physics::surface::find_probe;

    fn liquid(id: &str) -> AcidBase {
        find_probe(id).unwrap().acid_base.unwrap()
    }

    #[test]
    fn inverse_undoes_forward_for_three_and_for_five_probes() {
        let solid = AcidBase { lifshitz: 0.032, plus: 0.0004, minus: 0.012 };
        let probes = ["water", "diiodomethane", "formamide", "ethylene-glycol", "glycerol"].map(|id| {
            let liquid = liquid(id);
            AcidBaseProbe { liquid, angle: van_oss(&solid, &liquid).unwrap().angle }
        });
        for count in [3, 4, 5] {
            let found = van_oss_inverse(&probes[..count]).unwrap();
            assert!((found.lifshitz - solid.lifshitz).abs() < 1e-9, "{count}: {found:?}");
            assert!((found.plus - solid.plus).abs() < 1e-9, "{count}: {found:?}");
            assert!((found.minus - solid.minus).abs() < 1e-9, "{count}: {found:?}");
        }
    }

    #[test]
    fn refuses_what_it_cannot_tell_apart_and_negative_roots() {
        let probe = |id, degrees: f64| AcidBaseProbe { liquid: liquid(id), angle: degrees * DEGREE };
        // Two liquids without acid or base leave two unknowns to one equation.
        assert_eq!(
            van_oss_inverse(&[
                probe("water", 80.0),
                probe("diiodomethane", 40.0),
                probe("bromonaphthalene", 30.0)
            ]),
            Err(SurfaceFault::ProbesTooAlike)
        );
        assert!(matches!(
            van_oss_inverse(&[probe("water", 40.0), probe("diiodomethane", 40.0), probe("formamide", 90.0)]),
            Err(SurfaceFault::NegativeRoot { .. })
        ));
        assert_eq!(
            van_oss_inverse(&[probe("water", 40.0)]),
            Err(SurfaceFault::TooFewProbes { given: 1, needed: 3 })
        );
    }
}
