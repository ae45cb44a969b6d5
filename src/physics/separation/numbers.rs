//! Dimensionless numbers of the approach film, and the regime that they tell.

use crate::physics::{GRAVITY, liquid::Liquid};

/// The approach film: what the separation models see of the stream.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Film {
    /// Thickness h, m.
    pub thickness: f64,
    /// Mean speed U, m/s.
    pub speed: f64,
}

/// Dimensionless numbers of a stream at an edge.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Numbers {
    /// We = ρU²h/γ: inertia against surface tension.
    pub weber: f64,
    /// Re = ρUh/μ: inertia against viscosity.
    pub reynolds: f64,
    /// Fr = U²/(gh): inertia against gravity; 1 at a critical section.
    pub froude: f64,
    /// Ca = μU/γ = We/Re: viscosity against surface tension.
    pub capillary: f64,
    /// Bo = ρg r²/γ with the edge radius r: gravity against surface tension at the edge.
    pub bond: f64,
    /// r/h: edge radius over film thickness.
    pub radius_ratio: f64,
}

impl Numbers {
    /// Numbers of `film` of `liquid` at an edge of this radius (m).
    #[must_use]
    pub fn of(film: Film, liquid: &Liquid, edge_radius: f64) -> Self {
        let Film { thickness: h, speed: u } = film;
        let dynamic = liquid.density * u * u;
        Self {
            weber: dynamic * h / liquid.surface_tension,
            reynolds: liquid.density * u * h / liquid.viscosity,
            froude: u * u / (GRAVITY * h),
            capillary: liquid.viscosity * u / liquid.surface_tension,
            bond: liquid.density * GRAVITY * edge_radius * edge_radius / liquid.surface_tension,
            radius_ratio: edge_radius / h,
        }
    }

    /// The regime these numbers tell.
    #[must_use]
    pub fn regime(&self) -> Regime {
        if self.reynolds < VISCOUS_BELOW_REYNOLDS {
            Regime::Viscous
        } else if self.weber < FREE_SHEET_WEBER {
            Regime::Capillary
        } else if self.weber < INERTIAL_ABOVE || self.reynolds < INERTIAL_ABOVE {
            Regime::Transitional
        } else {
            Regime::Inertial
        }
    }
}

/// Below this Weber number no free sheet exists: its two surfaces pull 2γ per width against the momentum ρU²h.
pub const FREE_SHEET_WEBER: f64 = 2.0;

/// From this Weber and Reynolds number on inertia is called dominant ("far above 1": common practice, no source; the figure is own judgement).
pub const INERTIAL_ABOVE: f64 = 10.0;

/// Below this Reynolds number viscosity rules the stream as a whole (own judgement; "around 1": common practice, no source).
pub const VISCOUS_BELOW_REYNOLDS: f64 = 1.0;

/// What rules the stream as a whole.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Regime {
    /// We and Re far above 1: inertia rules the stream, wetting at the edge decides whether it leaves.
    Inertial,
    /// Between the others.
    Transitional,
    /// We < 2: no free sheet can leave; the liquid drips, beads or runs.
    Capillary,
    /// Re < 1: a creeping stream that follows the wall.
    Viscous,
}

impl Regime {
    /// The word used in answers.
    #[must_use]
    pub const fn as_str(self) -> &'static str {
        match self {
            Self::Inertial => "inertial",
            Self::Transitional => "transitional",
            Self::Capillary => "capillary",
            Self::Viscous => "viscous",
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    const WATER: Liquid = Liquid { density: 998.2, viscosity: 1.002e-3, surface_tension: 0.07275 };

    #[test]
    fn capillary_number_is_weber_over_reynolds() {
        let n = Numbers::of(Film { thickness: 2e-3, speed: 0.5 }, &WATER, 5e-4);
        assert!((n.capillary - n.weber / n.reynolds).abs() < 1e-15);
        assert!((n.radius_ratio - 0.25).abs() < 1e-15);
    }

    #[test]
    fn inertia_rules_far_above_one() {
        // Common practice, no source: stream inertia dominates when We and Re are far above 1.
        let fast = Numbers::of(Film { thickness: 3e-3, speed: 1.0 }, &WATER, 5e-4);
        assert_eq!(fast.regime(), Regime::Inertial);
        let slow = Numbers::of(Film { thickness: 1e-3, speed: 0.1 }, &WATER, 5e-4);
        assert_eq!(slow.regime(), Regime::Capillary);
        let syrup = Liquid { density: 1400.0, viscosity: 10.0, surface_tension: 0.06 };
        assert_eq!(Numbers::of(Film { thickness: 5e-3, speed: 0.1 }, &syrup, 5e-4).regime(), Regime::Viscous);
    }
}
