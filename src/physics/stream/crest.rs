//! From the crest down: where the floor of a steep run begins, and the developed film on it.
//!
//! The crest is where the level surface of the pool gives way to the sloping floor. The flow is critical on
//! it while the floor is still level: total head E = y_c + A/(2T) with g, not g cos σ, the same head as in
//! the lip's rating (`critical_flow`), which knows no slope. The slope then starts with that energy,
//! y cos σ + βQ²/(2gA²) = E, on the supercritical branch. (Critical flow with g cos σ at the top of the slope would
//! let a steeper lip have less head for the same pour, and slow the stream.) Friction eats this surplus where
//! it is strong: the energy kept, (cos σ + w(1 − cos σ)) y_c + βQ²/(2gA_c²), grows from w = 0 to 1 as sin
//! σ/S_f goes from 1 to [`FREE_CREST`] (own judgement).

use super::join::smoothstep;
use super::newton::newton;
use super::{DEVELOPED, march, sheet};
use crate::physics::GRAVITY;
use crate::physics::lip::Section;

/// sin σ/S_f at the control from which the crest's surplus energy survives whole; own judgement.
const FREE_CREST: f64 = 8.0;

/// A steep run as the march sees it.
#[derive(Debug, Clone, Copy)]
pub(super) struct SteepRun {
    /// Sine and cosine of the floor's slope.
    pub sine: f64,
    pub cosine: f64,
    /// Slope, rad.
    pub slope: f64,
    /// Length, m.
    pub length: f64,
    /// ln(sin σ/S_f) at the control.
    pub steepness: f64,
    /// Normal depth, m.
    pub normal_depth: f64,
}

/// Depth, m, at the end of a steep run, of the developed film (momentum factor 6/5) that starts at the crest.
pub(super) fn end_depth(
    section: &Section,
    run: &SteepRun,
    flow: f64,
    kinematic_viscosity: f64,
) -> Option<f64> {
    let critical = super::critical_depth(section, flow, DEVELOPED, GRAVITY)?;
    let start = start_depth(section, run, flow, critical)?;
    if let Section::Sheet { .. } = section {
        let critical_cubed = critical * critical * critical / run.cosine;
        sheet::depth_after(run.length, start, run.normal_depth, critical_cubed, run.cosine / run.sine)
    } else {
        let reach = march::Reach {
            section,
            flow,
            kinematic_viscosity,
            momentum_factor: DEVELOPED,
            sine: run.sine,
            cosine: run.cosine,
        };
        march::depth_after(&reach, run.length, start, run.normal_depth)
    }
}

/// Depth at the top of the slope, m.
fn start_depth(section: &Section, run: &SteepRun, flow: f64, critical: f64) -> Option<f64> {
    let weight = smoothstep(run.steepness / libm::log(FREE_CREST));
    if weight == 0.0 {
        return Some(critical);
    }
    let half = libm::sin(0.5 * run.slope);
    let fall = 2.0 * half * half; // 1 − cos σ
    let start = match section {
        Section::Sheet { .. } => flat_start(fall, weight)?,
        Section::Vee { .. } | Section::Trough { .. } | Section::Tube { .. } => {
            round_start(section, fall, weight, flow, critical)?
        }
    };
    Some(start * critical)
}

/// s = y/y_c at the top of a flat slope: cos σ s + 1/(2s²) = cos σ + ½ + w(1 − cos σ), freed of cancellation
/// with ε = 1 − s: ε(1 − cos σ + ε(1 + 2s)/(2s²)) = w(1 − cos σ).
fn flat_start(fall: f64, weight: f64) -> Option<f64> {
    let surplus = weight * fall;
    let excess = |e: f64| {
        let s = 1.0 - e;
        let bend = 0.5 * (1.0 + 2.0 * s) / (s * s);
        // d(bend)/dε = (1 + s)/s³
        (e * (fall + e * bend) - surplus, fall + e * (2.0 * bend + e * (1.0 + s) / (s * s * s)))
    };
    // ε is at most 1 − 1/√3 (vertical, all the energy), and never above either term alone would allow.
    let guess = weight.min((2.0 / 3.0 * surplus).sqrt()).min(0.42);
    newton(excess, 0.0, 0.5, guess).map(|e| 1.0 - e)
}

/// The same for the other sections, with the kinetic head βQ²/(2gA²).
fn round_start(section: &Section, fall: f64, weight: f64, flow: f64, critical: f64) -> Option<f64> {
    let kinetic = |s: f64| {
        let wetted = section.wetted(s * critical);
        let head = DEVELOPED * flow * flow / (2.0 * GRAVITY * wetted.area * wetted.area);
        (head / critical, -2.0 * head * wetted.top_width / wetted.area)
    };
    let at_crest = kinetic(1.0).0;
    let excess = |s: f64| {
        let (head, slope) = kinetic(s);
        (head - at_crest - (1.0 - s) * (1.0 - fall) - weight * fall, slope + 1.0 - fall)
    };
    newton(excess, 1.0, 0.2, 1.0 - 0.5 * weight.min((2.0 / 3.0 * weight * fall).sqrt()))
}
