//! What the tests share: fluids, boxes, and a circle through an interface.

use std::sync::atomic::AtomicBool;

use dribble_risk::physics::separation::free_surface::contact::ContactAngle;
use dribble_risk::physics::separation::free_surface::lattice::Lattice;
use dribble_risk::physics::separation::free_surface::ramp::Watch;
use dribble_risk::physics::separation::free_surface::setup::{Ends, Fluids, Seed, Setup};

pub(crate) static NEVER: AtomicBool = AtomicBool::new(false);

pub(crate) fn watch() -> Watch<'static> {
    Watch { cancel: &NEVER, progress: &|_| {} }
}

pub(crate) fn fluids(viscosity: f64, surface_tension: f64) -> Fluids {
    Fluids {
        density_ratio: 0.02,
        liquid_viscosity: viscosity,
        gas_viscosity: viscosity,
        surface_tension,
        interface: 4.0,
        mobility: 0.05,
        gravity: [0.0, 0.0],
    }
}

pub(crate) fn degrees(angle: f64) -> ContactAngle {
    ContactAngle::single(angle.to_radians()).unwrap()
}

/// A lattice at rest with walls where `distance` is negative and liquid where `inside` is positive (signed distance from the interface).
pub(crate) fn at_rest(
    (columns, rows): (usize, usize),
    ends: Ends,
    distance: &dyn Fn(f64, f64) -> f64,
    inside: &dyn Fn(f64, f64) -> f64,
    fluids: Fluids,
    contact: ContactAngle,
) -> Lattice<f32> {
    let xi = fluids.interface;
    let start =
        |x: f64, y: f64| Seed { phase: 0.5 + 0.5 * (2.0 * inside(x, y) / xi).tanh(), velocity: [0.0; 2] };
    let setup = Setup {
        columns,
        rows,
        distance,
        imposed: &|_, _| None,
        start: &start,
        ends,
        sponge: 0,
        fluids,
        contact,
    };
    Lattice::new(&setup, 1).unwrap()
}

/// A closed box one cell within the lattice.
pub(crate) fn closed(columns: usize, rows: usize) -> impl Fn(f64, f64) -> f64 {
    move |x: f64, y: f64| {
        let (w, h) = (columns as f64 - 1.5, rows as f64 - 1.5);
        (x - 0.5).min(w - x).min(y - 0.5).min(h - y)
    }
}

/// Points where the phase crosses one half between neighbours, at least `clear` from the walls.
pub(crate) fn interface(
    lattice: &Lattice<f32>,
    distance: &dyn Fn(f64, f64) -> f64,
    clear: f64,
) -> Vec<(f64, f64)> {
    let mut points = vec![];
    for j in 1..lattice.rows() - 1 {
        for i in 1..lattice.columns() - 1 {
            let here = lattice.phase(i, j) - 0.5;
            for (di, dj) in [(1, 0), (0, 1)] {
                let there = lattice.phase(i + di, j + dj) - 0.5;
                if here * there < 0.0 && !lattice.is_wall(i, j) && !lattice.is_wall(i + di, j + dj) {
                    let part = here / (here - there);
                    let (x, y) = (i as f64 + part * di as f64, j as f64 + part * dj as f64);
                    if distance(x, y) > clear {
                        points.push((x, y));
                    }
                }
            }
        }
    }
    points
}

/// Centre and radius of the circle nearest to the points (least squares of x² + y² + ax + by + c).
pub(crate) fn circle(points: &[(f64, f64)]) -> (f64, f64, f64) {
    let mut m = [[0.0; 4]; 3];
    for &(x, y) in points {
        let row = [x, y, 1.0];
        let right = -(x * x + y * y);
        for (k, line) in m.iter_mut().enumerate() {
            for (l, value) in row.iter().enumerate() {
                line[l] += row[k] * value;
            }
            line[3] += row[k] * right;
        }
    }
    for k in 0..3 {
        let pivot = m[k];
        for (l, line) in m.iter_mut().enumerate() {
            if l != k {
                let factor = line[k] / pivot[k];
                for (value, p) in line.iter_mut().zip(pivot) {
                    *value -= factor * p;
                }
            }
        }
    }
    let [a, b, c] = [m[0][3] / m[0][0], m[1][3] / m[1][1], m[2][3] / m[2][2]];
    (-a / 2.0, -b / 2.0, (a * a / 4.0 + b * b / 4.0 - c).sqrt())
}
