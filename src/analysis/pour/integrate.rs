//! The pour in time: volume as the state, RK4, steps that end on the corners of the course, halved until the flow integrated on its own agrees.

use std::sync::atomic::{AtomicBool, Ordering};

use super::{
    attachment::{Faces, Judge, Judgement, Side, Track},
    attitude::{Attitude, LEAST_FLOW},
    course::{Course, Decided, Sample, Span, Step},
    landing::landing,
    spec::Setup,
};
use crate::physics::{
    numerics::{Bracket, find_root},
    stream::{SMALL_HEAD, StreamFault},
};

/// Largest step, s, of a pour of up to 25 s; a 200th of longer ones.
const LARGEST_STEP: f64 = 0.125;
/// Difference between volume state and integrated flow that a step may leave, as a share of the fill.
const STEP_TOLERANCE: f64 = 3e-9;
/// Share of the fill below which the vessel counts as empty.
const EMPTY: f64 = 1e-9;
/// The most steps of a pour.
const MOST_STEPS: usize = 200_000;

/// Why a pour could not be computed.
#[derive(Debug, Clone, Copy, PartialEq, thiserror::Error)]
pub(super) enum IntegrationFault {
    #[error("{0}")]
    Stream(#[from] StreamFault),
    #[error(
        "the level does not settle: this lip passes far more than the vessel can supply over {MOST_STEPS} steps in time"
    )]
    TooManySteps,
    #[error("the level over the lip did not converge")]
    NotConverged,
    #[error("the computation was stopped")]
    Cancelled,
}

struct Pouring<'a> {
    setup: &'a mut Setup,
    judge: Judge,
    tracks: [Track; 3],
    course: Course,
    /// The lip has been wetted: liquid starts over it without a capillary hold.
    lip_wetted: bool,
    pending_target: Option<(f64, f64)>,
}

/// Pours.
pub(super) fn integrate(setup: &mut Setup, cancel: &AtomicBool) -> Result<Course, IntegrationFault> {
    let judge = Judge::new(setup);
    let wet = setup.starts_wet;
    let mut pouring = Pouring {
        judge,
        tracks: [Side::Best, Side::Least, Side::Most].map(|side| Track::new(side, wet)),
        course: Course {
            samples: Vec::with_capacity(256),
            flowing: Vec::new(),
            dribbling: Vec::new(),
            dribbled: [0.0; 3],
            served: 0.0,
            undecided: 0.0,
            small_head: 0.0,
            peak: None,
            largest_flow: 0.0,
            largest_head: f64::NEG_INFINITY,
            reached_target: false,
            began_above_lip: false,
            steps: 0,
        },
        lip_wetted: wet,
        pending_target: setup.target,
        setup,
    };
    pouring.run(cancel)?;
    let mut course = pouring.course;
    course.dribbled = pouring.tracks.map(|track| track.dribbled);
    Ok(course)
}

