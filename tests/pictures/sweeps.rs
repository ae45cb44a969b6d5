//! Tables of sweeps.

use std::sync::atomic::AtomicBool;

use dribble_risk::{
    analysis::{decision::Verdict, field::Field, sweep},
    service::{
        api::evaluations::{EXAMPLE, EvaluationRequest},
        render::{
            Asked, Axis, Drawn, Heading, NotDrawable, Scale, SweepAxis, SweepTable, drawable, sweep,
            sweep_picture,
        },
    },
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

/// A sweep of the example over fields of it.
fn computed(axes: Vec<sweep::Axis>, quantity: Drawn) -> String {
    let request: EvaluationRequest = serde_json::from_str(EXAMPLE).unwrap();
    let (spec, _) = request.question().unwrap();
    let never = AtomicBool::new(false);
    let swept = sweep::Sweep::new(spec, axes, &never).unwrap();
    let heading = Heading { title: "", subtitle: "The example", note: "set-1" };
    sweep_picture(&swept.picture_table(&never).unwrap(), quantity, heading).unwrap()
}

fn log(field: Field, from: f64, to: f64, count: usize) -> sweep::Axis {
    sweep::Axis::new(field, sweep::Values::Logarithmic { from, to, count })
}

#[test]
fn a_sweep_is_refused_before_it_is_computed() {
    assert_eq!(drawable(2, 40_000), Ok(()));
    assert_eq!(drawable(2, 40_001), Err(NotDrawable::Points(40_001)));
    assert_eq!(drawable(3, 10), Err(NotDrawable::Axes(3)));
}

pub fn all() -> Vec<Picture> {
    let slopes = sweep::Axis::new(Field::Slope, sweep::Values::Linear { from: -20.0, to: 60.0, count: 41 });
    let negative = log(Field::Slope, -1.0, -25.0, 30);
    let cold =
        sweep::Axis::new(Field::Temperature, sweep::Values::Linear { from: -20.0, to: 90.0, count: 45 });
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
        ("sweep-computed-curve", computed(vec![log(Field::Flow, 1.0, 200.0, 80)], Drawn::SafetyFactor)),
        ("sweep-computed-negative", computed(vec![negative], Drawn::SafetyFactor)),
        (
            "sweep-computed-map",
            computed(
                vec![log(Field::Flow, 1.0, 200.0, 60), log(Field::EdgeRadius, 0.1, 5.0, 50)],
                Drawn::SafetyFactor,
            ),
        ),
        (
            "sweep-computed-slopes",
            computed(vec![log(Field::Flow, 1.0, 200.0, 60), slopes], Drawn::DribbleProbability),
        ),
        (
            "sweep-computed-freezing",
            computed(vec![cold, log(Field::Flow, 1.0, 200.0, 40)], Drawn::SafetyFactor),
        ),
    ]
    .map(|(name, svg)| (name.to_owned(), svg))
    .to_vec()
}
