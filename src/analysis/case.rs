//! One case, ready to be decided: SI units, liquid and surface resolved, every uncertain input with its weight.

use super::{calibration::Calibration, field::Field};
use crate::physics::{lip::Lip, liquid::Liquid, separation::closed_form::CoefficientSet};
use arrayvec::ArrayVec;

/// A case: everything that [`super::decision::decide`] looks at.
#[derive(Debug, Clone)]
pub struct Case {
    /// The lip.
    pub lip: Lip,
    /// The liquid.
    pub liquid: Liquid,
    /// Advancing contact angle, rad.
    pub advancing: f64,
    /// Receding contact angle, rad.
    pub receding: f64,
    /// The angle that counts for this outer face, rad: advancing on a dry one, receding on a wet one.
    pub contact_angle: f64,
    /// Pour rate, m³/s.
    pub flow: f64,
    /// Confidence of the verdict.
    pub confidence: Confidence,
    /// Coefficients of the closed form.
    pub coefficients: &'static CoefficientSet,
    /// What bench pours have taught of them, if anything.
    pub calibration: Option<Calibration>,
    /// Uncertain inputs.
    pub inputs: Inputs,
}

/// A confidence, and the normal quantile of its two-sided interval.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Confidence {
    /// The confidence, 0.5 to 0.9999.
    pub level: f64,
    /// Normal quantile at (1 + level)/2.
    pub two_sided: f64,
}

impl Confidence {
    /// The default, 0.95.
    pub const DEFAULT: Self = Self { level: 0.95, two_sided: 1.959_963_984_540_054 };

    /// Confidence at this level.
    #[must_use]
    pub fn at(level: f64) -> Self {
        #[expect(clippy::float_cmp_const, reason = "a shortcut for exactly the default")]
        if level == Self::DEFAULT.level {
            return Self::DEFAULT;
        }
        Self { level, two_sided: crate::physics::numerics::normal_quantile(0.5 * (1.0 + level)) }
    }
}

/// A primary input of the balance, in which ln(safety factor) has a slope.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
#[repr(u8)]
pub enum Primary {
    /// ln density.
    Density,
    /// ln viscosity.
    Viscosity,
    /// ln surface tension.
    SurfaceTension,
    /// Contact angle, rad.
    ContactAngle,
    /// Edge radius, m.
    EdgeRadius,
    /// Turn of the edge, rad.
    Turn,
    /// Size of the section: ln of width, diameter or bore; included angle in rad.
    Section,
    /// Slope of the floor, rad.
    Slope,
    /// Length of the floor, m.
    RunLength,
    /// ln pour rate.
    Flow,
    /// ln thickness at a given pour rate (the stream model).
    Thickness,
    /// ln of the equivalent sheet's thickness at a given speed.
    Equivalence,
}

impl Primary {
    /// How many there are.
    pub const COUNT: usize = 12;
    /// Those that act through the stream's thickness and speed alone.
    pub const OF_THE_STREAM: [Self; 6] =
        [Self::Section, Self::Slope, Self::RunLength, Self::Flow, Self::Thickness, Self::Equivalence];
}

/// What an uncertainty comes from.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Source {
    /// A numeric field of the question.
    Field(Field),
    /// A catalogue surface.
    CatalogueSurface,
    /// Angles estimated from surface energy: the estimate itself.
    EstimatedSurface,
    /// The stream model: thickness at this pour rate, equivalent sheet.
    Stream,
    /// The separation model.
    Model,
}

impl Source {
    /// Its name in answers: a JSON Pointer where there is a field, else a word.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::Field(field) => field.pointer(),
            Self::CatalogueSurface => "/surface/catalogue",
            Self::EstimatedSurface => "/surface/estimated",
            Self::Stream => "stream",
            Self::Model => "model",
        }
    }
}

/// One standard uncertainty, as a shift of the primary inputs.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Shift {
    /// Shifts one primary input.
    One(Primary, f64),
    /// Shifts ln density, ln viscosity and ln surface tension together (temperature, composition).
    Liquid([f64; 3]),
}

/// An uncertain input.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Input {
    /// What it is.
    pub source: Source,
    /// What one standard uncertainty does.
    pub shift: Shift,
}

/// The uncertain inputs of a case; a question has 24 at most.
pub type Inputs = ArrayVec<Input, 24>;

/// Slopes of ln(safety factor) in the primary inputs.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Slopes(pub [f64; Primary::COUNT]);

impl Slopes {
    /// The slope in this primary input.
    #[must_use]
    pub fn of(&self, primary: Primary) -> f64 {
        self.0[primary as usize]
    }

    /// What one standard uncertainty of this input does to ln(safety factor).
    #[must_use]
    pub fn effect(&self, shift: &Shift) -> f64 {
        match shift {
            Shift::One(primary, by) => self.of(*primary) * by,
            Shift::Liquid([density, viscosity, tension]) => {
                self.of(Primary::Density) * density
                    + self.of(Primary::Viscosity) * viscosity
                    + self.of(Primary::SurfaceTension) * tension
            }
        }
    }
}
