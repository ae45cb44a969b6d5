//! From a separated stream, the Weber number is lowered until the stream clings.

use core::f64::consts::PI;
use std::sync::atomic::{AtomicBool, Ordering};

use super::outcome::{Deflection, Onset, Outcome, Ramp, Reason, SolverFault, State, Threshold};
use super::problem::{Approach, Grid, Problem};
use super::real::Real;
use super::stream::{Reading, Stream};

/// The contact line has run down the wall when it is this many thicknesses beyond the arc.
pub const RUN_BEYOND_ARC: f64 = 2.0;
/// It shows first signs of it here.
const SIGNS_BEYOND_ARC: f64 = 1.0;
/// The approach film is choked when it is this many times as thick two thicknesses before the arc as it was when settled.
const CHOKED: f64 = 1.5;
/// Time between readings, in h/U.
const READING_INTERVAL: f64 = 0.5;
/// Lowest Weber number of a ramp: at 2 no free sheet exists (two surfaces pull 2γ against ρU²h), so nothing is to be found below.
pub const LOWEST_WEBER: f64 = 1.2;
/// Highest Weber number that a ramp starts from.
pub const HIGHEST_WEBER: f64 = 400.0;
/// Fall of ln We per h/U on the first, quick way down.
const QUICK: f64 = 0.05;
/// The second way down starts this much above where the first ended.
const RESTART: f64 = 1.9;

/// How to compute.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Plan {
    /// Grid.
    pub grid: Grid,
    /// Weber number that the first ramp starts from; raised if the stream clings there.
    pub start: f64,
    /// Fall of ln We per h/U on the slow ramp. 0.006..0.03; the threshold read lags by about 8 times this.
    pub rate: f64,
    /// Most cell updates allowed.
    pub budget: f64,
    /// Threads. Results do not depend on it.
    pub threads: usize,
}

impl Plan {
    /// A plan on a grid of `cells` cells per thickness.
    ///
    /// # Errors
    /// [`SolverFault::Problem`] if the problem is out of range or the grid too coarse for it.
    pub fn with_cells(problem: &Problem, cells: u32, threads: usize) -> Result<Self, SolverFault> {
        let grid = Grid::with_cells(problem, cells)?;
        Ok(Self { grid, start: starting_weber(problem), rate: 0.012, budget: 3e10, threads })
    }

    /// Cell updates that a whole ramp takes at most, about.
    #[must_use]
    pub fn work(&self, problem: &Problem) -> f64 {
        let (columns, rows) = self.grid.shape(problem);
        let settle = settling_time(problem, &self.grid);
        let quick = libm::log(self.start / LOWEST_WEBER) / QUICK;
        let slow = (libm::log(RESTART) + 0.3) / self.rate;
        (2.0 * settle + quick + slow) * self.grid.steps_per_turnover() * (columns * rows) as f64
    }
}

/// Where a ramp may start: six times the sharp-edge balance, and more for blunt edges, shallow turns and gravity (own judgement; only the time taken
/// depends on it, as the start is raised when too low).
fn starting_weber(problem: &Problem) -> f64 {
    let e = 1.0 + libm::cos(problem.contact.advancing());
    let balance = 1.0 + e / (1.0 - libm::cos(problem.turn));
    let gravity = problem.froude.map_or(0.0, |froude| 3.0 / froude);
    let viscous = 30.0 / problem.reynolds;
    (4.0 * balance * (1.0 + problem.radius_ratio.min(2.0) + gravity + viscous)).clamp(12.0, HIGHEST_WEBER)
}

/// Time for the film to cross the lattice and for the start to be forgotten, in h/U.
fn settling_time(problem: &Problem, grid: &Grid) -> f64 {
    let across = grid.room[0] + 2.0 * problem.radius_ratio + 6.0;
    match problem.approach {
        Approach::Film => 1.5 * across,
        // The depth must fill up: waves run upstream slowly near the critical state.
        Approach::Flow => 4.0 * across,
    }
}

/// What is told on the way.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Progress {
    /// Cell updates done, as a part of the greatest number foreseen, 0..1.
    pub part: f64,
    /// Weber number now.
    pub weber: f64,
    /// What was read last.
    pub reading: Reading,
}

/// Cancel flag and progress, handed down.
#[derive(Clone, Copy)]
pub struct Watch<'a> {
    /// Raised by the caller to stop.
    pub cancel: &'a AtomicBool,
    /// Told about every half h/U.
    pub progress: &'a dyn Fn(Progress),
}

