//! The precision of the fields: one kernel for single and double.

use std::fmt::Debug;
use std::ops::{Add, AddAssign, Div, Mul, Neg, Sub};

/// A floating-point number that the fields can be made of.
///
/// Single precision is what runs use (half the traffic, twice the lanes); double is there to show that single suffices.
pub trait Real:
    Copy
    + Debug
    + Default
    + PartialOrd
    + Send
    + Sync
    + 'static
    + Add<Output = Self>
    + AddAssign
    + Sub<Output = Self>
    + Mul<Output = Self>
    + Div<Output = Self>
    + Neg<Output = Self>
{
    /// Nearest value to `x`.
    fn of(x: f64) -> Self;
    /// This value in double precision.
    fn wide(self) -> f64;
    /// Square root, correctly rounded on every machine.
    #[must_use]
    fn root(self) -> Self;
}

impl Real for f32 {
    #[inline(always)]
    fn of(x: f64) -> Self {
        x as Self
    }
    #[inline(always)]
    fn wide(self) -> f64 {
        f64::from(self)
    }
    #[inline(always)]
    fn root(self) -> Self {
        self.sqrt()
    }
}

impl Real for f64 {
    #[inline(always)]
    fn of(x: f64) -> Self {
        x
    }
    #[inline(always)]
    fn wide(self) -> f64 {
        self
    }
    #[inline(always)]
    fn root(self) -> Self {
        self.sqrt()
    }
}
