//! A whole pour from a tilting vessel, to its last drop.
//!
//! Quasi-steady: the level in the vessel is flat at every instant, and the lip passes what its rating says at that head
//! ([`rated_flow`](crate::physics::stream::rated_flow)). State is the volume in the vessel; at every step the stream is decided by
//! [`decide`](super::decision::decide), with the floor's slope and the flow of that instant. While the stream clings all of the flow runs down outside.
//!
//! The lip position is that of the edge. The head that drives the flow is measured over the highest point of the floor: its upper end where it falls, the edge where it
//! rises. A dry lip holds liquid back to a capillary head and then starts suddenly. Flow below the least accepted pour rate (0.01 mL/s) is no flow.

mod attachment;
mod attitude;
mod course;
mod flags;
mod integrate;
mod landing;
mod programme;
mod search;
mod spec;

use std::sync::atomic::AtomicBool;

pub use course::{Decided, Sample, Span};
pub use landing::Landing;
pub use search::{Found, least_dribbling_hold, least_return_rate};
pub use spec::{LipPositionSpec, PourSpec, TiltSpec, VesselSpec};

use self::{
    course::Course,
    integrate::{IntegrationFault, integrate},
    spec::Setup,
};
use super::{cautions::cautions, fault::Fault, notice::Notice, resolve::Resolved};
use crate::physics::{
    last_drop::{LastDrop, drained_thickness, last_drop},
    vessel::Vessel,
};

/// A volume with its interval, m³.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct VolumeBand {
    /// Best estimate.
    pub value: f64,
    /// Low end.
    pub low: f64,
    /// High end.
    pub high: f64,
}

/// What a pour comes to. Times in s from the start of the course, volumes in m³.
#[derive(Debug, Clone)]
pub struct Pour {
    /// Liquid, surface and lip, with what they were made from.
    pub resolved: Resolved,
    /// The vessel with its lip.
    pub vessel: Vessel,
    /// Left the lip freely.
    pub served: f64,
    /// Ran down outside. Low and high: the two ends of the safety factor's interval at the confidence asked for, each with its own history.
    pub dribbled: VolumeBand,
    /// Still in the vessel at the end.
    pub remaining: f64,
    /// Fill less remaining, served and dribbled: how well the account closes.
    pub imbalance: f64,
    /// Stretches of flow.
    pub flowing: Vec<Span>,
    /// Stretches of dribbling, best estimate.
    pub dribbling: Vec<Span>,
    /// Seconds of dribbling before the largest flow.
    pub dribbling_start: f64,
    /// Seconds of dribbling after it.
    pub dribbling_end: f64,
    /// Largest flow, m³/s.
    pub peak_flow: f64,
    /// Tilt at which this fill reaches the lip, rad; `None`: at none up to upside down.
    pub start_tilt: Option<f64>,
    /// The pour instant by instant; instants at which the stream changes sides are among them.
    pub samples: Vec<Sample>,
    /// The last drop; `None` when nothing was poured.
    pub last_drop: Option<LastDrop>,
    /// Film still draining down the inner wall that the pour laid bare; `None` when nothing was poured. An order of magnitude.
    pub residue: Option<VolumeBand>,
    /// Warnings.
    pub warnings: Vec<Notice>,
    /// Cautions.
    pub cautions: Vec<Notice>,
    /// Steps of the integration.
    pub steps: usize,
}

impl Pour {
    /// Time from the first to the last flow, s; 0 when nothing was poured.
    #[must_use]
    pub fn duration(&self) -> f64 {
        match (self.flowing.first(), self.flowing.last()) {
            (Some(first), Some(last)) => last.to - first.from,
            _ => 0.0,
        }
    }

    /// The sample nearest before a time, s.
    #[must_use]
    pub fn sample_at(&self, time: f64) -> Option<&Sample> {
        let after = self.samples.partition_point(|sample| sample.time <= time);
        self.samples.get(after.checked_sub(1)?)
    }
}

