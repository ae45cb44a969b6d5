//! The computed stream: a lattice with a lip in it, and what is read from it.

use core::f64::consts::PI;
use std::sync::atomic::AtomicBool;

use super::lattice::{Lattice, LatticeFault};
use super::lip::Lip;
use super::problem::{Approach, Grid, Problem};
use super::real::Real;
use super::setup::{Ends, Feed, Fluids, Seed, Setup};

/// Where the stream's direction is read: this many thicknesses beyond the arc.
const READING_DISTANCE: f64 = 4.5;

/// A stream being computed.
#[derive(Debug)]
pub struct Stream<T> {
    problem: Problem,
    grid: Grid,
    lip: Lip,
    lattice: Lattice<T>,
    weber: f64,
    ring: Vec<(usize, usize)>,
    beside_wall: Vec<(usize, usize, f64)>,
}

/// What is read from a stream.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Reading {
    /// Farthest wetted point along the wall from the start of the arc, in thicknesses h.
    pub contact_position: f64,
    /// Angle of the stream below the floor's direction, rad, 4.5 h beyond the arc; `None` if no liquid gets there.
    pub ejection_angle: Option<f64>,
    /// Thickness at the start of the arc, in h.
    pub thickness_at_arc: f64,
    /// Thickness two h before the arc, in h.
    pub thickness_before: f64,
    /// Flow per width at the start of the arc, in U h.
    pub flow: f64,
    /// Momentum per width at the start of the arc, in U² h.
    pub momentum: f64,
}

impl<T: Real> Stream<T> {
    /// A separated stream: the film on the floor, and a sheet straight on from it.
    ///
    /// # Errors
    /// [`LatticeFault`] if the grid's shape does not fit.
    pub fn separated(
        problem: &Problem,
        grid: &Grid,
        weber: f64,
        threads: usize,
    ) -> Result<Self, LatticeFault> {
        let h = f64::from(grid.cells);
        let radius = problem.radius_ratio * h;
        let (columns, rows) = grid.shape(problem);
        // Walls along the grid fall midway between cells.
        let arc_start = (grid.room[0] * h + radius).round() - radius - 0.5;
        let floor = (grid.room[2] * h + radius).round() - 0.5;
        let lip = Lip { arc_start, floor, radius, turn: problem.turn };
        let liquid_viscosity = grid.speed * h / problem.reynolds;
        let g = problem.froude.map_or(0.0, |froude| grid.speed * grid.speed / (froude * h));
        let (sine, cosine) = libm::sincos(problem.slope);
        let fluids = Fluids {
            density_ratio: grid.density_ratio,
            liquid_viscosity,
            gas_viscosity: (2.0 * liquid_viscosity).max(grid.least_gas_viscosity),
            surface_tension: grid.speed * grid.speed * h / weber,
            interface: grid.interface,
            mobility: grid.mobility,
            gravity: [g * sine, -g * cosine],
        };
        let depth = match problem.approach {
            Approach::Film => h,
            Approach::Flow => 1.15 * h,
        };
        let speed = grid.speed * h / depth;
        let slot = Slot { row: floor.floor() as usize, from: 2, length: 2.0 * h };
        let start = |x: f64, y: f64| {
            let height = y - floor;
            let top = 0.5 - 0.5 * libm::tanh(2.0 * (height - depth) / grid.interface);
            let under = 0.5 + 0.5 * libm::tanh(2.0 * height / grid.interface);
            let phase = if x < lip.arc_start { if height > -1.0 { top } else { 0.0 } } else { top * under };
            Seed { phase, velocity: [speed * phase, 0.0] }
        };
        let lattice = Lattice::new(
            &Setup {
                columns,
                rows,
                distance: &|x, y| match problem.approach {
                    Approach::Film => lip.distance(x, y),
                    // Closed behind the slot.
                    Approach::Flow => lip.distance(x, y).min(x - 1.5),
                },
                imposed: &|i, j| match problem.approach {
                    Approach::Film => None,
                    Approach::Flow => slot
                        .at(i, j)
                        .then_some(Seed { phase: 1.0, velocity: [0.0, grid.speed * h / slot.cells()] }),
                },
                start: &start,
                ends: match problem.approach {
                    Approach::Film => Ends::Through(Feed { floor, thickness: h, speed: grid.speed }),
                    Approach::Flow => Ends::Open,
                },
                sponge: 14,
                fluids,
                contact: problem.contact,
            },
            threads,
        )?;
        let mut stream =
            Self { problem: *problem, grid: *grid, lip, lattice, weber, ring: vec![], beside_wall: vec![] };
        stream.survey();
        Ok(stream)
    }

