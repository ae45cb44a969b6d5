//! From a separated stream, the Weber number is lowered until the stream clings.

use core::f64::consts::PI;
use std::sync::atomic::{AtomicBool, Ordering};

use super::outcome::{Deflection, Onset, Outcome, Reason, Search, SolverFault, State, Threshold};
use super::problem::{Approach, Grid, Problem};
use super::real::Real;
use super::stream::{Reading, Stream};

/// The contact line has run down the wall when it is this many thicknesses beyond the arc.
pub const RUN_BEYOND_ARC: f64 = 2.0;
/// The approach film is choked when it is this many times as thick two thicknesses before the arc as it was when settled.
const CHOKED: f64 = 1.5;
/// Time between readings, in h/U.
const READING_INTERVAL: f64 = 0.5;
/// Lowest Weber number of a search: at 2 no free sheet exists (two surfaces pull 2γ against ρU²h), so nothing is to be found below.
pub const LOWEST_WEBER: f64 = 1.5;
/// Highest Weber number that a ramp starts from.
pub const HIGHEST_WEBER: f64 = 400.0;
/// Fall of ln We per h/U on the first, quick way down.
const QUICK: f64 = 0.05;
/// Thickness two h before the arc that a film which has not been seen settled is taken to have, in h.
const UNSETTLED: f64 = 1.1;

/// How to compute.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Plan {
    /// Grid.
    pub grid: Grid,
    /// Weber number that the first ramp starts from; raised if the stream clings there.
    pub start: f64,
    /// The search ends when the Weber numbers on either side of the threshold differ by less than this part.
    pub tolerance: f64,
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
        Ok(Self { grid, start: starting_weber(problem), tolerance: 0.08, budget: 3e10, threads })
    }

    /// Cells of the lattice.
    fn cells_of(&self, problem: &Problem) -> f64 {
        let (columns, rows) = self.grid.shape(problem);
        (columns * rows) as f64
    }

    /// Longest time that a stream is held, in h/U.
    fn patience(&self, problem: &Problem) -> f64 {
        60.0 + 2.0 * settling_time(problem, &self.grid)
    }

    /// Cell updates that a search takes, about: the quick ramp and six streams held.
    #[must_use]
    pub fn work(&self, problem: &Problem) -> f64 {
        let settle = settling_time(problem, &self.grid);
        let quick = libm::log(self.start / LOWEST_WEBER) / QUICK;
        let held = 6.0 * (settle + 40.0);
        (settle + quick + held) * self.grid.steps_per_turnover() * self.cells_of(problem)
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
    let steps = turnovers * plan.grid.steps_per_turnover();
    afford(steps * plan.cells_of(problem), plan)?;
    let stream = Stream::separated(problem, &plan.grid, weber, plan.threads)?;
    let mut walk = Walk { stream, watch, interval: interval(plan), total: steps, before: 0 };
    let outcome = rest(problem, &mut walk, settling_time(problem, &plan.grid), turnovers, UNSETTLED);
    Ok((outcome, walk.stream))
}

fn afford(needed: f64, plan: &Plan) -> Result<(), SolverFault> {
    if needed > plan.budget {
        return Err(SolverFault::Budget { needed, allowed: plan.budget });
    }
    Ok(())
}

/// Finds the critical Weber number on one grid.
///
/// First a quick ramp down from a separated stream, which tells roughly where: near the threshold the stream gives way so slowly that a ramp passes it
/// before anything shows (the lag in ln We goes as the rate to the power ⅔, as at any fold; measured 6 × rate^⅔, rate per h/U). Then streams
/// held at fixed Weber numbers, each lowered from a settled separated stream, until they attach or rest; their Weber numbers close in on the threshold.
///
/// # Errors
/// [`SolverFault`] if the problem, the grid or the budget do not allow it.
pub fn critical_weber<T: Real>(
    problem: &Problem,
    plan: &Plan,
    watch: Watch<'_>,
) -> Result<Search, SolverFault> {
    problem.check()?;
    afford(plan.work(problem), plan)?;
    let mut search = Search {
        onset: Onset::Above { weber: plan.start },
        on_the_way: None,
        deflections: vec![],
        settled: None,
        cells: plan.grid.cells,
        steps: 0,
    };
    let mut start = plan.start;
    let ended = loop {
        let ended = descend::<T>(problem, plan, start, watch, &mut search)?;
        let early = match ended {
            Descent::Attached(weber) => weber > 0.5 * start,
            Descent::Choked(weber) => weber > 0.8 * start,
            Descent::Lowest | Descent::Failed(..) => false,
        };
        if !early || start >= HIGHEST_WEBER {
            break ended;
        }
        start = (2.5 * start).min(HIGHEST_WEBER);
    };
    let first = match ended {
        Descent::Attached(weber) => {
            search.on_the_way = Some(weber);
            (1.5 * weber).max(LOWEST_WEBER)
        }
        Descent::Choked(weber) => (1.5 * weber).max(LOWEST_WEBER),
        Descent::Lowest => LOWEST_WEBER,
        Descent::Failed(weber, reason) => {
            search.onset = Onset::NotConverged { weber, reason };
            return Ok(search);
        }
    };
    search.onset = close_in::<T>(problem, plan, (start, first), watch, &mut search)?;
    search.deflections.sort_by(|a, b| a.weber.total_cmp(&b.weber));
    Ok(search)
}

