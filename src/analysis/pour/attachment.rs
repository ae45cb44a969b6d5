//! Whether the stream clings, instant by instant, with the memory that a wetted face has.
//!
//! A dry outer face is wetted where the Weber number falls below the critical one at the advancing angle; from then on the receding angle counts, so that the stream
//! clears only above the higher recovery flow. Three tracks are followed: the best estimate, and the two ends of the safety factor's interval. At the cautious end a stream
//! of Weber number below 2, which cannot leave as a sheet, clings too.

use super::{attitude::LEAST_FLOW, spec::Setup};
use crate::{
    analysis::{
        case::Case,
        decision::{Decision, decide},
    },
    physics::{quantity, separation::numbers::FREE_SHEET_WEBER, stream::StreamFault},
};

/// What is known of the stream at one instant; `None`: too little flow, or a floor steeper than the models take.
#[derive(Debug, Clone, Copy, Default)]
pub(super) struct Judgement {
    pub dry: Option<Decision>,
    pub wet: Option<Decision>,
}

/// The two cases of a pour, and the quantile of its intervals.
pub(super) struct Judge {
    dry: Case,
    wet: Case,
    pub quantile: f64,
}

impl Judge {
    pub fn new(setup: &Setup) -> Self {
        Self {
            dry: setup.dry.case.clone(),
            wet: setup.wet.clone(),
            quantile: setup.dry.case.confidence.two_sided,
        }
    }

    /// Whether the models take this attitude of the floor (rad).
    pub fn takes(&self, slope: f64) -> bool {
        let range = quantity::RUN_SLOPE;
        let rounding = 1e-9;
        let (low, high) = (range.minimum * range.to_si - rounding, range.maximum * range.to_si + rounding);
        slope >= low && slope <= high && slope + self.dry.lip.edge.turn > 0.0
    }

    /// Decides both faces, or the ones asked for.
    pub fn judge(&mut self, slope: f64, flow: f64, faces: Faces) -> Result<Judgement, StreamFault> {
        if flow < LEAST_FLOW || !self.takes(slope) {
            return Ok(Judgement::default());
        }
        let on = |case: &mut Case| {
            case.flow = flow;
            case.lip.run.slope = slope;
            decide(case)
        };
        Ok(Judgement {
            dry: if faces.dry { Some(on(&mut self.dry)?) } else { None },
            wet: if faces.wet { Some(on(&mut self.wet)?) } else { None },
        })
    }

    /// The interval of the safety factor.
    pub fn interval(&self, decision: &Decision) -> (f64, f64) {
        decision.safety_interval(&self.dry)
    }

    /// The case with a dry face, at the last stream judged.
    pub fn dry(&self) -> &Case {
        &self.dry
    }
}

/// Which faces are asked about.
#[derive(Debug, Clone, Copy)]
pub(super) struct Faces {
    pub dry: bool,
    pub wet: bool,
}

/// Which end of the interval a track keeps to.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Side {
    Best,
    Least,
    Most,
}

/// One history of the outer face.
#[derive(Debug, Clone, Copy)]
pub(super) struct Track {
    pub side: Side,
    pub wet: bool,
    pub attached: bool,
    /// m³ that ran down.
    pub dribbled: f64,
}

impl Track {
    pub fn new(side: Side, wet: bool) -> Self {
        Self { side, wet, attached: false, dribbled: 0.0 }
    }

    /// By how much the stream is free (negative: it clings).
    pub fn excess(&self, judgement: &Judgement, quantile: f64) -> Option<f64> {
        let decision = if self.wet { judgement.wet } else { judgement.dry }?;
        let half = quantile * decision.standard_uncertainty;
        Some(match self.side {
            Side::Best => decision.margin,
            Side::Least => decision.margin + half,
            Side::Most => {
                (decision.margin - half).min(libm::log(decision.balance.numbers.weber / FREE_SHEET_WEBER))
            }
        })
    }

    /// Takes over what holds from now on.
    pub fn set(&mut self, attached: bool) {
        self.attached = attached;
        self.wet |= attached;
    }
}
