//! What the two-phase solver costs, and how near it comes to what this machine can do.
//!
//! `cargo bench --bench free_surface`: cell updates per second on one and two threads, beside the roofline measured in the same run:
//! the lower of STREAM-triad bandwidth (at the solver's working-set size) over bytes per cell update, and vector arithmetic (unfused multiplications
//! and additions, as the solver uses) over operations per cell update.
#![allow(missing_docs, clippy::unwrap_used, clippy::expect_used, clippy::panic)]

use std::f64::consts::PI;
use std::hint::black_box;
use std::sync::atomic::AtomicBool;
use std::time::Instant;

use dribble_risk::physics::separation::free_surface::contact::ContactAngle;
use dribble_risk::physics::separation::free_surface::problem::{Approach, Grid, Problem};
use dribble_risk::physics::separation::free_surface::real::Real;
use dribble_risk::physics::separation::free_surface::stream::Stream;

/// Bytes per cell update in single precision: nine fields read and nine written, the phase plane written and read, two masks read.
const BYTES: f64 = (9.0 + 9.0 + 2.0 + 2.0) * 4.0;
/// Operations per cell update, counted in the kernels' source: phase 23, moments 55, flux 26, collision 160.
const OPERATIONS: f64 = 264.0;

fn solver<T: Real>(cells: u32, threads: usize) -> (f64, usize) {
    let problem = Problem {
        radius_ratio: 1.0,
        contact: ContactAngle::single(80.0 * PI / 180.0).unwrap(),
        turn: PI / 2.0,
        reynolds: 200.0,
        froude: None,
        slope: 0.0,
        approach: Approach::Film,
    };
    let grid = Grid::with_cells(&problem, cells).unwrap();
    let (columns, rows) = grid.shape(&problem);
    let never = AtomicBool::new(false);
    let mut stream = Stream::<T>::separated(&problem, &grid, 30.0, threads).unwrap();
    stream.advance(100, &never);
    let best = (0..5)
        .map(|_| {
            let started = Instant::now();
            stream.advance(500, &never);
            500.0 * (columns * rows) as f64 / started.elapsed().as_secs_f64()
        })
        .fold(0.0, f64::max);
    (best, columns * rows * 20 * size_of::<T>())
}

struct Triad<'a>(&'a mut [f32], &'a [f32], &'a [f32]);

impl pulp::NullaryFnOnce for Triad<'_> {
    type Output = ();
    #[inline(always)]
    fn call(self) {
        for ((a, b), c) in self.0.iter_mut().zip(self.1).zip(self.2) {
            *a = *b + 3.0 * *c;
        }
    }
}

/// Bytes per second of one thread's triad over a working set of so many bytes.
fn triad(bytes: usize) -> f64 {
    let length = bytes / 12;
    let (mut a, b, c) = (vec![0.0f32; length], vec![1.0f32; length], vec![2.0f32; length]);
    let rounds = (400_000_000 / bytes).max(1);
    (0..5)
        .map(|_| {
            let started = Instant::now();
            for _ in 0..rounds {
                pulp::Arch::new().dispatch(Triad(black_box(&mut a), black_box(&b), black_box(&c)));
            }
            (rounds * length * 12) as f64 / started.elapsed().as_secs_f64()
        })
        .fold(0.0, f64::max)
}

const ACCUMULATORS: usize = 16 * 16;
struct Arithmetic<'a>(&'a mut [f32; ACCUMULATORS], usize);

impl pulp::NullaryFnOnce for Arithmetic<'_> {
    type Output = ();
    #[inline(always)]
    fn call(self) {
        let mut x = *self.0;
        for _ in 0..self.1 {
            for value in &mut x {
                *value = *value * 0.999 + 0.001;
            }
        }
        *self.0 = x;
    }
}

/// Operations per second of one thread, unfused.
fn arithmetic() -> f64 {
    let rounds = 400_000;
    let mut x = [1.0f32; ACCUMULATORS];
    (0..5)
        .map(|_| {
            let started = Instant::now();
            pulp::Arch::new().dispatch(Arithmetic(black_box(&mut x), black_box(rounds)));
            (2 * rounds * ACCUMULATORS) as f64 / started.elapsed().as_secs_f64()
        })
        .fold(0.0, f64::max)
}

/// The sum of what so many threads do at once.
fn together(threads: usize, work: impl Fn() -> f64 + Sync) -> f64 {
    std::thread::scope(|scope| {
        let workers: Vec<_> = (0..threads).map(|_| scope.spawn(&work)).collect();
        workers.into_iter().map(|worker| worker.join().unwrap()).sum()
    })
}

fn main() {
    for cells in [8, 12, 16] {
        for threads in [1, 2] {
            let (rate, bytes) = solver::<f32>(cells, threads);
            let bandwidth = together(threads, || triad(bytes / threads));
            let operations = together(threads, arithmetic);
            let (memory, compute) = (bandwidth / BYTES, operations / OPERATIONS);
            println!(
                "{cells:2} cells, {threads} threads: {:6.1} M cell updates/s; bandwidth allows {:6.1}, arithmetic {:6.1}: {:3.0} % of the roofline",
                rate / 1e6,
                memory / 1e6,
                compute / 1e6,
                100.0 * rate / memory.min(compute)
            );
        }
    }
    let (double, _) = solver::<f64>(12, 1);
    println!("12 cells, 1 thread, double precision: {:.1} M cell updates/s", double / 1e6);
}
