//! What is asked of the solver, and the grid that answers it.

use core::f64::consts::PI;

use super::contact::{AngleFault, ContactAngle};

/// How the liquid comes to the edge.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Approach {
    /// A film of given thickness and mean speed, parabolic profile, four thicknesses before the edge: a supercritical approach.
    Film,
    /// The flow per width U h is imposed far upstream, the depth is free: a subcritical approach, which the edge controls.
    /// h is then the critical depth (Fr = 1) or whatever depth the caller scales with.
    Flow,
}

/// A stream at a lip, in the scales of its approach film: thickness h, mean speed U.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Problem {
    /// r/h: edge radius over thickness; 0 for an ideally sharp edge. 0..10.
    pub radius_ratio: f64,
    /// Contact angles at floor, edge and outer wall.
    pub contact: ContactAngle,
    /// Turn α from the floor to the outer wall, rad. π/6..π.
    pub turn: f64,
    /// Re = ρUh/μ. 1..2000.
    pub reynolds: f64,
    /// Fr = U²/(gh); `None` without gravity. At least 0.1.
    pub froude: Option<f64>,
    /// Fall of the floor towards the edge, rad, −π/6..π/2.
    pub slope: f64,
    /// How the liquid comes.
    pub approach: Approach,
}

/// A problem outside what the solver takes.
#[derive(Debug, Clone, Copy, PartialEq, thiserror::Error)]
pub enum ProblemFault {
    /// A quantity is out of its range.
    #[error("{quantity} is {value}, outside {low}..{high}")]
    Range {
        /// Which.
        quantity: &'static str,
        /// Value given.
        value: f64,
        /// Least value taken.
        low: f64,
        /// Greatest value taken.
        high: f64,
    },
    /// The contact angles.
    #[error(transparent)]
    Angle(#[from] AngleFault),
    /// A flow with free depth needs gravity.
    #[error("an approach with free depth needs gravity (a finite Froude number)")]
    FreeDepthWithoutGravity,
    /// A lip thinner than the grid can carry.
    #[error(
        "a strip {cells:.1} cells thick is finer than the grid: at least {needed} cells per thickness are needed"
    )]
    StripTooThin {
        /// Thickness of the strip, cells.
        cells: f64,
        /// Cells per film thickness that would do.
        needed: u32,
    },
    /// The liquid's viscosity on this grid is below what the lattice carries.
    #[error("a Reynolds number of {reynolds:.0} needs at least {needed} cells per thickness")]
    GridTooCoarse {
        /// Reynolds number.
        reynolds: f64,
        /// Cells per film thickness that would do.
        needed: u32,
    },
}

impl Problem {
    /// Checks the ranges.
    ///
    /// # Errors
    /// The first [`ProblemFault`] found.
    pub fn check(&self) -> Result<(), ProblemFault> {
        let ranges = [
            ("radius over thickness", self.radius_ratio, 0.0, 10.0),
            ("turn", self.turn, PI / 6.0, PI),
            ("Reynolds number", self.reynolds, 1.0, 2000.0),
            ("Froude number", self.froude.unwrap_or(1.0), 0.1, 1e6),
            ("slope", self.slope, -PI / 6.0, PI / 2.0),
        ];
        for (quantity, value, low, high) in ranges {
            if !(low..=high).contains(&value) {
                return Err(ProblemFault::Range { quantity, value, low, high });
            }
        }
        if self.approach == Approach::Flow && self.froude.is_none() {
            return Err(ProblemFault::FreeDepthWithoutGravity);
        }
        Ok(())
    }
}

/// The grid and the numerical fluids.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Grid {
    /// Cells per film thickness h.
    pub cells: u32,
    /// Width ξ of the interface, cells.
    pub interface: f64,
    /// Mean speed U of the film, cells per step.
    pub speed: f64,
    /// Density of the gas over that of the liquid. Real air would be 1/800; between 1/50 and 1/100 thresholds moved by 1 to 10 % at 18 cells.
    pub density_ratio: f64,
    /// Least kinematic viscosity of the gas, cells² per step; above it, twice that of the liquid. What lies above drags the stream and draws it to the
    /// wall more than air does, so it should be as low as the lattice carries.
    pub least_gas_viscosity: f64,
    /// Mobility of the interface, cells² per step.
    pub mobility: f64,
    /// Room upstream of the arc, downstream, below and above it, in thicknesses.
    pub room: [f64; 4],
}

/// Least viscosity of the liquid, cells² per step, that the lattice carries (own judgement from runs: below it, noise grows).
const LEAST_VISCOSITY: f64 = 2.5e-4;

impl Grid {
    /// A grid of `cells` cells per thickness that suits the problem.
    ///
    /// # Errors
    /// [`ProblemFault`] if the problem is out of range or this grid too coarse for it.
    pub fn with_cells(problem: &Problem, cells: u32) -> Result<Self, ProblemFault> {
        problem.check()?;
        let speed = 0.05;
        let viscosity = speed * f64::from(cells) / problem.reynolds;
        if viscosity < LEAST_VISCOSITY {
            let needed = (LEAST_VISCOSITY * problem.reynolds / speed).ceil() as u32;
            return Err(ProblemFault::GridTooCoarse { reynolds: problem.reynolds, needed });
        }
        let strip = 2.0 * problem.radius_ratio * f64::from(cells);
        if problem.turn > 0.97 * PI && strip < 3.0 {
            let needed = if problem.radius_ratio > 0.0 {
                (1.5 / problem.radius_ratio).ceil() as u32
            } else {
                u32::MAX
            };
            return Err(ProblemFault::StripTooThin { cells: strip, needed });
        }
        let upstream = match problem.approach {
            Approach::Film => 4.0,
            Approach::Flow => 9.0,
        };
        Ok(Self {
            cells,
            interface: 4.0,
            speed,
            density_ratio: 0.01,
            least_gas_viscosity: 0.02,
            mobility: 0.05,
            room: [upstream, 7.0, 5.0, if problem.approach == Approach::Flow { 3.0 } else { 2.5 }],
        })
    }

    /// Columns and rows of the lattice.
    #[must_use]
    pub fn shape(&self, problem: &Problem) -> (usize, usize) {
        let h = f64::from(self.cells);
        let radius = problem.radius_ratio * h;
        let [upstream, downstream, below, above] = self.room;
        let wide = upstream * h + radius + downstream * h;
        let high = below * h + radius + above * h;
        let blocks = (wide / 16.0).round().max(1.0) as usize;
        (16 * blocks + 2, high.ceil() as usize)
    }

    /// Steps in the time h/U.
    #[must_use]
    pub fn steps_per_turnover(&self) -> f64 {
        f64::from(self.cells) / self.speed
    }
}
