//! Remarks on a computed stream, as bits.

use core::ops::BitOr;

/// Remarks on a computed stream.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub struct Flags(u32);

impl Flags {
    /// Nothing to remark.
    pub const NONE: Self = Self(0);
    /// The brink depth is below the capillary length: surface tension shapes the brink, and no formula here
    /// has it.
    pub const BRINK_BELOW_CAPILLARY_LENGTH: Self = Self(1);
    /// Total head at the control below [`SMALL_HEAD`](super::SMALL_HEAD): allow ±20 % on flow at a given
    /// head.
    pub const SMALL_HEAD: Self = Self(1 << 1);
    /// The brink is as thin as a viscous film can be, rather than what its end-depth ratio says: ±30 %.
    pub const VISCOUS_BRINK_BOUND: Self = Self(1 << 2);
    /// The approach film was thickened to what a viscous film needs just before a brink: ±30 %.
    pub const VISCOUS_APPROACH_BOUND: Self = Self(1 << 3);
    /// Reynolds number on 4 R_h above [`LAMINAR_LIMIT`](super::LAMINAR_LIMIT), on a downhill run: laminar
    /// friction is doubtful.
    pub const TURBULENT: Self = Self(1 << 4);
    /// The stream stands above the half-round part of a trough, between its vertical walls.
    pub const TROUGH_ABOVE_HALF: Self = Self(1 << 5);
    /// The tube runs full.
    pub const TUBE_FULL: Self = Self(1 << 6);
    /// The tube is between part full and full: an interpolation that keeps the speed from falling.
    pub const TUBE_FILLING: Self = Self(1 << 7);
    /// Friction on the run takes less than 1 % of the stream's energy.
    pub const FRICTION_NEGLIGIBLE: Self = Self(1 << 8);

    /// Whether every bit of `other` is set.
    #[must_use]
    pub const fn contains(self, other: Self) -> bool {
        self.0 & other.0 == other.0
    }

    /// These flags, with those of `other` added when `condition` holds.
    #[must_use]
    pub const fn with(self, other: Self, condition: bool) -> Self {
        if condition { Self(self.0 | other.0) } else { self }
    }

    /// The bits.
    #[must_use]
    pub const fn bits(self) -> u32 {
        self.0
    }
}

impl BitOr for Flags {
    type Output = Self;

    fn bitor(self, other: Self) -> Self {
        Self(self.0 | other.0)
    }
}

#[cfg(test)]
mod tests {
    use super::Flags;

    #[test]
    fn bits_are_distinct_and_combine() {
        let both = Flags::SMALL_HEAD | Flags::TURBULENT;
        assert!(both.contains(Flags::SMALL_HEAD) && both.contains(Flags::TURBULENT));
        assert!(!both.contains(Flags::TUBE_FULL) && !Flags::NONE.contains(Flags::SMALL_HEAD));
        assert_eq!(Flags::NONE.with(Flags::TUBE_FULL, false), Flags::NONE);
        assert_eq!(both.bits().count_ones(), 2);
    }
}