/// State of the stream from a reading.
fn judge(stream: &Problem, reading: &Reading, settled: f64) -> Option<State> {
    let beyond = reading.contact_position - stream.radius_ratio * stream.turn;
    if beyond > RUN_BEYOND_ARC {
        Some(State::Attached)
    } else if stream.approach == Approach::Film && reading.thickness_before > CHOKED * settled {
        Some(State::Choked)
    } else if reading.contact_position == f64::NEG_INFINITY {
        Some(State::NotConverged(Reason::Dry))
    } else {
        None
    }
}

/// A stream on its way, with the bookkeeping that all runs share.
struct Walk<'a, T> {
    stream: Stream<T>,
    watch: Watch<'a>,
    interval: u32,
    total: f64,
    before: u64,
}

impl<T: Real> Walk<'_, T> {
    /// One interval; `Err` if there is nothing more to be had.
    fn pace(&mut self) -> Result<Reading, (Reason, Reading)> {
        self.stream.advance(self.interval, self.watch.cancel);
        let reading = self.stream.read();
        if self.watch.cancel.load(Ordering::Relaxed) {
            return Err((Reason::Cancelled, reading));
        }
        if !self.stream.is_sound() {
            return Err((Reason::Diverged, reading));
        }
        let done = (self.before + self.stream.lattice().steps()) as f64 / self.total;
        (self.watch.progress)(Progress { part: done.min(1.0), weber: self.stream.weber(), reading });
        Ok(reading)
    }
}

/// Computes the stream at one Weber number, until it rests or `turnovers` times h/U have passed.
///
/// # Errors
/// [`SolverFault`] if the problem, the grid or the budget do not allow it.
pub fn run_at<T: Real>(
    problem: &Problem,
    plan: &Plan,
    weber: f64,
    turnovers: f64,
    watch: Watch<'_>,
) -> Result<(Outcome, Stream<T>), SolverFault> {
    problem.check()?;
    if !(0.5..=1000.0).contains(&weber) {
        return Err(SolverFault::Weber(weber));
    }
    let (columns, rows) = plan.grid.shape(problem);
    let steps = turnovers * plan.grid.steps_per_turnover();
    afford(steps * (columns * rows) as f64, plan)?;
    let interval = (READING_INTERVAL * plan.grid.steps_per_turnover()).round() as u32;
    let stream = Stream::separated(problem, &plan.grid, weber, plan.threads)?;
    let mut walk = Walk { stream, watch, interval, total: steps, before: 0 };
    let settle = settling_time(problem, &plan.grid);
    let mut calm = 0;
    let mut last: Option<Reading> = None;
    let mut reading = walk.stream.read();
    let mut state = State::NotConverged(Reason::StillMoving);
    let mut time = 0.0;
    while time < turnovers {
        time += READING_INTERVAL;
        match walk.pace() {
            Ok(read) => reading = read,
            Err((reason, read)) => {
                reading = read;
                state = State::NotConverged(reason);
                break;
            }
        }
        if let Some(found) = judge(problem, &reading, 1.1) {
            state = found;
            if found != State::Choked || time > settle {
                break;
            }
        }
        let still = last.is_some_and(|last| {
            (last.contact_position - reading.contact_position).abs() < 0.01
                && match (last.ejection_angle, reading.ejection_angle) {
                    (Some(a), Some(b)) => (a - b).abs() < 0.05 * PI / 180.0,
                    _ => false,
                }
        });
        calm = if still { calm + 1 } else { 0 };
        if calm >= 12 && time > settle {
            state = State::Separated;
            break;
        }
        last = Some(reading);
    }
    let outcome = Outcome { state, weber, reading, steps: walk.stream.lattice().steps() };
    Ok((outcome, walk.stream))
}

fn afford(needed: f64, plan: &Plan) -> Result<(), SolverFault> {
    if needed > plan.budget {
        return Err(SolverFault::Budget { needed, allowed: plan.budget });
    }
    Ok(())
}

