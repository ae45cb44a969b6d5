//! What is known of a solid, and the surface energies that follow from it, each with its uncertainty.

use crate::physics::{
    quantity::DEGREE,
    surface::{
        AcidBase, AcidBaseProbe, ComponentProbe, Components, ProbeLiquid, neumann_inverse,
        owens_wendt_inverse, van_oss_inverse,
    },
};

/// What is known of a solid; its numbers stand apart, so that each can be shifted by its uncertainty.
#[derive(Debug, Clone, PartialEq)]
pub enum Solid {
    /// Dispersive and polar component, N/m.
    Components,
    /// Lifshitz–van der Waals, electron-acceptor and electron-donor component, N/m.
    AcidBase,
    /// Total surface energy, N/m.
    Total,
    /// Energies against vapour and against the liquid, N/m.
    Interfacial,
    /// Contact angles of these probe liquids, rad.
    Probes(Vec<&'static ProbeLiquid>),
}

/// A solid with its numbers.
#[derive(Debug, Clone, PartialEq)]
pub struct Known {
    /// What they are.
    pub kind: Solid,
    /// The numbers, SI.
    pub numbers: Vec<f64>,
    /// Their standard uncertainties, SI.
    pub uncertainties: Vec<f64>,
}

/// Why something does not follow from what is known.
pub type Missing = String;

impl Solid {
    /// Dispersive and polar component, N/m.
    ///
    /// # Errors
    /// What is missing, or what contradicts.
    pub fn components(&self, numbers: &[f64]) -> Result<Components, Missing> {
        match (self, numbers) {
            (Self::Components, &[dispersive, polar]) => Ok(Components { dispersive, polar }),
            (Self::Probes(liquids), angles) => {
                let probes: Vec<ComponentProbe> = liquids
                    .iter()
                    .zip(angles)
                    .map(|(probe, angle)| ComponentProbe { liquid: probe.components, angle: *angle })
                    .collect();
                owens_wendt_inverse(&probes).map_err(|fault| fault.to_string())
            }
            _ => Err(
                "needs the solid's dispersive and polar component, or angles of two or more probe liquids"
                    .into(),
            ),
        }
    }

    /// Components after van Oss, Chaudhury & Good, N/m.
    ///
    /// # Errors
    /// What is missing, or what contradicts.
    pub fn acid_base(&self, numbers: &[f64]) -> Result<AcidBase, Missing> {
        match (self, numbers) {
            (Self::AcidBase, &[lifshitz, plus, minus]) => Ok(AcidBase { lifshitz, plus, minus }),
            (Self::Probes(liquids), angles) => {
                let probe = |(probe, angle): (&&'static ProbeLiquid, &f64)| {
                    Some(AcidBaseProbe { liquid: probe.acid_base?, angle: *angle })
                };
                let probes: Option<Vec<AcidBaseProbe>> = liquids.iter().zip(angles).map(probe).collect();
                let probes =
                    probes.ok_or("the acid–base components of one of the probe liquids are not known")?;
                van_oss_inverse(&probes).map_err(|fault| fault.to_string())
            }
            _ => Err("needs the solid's Lifshitz–van der Waals, electron-acceptor and electron-donor component, or angles of three or more probe liquids".into()),
        }
    }

    /// Total surface energy, N/m: given, the sum of given components, or the mean of what Neumann's equation of state finds from each probe angle.
    ///
    /// # Errors
    /// What contradicts.
    pub fn total(&self, numbers: &[f64]) -> Result<f64, Missing> {
        match (self, numbers) {
            (Self::Total, &[total]) | (Self::Interfacial, &[total, _]) => Ok(total),
            (Self::Components, &[dispersive, polar]) => Ok(Components { dispersive, polar }.total()),
            (Self::AcidBase, &[lifshitz, plus, minus]) => Ok(AcidBase { lifshitz, plus, minus }.total()),
            (Self::Probes(liquids), angles) if !liquids.is_empty() => {
                let mut sum = 0.0;
                for (probe, angle) in liquids.iter().zip(angles) {
                    sum += neumann_inverse(*angle, probe.components.total())
                        .map_err(|fault| fault.to_string())?;
                }
                Ok(sum / liquids.len() as f64)
            }
            _ => Err("needs the solid's surface energy".into()),
        }
    }

