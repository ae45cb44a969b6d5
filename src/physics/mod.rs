//! What nature does: liquids, surfaces, the stream at the lip, and whether it leaves or clings.
//!
//! Everything here is in SI units and radians unless a name says otherwise (temperatures are in degrees
//! Celsius and compositions in mass fractions, because the published correlations are). Nothing here knows of requests, of
//! serialisation or of the time of day.

pub mod last_drop;
pub mod lip;
pub mod liquid;
pub mod numerics;
pub mod quantity;
pub mod separation;
pub mod stream;
pub mod surface;
pub mod vessel;

/// Standard acceleration of gravity, m/s² (exact by convention: 3rd CGPM, 1901).
pub const GRAVITY: f64 = 9.80665;

/// What a number rests on.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Basis {
    /// A published correlation or table, coefficients seen in a source or checked against one.
    Published,
    /// A published value or correlation written down from memory, not verified against the source.
    FromMemory,
    /// An estimate or judgement of our own.
    Estimate,
    /// Computed from other numbers in this answer.
    Derived,
    /// Given by the caller.
    Given,
}

impl Basis {
    /// The word used for this basis in every answer.
    #[must_use]
    pub const fn as_str(self) -> &'static str {
        match self {
            Self::Published => "published",
            Self::FromMemory => "from memory",
            Self::Estimate => "estimate",
            Self::Derived => "derived",
            Self::Given => "given",
        }
    }
}
