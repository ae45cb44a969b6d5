//! Everything that is said of one lip: the decision with its flows, drop, remedies, shares, warnings and cautions.

use super::{
    cautions::cautions,
    decision::{Decision, decide},
    fault::Fault,
    flow_limit::{FlowLimits, flow_limits},
    notice::Notice,
    remedy::{Limit, Remedies, remedies},
    resolve::Resolved,
    spec::Spec,
    warnings::warnings,
};
use crate::physics::{
    last_drop::{LastDrop, last_drop},
    separation::{
        adhesion::{self, AdhesionEstimate},
        deflection::{Deflection, deflection},
        pinning::{Pinning, pinning},
    },
    stream::StreamFault,
};

/// Which parts of an answer are wanted; leaving some out makes it faster.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Include {
    /// What would mend it.
    pub remedies: bool,
    /// Shares of the variance by source.
    pub contributions: bool,
    /// The last drop.
    pub last_drop: bool,
    /// The adhesion estimate.
    pub adhesion_estimate: bool,
}

impl Include {
    /// Every part.
    pub const ALL: Self =
        Self { remedies: true, contributions: true, last_drop: true, adhesion_estimate: true };
    /// None of them.
    pub const NONE: Self =
        Self { remedies: false, contributions: false, last_drop: false, adhesion_estimate: false };
}

/// The whole answer about one lip.
#[derive(Debug, Clone)]
pub struct Evaluation {
    /// The case and what it was made from.
    pub resolved: Resolved,
    /// The decision.
    pub decision: Decision,
    /// Pour rates at which it changes sides.
    pub flows: FlowLimits,
    /// Deflection of the stream; `None` once attached.
    pub deflection: Option<Deflection>,
    /// What the edge can hold statically.
    pub pinning: Pinning,
    /// The last drop, if wanted.
    pub last_drop: Option<LastDrop>,
    /// The adhesion estimate, if wanted.
    pub adhesion: Option<AdhesionEstimate>,
    /// Remedies, if wanted.
    pub remedies: Option<Remedies>,
    /// Shares of the variance of ln(safety factor), largest first, if wanted.
    pub contributions: Option<Vec<Contribution>>,
    /// Warnings.
    pub warnings: Vec<Notice>,
    /// Cautions.
    pub cautions: Vec<Notice>,
}

/// One source's share of the variance of ln(safety factor).
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Contribution {
    /// The source: a JSON Pointer, or `model`, or `stream`.
    pub source: &'static str,
    /// Its share, 0 to 1; all shares together make 1.
    pub share: f64,
}

/// Evaluates one question.
///
/// # Errors
/// Every fault of the question. A stream that cannot be computed is a fault too.
pub fn evaluate(spec: &Spec, include: Include, limits: &[Limit]) -> Result<Evaluation, Vec<Fault>> {
    let resolved = spec.resolve()?;
    let case = &resolved.case;
    let decision = decide(case).map_err(stream_fault)?;
    let flow_slope = decision.slopes.of(super::case::Primary::Flow);
    let flows = flow_limits(case, flow_slope).map_err(stream_fault)?;
    let numbers = &decision.balance.numbers;
    let deflection =
        deflection(numbers, case.lip.edge.turn, decision.safety_factor(), decision.standard_uncertainty);
    let pinning = pinning(
        &case.lip.edge,
        case.advancing,
        decision.balance.stream.thickness,
        case.liquid.capillary_length(),
    );
    let remedies = include.remedies.then(|| remedies(spec, &resolved, &decision, limits));
    let evaluation = Evaluation {
        flows,
        deflection,
        pinning,
        last_drop: include.last_drop.then(|| last_drop(&case.lip, &case.liquid, &resolved.angles)),
        adhesion: include.adhesion_estimate.then(|| adhesion::estimate(numbers, case.contact_angle)),
        remedies,
        contributions: include.contributions.then(|| contributions(&resolved, &decision)),
        warnings: warnings(spec, &resolved, &decision),
        cautions: cautions(&spec.liquid, &resolved.liquid),
        decision,
        resolved,
    };
    Ok(evaluation)
}

fn contributions(resolved: &Resolved, decision: &Decision) -> Vec<Contribution> {
    let total = decision.standard_uncertainty * decision.standard_uncertainty;
    let mut shares: Vec<Contribution> = Vec::with_capacity(20);
    for (source, variance) in decision.variances(&resolved.case) {
        let share = variance / total;
        match shares.iter_mut().find(|c| c.source == source.name()) {
            Some(known) => known.share += share,
            None if share > 0.0 => shares.push(Contribution { source: source.name(), share }),
            None => {}
        }
    }
    shares.sort_by(|a, b| b.share.total_cmp(&a.share));
    shares
}

/// A stream that cannot be computed, as a fault of the question.
pub(super) fn stream_fault(fault: StreamFault) -> Vec<Fault> {
    vec![Fault::new("/lip", "not_computable", format!("the stream at this lip cannot be computed: {fault}"))]
}
