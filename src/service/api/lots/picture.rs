//! A lot as a picture: the values with limit and guard band, and the operating characteristic.

use crate::{
    analysis::lot::{Counted, Decision, Measured, Measurement, Points, PourTest, Sense},
    service::{
        fingerprint::ModelAnswer,
        render::{
            Axis, Curve, CurveChart, CurvePoint, Heading, Histogram, Limit, Mark, Scale, Side, curve,
            histogram, percent, significant, stack, with_unit,
        },
    },
};

fn note(model: &ModelAnswer) -> String {
    format!(
        "dribble-risk {}, coefficients {}, fingerprint {}",
        model.version, model.coefficients, model.fingerprint
    )
}

const fn says(decision: Decision) -> &'static str {
    match decision {
        Decision::Accept => "Accept",
        Decision::Reject => "Reject",
        Decision::MorePiecesNeeded => "More pieces needed",
    }
}

/// Draws measured parts: name and unit of the characteristic beside what was found.
pub(super) fn of_measured(
    measurement: &Measurement<'_>,
    found: &Measured,
    (name, unit): (&str, &str),
    model: &ModelAnswer,
) -> String {
    let note = note(model);
    let values: Vec<f64> = measurement.values.iter().map(|x| x - measurement.bias).collect();
    let (edges, counts) = classes(&values);
    let title = format!("{}: {}", says(found.decision), found.reasons.first().map_or("", |r| &r.detail));
    let moments = &found.moments;
    let spread =
        moments.standard_deviation.map_or_else(String::new, |s| format!(", sd {}", with_unit(s, unit)));
    let capability = found.performance.map_or_else(String::new, |(ppk, low)| {
        format!(" · P_pk {}, at least {}", significant(ppk, 3), significant(low, 3))
    });
    let subtitle = format!(
        "{} parts, mean {}{spread}{capability} · bounds at {} confidence",
        moments.count,
        with_unit(moments.mean, unit),
        percent(measurement.confidence)
    );
    let limit = measurement.limit;
    let used = found.guard_band.limit_used;
    #[expect(clippy::float_cmp, reason = "no guard band leaves the limit as it is")]
    let guarded = (used != limit.value).then_some(used);
    let parts = histogram(&Histogram {
        heading: Heading { title: &title, subtitle: &subtitle, note: &note },
        axis: Axis { name, unit, scale: Scale::Linear },
        edges: &edges,
        counts: &counts,
        count_name: "parts",
        limit: Some(Limit {
            at: limit.value,
            good: match limit.sense {
                Sense::AtMost => Side::Below,
                Sense::AtLeast => Side::Above,
            },
            label: "limit",
            guarded,
        }),
        marks: &[Mark { at: moments.mean, label: "mean" }],
    });
    let oc = characteristic(&found.operating_characteristic, measurement.points, moments.count as u64, &note);
    stack(&[parts, oc])
}

/// Draws a pour test.
pub(super) fn of_pour_test(test: &PourTest, found: &Counted, model: &ModelAnswer) -> String {
    characteristic(&found.operating_characteristic, test.points, test.pieces, &note(model))
}

fn characteristic(points: &[(f64, f64)], plan: Points, pieces: u64, note: &str) -> String {
    let point = |&(x, y): &(f64, f64)| CurvePoint { x, y, low: f64::NAN, high: f64::NAN, verdict: None };
    let points: Vec<CurvePoint> = points.iter().map(point).collect();
    let title = format!("Operating characteristic with {pieces} pieces");
    let subtitle = format!(
        "A lot {} nonconforming is to be accepted at least {} of the time, one {} nonconforming at most {}",
        percent(plan.producer.fraction),
        percent(1.0 - plan.producer.risk),
        percent(plan.consumer.fraction),
        percent(plan.consumer.risk)
    );
    curve(&CurveChart {
        heading: Heading { title: &title, subtitle: &subtitle, note },
        x: Axis { name: "fraction nonconforming", unit: "", scale: Scale::Log },
        y: Axis { name: "probability of accepting", unit: "", scale: Scale::Linear },
        curves: &[Curve { label: "", points: &points }],
        levels: &[
            Mark { at: 1.0 - plan.producer.risk, label: "producer" },
            Mark { at: plan.consumer.risk, label: "consumer" },
        ],
        limits: &[
            Mark { at: plan.producer.fraction, label: "producer's quality" },
            Mark { at: plan.consumer.fraction, label: "consumer's quality" },
        ],
        asked: None,
    })
}

/// Equal classes: about the root of the count, 5 to 40 (common practice, no source).
fn classes(values: &[f64]) -> (Vec<f64>, Vec<f64>) {
    let (low, high) =
        values.iter().fold((f64::INFINITY, f64::NEG_INFINITY), |(l, h), x| (x.min(l), x.max(h)));
    let count = (values.len() as f64).sqrt().ceil().clamp(5.0, 40.0);
    let width = if high > low { (high - low) / count } else { low.abs().max(1.0) * 0.01 };
    let start = if high > low { low } else { low - 0.5 * count * width };
    let mut counts = vec![0.0; count as usize];
    for x in values {
        let class = (((x - start) / width) as usize).min(counts.len() - 1);
        counts[class] += 1.0;
    }
    let edges = (0..=counts.len()).map(|i| start + i as f64 * width).collect();
    (edges, counts)
}