/// Finds the critical Weber number on one grid: a quick ramp down from a separated stream, then a slow one from a little above where the
/// first ended.
///
/// # Errors
/// [`SolverFault`] if the problem, the grid or the budget do not allow it.
pub fn critical_weber<T: Real>(problem: &Problem, plan: &Plan, watch: Watch<'_>) -> Result<Ramp, SolverFault> {
    problem.check()?;
    afford(plan.work(problem), plan)?;
    let mut ramp = Ramp {
        onset: Onset::Above { weber: plan.start },
        deflections: vec![],
        settled: None,
        cells: plan.grid.cells,
        steps: 0,
    };
    let mut start = plan.start;
    loop {
        ramp.onset = descend::<T>(problem, plan, start, QUICK, watch, &mut ramp)?;
        match ramp.onset {
            Onset::Above { .. } if start < HIGHEST_WEBER => start = (2.5 * start).min(HIGHEST_WEBER),
            Onset::Found { critical, .. } if critical > 0.8 * start && start < HIGHEST_WEBER => start *= 2.0,
            _ => break,
        }
    }
    let mut again = match ramp.onset {
        Onset::Found { first_signs, .. } => first_signs * RESTART,
        // A jump set off by the quick descent need not occur on a slow one.
        Onset::Below { weber, choked: true } => weber * RESTART,
        _ => return Ok(ramp),
    };
    loop {
        ramp.onset = descend::<T>(problem, plan, again, plan.rate, watch, &mut ramp)?;
        match ramp.onset {
            Onset::Above { .. } if again < 2.0 * HIGHEST_WEBER => again *= 1.5,
            Onset::Found { critical, .. } if critical > 0.9 * again && again < 2.0 * HIGHEST_WEBER => again *= 1.3,
            _ => return Ok(ramp),
        }
    }
}

/// One way down from a fresh separated stream at `start`.
fn descend<T: Real>(
    problem: &Problem,
    plan: &Plan,
    start: f64,
    rate: f64,
    watch: Watch<'_>,
    ramp: &mut Ramp,
) -> Result<Onset, SolverFault> {
    let interval = (READING_INTERVAL * plan.grid.steps_per_turnover()).round() as u32;
    let stream = Stream::<T>::separated(problem, &plan.grid, start, plan.threads)?;
    let (columns, rows) = plan.grid.shape(problem);
    let total = plan.work(problem) / (columns * rows) as f64;
    let mut walk = Walk { stream, watch, interval, total, before: ramp.steps };
    let settle = settling_time(problem, &plan.grid);
    ramp.deflections.clear();
    let mut time = 0.0;
    let mut settled: Option<f64> = None;
    let mut signs = None;
    let mut station = f64::INFINITY;
    let onset = loop {
        time += READING_INTERVAL;
        if time > settle {
            walk.stream.set_weber(walk.stream.weber() * libm::exp(-rate * READING_INTERVAL));
        }
        let weber = walk.stream.weber();
        let reading = match walk.pace() {
            Ok(reading) => reading,
            Err((reason, _)) => break Onset::NotConverged { weber, reason },
        };
        let beyond = reading.contact_position - problem.radius_ratio * problem.turn;
        if beyond > SIGNS_BEYOND_ARC {
            signs = signs.or(Some(weber));
        } else {
            signs = None;
        }
        if time > settle && settled.is_none() {
            settled = Some(reading.thickness_before);
            ramp.settled = Some(reading);
        }
        match judge(problem, &reading, settled.unwrap_or(f64::INFINITY)) {
            Some(State::Attached) if time <= settle => break Onset::Above { weber },
            Some(State::Attached) => {
                break Onset::Found { critical: weber, first_signs: signs.unwrap_or(weber) };
            }
            Some(State::Choked) => break Onset::Below { weber, choked: true },
            Some(State::NotConverged(reason)) => break Onset::NotConverged { weber, reason },
            Some(State::Separated) | None => {}
        }
        if weber < LOWEST_WEBER {
            break Onset::Below { weber, choked: false };
        }
        if time > settle && weber < 0.83 * station {
            station = weber;
            if let Some(angle) = reading.ejection_angle {
                ramp.deflections.push(Deflection { weber, angle, contact_position: reading.contact_position });
            }
        }
    };
    ramp.steps += walk.stream.lattice().steps();
    Ok(onset)
}

/// Critical Weber number on the plan's grid and on one a third coarser, whose difference estimates the error.
///
/// # Errors
/// [`SolverFault`] if the problem, either grid or the budget do not allow it.
pub fn critical_weber_on_two_grids<T: Real>(
    problem: &Problem,
    plan: &Plan,
    watch: Watch<'_>,
) -> Result<Threshold, SolverFault> {
    let coarser = Plan { grid: Grid::with_cells(problem, (plan.grid.cells * 2).div_ceil(3))?, ..*plan };
    afford(plan.work(problem) + coarser.work(problem), plan)?;
    let coarse = critical_weber::<T>(problem, &coarser, watch)?;
    let fine = critical_weber::<T>(problem, plan, watch)?;
    let grid_error = match (fine.onset, coarse.onset) {
        (Onset::Found { critical: a, .. }, Onset::Found { critical: b, .. }) => Some(libm::log(a / b).abs()),
        _ => None,
    };
    Ok(Threshold { fine, coarse, grid_error })
}
