//! Steady flows along a wall: Poiseuille's layer and Nusselt's film.

use dribble_risk::physics::separation::free_surface::setup::Ends;

use crate::bench::{NEVER, at_rest, degrees, fluids};

const COLUMNS: usize = 18;

#[test]
fn layer_between_walls_is_poiseuille() {
    let rows = 22;
    let gap = rows as f64 - 2.0;
    let walls = move |_: f64, y: f64| (y - 0.5).min(rows as f64 - 1.5 - y);
    let viscosity = 0.1;
    let push = 1e-5;
    let mut fluids = fluids(viscosity, 1e-4);
    fluids.gravity = [push, 0.0];
    let mut lattice = at_rest((COLUMNS, rows), Ends::Periodic, &walls, &|_, _| 100.0, fluids, degrees(90.0));
    lattice.advance(12_000, &NEVER);
    let acceleration = push * (1.0 - fluids.density_ratio);
    let mut worst = 0.0f64;
    let top = acceleration * gap * gap / (8.0 * viscosity);
    for j in 1..rows - 1 {
        let y = j as f64 - 0.5;
        let exact = acceleration / (2.0 * viscosity) * y * (gap - y);
        worst = worst.max((lattice.velocity(9, j)[0] - exact).abs() / top);
    }
    println!("Poiseuille: largest error {:.2} % of the highest speed", 100.0 * worst);
    assert!(worst < 0.01, "{worst}");
}

#[test]
fn film_down_a_slope_is_nusselt() {
    let rows = 50;
    let depth = 16.0;
    let walls = |_: f64, y: f64| y - 0.5;
    let viscosity = 0.1;
    let push = 4e-6;
    let mut fluids = fluids(viscosity, 1e-3);
    fluids.gravity = [push, -push];
    let inside = |_: f64, y: f64| depth - (y - 0.5);
    let mut lattice = at_rest((COLUMNS, rows), Ends::Periodic, &walls, &inside, fluids, degrees(90.0));
    lattice.advance(20_000, &NEVER);
    let acceleration = push * (1.0 - fluids.density_ratio);
    let flow: f64 = (1..rows - 1).map(|j| lattice.phase(9, j) * lattice.velocity(9, j)[0]).sum();
    let exact = acceleration * depth * depth * depth / (3.0 * viscosity);
    let error = flow / exact - 1.0;
    println!("Nusselt: error of the flow {:.2} %", 100.0 * error);
    assert!(error.abs() < 0.04, "{error}");
}
