//! Maps.

use dribble_risk::{
    analysis::decision::Verdict,
    service::render::{Axis, Boundary, Dark, Heading, MapChart, Scale, map, round_levels},
};

use crate::Picture;

const HEADING: Heading<'_> = Heading {
    title: "Safety factor over edge radius and pour rate",
    subtitle: "Water at 20 °C on glazed porcelain, in use; sheet lip 24 mm wide, turn 110°, floor sloping 8°",
    note: "dribble-risk 0.1.0, set-1, fingerprint 0123456789abcdef",
};
const FLOW: Axis<'_> = Axis { name: "pour rate", unit: "mL/s", scale: Scale::Log };
const RADIUS: Axis<'_> = Axis { name: "edge radius", unit: "mm", scale: Scale::Log };
const FACTOR: Axis<'_> = Axis { name: "safety factor", unit: "", scale: Scale::Log };
const CHANCE: Axis<'_> = Axis { name: "dribble probability", unit: "", scale: Scale::Linear };

fn spread(from: f64, to: f64, count: usize, log: bool) -> Vec<f64> {
    (0..count)
        .map(|i| {
            let share = i as f64 / (count.max(2) - 1) as f64;
            if log { from * (to / from).powf(share) } else { from + share * (to - from) }
        })
        .collect()
}

/// A smooth stand-in for Φ.
fn chance(factor: f64, doubt: f64) -> f64 {
    1.0 / (1.0 + (1.7 * factor.ln() / doubt).exp())
}

struct Table {
    xs: Vec<f64>,
    ys: Vec<f64>,
    factor: Vec<f64>,
    chance: Vec<f64>,
    verdicts: Vec<Option<Verdict>>,
}

fn table(xs: Vec<f64>, ys: Vec<f64>, factor: impl Fn(f64, f64) -> f64) -> Table {
    let factor: Vec<f64> =
        ys.iter().flat_map(|y| xs.iter().map(|x| factor(*x, *y)).collect::<Vec<_>>()).collect();
    let chances: Vec<f64> = factor.iter().map(|f| chance(*f, 0.45)).collect();
    let verdict = |p: &f64| match *p {
        p if p.is_nan() => None,
        p if p <= 0.05 => Some(Verdict::Clean),
        p if p >= 0.95 => Some(Verdict::Dribbles),
        _ => Some(Verdict::Marginal),
    };
    let verdicts = chances.iter().map(verdict).collect();
    Table { xs, ys, factor, chance: chances, verdicts }
}

fn draw(
    table: &Table,
    of_chance: bool,
    axes: [Axis<'_>; 2],
    asked: Option<[f64; 2]>,
    heading: Heading<'_>,
) -> String {
    let (quantity, values, dark) =
        if of_chance { (CHANCE, &table.chance, Dark::High) } else { (FACTOR, &table.factor, Dark::Low) };
    let levels =
        if of_chance { vec![0.05, 0.25, 0.5, 0.75, 0.95] } else { round_levels(values, quantity.scale, 9) };
    // Straighter between the points than the probability itself.
    let odds: Vec<f64> = table.chance.iter().map(|p| (p / (1.0 - p)).ln().clamp(-40.0, 40.0)).collect();
    map(&MapChart {
        heading,
        x: axes[0],
        y: axes[1],
        xs: &table.xs,
        ys: &table.ys,
        quantity,
        values,
        levels: &levels,
        dark,
        boundaries: &[
            Boundary { label: "dribbles up to here (probability 0.95)", values: &odds, level: 19_f64.ln() },
            Boundary { label: "clean from here (probability 0.05)", values: &odds, level: -(19_f64.ln()) },
        ],
        verdicts: &table.verdicts,
        asked,
    })
}

fn lip(x: f64, y: f64) -> f64 {
    0.004 * x.powf(1.9) / (0.4 + y.powf(1.2))
}

pub fn all() -> Vec<Picture> {
    let log = |nx, ny| (spread(3.0, 300.0, nx, true), spread(0.1, 5.0, ny, true));
    let axes = [FLOW, RADIUS];
    let linear = axes.map(|axis| Axis { scale: Scale::Linear, ..axis });
    let (xs, ys) = log(60, 50);
    let plain = table(xs, ys, lip);
    let (xs, ys) = log(24, 20);
    let holed = table(xs, ys, |x, y| {
        if (y > 2.0 && x < 8.0) || ((x - 60.0).abs() < 8.0 && (y - 0.5).abs() < 0.1) {
            f64::NAN
        } else {
            lip(x, y)
        }
    });
    let (xs, ys) = log(5, 4);
    let coarse = table(xs, ys, lip);
    let (xs, ys) = log(30, 30);
    let clean = table(xs, ys, |x, y| 100.0 + lip(x, y));
    let wavy = table(spread(0.0, 20.0, 80, false), spread(-30.0, 85.0, 60, false), |x, y| {
        (1.6 * (x * 0.7).sin() * (y * 0.08).cos()).exp()
    });
    let nothing = table(vec![1.0, 2.0], vec![1.0, 2.0], |_, _| f64::NAN);
    let flat = table(vec![1.0, 2.0, 4.0], vec![1.0, 3.0], |_, _| 2.0);
    let row = table(spread(3.0, 300.0, 40, true), vec![0.8], lip);
    let single = table(vec![25.0], vec![0.8], lip);
    let steep = table(spread(1e-6, 1e6, 40, true), spread(1e-6, 1e-3, 40, true), |x, y| x * y * 1e3);
    let long = "<long & winding> ".repeat(30);
    let heading = Heading { title: &long, subtitle: &long, note: &long };
    let wordy = [Axis { name: &long, ..FLOW }, Axis { name: &long, ..RADIUS }];
    [
        ("map-factor", draw(&plain, false, axes, Some([25.0, 0.8]), HEADING)),
        ("map-chance", draw(&plain, true, axes, Some([25.0, 0.8]), HEADING)),
        ("map-linear", draw(&plain, false, linear, Some([290.0, 4.9]), HEADING)),
        ("map-holed", draw(&holed, false, axes, None, HEADING)),
        ("map-coarse", draw(&coarse, false, axes, None, HEADING)),
        ("map-clean", draw(&clean, true, axes, Some([25.0, 0.8]), HEADING)),
        ("map-wavy", draw(&wavy, false, linear, None, HEADING)),
        ("map-nothing", draw(&nothing, false, axes, None, HEADING)),
        ("map-flat", draw(&flat, false, linear, None, HEADING)),
        ("map-row", draw(&row, false, axes, Some([25.0, 0.8]), HEADING)),
        ("map-single", draw(&single, false, axes, None, HEADING)),
        ("map-steep", draw(&steep, false, wordy, Some([1.0, 1e-4]), heading)),
    ]
    .map(|(name, svg)| (name.to_owned(), svg))
    .to_vec()
}
