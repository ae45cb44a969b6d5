//! The pour as a picture: tilt, flow and safety factor against time, and below the vessel at its moments.

use crate::{
    analysis::pour::{Pour, PourSpec, Sample},
    physics::quantity,
    service::{
        api::evaluations::materials,
        fingerprint::ModelAnswer,
        render::{
            Axis, CurvePoint, Heading, Mark, Panel, Panels, Scale, Span, VesselMoment, VesselStream, course,
            percent, significant, with_unit,
        },
    },
};

/// Safety factors below this are not drawn: they go to zero with the flow, and would press the rest flat.
const LEAST_FACTOR: f64 = 0.01;

/// Draws the pour.
pub(super) fn picture(spec: &PourSpec, pour: &Pour, model: &ModelAnswer) -> String {
    let small = pour.samples.iter().any(|s| s.decided.is_some_and(|d| d.safety_factor < LEAST_FACTOR));
    let mut note =
        if small { format!("Safety factors below {LEAST_FACTOR} are not drawn. ") } else { String::new() };
    note.push_str(&format!(
        "dribble-risk {}, coefficients {}, fingerprint {}",
        model.version, model.coefficients, model.fingerprint
    ));
    let subtitle = format!(
        "{} · {} at the start · verdict and intervals at {} confidence",
        materials(&spec.lip),
        with_unit(spec.fill_ml, "mL"),
        percent(spec.lip.confidence)
    );
    let plain = |y: &dyn Fn(&Sample) -> f64| -> Vec<CurvePoint> {
        let point = |s: &Sample| bare(s.time, y(s));
        pour.samples.iter().map(point).collect()
    };
    let tilt = plain(&|s| s.tilt / quantity::TILT.to_si);
    let flow = plain(&|s| s.flow / quantity::FLOW.to_si);
    let factor: Vec<CurvePoint> = pour.samples.iter().map(factor).collect();
    let linear = |name, unit| Axis { name, unit, scale: Scale::Linear };
    let spans: Vec<Span<'_>> = pour
        .dribbling
        .iter()
        .map(|span| Span { from: span.from, to: span.to, label: "runs down the outside (best estimate)" })
        .collect();
    let chosen = chosen(pour);
    let marks: Vec<Mark<'_>> =
        chosen.iter().filter(|(_, s)| s.flow > 0.0).map(|(label, s)| Mark { at: s.time, label }).collect();
    let drawn: Vec<Drawn> = chosen.iter().map(|(label, sample)| Drawn::new(pour, label, sample)).collect();
    let moments: Vec<VesselMoment<'_>> = drawn.iter().map(Drawn::moment).collect();
    let title = title(pour);
    let chart = Panels {
        heading: Heading { title: &title, subtitle: &subtitle, note: &note },
        x: linear("time", "s"),
        panels: &[
            Panel { axis: linear("tilt", "°"), points: &tilt, level: None },
            Panel { axis: linear("flow", "mL/s"), points: &flow, level: None },
            Panel {
                axis: Axis { name: "safety factor", unit: "", scale: Scale::Log },
                points: &factor,
                level: Some(Mark { at: 1.0, label: "clings below, leaves above" }),
            },
        ],
        spans: &spans,
        moments: &marks,
    };
    course(&chart, &moments)
}

fn title(pour: &Pour) -> String {
    let ml = |volume: f64| with_unit(volume / quantity::FILL.to_si, "mL");
    if pour.flowing.is_empty() {
        return "Nothing leaves the vessel".to_owned();
    }
    let number = |volume: f64| significant(volume / quantity::FILL.to_si, 3);
    let band = pour.dribbled;
    format!(
        "{} served; {} ({} to {}) runs down the outside",
        ml(pour.served),
        ml(band.value),
        number(band.low),
        number(band.high)
    )
}

const fn bare(x: f64, y: f64) -> CurvePoint {
    CurvePoint { x, y, low: f64::NAN, high: f64::NAN, verdict: None }
}

fn factor(sample: &Sample) -> CurvePoint {
    match &sample.decided {
        Some(decided) if decided.safety_factor >= LEAST_FACTOR => CurvePoint {
            x: sample.time,
            y: decided.safety_factor,
            low: decided.low.max(0.5 * LEAST_FACTOR),
            high: decided.high,
            verdict: None,
        },
        _ => bare(sample.time, f64::NAN),
    }
}

/// The moments to be drawn: at rest, where the pour starts, its largest flow, where it ends; without a pour, at rest and tilted furthest.
fn chosen(pour: &Pour) -> Vec<(&'static str, &Sample)> {
    let most = |of: fn(&Sample) -> f64| {
        pour.samples.iter().reduce(|best, sample| if of(sample) > of(best) { sample } else { best })
    };
    let rest = pour.samples.first().map(|sample| ("at rest", sample));
    let flowing = || pour.samples.iter().filter(|sample| sample.flow > 0.0);
    let found = match (flowing().next(), most(|s| s.flow), flowing().next_back()) {
        (Some(first), Some(largest), Some(last)) => {
            vec![rest, Some(("start", first)), Some(("largest flow", largest)), Some(("end", last))]
        }
        _ => vec![rest, most(|s| s.tilt).map(|sample| ("tilted furthest", sample))],
    };
    let mut found: Vec<_> = found.into_iter().flatten().collect();
    found.dedup_by(|b, a| a.1.time == b.1.time && a.1.flow == b.1.flow);
    found
}

/// A moment with what it borrows.
struct Drawn {
    caption: String,
    wall: Vec<[f64; 2]>,
    level: Option<f64>,
    lip: [f64; 2],
    stream: VesselStream,
}

impl Drawn {
    fn new(pour: &Pour, label: &str, sample: &Sample) -> Self {
        let mm = |[x, y]: [f64; 2]| [x / quantity::VESSEL_LENGTH.to_si, y / quantity::VESSEL_LENGTH.to_si];
        let outline = pour.vessel.outline(sample.tilt, sample.head);
        let lip = mm(outline.lip);
        let mut wall: Vec<[f64; 2]> = outline.wall.into_iter().map(mm).collect();
        // A spout reaches out from the brim.
        if wall.first() != Some(&lip) {
            wall.insert(0, lip);
        }
        let stream = match (sample.flow > 0.0, sample.attached) {
            (false, _) => VesselStream::None,
            (true, true) => VesselStream::Dribbles,
            (true, false) => VesselStream::Leaves,
        };
        let tilt = significant(sample.tilt / quantity::TILT.to_si, 3);
        let mut caption = format!("{}, {tilt}°: {label}", with_unit(sample.time, "s"));
        if sample.flow > 0.0 {
            caption.push_str(&format!(", {}", with_unit(sample.flow / quantity::FLOW.to_si, "mL/s")));
        }
        let level = (!outline.liquid.is_empty()).then(|| outline.level / quantity::VESSEL_LENGTH.to_si);
        Self { caption, wall, level, lip, stream }
    }

    fn moment(&self) -> VesselMoment<'_> {
        VesselMoment {
            caption: &self.caption,
            wall: &self.wall,
            level: self.level,
            lip: Some(self.lip),
            stream: self.stream,
        }
    }
}
