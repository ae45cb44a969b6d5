//! Contact angle with hysteresis.

use core::f64::consts::PI;

/// Advancing and receding contact angle, rad, through the liquid.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ContactAngle {
    advancing: f64,
    receding: f64,
}

/// Angles nearer than this to 0 or π are refused: 5°, the wall stencil cannot tell them from 0 or π (own judgement).
pub const ANGLE_MARGIN: f64 = 5.0 * PI / 180.0;

/// Contact angles that the solver cannot take.
#[derive(Debug, Clone, Copy, PartialEq, thiserror::Error)]
pub enum AngleFault {
    /// An angle is within 5° of 0 or 180°, or not finite.
    #[error("contact angle of {:.1}° is within 5° of 0° or 180°", .0.to_degrees())]
    OutOfReach(f64),
    /// The receding angle exceeds the advancing one.
    #[error("receding contact angle {:.1}° exceeds the advancing {:.1}°", .receding.to_degrees(), .advancing.to_degrees())]
    Reversed {
        /// Advancing angle, rad.
        advancing: f64,
        /// Receding angle, rad.
        receding: f64,
    },
}

impl ContactAngle {
    /// Both angles, rad.
    ///
    /// # Errors
    /// [`AngleFault`] outside 5°..175° or with the receding angle above the advancing one.
    pub fn new(advancing: f64, receding: f64) -> Result<Self, AngleFault> {
        for angle in [advancing, receding] {
            if !(ANGLE_MARGIN..=PI - ANGLE_MARGIN).contains(&angle) {
                return Err(AngleFault::OutOfReach(angle));
            }
        }
        if receding > advancing {
            return Err(AngleFault::Reversed { advancing, receding });
        }
        Ok(Self { advancing, receding })
    }

    /// One angle, rad, no hysteresis.
    ///
    /// # Errors
    /// [`AngleFault`] outside 5°..175°.
    pub fn single(angle: f64) -> Result<Self, AngleFault> {
        Self::new(angle, angle)
    }

    /// Advancing angle, rad.
    #[must_use]
    pub const fn advancing(&self) -> f64 {
        self.advancing
    }

    /// Receding angle, rad.
    #[must_use]
    pub const fn receding(&self) -> f64 {
        self.receding
    }
}
