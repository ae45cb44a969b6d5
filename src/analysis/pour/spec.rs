//! A pour as it is asked for, in the caller's units, and what it resolves to.

use super::programme::Programme;
use crate::{
    analysis::{
        case::Case,
        fault::Fault,
        field::Field,
        resolve::Resolved,
        spec::{OuterFace, Spec},
    },
    physics::{
        quantity::{self, Quantity},
        vessel::{LipPosition, Vessel, VesselFault},
    },
};

/// A whole pour: lip, surface and liquid, and the vessel that is tilted.
#[derive(Debug, Clone)]
pub struct PourSpec {
    /// Lip, surface, liquid, outer face at the start, confidence. Its slope is the floor's with the vessel upright; its pour rate is not looked at.
    pub lip: Spec,
    /// The vessel.
    pub vessel: VesselSpec,
    /// Where the lip is; `None`: on the brim.
    pub lip_position: Option<LipPositionSpec>,
    /// Liquid in the vessel at the start, mL.
    pub fill_ml: f64,
    /// How it is tilted.
    pub tilt: TiltSpec,
    /// Tilt back when this much has left the vessel, mL.
    pub target_ml: Option<f64>,
    /// Height of the lip above where the stream lands, mm.
    pub drop_mm: f64,
    /// Factor on the largest time step, 1 unless the convergence itself is asked about.
    pub step_factor: f64,
}

/// Where the lip is, from the vessel's axis and base.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LipPositionSpec {
    /// Distance from the axis, mm.
    pub radius_mm: f64,
    /// Height above the base, mm.
    pub height_mm: f64,
}

/// A vessel, mm.
#[derive(Debug, Clone, PartialEq)]
pub enum VesselSpec {
    /// Round, straight.
    Cylinder {
        /// Inner diameter.
        diameter_mm: f64,
        /// Inner height.
        height_mm: f64,
    },
    /// Round, conical.
    Cone {
        /// Inner diameter at the brim.
        top_diameter_mm: f64,
        /// Inner diameter at the base.
        bottom_diameter_mm: f64,
        /// Inner height.
        height_mm: f64,
    },
    /// A box.
    Box {
        /// Along the pour.
        length_mm: f64,
        /// Across it.
        width_mm: f64,
        /// Inner height.
        height_mm: f64,
    },
    /// A body of revolution.
    Revolved {
        /// [height, radius] from the base up.
        profile_mm: Vec<[f64; 2]>,
    },
}

/// How a vessel is tilted.
#[derive(Debug, Clone, PartialEq)]
pub enum TiltSpec {
    /// Up at one rate, hold, back at another.
    Steady {
        /// Rate on the way down to the pour, °/s.
        rate_deg_s: f64,
        /// Tilt that is held, degrees.
        hold_deg: f64,
        /// How long, s.
        hold_s: f64,
        /// Rate on the way back, °/s.
        return_rate_deg_s: f64,
    },
    /// Any course, straight between points.
    Program {
        /// [time in s, tilt in degrees].
        points: Vec<[f64; 2]>,
    },
}

/// A pour ready to be computed.
pub(super) struct Setup {
    /// Resolved with a dry outer face.
    pub dry: Resolved,
    /// The case with a wet outer face.
    pub wet: Case,
    pub vessel: Vessel,
    pub programme: Programme,
    /// m³
    pub fill: f64,
    /// m³ and the rate of the return, rad/s.
    pub target: Option<(f64, f64)>,
    /// Slope of the floor with the vessel upright, rad.
    pub upright_slope: f64,
    /// m
    pub drop: f64,
    pub step_factor: f64,
    /// Whether the outer face is wet at the start.
    pub starts_wet: bool,
}

/// Relative standard uncertainty of the flow at a given head: ±20 % below 10 mm (own judgement) read as two standard uncertainties.
const FLOW_UNCERTAINTY: f64 = 0.1;

impl PourSpec {
    /// Every fault of the pour that is asked for, without pouring.
    #[must_use]
    pub fn faults(&self) -> Vec<Fault> {
        self.resolve().err().unwrap_or_default()
    }

