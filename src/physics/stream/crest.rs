//! From the crest down: where the floor of a steep run begins, and the developed film on it.
//!
//! The crest is where the level surface of the pool gives way to the sloping floor. The flow is critical on it while the floor is still level:
//! total head E = y_c + A/(2T) with g, not g cos σ, the same head as in the lip's rating (`critical_flow`), which knows no slope. The slope then
//! starts with that energy, y cos σ + βQ²/(2gA²) = E, on the supercritical branch. (Critical flow with g cos σ at the top of the slope would
//! let a steeper lip have less head for the same pour, and slow the stream.) Friction eats this surplus where it is strong:
//! the start depth moves from critical to full energy as sin σ/S_f goes from 1 to [`FREE_CREST`] (own judgement).

use core::f64::consts::FRAC_PI_3;

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
    // Flat: cos σ s³ − (3/2) s² + ½ = 0 for s = y/y_c, solved by s = 1/(2 cos((π − σ)/3)).
    let flat = 0.5 / libm::cos(FRAC_PI_3 - run.slope / 3.0);
    let free = match section {
        Section::Sheet { .. } => flat,
        Section::Vee { .. } | Section::Trough { .. } | Section::Tube { .. } => {
            free_start(section, run, flow, critical, flat)?
        }
    };
    Some(critical * libm::exp(weight * libm::log(free)))
}

/// Depth over critical depth on the slope with the whole energy of the level crest.
fn free_start(section: &Section, run: &SteepRun, flow: f64, critical: f64, guess: f64) -> Option<f64> {
    let kinetic = |depth: f64| {
        let wetted = section.wetted(depth);
        let head = DEVELOPED * flow * flow / (2.0 * GRAVITY * wetted.area * wetted.area);
        (head, -2.0 * head * wetted.top_width / wetted.area)
    };
    let at_crest = kinetic(critical).0;
    let half = libm::sin(0.5 * run.slope);
    let fall = 2.0 * half * half; // 1 − cos σ
    newton(
        |s| {
            let (head, slope) = kinetic(s * critical);
            ((head - at_crest) / critical - (1.0 - s) - fall * s, slope + run.cosine)
        },
        1.0,
        0.2,
        guess,
    )
}
