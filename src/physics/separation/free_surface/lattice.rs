//! The lattice: built from a [`Setup`], advanced by one or more threads, read by column and row.

use std::sync::Mutex;
use std::sync::PoisonError;
use std::sync::atomic::{AtomicBool, Ordering};

use super::band::{Band, Plan};
use super::barrier::Barrier;
use super::kernel::Media;
use super::layout::{FIELDS, HALO, LANES, MOVE_X, MOVE_Y, PHASE, REST, STRESS_XX, STRESS_YY};
use super::real::Real;
use super::setup::{Ends, Fluids, Setup};
use super::sides::Sides;
use super::wall::{Cell, Ground, Walls};

/// A lattice that cannot be built.
#[derive(Debug, Clone, Copy, PartialEq, Eq, thiserror::Error)]
pub enum LatticeFault {
    /// The columns are not 2 more than a multiple of 16, or the rows fewer than 8.
    #[error(
        "a lattice of {columns} by {rows} cells: columns must be 2 more than a multiple of 16, rows at least 8"
    )]
    Shape {
        /// Columns asked for.
        columns: usize,
        /// Rows asked for.
        rows: usize,
    },
}

/// Two fluids on a grid of square cells.
#[derive(Debug)]
pub struct Lattice<T> {
    plan: Plan<T>,
    fluids: Fluids,
    bands: Vec<Band<T>>,
    post: Vec<Exchange<T>>,
    steps: u64,
}

/// Letter boxes between a band and the one above it, by the parity of the step.
#[derive(Debug)]
struct Exchange<T> {
    up: [Mutex<Vec<T>>; 2],
    down: [Mutex<Vec<T>>; 2],
}

impl<T: Real> Exchange<T> {
    fn new(length: usize) -> Self {
        let make = || Mutex::new(vec![T::default(); length]);
        Self { up: [make(), make()], down: [make(), make()] }
    }
}

/// Most bands a lattice of so many rows is cut into: each keeps at least twice its halo.
fn most_bands(rows: usize) -> usize {
    (rows / (2 * HALO)).max(1)
}

impl<T: Real> Lattice<T> {
    /// Builds the lattice and cuts it into bands for `threads` threads. Results do not depend on `threads`.
    ///
    /// # Errors
    /// [`LatticeFault::Shape`] if the numbers of cells do not fit the kernels.
    pub fn new(setup: &Setup<'_>, threads: usize) -> Result<Self, LatticeFault> {
        let (nx, ny) = (setup.columns, setup.rows);
        if nx < LANES + 2 || (nx - 2) % LANES != 0 || ny < 8 {
            return Err(LatticeFault::Shape { columns: nx, rows: ny });
        }
        let cells: Vec<Cell> = (0..nx * ny)
            .map(|at| {
                let (i, j) = (at % nx, at / nx);
                if (setup.imposed)(i, j).is_some() {
                    Cell::Imposed
                } else if (setup.distance)(i as f64, j as f64) < 0.0 {
                    Cell::Wall
                } else {
                    Cell::Fluid
                }
            })
            .collect();
        let periodic = setup.ends == Ends::Periodic;
        let ground = Ground { columns: nx, rows: ny, cells: &cells, distance: setup.distance, periodic };
        let walls = Walls::of(&ground, setup.contact, setup.fluids.interface);
        let fluid = cells.iter().map(|cell| T::of(f64::from(u8::from(*cell == Cell::Fluid)))).collect();
        let sponge = (0..nx * ny).map(|at| T::of(sponge_at(setup, at % nx, at / nx))).collect();
        let plan = Plan { columns: nx, rows: ny, cells, fluid, sponge, walls, sides: Sides::of(setup) };
        let count = threads.clamp(1, most_bands(ny));
        let bands = (0..count)
            .map(|band| (band * ny / count, (band + 1) * ny / count))
            .map(|(from, to)| Band::new(from, to - from, &plan))
            .collect();
        let post = (1..count).map(|_| Exchange::new(HALO * FIELDS * nx)).collect();
        let mut lattice = Self { plan, fluids: setup.fluids, bands, post, steps: 0 };
        lattice.fill(setup);
        Ok(lattice)
    }

