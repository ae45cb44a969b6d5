//! Checks against the outside world: handbooks, standards, worked examples and general-purpose reference libraries.
//! Each check names its source and basis.
#![allow(missing_docs)]

mod calibration;
mod facts;
mod hydraulics;
mod liquids;
mod pour;
mod statistics;
mod vessel;
mod wetting;
