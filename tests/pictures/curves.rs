//! Curves.

use dribble_risk::{
    analysis::decision::Verdict,
    service::render::{Axis, Curve, CurveChart, CurvePoint, Heading, Mark, Scale, curve},
};

use crate::Picture;

const RADIUS: Axis<'_> = Axis { name: "edge radius", unit: "mm", scale: Scale::Log };
const FACTOR: Axis<'_> = Axis { name: "safety factor", unit: "", scale: Scale::Log };
const THRESHOLD: [Mark<'_>; 1] = [Mark { at: 1.0, label: "threshold: leaves above, clings below" }];
const HEADING: Heading<'_> = Heading {
    title: "Safety factor against edge radius",
    subtitle: "Water at 20 °C, 25 mL/s, sheet lip 24 mm wide, turn 110°, floor sloping 8°; 95 % intervals",
    note: "dribble-risk 0.1.0, set-1, fingerprint 0123456789abcdef",
};

fn verdict(y: f64, doubt: f64) -> Option<Verdict> {
    let z = y.ln() / doubt;
    Some(if z > 1.645 {
        Verdict::Clean
    } else if z < -1.645 {
        Verdict::Dribbles
    } else {
        Verdict::Marginal
    })
}

/// A falling curve of `count` points from `from` to `to`.
fn falling(from: f64, to: f64, count: usize, level: f64, doubt: f64) -> Vec<CurvePoint> {
    (0..count)
        .map(|i| {
            let x = from * (to / from).powf(i as f64 / (count.max(2) - 1) as f64);
            let y = level / (1.0 + 0.8 * x.powf(1.7));
            let band = (1.96 * doubt).exp();
            CurvePoint { x, y, low: y / band, high: y * band, verdict: verdict(y, doubt) }
        })
        .collect()
}

fn one(points: &[CurvePoint], asked: Option<[f64; 2]>) -> String {
    let curves = [Curve { label: "", points }];
    curve(&CurveChart {
        heading: HEADING,
        x: RADIUS,
        y: FACTOR,
        curves: &curves,
        levels: &THRESHOLD,
        limits: &[],
        asked,
    })
}

fn several(labels: &[String], points: &[Vec<CurvePoint>], x: Axis<'_>, y: Axis<'_>) -> String {
    let curves: Vec<_> = labels.iter().zip(points).map(|(label, points)| Curve { label, points }).collect();
    curve(&CurveChart {
        heading: HEADING,
        x,
        y,
        curves: &curves,
        levels: &THRESHOLD,
        limits: &[Mark { at: 0.52, label: "limit 0.52 mm" }],
        asked: Some([0.8, 1.9]),
    })
}

pub fn all() -> Vec<Picture> {
    let plain = falling(0.1, 5.0, 60, 3.0, 0.4);
    let mut gaps = plain.clone();
    for i in (10..18).chain([30, 32]) {
        gaps[i] = CurvePoint { x: gaps[i].x, y: f64::NAN, low: f64::NAN, high: f64::NAN, verdict: None };
    }
    let clean = falling(0.1, 0.5, 40, 900.0, 0.4);
    let drowned = falling(0.1, 50.0, 40, 0.01, 0.4);
    let unsure: Vec<_> = falling(0.1, 5.0, 40, 3.0, 4.0);
    let tiny: Vec<_> =
        falling(1e-9, 3e-8, 30, 1e-6, 0.5).into_iter().map(|p| CurvePoint { verdict: None, ..p }).collect();
    let nothing = vec![CurvePoint { x: 0.5, y: f64::NAN, low: f64::NAN, high: f64::NAN, verdict: None }; 3];
    let linear = Axis { scale: Scale::Linear, ..RADIUS };
    let words =
        ["water, dry outer face", "water, wet outer face", "sunflower oil at 20 °C"].map(str::to_owned);
    let three = [2.0, 3.0, 0.9].map(|level| falling(0.1, 5.0, 50, level, 0.4));
    let many: Vec<_> = (0..30).map(|i| falling(0.1, 5.0, 40, 1.0 + 0.15 * f64::from(i), 0.3)).collect();
    let names: Vec<_> = (0..30)
        .map(|i| format!("case {i}: a label that goes on and on, <b>&amp;</b> with \"marks\" and ünïcödé"))
        .collect();
    let few: Vec<_> = [2.0, 3.0].map(|level| falling(0.1, 5.0, 4, level, 0.4)).to_vec();
    [
        ("curve-plain", one(&plain, Some([0.8, 1.9]))),
        ("curve-gaps", one(&gaps, None)),
        ("curve-all-clean", one(&clean, Some([0.49, 700.0]))),
        ("curve-empty-clean", one(&drowned, None)),
        ("curve-unsure", one(&unsure, Some([4.9, 0.1]))),
        ("curve-tiny", one(&tiny, None)),
        ("curve-one-point", one(&plain[20..21], Some([0.37, 2.6]))),
        ("curve-no-answer", one(&nothing, None)),
        ("curve-no-points", one(&[], None)),
        ("curve-three", several(&words, &three, RADIUS, FACTOR)),
        ("curve-linear", several(&words, &three, linear, Axis { scale: Scale::Linear, ..FACTOR })),
        ("curve-many", several(&names, &many, RADIUS, FACTOR)),
        ("curve-few-points", several(&names[..2], &few, linear, FACTOR)),
        ("curve-long-words", long_words(&plain)),
    ]
    .map(|(name, svg)| (name.to_owned(), svg))
    .to_vec()
}

fn long_words(points: &[CurvePoint]) -> String {
    let long = "a word of many ".repeat(40);
    let unbroken = "W".repeat(300);
    let huge: Vec<_> = points
        .iter()
        .map(|p| CurvePoint { y: p.y * 1e7, low: p.low * 1e7, high: p.high * 1e7, ..*p })
        .collect();
    let curves = [Curve { label: &unbroken, points: &huge }, Curve { label: &long, points }];
    curve(&CurveChart {
        heading: Heading { title: &long, subtitle: &unbroken, note: &long },
        x: Axis { name: &long, unit: "mm", scale: Scale::Log },
        y: Axis { name: &unbroken, unit: "</text><script>", scale: Scale::Linear },
        curves: &curves,
        levels: &[Mark { at: 1.0, label: &long }],
        limits: &[Mark { at: 3.0, label: &long }],
        asked: Some([0.1, 3e7]),
    })
}