/// Closes in on the threshold with streams lowered from `start` and held, the first at `first`.
fn close_in<T: Real>(
    problem: &Problem,
    plan: &Plan,
    (start, first): (f64, f64),
    watch: Watch<'_>,
    search: &mut Search,
) -> Result<Onset, SolverFault> {
    let (mut clings, mut leaves) = (None, None);
    let mut choked = false;
    let mut undecided = 0;
    let mut weber = first;
    loop {
        let held = hold::<T>(problem, plan, (start, weber), watch, search)?;
        match held.state {
            State::Separated => leaves = Some(weber),
            State::Attached | State::Choked => {
                clings = Some(weber);
                choked = held.state == State::Choked;
            }
            // Too near the threshold to tell in the time allowed: one such point is the threshold.
            State::NotConverged(Reason::StillMoving) if undecided == 0 => {
                undecided += 1;
                weber *= 1.0 + 0.6 * plan.tolerance;
                continue;
            }
            State::NotConverged(reason) => return Ok(Onset::NotConverged { weber, reason }),
        }
        weber = match (clings, leaves) {
            (Some(low), Some(high)) if high / low < 1.0 + plan.tolerance => {
                return Ok(if choked {
                    Onset::Below { weber: high, choked }
                } else {
                    Onset::Found { critical: (low * high).sqrt(), attached: low, separated: high }
                });
            }
            (Some(low), Some(high)) if high <= low => {
                return Ok(Onset::NotConverged { weber: high, reason: Reason::StillMoving });
            }
            (Some(low), Some(high)) => (low * high).sqrt(),
            (Some(low), None) if low > 2.0 * HIGHEST_WEBER => return Ok(Onset::Above { weber: low }),
            (Some(low), None) => 1.3 * low,
            (None, Some(high)) if high <= LOWEST_WEBER => {
                return Ok(Onset::Below { weber: high, choked: false });
            }
            (None, high) => (high.unwrap_or(weber) / 1.3).max(LOWEST_WEBER),
        };
    }
}

/// Lets a stream settle, then lowers its Weber number to `weber` in twelve h/U: started low at once, it would wet the outer wall before it is formed.
fn lower<T: Real>(walk: &mut Walk<'_, T>, settle: f64, weber: f64) -> Result<(), (Reason, Reading)> {
    let mut time = 0.0;
    while time < settle {
        walk.pace()?;
        time += READING_INTERVAL;
    }
    let stages = 24;
    let factor = libm::exp(libm::log(weber / walk.stream.weber()) / f64::from(stages));
    for _ in 0..stages {
        walk.stream.set_weber(walk.stream.weber() * factor);
        walk.pace()?;
    }
    walk.stream.set_weber(weber);
    Ok(())
}

/// A stream lowered from `start` to one Weber number and held there until it attaches, chokes or rests.
fn hold<T: Real>(
    problem: &Problem,
    plan: &Plan,
    (start, weber): (f64, f64),
    watch: Watch<'_>,
    search: &mut Search,
) -> Result<Outcome, SolverFault> {
    let settled = search.settled.map_or(1.1, |reading| reading.thickness_before);
    let total = plan.work(problem) / plan.cells_of(problem);
    let stream = Stream::<T>::separated(problem, &plan.grid, start.max(weber), plan.threads)?;
    let mut walk = Walk { stream, watch, interval: interval(plan), total, before: search.steps };
    if let Err((reason, reading)) = lower(&mut walk, settling_time(problem, &plan.grid), weber) {
        let steps = walk.stream.lattice().steps();
        search.steps += steps;
        return Ok(Outcome { state: State::NotConverged(reason), weber, reading, steps });
    }
    let forget = CALM as f64 * READING_INTERVAL;
    let outcome = rest(problem, &mut walk, forget, plan.patience(problem), settled);
    search.steps += outcome.steps;
    if let (State::Separated, Some(angle)) = (outcome.state, outcome.reading.ejection_angle) {
        search.deflections.push(Deflection {
            weber,
            angle,
            contact_position: outcome.reading.contact_position,
        });
    }
    Ok(outcome)
}

