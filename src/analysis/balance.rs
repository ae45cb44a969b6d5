//! Inertia against wetting at one pour rate: the stream, its numbers, its threshold. No other place computes a Weber number.

use super::{
    calibration::Place,
    case::{Case, Primary, Slopes},
};
use crate::physics::{
    lip::{Run, Section},
    liquid::Liquid,
    separation::{
        closed_form::{Edge, Threshold},
        numbers::{Film, Numbers},
    },
    stream::{Control, Stream, StreamFault, approach_film},
};

/// The balance at one pour rate.
#[derive(Debug, Clone, Copy)]
pub struct Balance {
    /// The stream.
    pub stream: Stream,
    /// Its numbers.
    pub numbers: Numbers,
    /// Critical Weber number and slopes.
    pub threshold: Threshold,
    /// ln(We/We_c).
    pub ln_safety_factor: f64,
}

/// The edge of this case, prepared for a contact angle (rad).
#[must_use]
pub fn prepare(case: &Case, contact_angle: f64) -> Edge {
    Edge::new(case.coefficients, contact_angle, case.lip.edge.turn)
}

/// The balance of `case` at pour rate `flow` (m³/s) on a prepared edge.
///
/// # Errors
/// When the stream cannot be computed.
pub fn balance(case: &Case, edge: &Edge, flow: f64) -> Result<Balance, StreamFault> {
    let stream = approach_film(&case.lip.section, &case.lip.run, &case.liquid, flow)?;
    Ok(weigh(case, edge, stream, stream.thickness))
}

/// The numbers of the stream of `case` at pour rate `flow` (m³/s).
///
/// # Errors
/// When the stream cannot be computed.
pub fn film_numbers(case: &Case, flow: f64) -> Result<Numbers, StreamFault> {
    let stream = approach_film(&case.lip.section, &case.lip.run, &case.liquid, flow)?;
    let film = Film { thickness: stream.thickness, speed: stream.speed };
    Ok(Numbers::of(film, &case.liquid, case.lip.edge.radius))
}

/// The balance for a stream already known, with `thickness` (m) as its equivalent sheet.
#[must_use]
pub fn weigh(case: &Case, edge: &Edge, stream: Stream, thickness: f64) -> Balance {
    let film = Film { thickness, speed: stream.speed };
    let numbers = Numbers::of(film, &case.liquid, case.lip.edge.radius);
    let mut threshold = edge.threshold(case.coefficients, &numbers);
    if let Some(calibration) = &case.calibration {
        let place = Place::of(&numbers, edge.contact_angle(), case.lip.edge.turn);
        threshold = calibration.corrected(&threshold, &place);
    }
    let ln_safety_factor = libm::log(numbers.weber) - threshold.ln_critical_weber;
    Balance { stream, numbers, threshold, ln_safety_factor }
}

impl Balance {
    /// Slopes of ln(safety factor) in the primary inputs at this balance.
    ///
    /// The threshold's slopes are exact. Those of the stream are exact for the critical section of a sheet lip, else forward differences.
    ///
    /// # Errors
    /// When a neighbouring stream cannot be computed.
    pub fn slopes(&self, case: &Case, flow: f64) -> Result<Slopes, StreamFault> {
        let t = &self.threshold;
        // ln S = ln We − ln We_c with We = ρU²h/γ, Re = ρUh/μ, Fr = U²/(gh), r/h.
        let by_thickness = 1.0 - t.by_ln_reynolds + t.by_ln_froude + t.by_ln_radius_ratio;
        let by_speed = 2.0 - t.by_ln_reynolds - 2.0 * t.by_ln_froude;
        let stream = StreamSlopes::of(case, &self.stream, flow)?;
        let through = |s: Pair| by_thickness * s.thickness + by_speed * s.speed;
        let radius = case.lip.edge.radius;
        let by_kinematic_viscosity = through(stream.kinematic_viscosity);
        let mut slopes = [0.0; Primary::COUNT];
        let mut set = |primary: Primary, value: f64| slopes[primary as usize] = value;
        set(Primary::Density, 1.0 - t.by_ln_reynolds - by_kinematic_viscosity);
        set(Primary::Viscosity, t.by_ln_reynolds + by_kinematic_viscosity);
        set(Primary::SurfaceTension, -1.0);
        set(Primary::ContactAngle, -t.by_contact_angle);
        set(Primary::EdgeRadius, if radius > 0.0 { -t.by_ln_radius_ratio / radius } else { 0.0 });
        set(Primary::Turn, -t.by_turn);
        set(Primary::Section, through(stream.section));
        set(Primary::Slope, through(stream.slope));
        set(Primary::RunLength, through(stream.length));
        set(Primary::Flow, through(stream.flow));
        set(Primary::Thickness, by_thickness - by_speed);
        set(Primary::Equivalence, by_thickness);
        Ok(Slopes(slopes))
    }
}

