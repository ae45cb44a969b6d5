//! A drop at rest: the pressure inside exceeds that outside by σ/R (Laplace; two dimensions).

use dribble_risk::physics::separation::free_surface::setup::Ends;

use crate::bench::{NEVER, at_rest, circle, closed, degrees, fluids, interface};

fn laplace_error(radius: f64) -> f64 {
    let size = 66;
    let walls = closed(size, size);
    let centre = (size as f64 - 1.0) / 2.0;
    let inside = |x: f64, y: f64| radius - (x - centre).hypot(y - centre);
    let surface_tension = 0.005;
    let mut lattice =
        at_rest((size, size), Ends::Open, &walls, &inside, fluids(0.1, surface_tension), degrees(90.0));
    lattice.advance(4000, &NEVER);
    let middle = size / 2;
    let jump = lattice.pressure(middle, middle) - lattice.pressure(4, 4);
    let (_, _, measured) = circle(&interface(&lattice, &walls, 1.0));
    jump * measured / surface_tension - 1.0
}

#[test]
fn pressure_jump_is_laplace() {
    for (radius, bound) in LAPLACE {
        let error = laplace_error(radius);
        println!("R = {radius}: error of the pressure jump {:.2} %", 100.0 * error);
        assert!(error.abs() < bound, "R = {radius}: {error}");
    }
}

/// Radius, cells; bound of the error.
const LAPLACE: [(f64, f64); 2] = [(12.0, 0.03), (20.0, 0.03)];
