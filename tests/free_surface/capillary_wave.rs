//! A small standing wave: frequency and decay of the normal mode of two unbounded fluids of equal kinematic viscosity
//! (Prosperetti 1981, Phys. Fluids 24, 1217, doi 10.1063/1.863522; quartic from memory, checked below against its inviscid limit).

use dribble_risk::physics::separation::free_surface::lattice::Lattice;
use dribble_risk::physics::separation::free_surface::setup::Ends;

use crate::bench::{NEVER, at_rest, degrees, fluids};

type Complex = (f64, f64);
fn times(a: Complex, b: Complex) -> Complex {
    (a.0 * b.0 - a.1 * b.1, a.0 * b.1 + a.1 * b.0)
}

/// Decay rate and frequency: z² − νk² for the root z of the quartic nearest to the inviscid one.
fn mode(natural: f64, damping: f64, beta: f64) -> (f64, f64) {
    let root = damping.sqrt();
    let c = [
        (1.0 - 4.0 * beta) * damping * damping + natural * natural,
        4.0 * (1.0 - 3.0 * beta) * damping * root,
        2.0 * (1.0 - 6.0 * beta) * damping,
        -4.0 * beta * root,
        1.0,
    ];
    let half = (natural / 2.0).sqrt();
    // The modes that last are those with Re z < 0.
    let mut z = (-half, half);
    for _ in 0..60 {
        let (mut value, mut slope) = ((0.0, 0.0), (0.0, 0.0));
        for &k in c.iter().rev() {
            slope = times(slope, z);
            slope = (slope.0 + value.0, slope.1 + value.1);
            value = times(value, z);
            value = (value.0 + k, value.1);
        }
        let size = slope.0 * slope.0 + slope.1 * slope.1;
        let step = times(value, (slope.0 / size, -slope.1 / size));
        z = (z.0 - step.0, z.1 - step.1);
    }
    let square = times(z, z);
    (-(square.0 - damping), square.1.abs())
}

#[test]
fn the_quartic_has_the_inviscid_limit() {
    let (decay, frequency) = mode(0.002, 1e-9, 0.0);
    assert!(
        (frequency / 0.002 - 1.0).abs() < 1e-3 && (decay / 2e-9 - 1.0).abs() < 0.01,
        "{decay} {frequency}"
    );
}

fn amplitude(lattice: &Lattice<f32>, length: f64) -> f64 {
    let k = 2.0 * std::f64::consts::PI / length;
    (1..lattice.columns() - 1)
        .map(|i| {
            let depth: f64 = (1..lattice.rows() - 1).map(|j| lattice.phase(i, j)).sum();
            depth * (k * (i as f64 - 1.0)).cos() * 2.0 / length
        })
        .sum()
}

#[test]
fn frequency_and_decay() {
    let (columns, rows) = (66, 74);
    let length = 64.0;
    let k = 2.0 * std::f64::consts::PI / length;
    let walls = move |_: f64, y: f64| (y - 0.5).min(rows as f64 - 1.5 - y);
    let fluids = fluids(0.005, 0.01);
    let inside = move |x: f64, y: f64| 36.0 + 1.5 * (k * (x - 1.0)).cos() - (y - 0.5);
    let mut lattice = at_rest((columns, rows), Ends::Periodic, &walls, &inside, fluids, degrees(90.0));
    let rho = 1.0 + fluids.density_ratio;
    let natural = (fluids.surface_tension * k * k * k / rho).sqrt();
    let (decay, frequency) =
        mode(natural, fluids.liquid_viscosity * k * k, fluids.density_ratio / (rho * rho));
    // Crossings and extremes from the first half period on, when the start is forgotten.
    let every = 20;
    let mut crossings = vec![];
    let mut extremes: Vec<(f64, f64)> = vec![];
    let mut past = [amplitude(&lattice, length); 2];
    for step in 1..=(3.4 * std::f64::consts::PI / frequency / f64::from(every)) as u32 {
        lattice.advance(every, &NEVER);
        let now = amplitude(&lattice, length);
        let time = f64::from(step * every);
        if now * past[1] < 0.0 {
            crossings.push(time - f64::from(every) * now / (now - past[1]));
        }
        if (now - past[1]) * (past[1] - past[0]) < 0.0 {
            extremes.push((time - f64::from(every), past[1].abs()));
        }
        past = [past[1], now];
    }
    let measured = std::f64::consts::PI * 2.0 / (crossings[2] - crossings[0]);
    let (first, last) = (extremes[0], extremes[extremes.len() - 1]);
    let measured_decay = (first.1 / last.1).ln() / (last.0 - first.0);
    println!(
        "capillary wave: frequency {:+.2} %, decay {:+.1} %",
        100.0 * (measured / frequency - 1.0),
        100.0 * (measured_decay / decay - 1.0)
    );
    assert!((measured / frequency - 1.0).abs() < 0.03, "{measured} {frequency}");
    assert!((measured_decay / decay - 1.0).abs() < 0.15, "{measured_decay} {decay}");
}
