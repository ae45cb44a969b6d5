//! The outermost cells of the lattice: fed, open, periodic or imposed.

use super::band::Plan;
use super::layout::{FLUX_X, FLUX_Y, MOVE_X, MOVE_Y, PHASE, REST, STRESS_XX, STRESS_XY, STRESS_YY};
use super::real::Real;
use super::setup::{Ends, Feed, Seed, Setup};
use super::wall::Cell;

/// What a fed row carries in.
#[derive(Debug, Clone, Copy)]
struct Fed<T> {
    phase: T,
    speed: T,
}

/// Left and right side, and the imposed cells.
#[derive(Debug)]
pub(super) struct Sides<T> {
    pub periodic: bool,
    /// For each row: what the left side feeds, if anything.
    fed: Vec<Option<Fed<T>>>,
    /// Imposed cells by rows: column, state.
    imposed: Vec<(usize, State<T>)>,
    imposed_rows: Vec<usize>,
}

/// A state to impose.
#[derive(Debug, Clone, Copy)]
struct State<T> {
    pressure: T,
    velocity: [T; 2],
    phase: T,
}

impl<T: Real> Sides<T> {
    pub(super) fn of(setup: &Setup<'_>) -> Self {
        let fed = (0..setup.rows)
            .map(|row| match setup.ends {
                Ends::Through(feed) => fed_at(&feed, row as f64, setup.fluids.interface),
                Ends::Periodic | Ends::Open => None,
            })
            .map(|fed| fed.map(|(phase, speed)| Fed { phase: T::of(phase), speed: T::of(speed) }))
            .collect();
        let mut imposed = vec![];
        let mut imposed_rows = vec![0];
        for row in 0..setup.rows {
            for column in 0..setup.columns {
                if let Some(Seed { phase, velocity }) = (setup.imposed)(column, row) {
                    let velocity = velocity.map(T::of);
                    imposed.push((column, State { pressure: T::default(), velocity, phase: T::of(phase) }));
                }
            }
            imposed_rows.push(imposed.len());
        }
        Self { periodic: setup.ends == Ends::Periodic, fed, imposed, imposed_rows }
    }

    /// Phase of the outermost columns and of imposed cells of a row.
    #[inline]
    pub(super) fn settle_phase(&self, phase: &mut [T], plan: &Plan<T>, row: usize) {
        let nx = plan.columns;
        if self.periodic {
            phase[0] = phase[nx - 2];
            phase[nx - 1] = phase[1];
        } else {
            phase[0] =
                self.fed[row].map_or(if self.is_fed() { T::default() } else { phase[1] }, |fed| fed.phase);
            phase[nx - 1] = phase[nx - 2];
        }
        for (column, state) in &self.imposed[self.imposed_rows[row]..self.imposed_rows[row + 1]] {
            phase[*column] = state.phase;
        }
    }

    fn is_fed(&self) -> bool {
        self.fed.iter().any(Option::is_some)
    }
}

/// Phase and speed of the feed at height `y`, cells; `None` above the film and below the floor.
fn fed_at(feed: &Feed, y: f64, interface: f64) -> Option<(f64, f64)> {
    let height = y - feed.floor;
    if height < -1.0 || height > feed.thickness + interface {
        return None;
    }
    let part = (height / feed.thickness).clamp(0.0, 1.0);
    let phase = 0.5 - 0.5 * libm::tanh(2.0 * (height - feed.thickness) / interface);
    Some((phase, 1.5 * feed.speed * part * (2.0 - part)))
}

/// Writes a state at equilibrium into column `i` of a row of fields.
#[inline]
fn impose<T: Real>(row: &mut [T], nx: usize, i: usize, state: State<T>) {
    let [u, v] = state.velocity;
    let three = T::of(3.0);
    let mut put = |field: usize, value: T| row[field * nx + i] = value;
    put(REST, state.pressure - T::of(1.5) * (u * u + v * v));
    put(MOVE_X, three * u);
    put(MOVE_Y, three * v);
    put(STRESS_XX, T::of(4.5) * u * u);
    put(STRESS_YY, T::of(4.5) * v * v);
    put(STRESS_XY, T::of(9.0) * u * v);
    put(PHASE, state.phase);
    put(FLUX_X, three * state.phase * u);
    put(FLUX_Y, three * state.phase * v);
}

/// Pressure, velocity and phase of column `i` of a row of fields.
#[inline]
fn state<T: Real>(row: &[T], nx: usize, i: usize) -> State<T> {
    let at = |field: usize| row[field * nx + i];
    let third = T::of(1.0 / 3.0);
    State {
        pressure: at(REST) + third * (at(STRESS_XX) + at(STRESS_YY)),
        velocity: [third * at(MOVE_X), third * at(MOVE_Y)],
        phase: at(PHASE),
    }
}

/// Outermost columns and imposed cells of a row just collided; `above` is the row above it, one step earlier.
#[inline]
pub(super) fn settle_columns<T: Real>(out: &mut [T], plan: &Plan<T>, row: usize, above: &[T]) {
    let nx = plan.columns;
    let sides = &plan.sides;
    if sides.periodic {
        for field in out.chunks_exact_mut(nx) {
            field[0] = field[nx - 2];
            field[nx - 1] = field[1];
        }
    } else {
        let zero = T::default();
        if plan.cells[row * nx] != Cell::Wall {
            let inner = state(out, nx, 1);
            let left = match sides.fed[row] {
                Some(fed) => {
                    State { pressure: inner.pressure, velocity: [fed.speed, zero], phase: fed.phase }
                }
                None if sides.is_fed() => State { pressure: zero, velocity: inner.velocity, phase: zero },
                None => State { pressure: zero, ..inner },
            };
            impose(out, nx, 0, left);
        }
        if plan.cells[row * nx + nx - 1] != Cell::Wall {
            let inner = state(out, nx, nx - 2);
            let [u, v] = inner.velocity;
            let outward = if u < zero { zero } else { u };
            impose(out, nx, nx - 1, State { pressure: zero, velocity: [outward, v], phase: inner.phase });
        }
    }
    for (column, imposed) in &sides.imposed[sides.imposed_rows[row]..sides.imposed_rows[row + 1]] {
        let pressure = state(above, nx, *column).pressure;
        impose(out, nx, *column, State { pressure, ..*imposed });
    }
}

/// The bottom or top row (`edge`) from the row beside it: everything leaves; liquid does not come back in from below.
#[inline]
pub(super) fn settle_row<T: Real>(fields: &mut [T], from: usize, to: usize, plan: &Plan<T>, edge: usize) {
    let nx = plan.columns;
    let zero = T::default();
    for i in 0..nx {
        if plan.cells[edge * nx + i] == Cell::Wall {
            continue;
        }
        let inner = state(&fields[from..], nx, i);
        let [u, v] = inner.velocity;
        let back = edge == 0 && v > zero && inner.phase > T::of(0.1);
        let outer = State { pressure: zero, velocity: [u, if back { zero } else { v }], phase: inner.phase };
        impose(&mut fields[to..], nx, i, outer);
    }
}
