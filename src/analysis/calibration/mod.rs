//! From bench pours to coefficients.
//!
//! # The model
//!
//! y = offset + xᵀb + e with e ~ N(0, s²). Here y = ln We at the onset of dribbling, the offset is ln We_c of the closed form, and x = (1, ln(r/h) − mean, ln E − mean) with
//! E = 1 + cos θ, centred on the bench rows: so b0 says by how much the closed form is off on this bench, b1 and b2 how its answer to the edge
//! radius and to wetting is off, and s is the scatter from pour to pour.
//!
//! A row may say where the onset was, with an uncertainty u of its own: y ~ N(offset + xᵀb, s² + u²); or that it lay between two flow steps: Φ(z₂) − Φ(z₁);
//! or only that one pour was clean or dribbled: P(clean) = Φ((y − offset − xᵀb)/s). All share s.
//!
//! # What no longer holds
//!
//! The closed form's trends are built in; a calibration's are what its rows showed. With b1 below minus the closed form's own slope a sharper edge makes things worse, with b2 below
//! minus its slope in ln E a more wettable one makes things better. Between the bench rows that may be so; it is never clamped, and a verdict says so (`trend_reversed`).
//!
//! # What is counted twice
//!
//! The uncertainty of a bench row's own angle, radius and liquid is not taken off: what varies from row to row is in s, what is common to all rows is in b0, and the question
//! adds its own inputs' and the stream's uncertainty again. That errs on the wide side.
//!
//! [`posterior()`] gives b and s as a mixture of normal distributions ([`Mixture`]); [`Calibration`] is the small part of it that a decision needs.

mod bench;
mod correction;
mod design;
mod fit;
mod leave_one_out;
mod matrix;
mod mixture;
mod posterior;
mod prior;
#[cfg(test)]
mod recovery;
mod remarks;
mod row;
mod separation;

pub use bench::{BenchFault, BenchRow, Pour, bench_row};
pub use correction::{Calibration, Covered, Place};
pub use design::{centre, condition_number};
pub use fit::{Counts, Fit, TAUGHT_BELOW, fit};
pub use leave_one_out::{Standing, flag_beyond, standings};
pub use matrix::{Factor, Symmetric, Vector, dot};
pub use mixture::{GridPoint, Mixture, Moments};
pub use posterior::{FitFault, GRID, Mode, misfit, mode_at, posterior};
pub use prior::Prior;
pub use remarks::{COEFFICIENTS, remarks};
pub use row::{Misfit, Row, Seen};
pub use separation::separable;