/// Pours.
///
/// Pure: the same specification gives the same answer, bit for bit. `cancel` is looked at now and then; once true the pour ends with a fault `cancelled`.
///
/// # Errors
/// Every fault of the specification; a pour that cannot be computed.
pub fn pour(spec: &PourSpec, cancel: &AtomicBool) -> Result<Pour, Vec<Fault>> {
    let mut setup = spec.resolve()?;
    let course = integrate(&mut setup, cancel).map_err(|fault| {
        let code = if fault == IntegrationFault::Cancelled { "cancelled" } else { "not_computable" };
        vec![Fault::new("", code, format!("the pour cannot be computed: {fault}"))]
    })?;
    Ok(finish(spec, setup, course))
}

fn finish(spec: &PourSpec, setup: Setup, course: Course) -> Pour {
    let start_tilt = setup.vessel.tilt_reaching(setup.fill, 0.0);
    let warnings = flags::warnings(spec, &setup, &course, start_tilt);
    let remaining = course.samples.last().map_or(setup.fill, |sample| sample.volume);
    let poured = !course.flowing.is_empty();
    let [value, low, high] = course.dribbled;
    let peak_time = course.peak_time();
    let (mut dribbling_start, mut dribbling_end) = (0.0, 0.0);
    for span in &course.dribbling {
        dribbling_start += (span.to.min(peak_time) - span.from).max(0.0);
        dribbling_end += (span.to - span.from.max(peak_time)).max(0.0);
    }
    Pour {
        served: course.served,
        dribbled: VolumeBand { value, low: low.min(value), high: high.max(value) },
        remaining,
        imbalance: setup.fill - remaining - course.served - value,
        dribbling_start,
        dribbling_end,
        peak_flow: course.largest_flow,
        start_tilt,
        last_drop: poured.then(|| last_drop(&setup.dry.case.lip, &setup.dry.case.liquid, &setup.dry.angles)),
        residue: poured.then(|| residue(&setup, &course, remaining)),
        warnings,
        cautions: cautions(&spec.lip.liquid, &setup.dry.liquid),
        flowing: course.flowing,
        dribbling: course.dribbling,
        samples: course.samples,
        steps: course.steps,
        resolved: setup.dry,
        vessel: setup.vessel,
    }
}

impl Course {
    /// When the flow was largest, s.
    fn peak_time(&self) -> f64 {
        let mut best = (0.0, f64::NEG_INFINITY);
        for sample in &self.samples {
            if sample.flow > best.1 {
                best = (sample.time, sample.flow);
            }
        }
        best.0
    }
}

/// Factor by which the film left on the wall may be off either way (own judgement).
const RESIDUE_BAND: f64 = 2.0;

/// The film that a pour leaves on the wall it lays bare: (2/3) h(L, t) on the area between the levels at rest before and after, Jeffreys' drained film h =
/// √(μL/(ρgt)) after the time from the first flow to the end of the course. A thin liquid dewets and leaves less.
fn residue(setup: &Setup, course: &Course, remaining: f64) -> VolumeBand {
    let vessel = &setup.vessel;
    let level = |volume: f64| vessel.head(0.0, volume.max(0.0), 0.0).0 + vessel.lip().height;
    let (area, length) = vessel.wall_between(level(remaining), level(setup.fill));
    let began = course.flowing.first().map_or(0.0, |span| span.from);
    let time = setup.programme.end() - began;
    let film = if time > 0.0 { drained_thickness(&setup.dry.case.liquid, length, time) } else { 0.0 };
    // No more than what was poured can cling to the wall.
    let value = (2.0 / 3.0 * film * area).min(setup.fill - remaining);
    let high = (value * RESIDUE_BAND).min(setup.fill - remaining);
    VolumeBand { value, low: value / RESIDUE_BAND, high }
}

#[cfg(test)]
mod tests;
