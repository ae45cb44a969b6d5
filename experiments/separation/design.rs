//! The designed set of runs: which streams are computed, and which of them are held out.
//!
//! A low-discrepancy sequence (additive recurrence on the generalised golden ratio, so any first part of it fills the space) with a fixed offset;
//! one run of every four is held out, drawn by a fixed hash before anything is computed.

use std::f64::consts::PI;

use dribble_risk::physics::separation::free_surface::contact::{AngleFault, ContactAngle};
use dribble_risk::physics::separation::free_surface::problem::{Approach, Problem};

/// Offset of the sequence and key of the hash. Changing it makes another experiment.
pub(crate) const SEED: u64 = 20_240_611;
/// Runs of the design.
pub(crate) const RUNS: usize = 240;

/// A run of the design.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Case {
    pub(crate) run: usize,
    pub(crate) held_out: bool,
    pub(crate) radius_ratio: f64,
    pub(crate) contact_angle_deg: f64,
    pub(crate) turn_deg: f64,
    pub(crate) reynolds: f64,
    /// Infinite without gravity.
    pub(crate) froude: f64,
    pub(crate) slope_deg: f64,
    pub(crate) approach: Approach,
}

impl Case {
    pub(crate) fn problem(&self) -> Result<Problem, AngleFault> {
        Ok(Problem {
            radius_ratio: self.radius_ratio,
            contact: ContactAngle::single(self.contact_angle_deg * PI / 180.0)?,
            turn: self.turn_deg * PI / 180.0,
            reynolds: self.reynolds,
            froude: self.froude.is_finite().then_some(self.froude),
            slope: self.slope_deg * PI / 180.0,
            approach: self.approach,
        })
    }
}

/// One number from two by mixing bits (SplitMix64's finaliser).
fn hash(a: u64, b: u64) -> u64 {
    let mut z = a.wrapping_mul(0x9E37_79B9_7F4A_7C15).wrapping_add(b.wrapping_mul(0xD1B5_4A32_D192_ED03));
    z = (z ^ (z >> 30)).wrapping_mul(0xBF58_476D_1CE4_E5B9);
    z = (z ^ (z >> 27)).wrapping_mul(0x94D0_49BB_1331_11EB);
    z ^ (z >> 31)
}

/// Point `run` of the sequence in the unit cube of seven dimensions.
fn point(run: usize) -> [f64; 7] {
    // Root of x^8 = x + 1.
    let mut ratio = 1.1f64;
    for _ in 0..60 {
        ratio = libm::pow(1.0 + ratio, 1.0 / 8.0);
    }
    let mut step = 1.0;
    let mut at = [0.0; 7];
    for (k, value) in at.iter_mut().enumerate() {
        step /= ratio;
        let offset = (hash(SEED, k as u64) >> 11) as f64 / (1u64 << 53) as f64;
        *value = (offset + step * (run as f64 + 1.0)).fract();
    }
    at
}

fn between(low: f64, high: f64, part: f64) -> f64 {
    low + (high - low) * part
}

fn rounded(value: f64, digits: i32) -> f64 {
    let scale = (0..digits).fold(1.0, |scale, _| scale * 10.0);
    (value * scale).round() / scale
}

/// Run `run` of the design.
pub(crate) fn case(run: usize) -> Case {
    let [kind, radius, angle, turn, reynolds, gravity, slope] = point(run);
    let drawn = (hash(SEED ^ 0x5EED, (run / 4) as u64) % 4) as usize;
    // One in six is ideally sharp; two thirds of the others lie at r/h of 1 or less, where people pour.
    let sharp = radius < 1.0 / 6.0;
    let blunt = (radius - 1.0 / 6.0) * 6.0 / 5.0;
    let radius_ratio = if sharp {
        0.0
    } else if blunt < 2.0 / 3.0 {
        0.2 * libm::pow(5.0, blunt * 1.5)
    } else {
        libm::pow(3.0, (blunt - 2.0 / 3.0) * 3.0)
    };
    // Three in ten come at free depth, critical at the edge of a level or mild floor; one in ten without gravity.
    let (approach, froude, slope_deg) = if kind < 0.3 {
        (Approach::Flow, 1.0, between(-10.0, 5.0, slope))
    } else if kind < 0.4 {
        (Approach::Film, f64::INFINITY, 0.0)
    } else {
        // 1/√Fr evenly: Fr from 1.4 to 100, half of them below 4.
        let root = between(0.1, 0.85, gravity);
        (Approach::Film, 1.0 / (root * root), between(-10.0, 40.0, slope))
    };
    let turn_deg = between(60.0, if sharp { 150.0 } else { 180.0 }, turn);
    Case {
        run,
        held_out: run % 4 == drawn,
        radius_ratio: rounded(radius_ratio, 4),
        contact_angle_deg: rounded(between(15.0, 150.0, angle), 1),
        turn_deg: rounded(turn_deg, 1),
        reynolds: rounded(10.0 * libm::pow(100.0, reynolds), 1),
        froude: rounded(froude, 3),
        slope_deg: rounded(slope_deg, 1),
        approach,
    }
}