    /// The pour that is asked for.
    ///
    /// # Errors
    /// Every fault of it.
    pub(super) fn resolve(&self) -> Result<Setup, Vec<Fault>> {
        let mut faults = Vec::new();
        let mut lip = self.lip;
        // The attitude changes along the pour; a slope that contradicts the turn at some instant is looked at then.
        lip.slope_deg = 0.0;
        lip.flow_ml_s = 1.0;
        lip.uncertainty.set(Field::Flow, FLOW_UNCERTAINTY);
        lip.outer_face = OuterFace::Dry;
        let dry = lip.resolve().map_err(|mut found| faults.append(&mut found)).ok();
        lip.outer_face = OuterFace::Wet;
        let wet = dry.as_ref().and_then(|_| lip.resolve().ok());
        let vessel = self.vessel(&mut faults);
        let programme = self.programme(&mut faults);
        if let Some(vessel) = &vessel {
            self.check_fill(vessel, &mut faults);
        }
        let target = programme.as_ref().and_then(|programme| self.target(programme, &mut faults));
        let (Some(dry), Some(wet), Some(vessel), Some(programme), true) =
            (dry, wet, vessel, programme, faults.is_empty())
        else {
            return Err(faults);
        };
        Ok(Setup {
            dry,
            wet: wet.case,
            vessel,
            programme,
            fill: self.fill_ml * quantity::FILL.to_si,
            target,
            upright_slope: self.lip.slope_deg * quantity::RUN_SLOPE.to_si,
            drop: self.drop_mm * quantity::DROP.to_si,
            step_factor: self.step_factor,
            starts_wet: self.lip.outer_face == OuterFace::Wet,
        })
    }

    fn vessel(&self, faults: &mut Vec<Fault>) -> Option<Vessel> {
        const MM: f64 = quantity::VESSEL_LENGTH.to_si;
        let (at, built) = match &self.vessel {
            VesselSpec::Cylinder { diameter_mm, height_mm } => {
                ("/vessel/cylinder", Vessel::cylinder(diameter_mm * MM, height_mm * MM))
            }
            VesselSpec::Cone { top_diameter_mm, bottom_diameter_mm, height_mm } => {
                ("/vessel/cone", Vessel::cone(top_diameter_mm * MM, bottom_diameter_mm * MM, height_mm * MM))
            }
            VesselSpec::Box { length_mm, width_mm, height_mm } => {
                ("/vessel/box", Vessel::cuboid(length_mm * MM, width_mm * MM, height_mm * MM))
            }
            VesselSpec::Revolved { profile_mm } => {
                let at = "/vessel/revolved/profile_mm";
                let ranges = [quantity::VESSEL_OFFSET, quantity::VESSEL_OFFSET];
                if !all_accepted(profile_mm, &ranges, at, faults) {
                    return None;
                }
                let points: Vec<[f64; 2]> = profile_mm.iter().map(|[z, r]| [z * MM, r * MM]).collect();
                (at, Vessel::revolved(&points))
            }
        };
        let vessel = built.map_err(|fault| faults.push(vessel_fault(at, fault))).ok()?;
        let Some(position) = self.lip_position else { return Some(vessel) };
        let lip = LipPosition { radius: position.radius_mm * MM, height: position.height_mm * MM };
        vessel
            .with_lip(lip)
            .map_err(|fault| {
                let wall = match fault {
                    VesselFault::LipInside { wall } => Some(wall / MM),
                    _ => None,
                };
                let detail = format!(
                    "the lip would be inside the vessel: at that height its wall is {:.4} mm from the axis",
                    wall.unwrap_or_default()
                );
                let fault = Fault::new("/lip_position/radius_mm", "lip_inside_vessel", detail);
                faults.push(fault.within(wall, quantity::VESSEL_LENGTH.maximum));
            })
            .ok()
    }

    fn check_fill(&self, vessel: &Vessel, faults: &mut Vec<Fault>) {
        let capacity = vessel.capacity() / quantity::FILL.to_si;
        if self.fill_ml > capacity * (1.0 + 1e-9) {
            let detail = format!("the vessel holds {capacity:.1} mL up to its brim");
            faults.push(Fault::new("/fill_ml", "over_full", detail).within(quantity::FILL.minimum, capacity));
            return;
        }
        let (head, _) = vessel.head(0.0, self.fill_ml * quantity::FILL.to_si, 0.0);
        if head > 1e-6 {
            let level = (head + vessel.lip().height) / quantity::VESSEL_LENGTH.to_si;
            let detail = format!(
                "with the vessel upright the liquid stands {level:.2} mm above the base, higher than the lip: it would run out before it is tilted"
            );
            let fault = Fault::new("/lip_position/height_mm", "lip_below_level", detail);
            faults.push(fault.within(level, quantity::VESSEL_LENGTH.maximum));
        }
    }

