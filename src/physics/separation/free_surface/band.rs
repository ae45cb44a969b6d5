//! A band of rows: owned by one thread, stepped by itself, exchanging its outermost rows once a step.
//!
//! What a band computes beyond its own rows (the phase in its halo) is the same arithmetic on the same numbers as in the neighbour that owns
//! them, so results do not depend on how many bands there are.

use std::ops::Range;

use super::kernel::{Media, Row, STREAMED, collide, stream_moments, stream_phase};
use super::layout::{
    CX, CY, FIELDS, FLUX_X, FLUX_Y, HALO, MOVE_X, MOVE_Y, PHASE, REST, STRESS_XX, STRESS_XY, STRESS_YY,
    WEIGHT,
};
use super::real::Real;
use super::sides::{Sides, settle_columns, settle_row};
use super::wall::{Cell, Link, Pin, Walls};

/// What all bands share: never changes while they run.
#[derive(Debug)]
pub(super) struct Plan<T> {
    pub columns: usize,
    pub rows: usize,
    pub cells: Vec<Cell>,
    pub fluid: Vec<T>,
    pub sponge: Vec<T>,
    pub walls: Walls<T>,
    pub sides: Sides<T>,
}

/// Rows `first..first + rows` of the lattice, with [`HALO`] rows more on either side.
#[derive(Debug)]
pub(super) struct Band<T> {
    pub first: usize,
    pub rows: usize,
    /// Fields now.
    pub now: Vec<T>,
    /// Fields of the next step, in the making.
    pub next: Vec<T>,
    phase: Vec<T>,
    streamed: Vec<T>,
    /// Springs of the ghosts in the own rows and one more on either side.
    pins: Vec<Pin<T>>,
}

/// Rows whose ghosts a band writes.
fn ghost_rows(first: usize, rows: usize, all: usize) -> Range<usize> {
    first.saturating_sub(1)..(first + rows + 1).min(all)
}

impl<T: Real> Band<T> {
    pub(super) fn new(first: usize, rows: usize, plan: &Plan<T>) -> Self {
        let columns = plan.columns;
        let ghosts = ghost_rows(first, rows, plan.rows);
        let pins = plan.walls.ghost_rows[ghosts.end] - plan.walls.ghost_rows[ghosts.start];
        let kept = rows + 2 * HALO;
        Self {
            first,
            rows,
            now: vec![T::default(); kept * FIELDS * columns],
            next: vec![T::default(); kept * FIELDS * columns],
            phase: vec![T::default(); kept * columns],
            streamed: vec![T::default(); STREAMED * columns],
            pins: vec![Pin::default(); pins],
        }
    }

    /// One step of the band's own rows; its halo must be up to date, and is not afterwards.
    #[inline(always)]
    pub(super) fn step(&mut self, plan: &Plan<T>, media: &Media<T>) {
        self.stream_phases(plan);
        let nx = plan.columns;
        let length = FIELDS * nx;
        for row in self.first.max(1)..(self.first + self.rows).min(plan.rows - 1) {
            let at = row + HALO - self.first;
            let [below, here, above] = [at - 1, at, at + 1].map(|k| &self.now[k * length..(k + 1) * length]);
            stream_moments(below, here, above, &mut self.streamed, nx);
            for link in &plan.walls.links[plan.walls.link_rows[row]..plan.walls.link_rows[row + 1]] {
                bounce_moments(link, here, &mut self.streamed, nx);
            }
            let out = &mut self.next[at * length..(at + 1) * length];
            let input = Row {
                phase: [at - 1, at, at + 1].map(|k| &self.phase[k * nx..(k + 1) * nx]),
                streamed: &self.streamed,
                fluid: &plan.fluid[row * nx..(row + 1) * nx],
                sponge: &plan.sponge[row * nx..(row + 1) * nx],
            };
            collide(input, media, out, nx);
            settle_columns(out, plan, row, above);
        }
        for (edge, inner) in [(0, 1), (plan.rows - 1, plan.rows - 2)] {
            if (self.first..self.first + self.rows).contains(&edge) {
                let from = (inner + HALO - self.first) * length;
                let to = (edge + HALO - self.first) * length;
                settle_row(&mut self.next, from, to, plan, edge);
            }
        }
        std::mem::swap(&mut self.now, &mut self.next);
    }

