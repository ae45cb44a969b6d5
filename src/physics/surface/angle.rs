//! Contact angles with what they rest on.

use core::f64::consts::PI;

use super::SurfaceFault;
use crate::physics::Basis;
use crate::physics::quantity::DEGREE;

/// One contact angle with its uncertainty.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct AngleEstimate {
    /// Angle through the liquid, rad, 0 to π.
    pub angle: f64,
    /// Standard uncertainty, rad.
    pub standard_uncertainty: f64,
    /// Where it comes from, in words.
    pub source: &'static str,
    /// What it rests on.
    pub basis: Basis,
}

/// The three angles of a liquid on a face: receding ≤ contact ≤ advancing.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct WettingAngles {
    /// Static contact angle.
    pub contact: AngleEstimate,
    /// Advancing angle: a dry face is wetted at it.
    pub advancing: AngleEstimate,
    /// Receding angle: a wet face holds on at it.
    pub receding: AngleEstimate,
}

/// The angle that a model of wetting predicts.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ModelAngle {
    /// Equilibrium contact angle, rad; 0 when the liquid spreads.
    pub angle: f64,
    /// The model asks for cos θ > 1: no equilibrium drop, the liquid spreads to a film.
    pub spreads: bool,
}

impl ModelAngle {
    /// Angle of this cosine; above 1 the liquid spreads, below −1 there is no such angle and `fault` is given.
    pub(super) fn from_cosine(cosine: f64, fault: SurfaceFault) -> Result<Self, SurfaceFault> {
        // Rounding may carry an exact 180° a few ulps past −1.
        if cosine >= -1.0 - 1e-12 {
            Ok(Self { angle: angle_of(cosine), spreads: cosine > 1.0 })
        } else {
            Err(fault)
        }
    }
}

/// Angle of a cosine; cosines past the ends belong to a spreading film (0) or to a drop that rolls (π).
pub(super) fn angle_of(cosine: f64) -> f64 {
    libm::acos(cosine.clamp(-1.0, 1.0))
}

/// Refuses what is no angle between 0 and π.
pub(super) fn accept_angle(angle: f64) -> Result<f64, SurfaceFault> {
    if (0.0..=PI).contains(&angle) { Ok(angle) } else { Err(SurfaceFault::NotAnAngle { angle }) }
}

/// How a face takes to a liquid.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Wettability {
    /// Below 89°.
    Hydrophilic,
    /// 89° to 91°.
    Neutral,
    /// Above 91°.
    Hydrophobic,
    /// 150° and more.
    Superhydrophobic,
}

impl Wettability {
    /// Half width of the band round 90° that is called neutral: 1°, the repeatability of a goniometer (own judgement).
    pub const NEUTRAL_HALF_WIDTH: f64 = 1.0 * DEGREE;
    /// Superhydrophobic from here: 150° (common practice, no source).
    pub const SUPERHYDROPHOBIC: f64 = 150.0 * DEGREE;

    /// The class of a contact angle (rad). The divide at 90° is common practice, no source: there cos θ changes sign, and with it what
    /// roughness does.
    #[must_use]
    pub fn of(angle: f64) -> Self {
        let from_right_angle = angle - core::f64::consts::FRAC_PI_2;
        if angle >= Self::SUPERHYDROPHOBIC {
            Self::Superhydrophobic
        } else if from_right_angle.abs() <= Self::NEUTRAL_HALF_WIDTH {
            Self::Neutral
        } else if from_right_angle > 0.0 {
            Self::Hydrophobic
        } else {
            Self::Hydrophilic
        }
    }

    /// The word used for this class in every answer.
    #[must_use]
    pub const fn as_str(self) -> &'static str {
        match self {
            Self::Hydrophilic => "hydrophilic",
            Self::Neutral => "neutral",
            Self::Hydrophobic => "hydrophobic",
            Self::Superhydrophobic => "superhydrophobic",
        }
    }
}

/// The word for how a face takes to a liquid with this contact angle (rad): see [`Wettability::of`].
#[must_use]
pub fn wettability(angle: f64) -> &'static str {
    Wettability::of(angle).as_str()
}

#[cfg(test)]
mod tests {
    use super::{DEGREE, wettability};

    #[test]
    fn classes_meet_at_their_bounds() {
        for (degrees, word) in [
            (0.0, "hydrophilic"),
            (88.9, "hydrophilic"),
            (90.0, "neutral"),
            (91.1, "hydrophobic"),
            (149.9, "hydrophobic"),
            (150.0, "superhydrophobic"),
            (180.0, "superhydrophobic"),
        ] {
            assert_eq!(wettability(degrees * DEGREE), word, "{degrees}");
        }
    }
}