    fn fill(&mut self, setup: &Setup<'_>) {
        let nx = self.plan.columns;
        for band in &mut self.bands {
            let kept = band.first.saturating_sub(HALO)..(band.first + band.rows + HALO).min(self.plan.rows);
            for row in kept {
                for i in 0..nx {
                    if self.plan.cells[row * nx + i] == Cell::Wall {
                        continue;
                    }
                    let seed = (setup.imposed)(i, row).unwrap_or_else(|| (setup.start)(i as f64, row as f64));
                    let [u, v] = seed.velocity;
                    let values = [
                        -1.5 * (u * u + v * v),
                        3.0 * u,
                        3.0 * v,
                        4.5 * u * u,
                        4.5 * v * v,
                        9.0 * u * v,
                        seed.phase,
                        3.0 * seed.phase * u,
                        3.0 * seed.phase * v,
                    ];
                    for (field, value) in values.into_iter().enumerate() {
                        let at = band.index(row, field, nx) + i;
                        band.now[at] = T::of(value);
                    }
                }
            }
        }
    }

    /// Columns.
    #[must_use]
    pub const fn columns(&self) -> usize {
        self.plan.columns
    }

    /// Rows.
    #[must_use]
    pub const fn rows(&self) -> usize {
        self.plan.rows
    }

    /// Steps taken.
    #[must_use]
    pub const fn steps(&self) -> u64 {
        self.steps
    }

    /// Fluids and forces now.
    #[must_use]
    pub const fn fluids(&self) -> &Fluids {
        &self.fluids
    }

    /// Changes the surface tension (lattice units).
    pub const fn set_surface_tension(&mut self, surface_tension: f64) {
        self.fluids.surface_tension = surface_tension;
    }

    /// Changes gravity (lattice units).
    pub const fn set_gravity(&mut self, gravity: [f64; 2]) {
        self.fluids.gravity = gravity;
    }

    /// Takes `steps` steps, or fewer if `cancel` is raised; allocates nothing but what starting the threads takes.
    pub fn advance(&mut self, steps: u32, cancel: &AtomicBool) {
        let media = media_of(&self.fluids);
        let arch = pulp::Arch::new();
        let plan = &self.plan;
        let start = self.steps;
        let mut done = 0;
        if let [band] = self.bands.as_mut_slice() {
            while done < steps && !cancel.load(Ordering::Relaxed) {
                arch.dispatch(Step { band: &mut *band, plan, media: &media });
                done += 1;
            }
        } else {
            let barrier = Barrier::new(self.bands.len());
            let post = &self.post;
            let agreed = AtomicBool::new(false);
            let (barrier, agreed, media) = (&barrier, &agreed, &media);
            done = std::thread::scope(|scope| {
                let mut bands = self.bands.iter_mut().enumerate();
                let first = bands.next();
                let workers: Vec<_> = bands
                    .map(|(k, band)| {
                        scope.spawn(move || {
                            work(band, k, Share { plan, media, post, barrier, cancel, agreed, start, steps })
                        })
                    })
                    .collect();
                let done = first.map_or(0, |(k, band)| {
                    work(band, k, Share { plan, media, post, barrier, cancel, agreed, start, steps })
                });
                drop(workers);
                done
            });
        }
        self.steps += u64::from(done);
    }

    fn read(&self, column: usize, row: usize, field: usize) -> f64 {
        let band = self.bands.iter().rev().find(|band| band.first <= row).unwrap_or(&self.bands[0]);
        band.now[band.index(row, field, self.plan.columns) + column].wide()
    }

    /// Whether the cell is part of a wall.
    #[must_use]
    pub fn is_wall(&self, column: usize, row: usize) -> bool {
        self.plan.cells[row * self.plan.columns + column] == Cell::Wall
    }

    /// Phase of a cell: 1 in the liquid, 0 in the gas and in walls.
    #[must_use]
    pub fn phase(&self, column: usize, row: usize) -> f64 {
        self.read(column, row, PHASE)
    }

    /// Velocity of a cell, cells per step (half a step of acceleration ahead).
    #[must_use]
    pub fn velocity(&self, column: usize, row: usize) -> [f64; 2] {
        [self.read(column, row, MOVE_X) / 3.0, self.read(column, row, MOVE_Y) / 3.0]
    }

    /// Pressure P of a cell, with the liquid's density as unit of density.
    #[must_use]
    pub fn pressure(&self, column: usize, row: usize) -> f64 {
        let reduced = self.read(column, row, REST)
            + (self.read(column, row, STRESS_XX) + self.read(column, row, STRESS_YY)) / 3.0;
        let gas = self.fluids.density_ratio;
        reduced / 3.0 * (gas + self.phase(column, row).clamp(0.0, 1.0) * (1.0 - gas))
    }

