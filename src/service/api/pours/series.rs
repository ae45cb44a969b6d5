//! The pour instant by instant, as columns.

use arrow_schema::ArrowError;
use serde::Serialize;
use utoipa::ToSchema;

use crate::{
    analysis::{
        pour::{Pour, Sample},
        sweep::Column,
    },
    physics::quantity,
    service::{
        api::quantity::Number,
        fingerprint::ModelAnswer,
        table::{Cells, Head, arrow, csv},
    },
};

/// A column of the series, and what an instant has in it.
struct Entry {
    head: Head,
    value: fn(&Sample) -> Cell,
}

enum Cell {
    Number(f64),
    Word(Option<&'static str>),
}

const MM: f64 = quantity::VESSEL_LENGTH.to_si;
const ML: f64 = quantity::FILL.to_si;

/// A column that every instant has.
const fn always(
    name: &'static str,
    unit: &'static str,
    meaning: &'static str,
    value: fn(&Sample) -> Cell,
) -> Entry {
    Entry { head: Head { name, unit, meaning, is_word: false, may_be_empty: false }, value }
}

/// A column of numbers that an instant may not have.
const fn some(
    name: &'static str,
    unit: &'static str,
    meaning: &'static str,
    value: fn(&Sample) -> Cell,
) -> Entry {
    Entry { head: Head { name, unit, meaning, is_word: false, may_be_empty: true }, value }
}

/// A column of words that an instant may not have.
const fn word(name: &'static str, meaning: &'static str, value: fn(&Sample) -> Cell) -> Entry {
    Entry { head: Head { name, unit: "", meaning, is_word: true, may_be_empty: true }, value }
}

fn or_none(value: Option<f64>) -> Cell {
    Cell::Number(value.unwrap_or(f64::NAN))
}

/// The columns, in the order of a table.
const ENTRIES: [Entry; 14] = [
    always("t_s", "s", "time from the start of the course", |s| Cell::Number(s.time)),
    always("tilt_deg", "deg", "tilt", |s| Cell::Number(s.tilt / quantity::TILT.to_si)),
    always("floor_slope_deg", "deg", "slope of the lip's floor, downhill positive", |s| {
        Cell::Number(s.slope / quantity::RUN_SLOPE.to_si)
    }),
    always("head_mm", "mm", "level above the lip's edge", |s| Cell::Number(s.head / MM)),
    always("remaining_ml", "mL", "still in the vessel", |s| Cell::Number(s.volume / ML)),
    always("flow_ml_s", "mL/s", "flow over the lip", |s| Cell::Number(s.flow / quantity::FLOW.to_si)),
    some("safety_factor", "", "Weber number over critical Weber number", |s| {
        or_none(s.decided.map(|d| d.safety_factor))
    }),
    some("safety_factor_low", "", "lower end of the safety factor's interval", |s| {
        or_none(s.decided.map(|d| d.low))
    }),
    some("safety_factor_high", "", "upper end of the safety factor's interval", |s| {
        or_none(s.decided.map(|d| d.high))
    }),
    word("verdict", "clean, marginal or dribbles at the confidence asked for", |s| {
        Cell::Word(s.decided.map(|d| d.verdict.as_str()))
    }),
    word("stream", "what the stream does in the best estimate: clings or free", |s| {
        Cell::Word(match (s.flow > 0.0, s.attached) {
            (false, _) => None,
            (true, true) => Some("clings"),
            (true, false) => Some("free"),
        })
    }),
    some("landing_mm", "mm", "distance from the edge to where the stream lands, middle of the band", |s| {
        or_none(s.landing.map(|l| 0.5 * (l.near + l.far) / MM))
    }),
    some("landing_near_mm", "mm", "landing of a round jet", |s| or_none(s.landing.map(|l| l.near / MM))),
    some("landing_far_mm", "mm", "landing in ballistic flight", |s| or_none(s.landing.map(|l| l.far / MM))),
];

/// The columns' heads.
pub fn heads() -> Vec<Head> {
    ENTRIES.iter().map(|entry| entry.head).collect()
}

/// The columns, in the order of their heads.
pub fn columns(pour: &Pour) -> Vec<Column> {
    ENTRIES
        .iter()
        .map(|entry| {
            let mut numbers = Vec::new();
            let mut words = Vec::new();
            for sample in &pour.samples {
                match (entry.value)(sample) {
                    Cell::Number(value) => numbers.push(value),
                    Cell::Word(word) => words.push(word),
                }
            }
            if entry.head.is_word { Column::Words(words) } else { Column::Numbers(numbers) }
        })
        .collect()
}

/// The series as comma-separated values: a line for each instant.
pub fn csv(pour: &Pour) -> Vec<u8> {
    let columns = columns(pour);
    let cells: Vec<Cells<'_>> = columns.iter().map(Cells::from).collect();
    let mut text = csv::header(&heads());
    text.extend(csv::lines(&cells, pour.samples.len()));
    text
}

/// The series as an Arrow stream of one record batch.
///
/// # Errors
/// None in practice: columns and heads stand in one list.
pub fn arrow(pour: &Pour, model: &ModelAnswer) -> Result<Vec<u8>, ArrowError> {
    let schema = arrow::schema(&heads(), arrow::about(model));
    let mut written = arrow::Stream::new(&schema)?;
    let mut pieces = written.pieces(&arrow::rows(&schema, columns(pour))?)?;
    pieces.extend(written.end()?);
    Ok(pieces.concat())
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
        let names = ENTRIES.iter().map(|entry| entry.head.name);
        let mut columns: Vec<(&str, Column)> = names.zip(columns(pour)).collect();
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
