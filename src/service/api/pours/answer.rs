//! The pour answer.

use serde::Serialize;
use utoipa::ToSchema;

use super::series::SeriesAnswer;
use crate::{
    analysis::pour::{Pour, Span, VolumeBand},
    physics::{last_drop::LastDrop, quantity},
    service::{
        api::{evaluations::IntervalAnswer, notice::NoticeAnswer, quantity::Number},
        fingerprint::ModelAnswer,
    },
};

/// What a pour comes to.
#[derive(Debug, Serialize, ToSchema)]
pub struct PourAnswer<'a> {
    /// Left the lip freely, best estimate; what left in all is this and `dribbled_ml.value`.
    #[schema(value_type = f64)]
    pub served_ml: Number,
    /// Ran down the outside: while the stream clings, all of the flow does. Low and high from the two ends of the safety factor's interval, each with its own history of
    /// the outer face.
    pub dribbled_ml: IntervalAnswer,
    /// Still in the vessel at the end.
    #[schema(value_type = f64)]
    pub remaining_ml: Number,
    /// From the first flow over the lip to the last; 0 when nothing was poured.
    #[schema(value_type = f64)]
    pub duration_s: Number,
    /// When liquid first runs over the lip; null when nothing was poured.
    #[schema(value_type = Option<f64>)]
    pub starts_s: Option<Number>,
    /// When it last does.
    #[schema(value_type = Option<f64>)]
    pub ends_s: Option<Number>,
    /// Tilt at which the level of this fill reaches the lip's edge; null: at none up to upside down.
    #[schema(value_type = Option<f64>)]
    pub start_tilt_deg: Option<Number>,
    /// How long the stream clings, before and after the largest flow, in the best estimate.
    pub dribbling_s: DribblingAnswer,
    /// When it does.
    pub dribbling_spans: Vec<SpanAnswer>,
    /// Largest flow.
    #[schema(value_type = f64)]
    pub peak_flow_ml_s: Number,
    /// The pour instant by instant.
    pub series: SeriesAnswer,
    /// What hangs, stays and runs when the pour ends; null when nothing was poured.
    pub last_drop: Option<PourDropAnswer>,
    /// Film still draining down the inner wall that the pour laid bare, at the end of the course; an order of magnitude, less where the liquid dewets. Null when nothing was
    /// poured. It counts as `remaining_ml`.
    pub residue_ml: Option<IntervalAnswer>,
    /// Where a number deserves less trust, and where the pour does not do what was asked.
    pub warnings: Vec<NoticeAnswer<'a>>,
    /// Where the liquid can hurt someone. They defer to local codes and licensed practice.
    pub cautions: Vec<NoticeAnswer<'a>>,
    /// What computed this answer.
    pub model: ModelAnswer,
}

/// How long the stream clings.
#[derive(Debug, Clone, Copy, Serialize, ToSchema)]
pub struct DribblingAnswer {
    /// At the start of the pour.
    #[schema(value_type = f64)]
    pub start: Number,
    /// At its end.
    #[schema(value_type = f64)]
    pub end: Number,
}

/// A stretch of time.
#[derive(Debug, Clone, Copy, Serialize, ToSchema)]
pub struct SpanAnswer {
    /// From.
    #[schema(value_type = f64)]
    pub from_s: Number,
    /// To.
    #[schema(value_type = f64)]
    pub to_s: Number,
}

/// What hangs, stays and runs when the pour ends; intervals are ± 2 standard uncertainties, by judgement.
#[derive(Debug, Clone, Copy, Serialize, ToSchema)]
pub struct PourDropAnswer {
    /// Largest volume that hangs from the lip.
    pub hanging_ul: IntervalAnswer,
    /// What is left on the lip after the drop has fallen.
    pub left_on_lip_ul: IntervalAnswer,
    /// Largest volume that the outer wall holds.
    pub held_on_wall_ul: IntervalAnswer,
    /// Whether what is left runs down: left on the lip exceeds held on the wall.
    pub runs_down: bool,
}

fn interval(unit: f64, value: f64, low: f64, high: f64) -> IntervalAnswer {
    IntervalAnswer { value: Number(value / unit), low: Number(low / unit), high: Number(high / unit) }
}

fn millilitres(band: VolumeBand) -> IntervalAnswer {
    interval(quantity::FILL.to_si, band.value, band.low, band.high)
}

impl PourDropAnswer {
    fn new(drop: &LastDrop) -> Self {
        const UL: f64 = 1e-9;
        Self {
            hanging_ul: interval(UL, drop.hanging, drop.hanging_low, drop.hanging_high),
            left_on_lip_ul: interval(UL, drop.left_on_lip, drop.left_on_lip_low, drop.left_on_lip_high),
            held_on_wall_ul: interval(UL, drop.held_on_wall, drop.held_on_wall_low, drop.held_on_wall_high),
            runs_down: drop.runs_down,
        }
    }
}

impl<'a> PourAnswer<'a> {
    /// Writes a pour in the caller's units.
    #[must_use]
    pub fn new(pour: &'a Pour, model: ModelAnswer) -> Self {
        let ml = |volume: f64| Number(volume / quantity::FILL.to_si);
        let span = |span: &Span| SpanAnswer { from_s: Number(span.from), to_s: Number(span.to) };
        Self {
            served_ml: ml(pour.served),
            dribbled_ml: millilitres(pour.dribbled),
            remaining_ml: ml(pour.remaining),
            duration_s: Number(pour.duration()),
            starts_s: pour.flowing.first().map(|span| Number(span.from)),
            ends_s: pour.flowing.last().map(|span| Number(span.to)),
            start_tilt_deg: pour.start_tilt.map(|tilt| Number(tilt / quantity::TILT.to_si)),
            dribbling_s: DribblingAnswer {
                start: Number(pour.dribbling_start),
                end: Number(pour.dribbling_end),
            },
            dribbling_spans: pour.dribbling.iter().map(span).collect(),
            peak_flow_ml_s: Number(pour.peak_flow / quantity::FLOW.to_si),
            series: SeriesAnswer::new(pour),
            last_drop: pour.last_drop.as_ref().map(PourDropAnswer::new),
            residue_ml: pour.residue.map(millilitres),
            warnings: pour.warnings.iter().map(NoticeAnswer::from).collect(),
            cautions: pour.cautions.iter().map(NoticeAnswer::from).collect(),
            model,
        }
    }
}