    fn programme(&self, faults: &mut Vec<Fault>) -> Option<Programme> {
        match &self.tilt {
            TiltSpec::Steady { rate_deg_s, hold_deg, hold_s, return_rate_deg_s } => {
                let (up, down) = (hold_deg / rate_deg_s, hold_deg / return_rate_deg_s);
                let hold = hold_deg * quantity::TILT.to_si;
                let corners = [[0.0, 0.0], [up, hold], [up + hold_s, hold], [up + hold_s + down, 0.0]];
                let rate = return_rate_deg_s * quantity::TILT_RATE.to_si;
                Some(Programme::new(corners, Some(rate)))
            }
            TiltSpec::Program { points } => {
                let at = "/tilt/program/points";
                let ranges = [quantity::TIME, quantity::TILT];
                let mut sound = all_accepted(points, &ranges, at, faults);
                if points.len() < 2 {
                    let detail = "a course needs two points at least: one is an attitude, not a pour";
                    faults.push(Fault::new(at, "wrong_count", detail).within(2.0, None));
                    sound = false;
                }
                for (i, pair) in points.windows(2).enumerate() {
                    if pair[1][0] <= pair[0][0] {
                        let detail =
                            format!("time must go forwards: {} s comes after {} s", pair[1][0], pair[0][0]);
                        let fault = Fault::new(format!("{at}/{}/0", i + 1), "time_not_increasing", detail);
                        faults.push(fault.within(pair[0][0], quantity::TIME.maximum));
                        sound = false;
                    }
                }
                let corners = points.iter().map(|[t, tilt]| [*t, tilt * quantity::TILT.to_si]);
                sound.then(|| Programme::new(corners, None))
            }
        }
    }

    fn target(&self, programme: &Programme, faults: &mut Vec<Fault>) -> Option<(f64, f64)> {
        let target = self.target_ml?;
        if target > self.fill_ml {
            let detail = format!("no more than the fill of {} mL can leave", self.fill_ml);
            let fault = Fault::new("/target_ml", "beyond_fill", detail);
            faults.push(fault.within(quantity::FILL.minimum, self.fill_ml));
            return None;
        }
        let Some(rate) = programme.return_rate() else {
            let detail = "the course never tilts back, so there is no rate to tilt back at; end it with a falling tilt";
            faults.push(Fault::new("/tilt/program/points", "no_return", detail));
            return None;
        };
        Some((target * quantity::FILL.to_si, rate))
    }
}

/// Whether every number of these pairs is in its range; faults of those that are not.
fn all_accepted(pairs: &[[f64; 2]], ranges: &[Quantity; 2], at: &str, faults: &mut Vec<Fault>) -> bool {
    let before = faults.len();
    for (i, pair) in pairs.iter().enumerate() {
        for (j, (value, range)) in pair.iter().zip(ranges).enumerate() {
            if !range.accepts(*value) {
                let detail = format!(
                    "{} must be between {} and {} {}",
                    range.name, range.minimum, range.maximum, range.unit
                );
                let fault = Fault::new(format!("{at}/{i}/{j}"), "out_of_range", detail);
                faults.push(fault.within(range.minimum, range.maximum));
            }
        }
    }
    faults.len() == before
}

fn vessel_fault(at: &'static str, fault: VesselFault) -> Fault {
    let detail = fault.to_string();
    let point = |index: usize, part: usize| format!("{at}/{index}/{part}");
    match fault {
        VesselFault::TooFewPoints => Fault::new(at, "wrong_count", detail).within(2.0, None),
        VesselFault::NotAtBase => Fault::new(point(0, 0), "contradiction", detail).within(0.0, 0.0),
        VesselFault::Backwards { index } => Fault::new(point(index, 0), "profile_backwards", detail),
        VesselFault::CrossesItself { index } => Fault::new(point(index, 0), "profile_crosses_itself", detail),
        VesselFault::Closed { index } => Fault::new(point(index, 1), "profile_closed", detail),
        VesselFault::NotPositive { .. } | VesselFault::LipInside { .. } => {
            Fault::new(at, "contradiction", detail)
        }
    }
}