    /// Energies against vapour and against the liquid, N/m.
    ///
    /// # Errors
    /// What is missing.
    pub fn interfacial(&self, numbers: &[f64]) -> Result<(f64, f64), Missing> {
        match (self, numbers) {
            (Self::Interfacial, &[solid_vapour, solid_liquid]) => Ok((solid_vapour, solid_liquid)),
            _ => Err("needs the solid's energies against vapour and against the liquid".into()),
        }
    }

    /// What these numbers rest on, in words.
    pub const fn basis(&self) -> &'static str {
        match self {
            Self::Probes(_) => "derived",
            Self::Components | Self::AcidBase | Self::Total | Self::Interfacial => "given",
        }
    }
}

/// Shares of a standard uncertainty by which a number is shifted, the next one where the one before leads out of what a model takes (own judgement).
const SHARES: [f64; 3] = [1.0, 1.0 / 8.0, 1.0 / 64.0];

/// Standard uncertainty of `f` at `numbers` from their `uncertainties`, in quadrature.
///
/// Each number is shifted up and down by its standard uncertainty and the larger change counts. Where a shift leads out of what the model takes, a smaller
/// share of it is tried and its change scaled up; a number that cannot be shifted at all adds nothing.
pub fn propagated(numbers: &[f64], uncertainties: &[f64], f: impl Fn(&[f64]) -> Option<f64>) -> f64 {
    let Some(here) = f(numbers) else { return 0.0 };
    let mut shifted = numbers.to_vec();
    let mut variance = 0.0;
    for (i, &u) in uncertainties.iter().enumerate() {
        if u == 0.0 {
            continue;
        }
        let mut change = |by: f64| {
            shifted[i] = numbers[i] + by;
            let moved = f(&shifted).map(|there| (there - here).abs());
            shifted[i] = numbers[i];
            moved
        };
        let largest = SHARES.into_iter().find_map(|share| {
            let sides = [change(share * u), change(-share * u)];
            sides.into_iter().flatten().reduce(f64::max).map(|moved| moved / share)
        });
        let largest = largest.unwrap_or(0.0);
        variance += largest * largest;
    }
    variance.sqrt()
}

/// Largest standard uncertainty an angle can have, rad: that of an angle of which nothing is known but that it lies between 0 and 180°.
pub const UNKNOWN_ANGLE: f64 = 180.0 * DEGREE / 3.464_101_615_137_754_6;

#[cfg(test)]
mod tests {
    use super::{Solid, propagated};
    use crate::physics::surface::find_probe;

    #[test]
    fn uncertainties_add_in_quadrature_and_ends_are_kept() {
        let sum = |x: &[f64]| Some(3.0 * x[0] + 4.0 * x[1]);
        assert!((propagated(&[1.0, 1.0], &[0.1, 0.1], sum) - 0.5).abs() < 1e-12);
        // Only upwards is allowed, and only a little.
        let near_the_end = |x: &[f64]| (0.0..0.02).contains(&x[0]).then_some(2.0 * x[0]);
        assert!((propagated(&[0.0], &[0.1], near_the_end) - 0.2).abs() < 1e-12);
        assert_eq!(propagated(&[0.0], &[0.1], |_| None), 0.0);
    }

    #[test]
    fn each_kind_says_what_it_lacks() {
        assert!(Solid::Total.components(&[0.04]).unwrap_err().contains("dispersive"));
        assert!(Solid::Components.acid_base(&[0.03, 0.01]).unwrap_err().contains("electron-donor"));
        assert!(Solid::Total.interfacial(&[0.04]).is_err());
        let one = Solid::Probes(vec![find_probe("water").unwrap()]);
        assert!(one.components(&[1.4]).unwrap_err().contains("2 needed"));
        assert!(one.acid_base(&[1.4]).unwrap_err().contains("3 needed"));
        assert!(one.total(&[1.4]).is_ok());
    }
}