/// Changes of ln thickness and ln speed per unit of an input.
#[derive(Clone, Copy, Default)]
struct Pair {
    thickness: f64,
    speed: f64,
}

struct StreamSlopes {
    flow: Pair,
    kinematic_viscosity: Pair,
    section: Pair,
    slope: Pair,
    length: Pair,
}

/// Step of the forward differences, in ln or rad: large against the stream's root tolerance, small against its curvature.
const STEP: f64 = 1e-4;

impl StreamSlopes {
    fn of(case: &Case, stream: &Stream, flow: f64) -> Result<Self, StreamFault> {
        let lip = &case.lip;
        if let (Section::Sheet { .. }, Control::Brink) = (lip.section, stream.control)
            && stream.depth == stream.critical_depth
        {
            // h = (q²/(g cos σ))^⅓, U = q/h.
            let third = 1.0 / 3.0;
            let by_flow = Pair { thickness: 2.0 * third, speed: third };
            let by_slope = third * libm::tan(lip.run.slope);
            return Ok(Self {
                flow: by_flow,
                kinematic_viscosity: Pair::default(),
                section: Pair { thickness: -by_flow.thickness, speed: -by_flow.speed },
                slope: Pair { thickness: by_slope, speed: -by_slope },
                length: Pair::default(),
            });
        }
        let differ = |section: &Section, run: &Run, liquid: &Liquid, flow: f64, step: f64| {
            approach_film(section, run, liquid, flow).map(|s| Pair {
                thickness: libm::log(s.thickness / stream.thickness) / step,
                speed: libm::log(s.speed / stream.speed) / step,
            })
        };
        let up = 1.0 + STEP;
        let ln_up = libm::log1p(STEP);
        let by_flow = differ(&lip.section, &lip.run, &case.liquid, flow * up, ln_up)?;
        let viscous = Liquid { viscosity: case.liquid.viscosity * up, ..case.liquid };
        let (wider, section_step) = match lip.section {
            Section::Sheet { width } => (Section::Sheet { width: width * up }, ln_up),
            Section::Vee { included_angle } => (Section::Vee { included_angle: included_angle + STEP }, STEP),
            Section::Trough { diameter } => (Section::Trough { diameter: diameter * up }, ln_up),
            Section::Tube { bore } => (Section::Tube { bore: bore * up }, ln_up),
        };
        let steeper = Run { slope: lip.run.slope + STEP, ..lip.run };
        let length_step = (lip.run.length * STEP).max(1e-6);
        let longer = Run { length: lip.run.length + length_step, ..lip.run };
        Ok(Self {
            flow: by_flow,
            kinematic_viscosity: differ(&lip.section, &lip.run, &viscous, flow, ln_up)?,
            section: differ(&wider, &lip.run, &case.liquid, flow, section_step)?,
            slope: differ(&lip.section, &steeper, &case.liquid, flow, STEP)?,
            length: differ(&lip.section, &longer, &case.liquid, flow, length_step)?,
        })
    }
}