    /// Whether every field of every cell is finite and slower than `limit` cells per step.
    #[must_use]
    pub fn is_sound(&self, limit: f64) -> bool {
        let nx = self.plan.columns;
        let bound = T::of(3.0 * limit);
        self.bands.iter().all(|band| {
            (band.first..band.first + band.rows).all(|row| {
                let at = band.index(row, 0, nx);
                let fields = &band.now[at..at + FIELDS * nx];
                let slow = |field: usize| {
                    fields[field * nx..(field + 1) * nx].iter().all(|&value| value < bound && value > -bound)
                };
                let still = T::of(2.0);
                let phase = &fields[PHASE * nx..(PHASE + 1) * nx];
                slow(MOVE_X) && slow(MOVE_Y) && phase.iter().all(|&value| value < still && value > -still)
            })
        })
    }
}

/// One step of one band, as the vector dispatcher takes it: compiled once for each set of vector instructions. The arithmetic is the same in all
/// of them (no fused multiply-add, no reordering), so results do not depend on the machine.
struct Step<'a, T> {
    band: &'a mut Band<T>,
    plan: &'a Plan<T>,
    media: &'a Media<T>,
}

impl<T: Real> pulp::NullaryFnOnce for Step<'_, T> {
    type Output = ();

    #[inline(always)]
    fn call(self) {
        self.band.step(self.plan, self.media);
    }
}

/// What a worker is handed.
#[derive(Clone, Copy)]
struct Share<'a, T> {
    plan: &'a Plan<T>,
    media: &'a Media<T>,
    post: &'a [Exchange<T>],
    barrier: &'a Barrier,
    cancel: &'a AtomicBool,
    agreed: &'a AtomicBool,
    start: u64,
    steps: u32,
}

/// Steps one band along with the others; returns the steps taken.
fn work<T: Real>(band: &mut Band<T>, k: usize, share: Share<'_, T>) -> u32 {
    let _token = share.barrier.token();
    let arch = pulp::Arch::new();
    let length = FIELDS * share.plan.columns;
    let mut done = 0;
    while done < share.steps {
        let parity = ((share.start + u64::from(done)) % 2) as usize;
        arch.dispatch(Step { band: &mut *band, plan: share.plan, media: share.media });
        // The first band alone decides whether to stop, before the barrier, so that all take the same number of steps.
        if k == 0 && share.cancel.load(Ordering::Relaxed) {
            share.agreed.store(true, Ordering::Release);
        }
        let own = HALO * length..(HALO + band.rows) * length;
        if let Some(exchange) = share.post.get(k) {
            lock(&exchange.up[parity]).copy_from_slice(&band.now[own.end - HALO * length..own.end]);
        }
        if let Some(exchange) = k.checked_sub(1).and_then(|below| share.post.get(below)) {
            lock(&exchange.down[parity]).copy_from_slice(&band.now[own.start..own.start + HALO * length]);
        }
        if !share.barrier.wait() {
            return done;
        }
        if let Some(exchange) = share.post.get(k) {
            band.now[own.end..own.end + HALO * length].copy_from_slice(&lock(&exchange.down[parity]));
        }
        if let Some(exchange) = k.checked_sub(1).and_then(|below| share.post.get(below)) {
            band.now[own.start - HALO * length..own.start].copy_from_slice(&lock(&exchange.up[parity]));
        }
        done += 1;
        if share.agreed.load(Ordering::Acquire) {
            break;
        }
    }
    done
}

fn lock<T>(mutex: &Mutex<Vec<T>>) -> std::sync::MutexGuard<'_, Vec<T>> {
    mutex.lock().unwrap_or_else(PoisonError::into_inner)
}

/// Coefficients of the collision.
fn media_of<T: Real>(fluids: &Fluids) -> Media<T> {
    Media {
        four_beta: T::of(48.0 * fluids.surface_tension / fluids.interface),
        kappa: T::of(1.5 * fluids.surface_tension * fluids.interface),
        sharpening: T::of(4.0 / fluids.interface),
        nu_gas: T::of(fluids.gas_viscosity),
        nu_step: T::of(fluids.liquid_viscosity - fluids.gas_viscosity),
        rho_gas: T::of(fluids.density_ratio),
        rho_step: T::of(1.0 - fluids.density_ratio),
        gravity_x: T::of(fluids.gravity[0]),
        gravity_y: T::of(fluids.gravity[1]),
        omega: T::of(1.0 / (3.0 * fluids.mobility + 0.5)),
    }
}

/// Viscosity added near the sides through which the stream leaves (right, bottom, top).
fn sponge_at(setup: &Setup<'_>, i: usize, j: usize) -> f64 {
    if setup.sponge == 0 {
        return 0.0;
    }
    let right = setup.columns - 1 - i;
    let nearest = right.min(j).min(setup.rows - 1 - j) as f64;
    let depth = (1.0 - nearest / setup.sponge as f64).max(0.0);
    0.25 * depth * depth
}