/// Readings over which a stream must not change to be called at rest: 12 h/U.
const CALM: usize = 24;

/// Lets a stream run until it attaches, chokes or rests.
fn rest<T: Real>(
    problem: &Problem,
    walk: &mut Walk<'_, T>,
    settle: f64,
    patience: f64,
    settled: f64,
) -> Outcome {
    let weber = walk.stream.weber();
    let mut past = [None; CALM];
    let mut time = 0.0;
    let mut taken = 0;
    let (state, reading) = loop {
        let reading = match walk.pace() {
            Ok(reading) => reading,
            Err((reason, reading)) => break (State::NotConverged(reason), reading),
        };
        time += READING_INTERVAL;
        match judge(problem, &reading, settled) {
            // The start itself may pile up liquid for a while.
            Some(State::Choked) if time <= settle => {}
            Some(state) => break (state, reading),
            None => {}
        }
        let slot = &mut past[taken % CALM];
        if let Some(then) = slot.replace(reading)
            && time > settle
            && calm(&then, &reading)
        {
            break (State::Separated, reading);
        }
        taken += 1;
        if time >= patience {
            // Streams that shed waves never rest; they leave all the same if the line has not advanced.
            let advanced =
                past.iter().flatten().any(|then| then.contact_position < reading.contact_position - 0.12);
            let state = if advanced { State::NotConverged(Reason::StillMoving) } else { State::Separated };
            break (state, reading);
        }
    };
    Outcome { state, weber, reading, steps: walk.stream.lattice().steps() }
}

/// Whether nothing has changed between two readings: 0.3°, and a tenth of h in the contact line.
fn calm(then: &Reading, now: &Reading) -> bool {
    let turned = match (then.ejection_angle, now.ejection_angle) {
        (Some(a), Some(b)) => (a - b).abs() < 0.3 * PI / 180.0,
        _ => false,
    };
    turned && (then.contact_position - now.contact_position).abs() < 0.1
}

/// How a quick ramp ended, and at which Weber number.
enum Descent {
    Attached(f64),
    Choked(f64),
    Lowest,
    Failed(f64, Reason),
}

/// One quick way down from a fresh separated stream at `start`.
fn descend<T: Real>(
    problem: &Problem,
    plan: &Plan,
    start: f64,
    watch: Watch<'_>,
    search: &mut Search,
) -> Result<Descent, SolverFault> {
    let total = plan.work(problem) / plan.cells_of(problem);
    let stream = Stream::<T>::separated(problem, &plan.grid, start, plan.threads)?;
    let mut walk = Walk { stream, watch, interval: interval(plan), total, before: search.steps };
    let settle = settling_time(problem, &plan.grid);
    let mut time = 0.0;
    let mut settled: Option<f64> = None;
    let ended = loop {
        time += READING_INTERVAL;
        if time > settle {
            walk.stream.set_weber(walk.stream.weber() * libm::exp(-QUICK * READING_INTERVAL));
        }
        let weber = walk.stream.weber();
        let reading = match walk.pace() {
            Ok(reading) => reading,
            Err((reason, _)) => break Descent::Failed(weber, reason),
        };
        if time > settle && settled.is_none() {
            settled = Some(reading.thickness_before);
            search.settled = Some(reading);
        }
        match judge(problem, &reading, settled.unwrap_or(f64::INFINITY)) {
            Some(State::Attached) => break Descent::Attached(weber),
            Some(State::Choked) => break Descent::Choked(weber),
            Some(State::NotConverged(reason)) => break Descent::Failed(weber, reason),
            Some(State::Separated) | None => {}
        }
        if weber < LOWEST_WEBER {
            break Descent::Lowest;
        }
    };
    search.steps += walk.stream.lattice().steps();
    Ok(ended)
}

fn interval(plan: &Plan) -> u32 {
    (READING_INTERVAL * plan.grid.steps_per_turnover()).round() as u32
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
