//! Materials, their states, and the angles that water makes on them.

use super::angle::AngleEstimate;
use crate::physics::Basis;
use crate::physics::quantity::DEGREE;

/// The state that a material is in.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum State {
    /// As made, or freshly cleaned.
    Clean,
    /// Washed, handled or aged in air: the everyday state.
    InUse,
    /// Worn or fouled.
    Worn,
}

impl State {
    /// All states, in the order in which a material passes through them.
    pub const ALL: [Self; 3] = [Self::Clean, Self::InUse, Self::Worn];

    /// The word used for this state in every request and answer.
    #[must_use]
    pub const fn as_str(self) -> &'static str {
        match self {
            Self::Clean => "clean",
            Self::InUse => "in_use",
            Self::Worn => "worn",
        }
    }
}

/// A set of states.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct States {
    /// Has the clean state.
    pub clean: bool,
    /// Has the state in use.
    pub in_use: bool,
    /// Has the worn state.
    pub worn: bool,
}

impl States {
    /// Whether the set holds this state.
    #[must_use]
    pub const fn contains(self, state: State) -> bool {
        match state {
            State::Clean => self.clean,
            State::InUse => self.in_use,
            State::Worn => self.worn,
        }
    }

    /// The states of the set.
    pub fn iter(self) -> impl Iterator<Item = State> {
        State::ALL.into_iter().filter(move |s| self.contains(*s))
    }
}

impl core::fmt::Display for States {
    fn fmt(&self, f: &mut core::fmt::Formatter<'_>) -> core::fmt::Result {
        for (i, state) in self.iter().enumerate() {
            if i > 0 {
                f.write_str(", ")?;
            }
            f.write_str(state.as_str())?;
        }
        Ok(())
    }
}

/// An angle with water (20 to 25 °C) as the catalogue holds it, in degrees: tables of angles are read, and checked, in degrees.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct AngleBand {
    /// Suggested value, degrees.
    pub typical_deg: f64,
    /// Lower end of the band, degrees. The band is two standard uncertainties to either side.
    pub low_deg: f64,
    /// Upper end of the band, degrees.
    pub high_deg: f64,
    /// Where it comes from.
    pub source: &'static str,
    /// What it rests on.
    pub basis: Basis,
}

impl AngleBand {
    /// Least standard uncertainty of any angle, 1°: the repeatability of a goniometer (own judgement). It matters only where the catalogue says
    /// "zero" without a band.
    pub const LEAST_UNCERTAINTY: f64 = 1.0 * DEGREE;

    /// The band in radians, read as ± 2 standard uncertainties.
    #[must_use]
    pub fn estimate(&self) -> AngleEstimate {
        let quarter = 0.25 * (self.high_deg - self.low_deg) * DEGREE;
        AngleEstimate {
            angle: self.typical_deg * DEGREE,
            standard_uncertainty: quarter.max(Self::LEAST_UNCERTAINTY),
            source: self.source,
            basis: self.basis,
        }
    }
}

/// How far the values of a finish can be trusted.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Confidence {
    /// Several published measurements agree.
    High,
    /// At least one angle is published.
    Medium,
    /// Recalled or judged.
    Low,
}

impl Confidence {
    /// The word used for it in every answer.
    #[must_use]
    pub const fn as_str(self) -> &'static str {
        match self {
            Self::High => "high",
            Self::Medium => "medium",
            Self::Low => "low",
        }
    }
}

/// A surface energy split after Owens & Wendt, at 20 °C.
///
/// Splits "from memory" for glass, glaze, enamel, steel and aluminium were picked so that the Owens–Wendt equation lands near the static angle:
/// they are no independent evidence for that equation.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct SurfaceEnergy {
    /// Dispersive component, N/m.
    pub dispersive: f64,
    /// Polar component, N/m.
    pub polar: f64,
    /// Where it comes from.
    pub source: &'static str,
}

impl SurfaceEnergy {
    /// Total surface energy, N/m.
    #[must_use]
    pub fn total(&self) -> f64 {
        self.dispersive + self.polar
    }
}

/// A material in one state: the finish meant, and the angles that water makes on it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Finish {
    /// The finish meant, in words.
    pub finish: &'static str,
    /// Static contact angle with water.
    pub contact: AngleBand,
    /// Advancing angle with water.
    pub advancing: AngleBand,
    /// Receding angle with water.
    pub receding: AngleBand,
    /// Surface energy in this state; `None` where it is not defined (absorbent or composite).
    pub surface_energy: Option<SurfaceEnergy>,
    /// How far these values can be trusted.
    pub confidence: Confidence,
    /// What to know about them; may be empty.
    pub note: &'static str,
}

/// How a material meets a liquid other than water.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum SurfaceKind {
    /// A dense face with a surface energy.
    Dense,
    /// Porous: it drinks the liquid and stays wet.
    Absorbent,
    /// Rough and water-repellent: it carries the liquid on tips, as long as the tension is high.
    Composite,
}

/// A lip material.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Material {
    /// Identifier, kebab-case.
    pub id: &'static str,
    /// Name.
    pub name: &'static str,
    /// How it meets other liquids.
    pub kind: SurfaceKind,
    /// As made or freshly cleaned.
    pub clean: Option<Finish>,
    /// Washed, handled or aged.
    pub in_use: Option<Finish>,
    /// Worn or fouled.
    pub worn: Option<Finish>,
    /// Surface energy in the everyday state, or in the clean one where that is the only one known. Each [`Finish`] carries its own.
    pub surface_energy: Option<SurfaceEnergy>,
}

impl Material {
    /// The values in this state, if they are known.
    #[must_use]
    pub fn state(&self, state: State) -> Option<&Finish> {
        match state {
            State::Clean => self.clean.as_ref(),
            State::InUse => self.in_use.as_ref(),
            State::Worn => self.worn.as_ref(),
        }
    }

    /// The states with values.
    #[must_use]
    pub fn states(&self) -> States {
        States { clean: self.clean.is_some(), in_use: self.in_use.is_some(), worn: self.worn.is_some() }
    }
}
