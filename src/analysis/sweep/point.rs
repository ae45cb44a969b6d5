//! One point of a sweep, judged.

use std::cell::OnceCell;

use super::layers::Parts;
use crate::analysis::{
    balance::slopes,
    case::Primary,
    decision::Judgement,
    flow_limit::{FlowLimits, flow_limits},
    spec::Spec,
};
use crate::physics::{quantity, separation::numbers::Numbers};

/// One point, judged, with what its outputs are made from.
pub(super) struct Point<'a> {
    pub(super) parts: Parts<'a>,
    pub(super) judged: Judgement,
    /// Normal quantile of the two-sided interval.
    pub(super) two_sided: f64,
    /// The question at this point, for the outputs that need it whole.
    pub(super) spec: &'a dyn Fn() -> Spec,
    pub(super) flows: OnceCell<Option<FlowLimits>>,
}

impl Point<'_> {
    /// The stream's numbers at this edge.
    pub(super) fn numbers(&self) -> Numbers {
        let radius = (self.spec)().radius_mm * quantity::EDGE_RADIUS.to_si;
        self.parts.stream.approach.numbers_at(&self.parts.condition.liquid, radius)
    }

    /// Turn of the edge, rad.
    pub(super) fn turn(&self) -> f64 {
        (self.spec)().turn_deg * quantity::TURN.to_si
    }

    /// Pour rates at which the lip of this point changes sides; found once for all outputs that need them.
    pub(super) fn flow_limits(&self) -> Option<FlowLimits> {
        *self.flows.get_or_init(|| {
            let resolved = (self.spec)().resolve().ok()?;
            let hint = slopes(&self.judged.threshold, &self.parts.stream.slopes, 0.0).of(Primary::Flow);
            flow_limits(&resolved.case, hint).ok()
        })
    }
}
