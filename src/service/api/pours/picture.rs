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

const MM: f64 = quantity::VESSEL_LENGTH.to_si;

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
    let rest = pour.vessel.outline(0.0, 0.0);
    let upright = with_spout(rest.wall, rest.lip, spec.lip.slope_deg * quantity::RUN_SLOPE.to_si);
    let drawn: Vec<Drawn> =
        chosen.iter().map(|(label, sample)| Drawn::new(pour, &upright, label, sample)).collect();
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

/// The wall of the upright vessel with its spout: the lip's floor goes on at its slope until it meets the wall, or else straight from the brim. How a spout opens into its
/// vessel is not given; this is a likely shape.
fn with_spout(mut wall: Vec<[f64; 2]>, lip: [f64; 2], slope: f64) -> Vec<[f64; 2]> {
    if wall.first().is_none_or(|brim| *brim == lip) {
        return wall;
    }
    let over_floor = |[x, z]: [f64; 2]| z - lip[1] - libm::tan(slope) * (lip[0] - x);
    let near = wall.windows(2).take_while(|pair| pair[0][0] > 0.0);
    let met = near.enumerate().find_map(|(i, pair)| {
        let (above, below) = (over_floor(pair[0]), over_floor(pair[1]));
        let share = above / (above - below);
        let at = [0, 1].map(|axis| pair[0][axis] + share * (pair[1][axis] - pair[0][axis]));
        (above > 0.0 && below <= 0.0 && at[0] > 0.0).then_some((i, at))
    });
    match met {
        Some((i, at)) => wall.splice(..=i, [lip, at]).for_each(drop),
        None => wall.insert(0, lip),
    }
    wall
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
    fn new(pour: &Pour, upright: &[[f64; 2]], label: &str, sample: &Sample) -> Self {
        let (sine, cosine) = libm::sincos(sample.tilt);
        let tilted = |[x, z]: [f64; 2]| [(x * cosine + z * sine) / MM, (z * cosine - x * sine) / MM];
        let outline = pour.vessel.outline(sample.tilt, sample.head);
        let wall: Vec<[f64; 2]> = upright.iter().copied().map(tilted).collect();
        let lip = outline.lip.map(|place| place / MM);
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
        let level = (!outline.liquid.is_empty()).then(|| outline.level / MM);
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

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_spout_meets_the_wall_where_its_floor_does() {
        let wall = vec![[5.0, 10.0], [5.0, 0.0], [-5.0, 0.0], [-5.0, 10.0]];
        let rising = with_spout(wall.clone(), [8.0, 10.0], -45_f64.to_radians());
        assert_eq!(rising.len(), 5);
        assert_eq!((rising[0], rising[2]), ([8.0, 10.0], [5.0, 0.0]));
        assert!((rising[1][0] - 5.0).abs() < 1e-12 && (rising[1][1] - 7.0).abs() < 1e-12, "{rising:?}");
        assert_eq!(with_spout(wall.clone(), [8.0, 10.0], 0.3)[..2], [[8.0, 10.0], [5.0, 10.0]]);
        assert_eq!(with_spout(wall.clone(), [5.0, 10.0], -0.3), wall);
    }
}
