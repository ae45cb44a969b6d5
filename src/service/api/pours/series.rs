//! The pour instant by instant, as columns.

use serde::Serialize;
use utoipa::ToSchema;

use crate::{
    analysis::pour::{Pour, Sample},
    physics::quantity,
    service::api::quantity::Number,
};

/// A column's values.
#[derive(Debug, Clone, PartialEq)]
pub enum Column {
    /// Numbers; NaN where there is none.
    Numbers(Vec<f64>),
    /// Words.
    Words(Vec<Option<&'static str>>),
}

/// A column of the series.
struct Head {
    name: &'static str,
    value: fn(&Sample) -> Cell,
}

enum Cell {
    Number(f64),
    Word(Option<&'static str>),
}

const MM: f64 = quantity::VESSEL_LENGTH.to_si;
const ML: f64 = quantity::FILL.to_si;

const fn number(name: &'static str, value: fn(&Sample) -> Cell) -> Head {
    Head { name, value }
}

fn or_none(value: Option<f64>) -> Cell {
    Cell::Number(value.unwrap_or(f64::NAN))
}

/// The columns, in the order of a CSV.
const HEADS: [Head; 14] = [
    number("t_s", |s| Cell::Number(s.time)),
    number("tilt_deg", |s| Cell::Number(s.tilt / quantity::TILT.to_si)),
    number("floor_slope_deg", |s| Cell::Number(s.slope / quantity::RUN_SLOPE.to_si)),
    number("head_mm", |s| Cell::Number(s.head / MM)),
    number("remaining_ml", |s| Cell::Number(s.volume / ML)),
    number("flow_ml_s", |s| Cell::Number(s.flow / quantity::FLOW.to_si)),
    number("safety_factor", |s| or_none(s.decided.map(|d| d.safety_factor))),
    number("safety_factor_low", |s| or_none(s.decided.map(|d| d.low))),
    number("safety_factor_high", |s| or_none(s.decided.map(|d| d.high))),
    number("verdict", |s| Cell::Word(s.decided.map(|d| d.verdict.as_str()))),
    number("stream", |s| {
        Cell::Word(match (s.flow > 0.0, s.attached) {
            (false, _) => None,
            (true, true) => Some("clings"),
            (true, false) => Some("free"),
        })
    }),
    number("landing_mm", |s| or_none(s.landing.map(|l| 0.5 * (l.near + l.far) / MM))),
    number("landing_near_mm", |s| or_none(s.landing.map(|l| l.near / MM))),
    number("landing_far_mm", |s| or_none(s.landing.map(|l| l.far / MM))),
];

/// Names and values of the columns.
pub fn columns(pour: &Pour) -> Vec<(&'static str, Column)> {
    HEADS
        .iter()
        .map(|head| {
            let mut numbers = Vec::with_capacity(pour.samples.len());
            let mut words = Vec::new();
            for sample in &pour.samples {
                match (head.value)(sample) {
                    Cell::Number(value) => numbers.push(value),
                    Cell::Word(word) => words.push(word),
                }
            }
            let column = if words.is_empty() { Column::Numbers(numbers) } else { Column::Words(words) };
            (head.name, column)
        })
        .collect()
}

/// The series as comma-separated values (RFC 4180): a line of names, then a line for each instant; what an instant does not have is left empty.
pub fn csv(pour: &Pour) -> Vec<u8> {
    let columns = columns(pour);
    let names: Vec<&str> = columns.iter().map(|(name, _)| *name).collect();
    let mut text = (names.join(",") + "\r\n").into_bytes();
    let mut buffer = ryu_js::Buffer::new();
    for row in 0..pour.samples.len() {
        for (i, (_, column)) in columns.iter().enumerate() {
            if i > 0 {
                text.push(b',');
            }
            match column {
                Column::Numbers(values) => {
                    if let Some(value) = values.get(row).filter(|value| value.is_finite()) {
                        text.extend_from_slice(buffer.format_finite(*value).as_bytes());
                    }
                }
                Column::Words(words) => {
                    text.extend_from_slice(words.get(row).copied().flatten().unwrap_or_default().as_bytes());
                }
            }
        }
        text.extend_from_slice(b"\r\n");
    }
    text
}

/// The pour instant by instant: columns of equal length. Instants at which the stream changes sides are among them; where a dry lip starts suddenly there are two of
/// the same time, before and after.
#[derive(Debug, Clone, Serialize, ToSchema)]
pub struct SeriesAnswer {
    /// Time from the start of the course.
    #[schema(value_type = Vec<f64>)]
    t_s: Vec<Number>,
    /// Tilt.
    #[schema(value_type = Vec<f64>)]
    tilt_deg: Vec<Number>,
    /// Slope of the lip's floor, downhill positive.
    #[schema(value_type = Vec<f64>)]
    floor_slope_deg: Vec<Number>,
    /// Level above the lip's edge; negative below it.
    #[schema(value_type = Vec<f64>)]
    head_mm: Vec<Number>,
    /// Still in the vessel.
    #[schema(value_type = Vec<f64>)]
    remaining_ml: Vec<Number>,
    /// Flow over the lip.
    #[schema(value_type = Vec<f64>)]
    flow_ml_s: Vec<Number>,
    /// Weber number over critical Weber number, on the outer face as it is then; null without flow, and where the floor is tilted beyond what the model takes.
    #[schema(value_type = Vec<Option<f64>>)]
    safety_factor: Vec<Option<Number>>,
    /// Lower end of its interval at the confidence asked for.
    #[schema(value_type = Vec<Option<f64>>)]
    safety_factor_low: Vec<Option<Number>>,
    /// Upper end of its interval.
    #[schema(value_type = Vec<Option<f64>>)]
    safety_factor_high: Vec<Option<Number>>,
    /// `clean`, `marginal` or `dribbles` at the confidence asked for; null like the safety factor.
    #[schema(example = json!([null, "dribbles", "marginal", "clean"]))]
    verdict: Vec<Option<&'static str>>,
    /// What the stream does in the best estimate: `clings` or `free`; null without flow.
    #[schema(example = json!([null, "clings", "free"]))]
    stream: Vec<Option<&'static str>>,
    /// Horizontal distance from the edge to where the stream lands, middle of the band; null while it clings; negative: under the vessel.
    #[schema(value_type = Vec<Option<f64>>)]
    landing_mm: Vec<Option<Number>>,
    /// As a round jet that surface tension pulls back; 0 where it drips.
    #[schema(value_type = Vec<Option<f64>>)]
    landing_near_mm: Vec<Option<Number>>,
    /// In ballistic flight.
    #[schema(value_type = Vec<Option<f64>>)]
    landing_far_mm: Vec<Option<Number>>,
}

impl SeriesAnswer {
    pub fn new(pour: &Pour) -> Self {
        let mut columns = columns(pour);
        let mut take = |name: &str| {
            let place = columns.iter().position(|(known, _)| *known == name);
            place.map(|place| columns.swap_remove(place).1)
        };
        let mut numbers = |name: &str| match take(name) {
            Some(Column::Numbers(values)) => values,
            Some(Column::Words(_)) | None => Vec::new(),
        };
        let all = |values: Vec<f64>| values.into_iter().map(Number).collect();
        let some = |values: Vec<f64>| {
            values.into_iter().map(|value| (!value.is_nan()).then_some(Number(value))).collect()
        };
        let (t_s, tilt_deg) = (all(numbers("t_s")), all(numbers("tilt_deg")));
        let (floor_slope_deg, head_mm) = (all(numbers("floor_slope_deg")), all(numbers("head_mm")));
        let (remaining_ml, flow_ml_s) = (all(numbers("remaining_ml")), all(numbers("flow_ml_s")));
        let safety_factor = some(numbers("safety_factor"));
        let safety_factor_low = some(numbers("safety_factor_low"));
        let safety_factor_high = some(numbers("safety_factor_high"));
        let landing_mm = some(numbers("landing_mm"));
        let landing_near_mm = some(numbers("landing_near_mm"));
        let landing_far_mm = some(numbers("landing_far_mm"));
        let mut words = |name: &str| match take(name) {
            Some(Column::Words(words)) => words,
            Some(Column::Numbers(_)) | None => Vec::new(),
        };
        let (verdict, stream) = (words("verdict"), words("stream"));
        Self {
            t_s,
            tilt_deg,
            floor_slope_deg,
            head_mm,
            remaining_ml,
            flow_ml_s,
            safety_factor,
            safety_factor_low,
            safety_factor_high,
            verdict,
            stream,
            landing_mm,
            landing_near_mm,
            landing_far_mm,
        }
    }
}