    /// Phase after streaming in all rows that the own rows' stencils reach, walls included.
    #[inline(always)]
    fn stream_phases(&mut self, plan: &Plan<T>) {
        let nx = plan.columns;
        let length = FIELDS * nx;
        let reach = HALO - 1;
        let low = self.first.saturating_sub(reach);
        let high = (self.first + self.rows + reach).min(plan.rows);
        for row in low.max(1)..high.min(plan.rows - 1) {
            let at = row + HALO - self.first;
            let [below, here, above] = [at - 1, at, at + 1].map(|k| &self.now[k * length..(k + 1) * length]);
            let out = &mut self.phase[at * nx..(at + 1) * nx];
            stream_phase(below, here, above, out, nx);
            for link in &plan.walls.links[plan.walls.link_rows[row]..plan.walls.link_rows[row + 1]] {
                bounce_phase(link, here, out, nx);
            }
            plan.sides.settle_phase(out, plan, row);
        }
        for (edge, inner) in [(0, 1), (plan.rows - 1, plan.rows - 2)] {
            if (low..high).contains(&edge) {
                let (from, to) = ((inner + HALO - self.first) * nx, (edge + HALO - self.first) * nx);
                self.phase.copy_within(from..from + nx, to);
            }
        }
        let shift = self.first * nx;
        let rows = ghost_rows(self.first, self.rows, plan.rows);
        let ghosts = plan.walls.ghost_rows[rows.start]..plan.walls.ghost_rows[rows.end];
        for (ghost, pin) in plan.walls.ghosts[ghosts].iter().zip(&mut self.pins) {
            ghost.write(&mut self.phase, shift, pin);
        }
        if plan.sides.periodic {
            for row in rows {
                let at = (row + HALO - self.first) * nx;
                self.phase[at] = self.phase[at + nx - 2];
                self.phase[at + nx - 1] = self.phase[at + 1];
            }
        }
    }

    /// Index in [`Self::now`] of a field at column 0 of a row of the lattice that this band keeps.
    pub(super) fn index(&self, row: usize, field: usize, columns: usize) -> usize {
        ((row + HALO - self.first) * FIELDS + field) * columns
    }
}

/// Adds what comes back from the wall to the phase of a cell.
#[inline]
fn bounce_phase<T: Real>(link: &Link, here: &[T], phase: &mut [T], nx: usize) {
    let i = link.column as usize;
    let at = |field: usize| here[field * nx + i];
    for k in 1..9 {
        if link.directions & (1 << k) != 0 {
            let toward = signed(CX[k], at(FLUX_X)) + signed(CY[k], at(FLUX_Y));
            phase[i] += T::of(WEIGHT[k]) * (at(PHASE) - toward);
        }
    }
}

/// Adds what comes back from the wall to the other moments of a cell.
#[inline]
fn bounce_moments<T: Real>(link: &Link, here: &[T], streamed: &mut [T], nx: usize) {
    let i = link.column as usize;
    let at = |field: usize| here[field * nx + i];
    for k in 1..9 {
        if link.directions & (1 << k) == 0 {
            continue;
        }
        let (cx, cy) = (CX[k], CY[k]);
        let weight = T::of(WEIGHT[k]);
        let even = at(REST)
            + signed(cx * cx, at(STRESS_XX))
            + signed(cy * cy, at(STRESS_YY))
            + signed(cx * cy, at(STRESS_XY));
        let back = weight * (even - (signed(cx, at(MOVE_X)) + signed(cy, at(MOVE_Y))));
        let flux = weight * (at(PHASE) - (signed(cx, at(FLUX_X)) + signed(cy, at(FLUX_Y))));
        let add = [
            back,
            signed(cx, back),
            signed(cy, back),
            signed(cx * cx, back),
            signed(cy * cy, back),
            signed(cx * cy, back),
            signed(cx, flux),
            signed(cy, flux),
        ];
        for (moment, value) in add.into_iter().enumerate() {
            streamed[moment * nx + i] += value;
        }
    }
}

/// `sign × value` for a sign of −1, 0 or 1.
#[inline]
fn signed<T: Real>(sign: i32, value: T) -> T {
    match sign {
        0 => T::default(),
        1 => value,
        _ => -value,
    }
}
