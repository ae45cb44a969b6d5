//! Small standing waves, by gravity and by surface tension: frequency and decay of the normal mode of two unbounded fluids of equal kinematic viscosity
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

/// Measured frequency and decay of a wave 64 cells long, relative to the exact ones.
fn measured(surface_tension: f64, gravity: f64) -> (f64, f64) {
    let (columns, rows) = (66, 74);
    let length = 64.0;
    let k = 2.0 * std::f64::consts::PI / length;
    let walls = move |_: f64, y: f64| (y - 0.5).min(rows as f64 - 1.5 - y);
    let mut fluids = fluids(0.005, surface_tension);
    fluids.gravity = [0.0, -gravity];
    let inside = move |x: f64, y: f64| 36.0 + 1.5 * (k * (x - 1.0)).cos() - (y - 0.5);
    let mut lattice = at_rest((columns, rows), Ends::Periodic, &walls, &inside, fluids, degrees(90.0));
    let (rho, step) = (1.0 + fluids.density_ratio, 1.0 - fluids.density_ratio);
    let natural = ((fluids.surface_tension * k * k * k + gravity * k * step) / rho).sqrt();
    let (decay, frequency) =
        mode(natural, fluids.liquid_viscosity * k * k, fluids.density_ratio / (rho * rho));
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
        // Extremes after the first crossing, when the start is forgotten.
        if (now - past[1]) * (past[1] - past[0]) < 0.0 && !crossings.is_empty() {
            extremes.push((time - f64::from(every), past[1].abs()));
        }
        past = [past[1], now];
    }
    let measured = std::f64::consts::PI * 2.0 / (crossings[2] - crossings[0]);
    let (first, last) = (extremes[0], extremes[extremes.len() - 1]);
    let measured_decay = (first.1 / last.1).ln() / (last.0 - first.0);
    (measured / frequency, measured_decay / decay)
}

#[test]
fn gravity_wave() {
    let (frequency, decay) = measured(1e-4, 1e-4);
    println!(
        "gravity wave: frequency {:+.2} %, decay {:+.0} %",
        100.0 * (frequency - 1.0),
        100.0 * (decay - 1.0)
    );
    // A wave twice as long errs by 0.7 %: the error falls as the square of the interface's width over the wave's length.
    assert!((frequency - 1.0).abs() < 0.03, "{frequency}");
}

/// A known flaw, measured: surface tension acts 7 to 13 % too weakly on a moving surface (frequency 7 % low at 64 cells, 4.5 % at 128), and part of its
/// work is lost to the interface's own relaxation: decay twice the exact one at mobility 0.05, 1.1 times at 0.4. At rest (Laplace) tension is right to 1 to
/// 3 %, and gravity waves have the right frequency, so inertia is not to blame; nor is anisotropy (a drop at rest is round to 5e-5 of its radius).
#[test]
fn capillary_wave() {
    let (frequency, decay) = measured(0.01, 0.0);
    println!(
        "capillary wave: frequency {:+.2} %, decay {:+.0} %",
        100.0 * (frequency - 1.0),
        100.0 * (decay - 1.0)
    );
    assert!((0.91..1.02).contains(&frequency), "{frequency}");
    assert!((0.9..2.1).contains(&decay), "{decay}");
}
