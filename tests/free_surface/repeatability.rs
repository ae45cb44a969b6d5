//! Same case, same numbers: whatever the threads, and closely whatever the precision; and what is refused.

use std::cell::Cell;
use std::f64::consts::PI;
use std::sync::atomic::{AtomicBool, Ordering};

use dribble_risk::physics::separation::free_surface::contact::{AngleFault, ContactAngle};
use dribble_risk::physics::separation::free_surface::outcome::{Onset, Reason, SolverFault, State};
use dribble_risk::physics::separation::free_surface::problem::{Approach, Grid, Problem, ProblemFault};
use dribble_risk::physics::separation::free_surface::ramp::{Plan, Watch, critical_weber, run_at};
use dribble_risk::physics::separation::free_surface::real::Real;
use dribble_risk::physics::separation::free_surface::stream::Stream;

use crate::bench::{NEVER, degrees, watch};

pub(crate) fn right_angle() -> Problem {
    Problem {
        radius_ratio: 0.5,
        contact: degrees(75.0),
        turn: PI / 2.0,
        reynolds: 150.0,
        froude: None,
        slope: 0.0,
        approach: Approach::Film,
    }
}

fn fields(threads: usize) -> Vec<u64> {
    let problem = right_angle();
    let grid = Grid::with_cells(&problem, 6).unwrap();
    let mut stream = Stream::<f32>::separated(&problem, &grid, 8.0, threads).unwrap();
    stream.advance(301, &NEVER);
    stream.advance(300, &NEVER);
    let lattice = stream.lattice();
    let cells = (0..lattice.rows()).flat_map(|j| (0..lattice.columns()).map(move |i| (i, j)));
    cells
        .flat_map(|(i, j)| {
            let [u, v] = lattice.velocity(i, j);
            [lattice.phase(i, j), u, v, lattice.pressure(i, j)].map(f64::to_bits)
        })
        .collect()
}

#[test]
fn fields_do_not_depend_on_the_threads() {
    let one = fields(1);
    for threads in [2, 3] {
        assert!(one == fields(threads), "{threads} threads differ");
    }
}

fn direction<T: Real>() -> (f64, f64) {
    let problem = right_angle();
    let grid = Grid::with_cells(&problem, 6).unwrap();
    let mut stream = Stream::<T>::separated(&problem, &grid, 8.0, 1).unwrap();
    stream.advance(3000, &NEVER);
    let reading = stream.read();
    (reading.ejection_angle.unwrap(), reading.momentum)
}

#[test]
fn single_precision_agrees_with_double() {
    let (single, double) = (direction::<f32>(), direction::<f64>());
    println!(
        "single less double: {:.1e} rad, {:.1e} of the momentum",
        single.0 - double.0,
        single.1 - double.1
    );
    assert!(
        (single.0 - double.0).abs() < 2e-3 && (single.1 - double.1).abs() < 1e-3,
        "{single:?} {double:?}"
    );
}

#[test]
fn a_raised_flag_stops_it() {
    let flag = AtomicBool::new(false);
    let calls = Cell::new(0);
    let progress = |_| {
        calls.set(calls.get() + 1);
        flag.store(calls.get() >= 3, Ordering::Relaxed);
    };
    let problem = right_angle();
    let plan = Plan::with_cells(&problem, 6, 2).unwrap();
    let search =
        critical_weber::<f32>(&problem, &plan, Watch { cancel: &flag, progress: &progress }).unwrap();
    assert!(matches!(search.onset, Onset::NotConverged { reason: Reason::Cancelled, .. }), "{search:?}");
    assert_eq!(calls.get(), 3);
}

#[test]
fn divergence_is_told() {
    // A stream ten times too fast for the lattice.
    let problem = right_angle();
    let mut plan = Plan::with_cells(&problem, 6, 1).unwrap();
    plan.grid.speed = 0.5;
    let (outcome, _) = run_at::<f32>(&problem, &plan, 8.0, 40.0, watch()).unwrap();
    assert_eq!(outcome.state, State::NotConverged(Reason::Diverged));
}

#[test]
fn what_does_not_fit_is_refused_with_what_would() {
    let problem = right_angle();
    let fault = Grid::with_cells(&Problem { reynolds: 1900.0, ..problem }, 6).unwrap_err();
    assert!(matches!(fault, ProblemFault::GridTooCoarse { needed: 10, .. }), "{fault}");
    let fault = Grid::with_cells(&Problem { turn: PI, radius_ratio: 0.1, ..problem }, 8).unwrap_err();
    assert!(matches!(fault, ProblemFault::StripTooThin { needed: 15, .. }), "{fault}");
    let fault = Grid::with_cells(&Problem { approach: Approach::Flow, ..problem }, 8).unwrap_err();
    assert_eq!(fault, ProblemFault::FreeDepthWithoutGravity);
    let fault = Grid::with_cells(&Problem { reynolds: f64::NAN, ..problem }, 8).unwrap_err();
    assert!(matches!(fault, ProblemFault::Range { quantity: "Reynolds number", .. }), "{fault}");
    assert!(matches!(ContactAngle::single(0.05), Err(AngleFault::OutOfReach(_))));
    assert!(matches!(ContactAngle::new(1.0, 1.2), Err(AngleFault::Reversed { .. })));
    let mut plan = Plan::with_cells(&problem, 12, 1).unwrap();
    plan.budget = 1e6;
    let fault = critical_weber::<f32>(&problem, &plan, watch()).unwrap_err();
    assert!(
        matches!(fault, SolverFault::Budget { needed, allowed } if needed > 1e7 && allowed == 1e6),
        "{fault}"
    );
}
