//! Tolerances as a picture: the histogram of the margin with the line where dribbling begins, and the drivers as bars.

use crate::{
    analysis::tolerance::{Outcome, Study},
    service::{
        fingerprint::ModelAnswer,
        render::{
            Axis, Bar, BarChart, Heading, Histogram, Limit, Mark, Scale, Side, bars, histogram, percent,
            significant, stack,
        },
    },
};

/// Draws the outcome of a study.
pub(super) fn picture(study: &Study, outcome: &Outcome, model: &ModelAnswer) -> String {
    let note = format!(
        "dribble-risk {}, coefficients {}, fingerprint {}",
        model.version, model.coefficients, model.fingerprint
    );
    let margins = margins(study, outcome, &note);
    match &outcome.drivers {
        Some(_) => stack(&[margins, drivers(study, outcome, &note)]),
        None => margins,
    }
}

fn margins(study: &Study, outcome: &Outcome, note: &str) -> String {
    let ppm = |share: f64| significant(1e6 * share, 3);
    let rate = &outcome.rate;
    let title =
        format!("{} of a million pours dribble ({} to {})", ppm(rate.value), ppm(rate.low), ppm(rate.high));
    let (low, high) = outcome.rate_with_model_doubt;
    let subtitle = format!(
        "{} trials, seed {} · sampling error at {} confidence; with the models' doubt {} to {} ppm",
        study.trials,
        study.seed,
        percent(study.base.confidence),
        ppm(low),
        ppm(high)
    );
    let counts: Vec<f64> = outcome.margin.histogram.counts.iter().map(|c| *c as f64).collect();
    histogram(&Histogram {
        heading: Heading { title: &title, subtitle: &subtitle, note },
        axis: Axis { name: "margin, ln(safety factor)", unit: "", scale: Scale::Linear },
        edges: &outcome.margin.histogram.edges,
        counts: &counts,
        count_name: "trials",
        limit: Some(Limit { at: 0.0, good: Side::Above, label: "dribbles below", guarded: None }),
        marks: &[Mark { at: outcome.margin.mean, label: "mean" }],
    })
}

fn drivers(study: &Study, outcome: &Outcome, note: &str) -> String {
    let z = 1.959_963_984_540_054;
    let shares: Vec<[[f64; 3]; 2]> = outcome
        .drivers
        .iter()
        .flatten()
        .map(|d| {
            let around = |value: f64, error: f64| [value, value - z * error, value + z * error];
            [around(d.first_order, d.first_order_error), around(d.total, d.total_error)]
        })
        .collect();
    let bars_: Vec<Bar<'_>> = study
        .varying
        .iter()
        .zip(&shares)
        .map(|(varying, values)| Bar { label: varying.field.quantity().name, values })
        .collect();
    bars(&BarChart {
        heading: Heading {
            title: "What drives the margin",
            subtitle: "Sobol' indices: shares of the variance of the margin, with 95 % intervals",
            note,
        },
        axis: Axis { name: "share of the variance", unit: "", scale: Scale::Linear },
        series: &["alone", "with interactions"],
        bars: &bars_,
    })
}