impl Pouring<'_> {
    fn run(&mut self, cancel: &AtomicBool) -> Result<(), IntegrationFault> {
        let mut now = self.at(0.0, self.setup.fill, None)?;
        let mut flowing = self.setup.start_excess(&now, self.lip_wetted) > 0.0;
        self.course.began_above_lip = flowing;
        let mut judgement = Judgement::default();
        if flowing {
            judgement = self.begin(&now)?;
        }
        self.push(&now, flowing, &judgement);
        let mut step = self.largest_step();
        while now.time < self.setup.programme.end() {
            self.course.steps += 1;
            if self.course.steps > MOST_STEPS {
                return Err(IntegrationFault::TooManySteps);
            }
            if self.course.steps.is_multiple_of(32) && cancel.load(Ordering::Relaxed) {
                return Err(IntegrationFault::Cancelled);
            }
            let corner = self.setup.programme.next_corner(now.time);
            if flowing {
                let (taken, error) = self.step(&now, step.min(self.largest_step()).min(corner - now.time))?;
                let dt = taken.duration();
                let tolerance = STEP_TOLERANCE * self.setup.fill;
                if (error > tolerance || taken.to.volume <= 0.0) && dt > 1e-9 {
                    step = 0.5 * dt;
                    continue;
                }
                if let Some(shorter) = self.hits_target(&taken) {
                    step = shorter;
                    continue;
                }
                if error < tolerance / 64.0 && dt >= step * 0.99 {
                    step = (2.0 * dt).min(self.largest_step());
                }
                judgement = self.pass(&taken, &judgement)?;
                now = taken.to;
                self.turn_back_on_target(&now);
                if now.flow < 0.5 * LEAST_FLOW || now.volume < EMPTY * self.setup.fill {
                    flowing = false;
                    self.cease(&taken);
                }
                self.push(&now, flowing, &judgement);
            } else {
                let end = corner.min(now.time + self.largest_step());
                let next = self.at(end, now.volume, Some(&now))?;
                let empty = now.volume < EMPTY * self.setup.fill;
                if empty || self.setup.start_excess(&next, self.lip_wetted) <= 0.0 {
                    now = next;
                    self.push(&now, false, &Judgement::default());
                    continue;
                }
                let start = self.start_between(&now, &next)?;
                self.push(&start, false, &Judgement::default());
                now = start;
                flowing = true;
                judgement = self.begin(&now)?;
                self.push(&now, true, &judgement);
                step = self.largest_step() / 8.0;
            }
        }
        if flowing {
            self.close(now.time);
        }
        Ok(())
    }

    fn largest_step(&self) -> f64 {
        LARGEST_STEP.max(self.setup.programme.end() / 200.0) * self.setup.step_factor
    }

    fn at(&self, time: f64, volume: f64, near: Option<&Attitude>) -> Result<Attitude, IntegrationFault> {
        self.setup.attitude(time, volume, near).ok_or(IntegrationFault::NotConverged)
    }

    /// One step of RK4, and how far its volume is from the flow integrated by Simpson's rule.
    fn step(&self, from: &Attitude, dt: f64) -> Result<(Step, f64), IntegrationFault> {
        let time = from.time;
        // A stage may ask for more than there is; the step is then refused.
        let stage = |dt: f64, flow: f64, near: &Attitude| {
            self.at(time + dt, (from.volume - dt * flow).max(0.0), Some(near))
        };
        let a = stage(0.5 * dt, from.flow, from)?;
        let b = stage(0.5 * dt, a.flow, &a)?;
        let c = stage(dt, b.flow, &b)?;
        let outflow = dt / 6.0 * (from.flow + 2.0 * (a.flow + b.flow) + c.flow);
        let volume = from.volume - outflow;
        if volume <= 0.0 {
            let to = Attitude { time: time + dt, volume, ..c };
            return Ok((Step { from: *from, middle: b.flow, to }, f64::INFINITY));
        }
        let to = self.at(time + dt, volume, Some(&c))?;
        let mut step = Step { from: *from, middle: b.flow, to };
        step.middle = self.at(time + 0.5 * dt, step.volume(0.5).max(0.0), Some(&b))?.flow;
        let error = (step.outflow(0.0, 1.0) - outflow).abs();
        Ok((step, error))
    }

    /// The instant, between two without flow, at which liquid begins to run.
    fn start_between(&self, from: &Attitude, to: &Attitude) -> Result<Attitude, IntegrationFault> {
        let excess = |at: &Attitude| self.setup.start_excess(at, self.lip_wetted);
        let f =
            |time: f64| self.setup.attitude(time, from.volume, Some(from)).map_or(f64::NAN, |at| excess(&at));
        if excess(from) > 0.0 {
            return Ok(*from);
        }
        let bracket = Bracket { low: (from.time, excess(from)), high: (to.time, excess(to)) };
        let time = find_root(f, bracket, 1e-9).ok_or(IntegrationFault::NotConverged)?;
        self.at(time, from.volume, Some(from))
    }

    /// Liquid begins to run over the lip.
    fn begin(&mut self, now: &Attitude) -> Result<Judgement, IntegrationFault> {
        self.lip_wetted = true;
        self.course.flowing.push(Span { from: now.time, to: now.time });
        let judgement = self.judge(now)?;
        let quantile = self.judge.quantile;
        for track in &mut self.tracks {
            let attached = match track.excess(&judgement, quantile) {
                Some(excess) => excess < 0.0,
                // A trickle clings; on a floor too steep to decide, neither is known.
                None => self.judge.takes(now.slope) || track.side == Side::Most,
            };
            track.set(attached);
        }
        if self.tracks[0].attached {
            self.course.dribbling.push(Span { from: now.time, to: now.time });
        }
        // Where the face has just been wetted, the wet one counts from here on.
        self.judge(now)
    }

    fn judge(&mut self, at: &Attitude) -> Result<Judgement, IntegrationFault> {
        let faces = Faces {
            dry: self.tracks.iter().any(|track| !track.wet),
            wet: self.tracks.iter().any(|track| track.wet),
        };
        let judgement = self.judge.judge(at.slope, at.flow, faces)?;
        if at.flow > self.course.largest_flow {
            self.course.largest_flow = at.flow;
            if let Some(decision) = judgement.dry.or(judgement.wet) {
                self.course.peak = Some((*at, decision));
            }
        }
        Ok(judgement)
    }

    /// Accounts for a step: who dribbled how much of it. Gives the judgement at its end.
    fn pass(&mut self, step: &Step, before: &Judgement) -> Result<Judgement, IntegrationFault> {
        let after = self.judge(&step.to)?;
        let quantile = self.judge.quantile;
        let whole = step.outflow(0.0, 1.0);
        let out_of_range = !(self.judge.takes(step.from.slope) && self.judge.takes(step.to.slope));
        if out_of_range {
            self.course.undecided += whole;
        }
        if step.from.over_sill.max(step.to.over_sill) < SMALL_HEAD {
            self.course.small_head += whole;
        }
        self.course.largest_head = self.course.largest_head.max(step.to.head).max(step.from.head);
        for index in 0..self.tracks.len() {
            let track = self.tracks[index];
            let (from, to) = (track.excess(before, quantile), track.excess(&after, quantile));
            let held = match track.side {
                _ if !out_of_range => track.attached,
                Side::Best => track.attached,
                Side::Least => false,
                Side::Most => true,
            };
            let dribbled = match (from, to) {
                (Some(a), Some(b)) if (a < 0.0) != (b < 0.0) && (a < 0.0) == track.attached => {
                    let share = self.crossing(step, &track, index, (a, b))?;
                    let attached = b < 0.0;
                    let part = if attached { step.outflow(share, 1.0) } else { step.outflow(0.0, share) };
                    self.change(index, attached, step.from.time + share * step.duration());
                    part
                }
                (_, Some(b)) if (b < 0.0) != track.attached && !out_of_range => {
                    // Decided for the first time.
                    self.change(index, b < 0.0, step.from.time);
                    if b < 0.0 { whole } else { 0.0 }
                }
                _ => {
                    if held {
                        whole
                    } else {
                        0.0
                    }
                }
            };
            self.tracks[index].dribbled += dribbled;
            if index == 0 {
                self.course.served += whole - dribbled;
            }
        }
        // A face wetted on the way needs the other decision.
        let lacks = self.tracks.iter().any(|track| {
            let has = if track.wet { after.wet.is_some() } else { after.dry.is_some() };
            !has
        });
        let decided = after.dry.is_some() || after.wet.is_some();
        if lacks && decided { self.judge(&step.to) } else { Ok(after) }
    }

    fn change(&mut self, index: usize, attached: bool, time: f64) {
        self.tracks[index].set(attached);
        if index > 0 {
            return;
        }
        if attached {
            self.course.dribbling.push(Span { from: time, to: time });
        } else if let Some(span) = self.course.dribbling.last_mut() {
            span.to = time;
        }
    }

    /// The share of the step at which a track changes sides: solved for the best estimate, by straight line for the ends of the interval.
    fn crossing(
        &mut self,
        step: &Step,
        track: &Track,
        index: usize,
        (a, b): (f64, f64),
    ) -> Result<f64, IntegrationFault> {
        if index > 0 {
            return Ok(a / (a - b));
        }
        let quantile = self.judge.quantile;
        let faces = Faces { dry: !track.wet, wet: track.wet };
        let mut found = None;
        let mut fault = None;
        let (setup, judge) = (&*self.setup, &mut self.judge);
        let f = |share: f64| {
            let time = step.from.time + share * step.duration();
            let Some(at) = setup.attitude(time, step.volume(share), Some(&step.from)) else {
                return f64::NAN;
            };
            match judge.judge(at.slope, at.flow, faces) {
                Ok(judgement) => {
                    found = Some((at, judgement));
                    track.excess(&judgement, quantile).unwrap_or(f64::NAN)
                }
                Err(e) => {
                    fault = Some(e);
                    f64::NAN
                }
            }
        };
        let share = find_root(f, Bracket { low: (0.0, a), high: (1.0, b) }, 1e-4);
        if let Some(fault) = fault {
            return Err(fault.into());
        }
        let Some(share) = share else { return Ok(a / (a - b)) };
        if let Some((at, judgement)) = found {
            let mut sample = self.sample(&at, true, &judgement);
            sample.attached = b < 0.0;
            sample.landing = sample.landing.filter(|_| !sample.attached);
            self.course.samples.push(sample);
        }
        Ok(share)
    }

    /// A step that goes beyond the target: how long it may last instead.
    fn hits_target(&self, step: &Step) -> Option<f64> {
        let (target, _) = self.pending_target?;
        let left = |share: f64| self.setup.fill - step.volume(share) - target;
        let beyond = left(1.0);
        if beyond <= 1e-9 * self.setup.fill || step.duration() < 1e-9 {
            return None;
        }
        let bracket = Bracket { low: (0.0, left(0.0).min(0.0)), high: (1.0, beyond) };
        find_root(left, bracket, 1e-12).map(|share| (share * step.duration()).max(0.5e-9))
    }

    fn turn_back_on_target(&mut self, now: &Attitude) {
        if let Some((target, rate)) = self.pending_target
            && self.setup.fill - now.volume >= target - 2e-9 * self.setup.fill
        {
            self.pending_target = None;
            self.course.reached_target = true;
            self.setup.programme.turn_back(now.time, rate);
        }
    }

    /// The flow over the lip ends within this step.
    fn cease(&mut self, step: &Step) {
        let (q0, q1) = (step.from.flow, step.to.flow);
        let share = if q0 > q1 { ((q0 - 0.5 * LEAST_FLOW) / (q0 - q1)).clamp(0.0, 1.0) } else { 1.0 };
        self.close(step.from.time + share * step.duration());
        for track in &mut self.tracks {
            track.attached = false;
        }
    }

    fn close(&mut self, time: f64) {
        if let Some(span) = self.course.flowing.last_mut() {
            span.to = time;
        }
        if self.tracks[0].attached
            && let Some(span) = self.course.dribbling.last_mut()
        {
            span.to = time;
        }
    }

    fn push(&mut self, at: &Attitude, flowing: bool, judgement: &Judgement) {
        let sample = self.sample(at, flowing, judgement);
        self.course.samples.push(sample);
    }

    fn sample(&self, at: &Attitude, flowing: bool, judgement: &Judgement) -> Sample {
        let best = &self.tracks[0];
        let decision = (if best.wet { judgement.wet } else { judgement.dry }).filter(|_| flowing);
        let decided = decision.map(|decision| {
            let (low, high) = self.judge.interval(&decision);
            Decided {
                verdict: decision.verdict,
                safety_factor: decision.safety_factor(),
                low,
                high,
                weber: decision.balance.numbers.weber,
            }
        });
        let attached = flowing && best.attached;
        let landing = decision
            .filter(|_| !attached)
            .and_then(|decision| landing(&decision, at.slope, self.judge.dry(), self.setup.drop));
        Sample {
            time: at.time,
            tilt: at.tilt,
            slope: at.slope,
            head: at.head,
            volume: at.volume,
            flow: if flowing { at.flow } else { 0.0 },
            decided,
            attached,
            landing,
        }
    }
}
