//! The vessel at one instant: where the level stands, and what flows over the lip.

use super::spec::Setup;
use crate::physics::{
    lip::Run,
    quantity,
    stream::{rated_flow, sill_height, start_head},
    vessel::Cut,
};

/// Flow below which nothing is decided and a pour counts as ended, m³/s: the least accepted pour rate.
pub(super) const LEAST_FLOW: f64 = quantity::FLOW.minimum * quantity::FLOW.to_si;

/// The vessel at one instant.
#[derive(Debug, Clone, Copy)]
pub(super) struct Attitude {
    pub time: f64,
    /// rad
    pub tilt: f64,
    /// Volume in the vessel, m³.
    pub volume: f64,
    /// Level above the lip, m.
    pub head: f64,
    /// Level above the highest point of the floor, m: what drives the flow.
    pub over_sill: f64,
    /// What flows over a wetted lip, m³/s.
    pub flow: f64,
    /// Slope of the floor, rad.
    pub slope: f64,
    pub cut: Cut,
}

impl Setup {
    /// The vessel at `time` with `volume` in it. `near`: an instant close by, to start the search for the level from.
    pub fn attitude(&self, time: f64, volume: f64, near: Option<&Attitude>) -> Option<Attitude> {
        let tilt = self.programme.tilt(time);
        let guess = near.map_or(0.0, |near| {
            // dV = S dh − S x_b dτ
            let change = volume - near.volume + near.cut.moment * (tilt - near.tilt);
            near.head + if near.cut.surface > 0.0 { change / near.cut.surface } else { 0.0 }
        });
        let (head, cut) = self.vessel.head(tilt, volume, guess);
        let run = Run { slope: self.upright_slope + tilt, ..self.dry.case.lip.run };
        let over_sill = head - sill_height(&run);
        let liquid = &self.dry.case.liquid;
        let flow = rated_flow(&self.dry.case.lip.section, &run, liquid.kinematic_viscosity(), over_sill)?;
        let known = head.is_finite() && flow.is_finite();
        known.then_some(Attitude { time, tilt, volume, head, over_sill, flow, slope: run.slope, cut })
    }

    /// How far the vessel is beyond where liquid begins to run (negative: not yet): the flow over the least one, and on a dry lip the head over what surface tension
    /// holds back.
    pub fn start_excess(&self, at: &Attitude, wetted: bool) -> f64 {
        let runs = at.flow / LEAST_FLOW - 1.0;
        let case = &self.dry.case;
        let held = start_head(&case.liquid, case.advancing, case.lip.edge.turn);
        if wetted || held <= 0.0 { runs } else { runs.min(at.head / held - 1.0) }
    }
}