    /// Lists the cells that readings need.
    fn survey(&mut self) {
        let h = f64::from(self.grid.cells);
        let ring = self.lip.radius + READING_DISTANCE * h;
        for j in 1..self.lattice.rows() - 1 {
            for i in 1..self.lattice.columns() - 1 {
                if self.lattice.is_wall(i, j) {
                    continue;
                }
                let (x, y) = (i as f64, j as f64);
                if (self.lip.reach(x, y) - ring).abs() < 1.0 && x > self.lip.arc_start {
                    self.ring.push((i, j));
                }
                if self.lip.distance(x, y) < 1.6 {
                    self.beside_wall.push((i, j, self.lip.along(x, y)));
                }
            }
        }
    }

    /// Weber number now.
    #[must_use]
    pub const fn weber(&self) -> f64 {
        self.weber
    }

    /// Sets the Weber number by the surface tension; Re and Fr stay.
    pub fn set_weber(&mut self, weber: f64) {
        self.weber = weber;
        self.lattice
            .set_surface_tension(self.grid.speed * self.grid.speed * f64::from(self.grid.cells) / weber);
    }

    /// Advances by `steps` steps.
    pub fn advance(&mut self, steps: u32, cancel: &AtomicBool) {
        self.lattice.advance(steps, cancel);
    }

    /// The lattice, to draw the stream from.
    #[must_use]
    pub const fn lattice(&self) -> &Lattice<T> {
        &self.lattice
    }

    /// The lip on the lattice.
    #[must_use]
    pub const fn lip(&self) -> &Lip {
        &self.lip
    }

    /// The problem.
    #[must_use]
    pub const fn problem(&self) -> &Problem {
        &self.problem
    }

    /// The grid.
    #[must_use]
    pub const fn grid(&self) -> &Grid {
        &self.grid
    }

    /// Whether the fields are finite and slower than a cell per step.
    #[must_use]
    pub fn is_sound(&self) -> bool {
        self.lattice.is_sound(1.0)
    }

    fn column(&self, x: f64) -> [f64; 3] {
        let i = (x.max(1.0) as usize).min(self.lattice.columns() - 2);
        let mut sums = [0.0; 3];
        for j in 0..self.lattice.rows() {
            if !self.lattice.is_wall(i, j) {
                let phase = self.lattice.phase(i, j).clamp(0.0, 1.0);
                let u = self.lattice.velocity(i, j)[0];
                sums[0] += phase;
                sums[1] += phase * u;
                sums[2] += phase * u * u;
            }
        }
        sums
    }

    /// Reads the stream.
    #[must_use]
    pub fn read(&self) -> Reading {
        let h = f64::from(self.grid.cells);
        let u = self.grid.speed;
        let mut farthest = f64::NEG_INFINITY;
        for &(i, j, along) in &self.beside_wall {
            if along > farthest && self.lattice.phase(i, j) > 0.5 {
                farthest = along;
            }
        }
        let (mut mx, mut my, mut wet) = (0.0, 0.0, false);
        for &(i, j) in &self.ring {
            let phase = self.lattice.phase(i, j);
            if phase > 0.5 {
                let [vx, vy] = self.lattice.velocity(i, j);
                mx += phase * vx;
                my += phase * vy;
                wet = true;
            }
        }
        let [thickness, flow, momentum] = self.column(self.lip.arc_start);
        let [before, ..] = self.column(self.lip.arc_start - 2.0 * h);
        Reading {
            contact_position: farthest / h,
            ejection_angle: wet
                .then(|| libm::atan2(-my, mx))
                .map(|angle| if angle < -PI / 2.0 { angle + 2.0 * PI } else { angle }),
            thickness_at_arc: thickness / h,
            thickness_before: before / h,
            flow: flow / (u * h),
            momentum: momentum / (u * u * h),
        }
    }
}

/// The slot in the floor that feeds a flow of free depth.
#[derive(Debug, Clone, Copy)]
struct Slot {
    row: usize,
    from: usize,
    length: f64,
}

impl Slot {
    fn cells(&self) -> f64 {
        self.length.round()
    }

    fn at(&self, i: usize, j: usize) -> bool {
        j == self.row && (self.from..self.from + self.cells() as usize).contains(&i)
    }
}
