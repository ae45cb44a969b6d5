//! What a pour is recorded as: instants, stretches, sums; and a step of it.

use super::{attitude::Attitude, landing::Landing};
use crate::analysis::decision::{Decision, Verdict};

/// One instant of a pour.
#[derive(Debug, Clone, Copy)]
pub struct Sample {
    /// Time from the start of the course, s.
    pub time: f64,
    /// Tilt, rad.
    pub tilt: f64,
    /// Slope of the floor, rad.
    pub slope: f64,
    /// Level above the lip, m; negative below it.
    pub head: f64,
    /// Volume in the vessel, m³.
    pub volume: f64,
    /// Flow over the lip, m³/s.
    pub flow: f64,
    /// What is decided of the stream; `None` without flow, or where the floor is steeper than the models take.
    pub decided: Option<Decided>,
    /// Whether the stream clings, in the best estimate.
    pub attached: bool,
    /// Where it lands; `None` while it clings.
    pub landing: Option<Landing>,
}

/// What is decided of the stream at one instant.
#[derive(Debug, Clone, Copy)]
pub struct Decided {
    /// The verdict with the face as it is then.
    pub verdict: Verdict,
    /// Weber number over critical Weber number.
    pub safety_factor: f64,
    /// Lower end of its interval.
    pub low: f64,
    /// Upper end of its interval.
    pub high: f64,
    /// Weber number of the approach film.
    pub weber: f64,
}

/// A stretch of time, s.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Span {
    /// From.
    pub from: f64,
    /// To.
    pub to: f64,
}

/// The course of a pour.
pub(super) struct Course {
    pub samples: Vec<Sample>,
    /// Stretches of flow.
    pub flowing: Vec<Span>,
    /// Stretches of dribbling, best estimate.
    pub dribbling: Vec<Span>,
    /// m³, integrated from the flow: run down outside, best estimate and both ends.
    pub dribbled: [f64; 3],
    /// m³, integrated from the flow: left the lip freely.
    pub served: f64,
    /// m³ that flowed while nothing could be decided for the steepness of the floor.
    pub undecided: f64,
    /// m³ that flowed at heads below 10 mm.
    pub small_head: f64,
    /// The stream with the largest flow, with the decision on a dry face.
    pub peak: Option<(Attitude, Decision)>,
    pub largest_flow: f64,
    pub largest_head: f64,
    /// Whether the pour was turned back on its target.
    pub reached_target: bool,
    pub began_above_lip: bool,
    pub steps: usize,
}

/// A step with its middle: enough for the quadratic that the flow follows within it.
pub(super) struct Step {
    pub from: Attitude,
    /// Flow in the middle, m³/s.
    pub middle: f64,
    pub to: Attitude,
}

impl Step {
    pub fn duration(&self) -> f64 {
        self.to.time - self.from.time
    }

    /// ∫ Q dt over the part of the step from share `a` to share `b`, of the quadratic through both ends and the middle.
    pub fn outflow(&self, a: f64, b: f64) -> f64 {
        let (q0, qm, q1) = (self.from.flow, self.middle, self.to.flow);
        // Q(s) = q0 + s (4qm − 3q0 − q1) + s² (2q0 − 4qm + 2q1)
        let linear = 4.0 * qm - 3.0 * q0 - q1;
        let square = 2.0 * q0 - 4.0 * qm + 2.0 * q1;
        let primitive = |s: f64| s * (q0 + s * (0.5 * linear + s * square / 3.0));
        self.duration() * (primitive(b) - primitive(a))
    }

    /// Volume at a share of the step: the cubic through both ends with their slopes −Q.
    pub fn volume(&self, s: f64) -> f64 {
        let dt = self.duration();
        let (v0, v1) = (self.from.volume, self.to.volume);
        let (d0, d1) = (-self.from.flow * dt, -self.to.flow * dt);
        let rest = 1.0 - s;
        v0 * (1.0 + 2.0 * s) * rest * rest + v1 * s * s * (3.0 - 2.0 * s) + s * rest * (d0 * rest - d1 * s)
    }
}
