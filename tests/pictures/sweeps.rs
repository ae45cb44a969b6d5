//! Tables of sweeps.

use dribble_risk::{
    analysis::decision::Verdict,
    service::render::{Asked, Axis, Drawn, Heading, Scale, SweepAxis, SweepTable, sweep},
};

use crate::Picture;

const FLOW: Axis<'_> = Axis { name: "pour rate", unit: "mL/s", scale: Scale::Log };
const ANGLE: Axis<'_> = Axis { name: "contact angle", unit: "deg", scale: Scale::Linear };

fn draw(flows: &[f64], angles: &[f64], quantity: Drawn, with_weber: bool) -> String {
    let axes = [SweepAxis { axis: FLOW, values: flows }, SweepAxis { axis: ANGLE, values: angles }];
    let factor: Vec<f64> = flows
        .iter()
        .flat_map(|q| {
            // Below 6 mL/s and above 130° there is no answer.
            let at = move |a: &f64| {
                if *q < 6.0 && *a > 130.0 { f64::NAN } else { (q / 20.0).powf(1.3) * (0.4 + a / 90.0) }
            };
            angles.iter().map(at).collect::<Vec<_>>()
        })
        .collect();
    let chance: Vec<f64> = factor.iter().map(|f| 1.0 / (1.0 + (1.7 * f.ln() / 0.4).exp())).collect();
    let verdicts: Vec<Option<Verdict>> = chance
        .iter()
        .zip(&factor)
        .map(|(p, f)| match (*p, *f) {
            (_, f) if f.is_nan() => None,
            (p, _) if p >= 0.95 => Some(Verdict::Dribbles),
            // As where no free sheet exists: not clean, however unlikely a dribble.
            (p, f) if p <= 0.05 && f < 9.0 => Some(Verdict::Clean),
            _ => Some(Verdict::Marginal),
        })
        .collect();
    let weber: Vec<f64> = factor.iter().map(|f| 18.0 / f).collect();
    let column = |by: f64| factor.iter().map(|f| f * by).collect::<Vec<f64>>();
    sweep(&SweepTable {
        heading: Heading {
            title: "",
            subtitle: "Water at 20 °C; sheet lip 24 mm wide",
            note: "dribble-risk 0.1.0, set-1",
        },
        axes: &axes[..if angles.len() == 1 { 1 } else { 2 }],
        quantity,
        safety_factor: &factor,
        low: &column(0.45),
        high: &column(2.2),
        dribble_probability: &chance,
        weber: if with_weber { &weber } else { &[] },
        verdicts: &verdicts,
        confidence: 0.95,
        asked: Some(Asked { at: &[25.0, 70.0], safety_factor: 1.57, dribble_probability: 0.13 }),
    })
    .unwrap()
}

pub fn all() -> Vec<Picture> {
    let flows: Vec<f64> = (0..40).map(|i| 3.0 * 1.12_f64.powi(i)).collect();
    let angles: Vec<f64> = (0..30).map(|i| 10.0 + 5.0 * f64::from(i)).collect();
    // Values out of order are put in order.
    let mixed: Vec<f64> = flows.iter().rev().copied().collect();
    [
        ("sweep-one-axis", draw(&flows, &[70.0], Drawn::SafetyFactor, false)),
        ("sweep-one-axis-probability", draw(&mixed, &[70.0], Drawn::DribbleProbability, false)),
        ("sweep-family", draw(&flows, &[105.0, 30.0, 70.0], Drawn::SafetyFactor, false)),
        ("sweep-map", draw(&mixed, &angles, Drawn::SafetyFactor, false)),
        ("sweep-map-probability", draw(&flows, &angles, Drawn::DribbleProbability, true)),
    ]
    .map(|(name, svg)| (name.to_owned(), svg))
    .to_vec()
}
