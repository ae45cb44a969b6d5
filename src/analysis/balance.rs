//! Inertia against wetting at one pour rate: the stream, its numbers, its threshold. No other place computes a Weber number.

use super::{
    calibration::{Calibration, Place},
    case::{Case, Primary, Slopes},
};
use crate::physics::{GRAVITY, numerics::ln};
use crate::physics::{
    lip::{Lip, Run, Section},
    liquid::Liquid,
    separation::{
        closed_form::{CoefficientSet, Edge, FilmTerms, LnNumbers, RimTerms, Threshold, ln_critical_weber},
        numbers::{Film, Numbers},
    },
    stream::{Control, Stream, StreamFault, approach_film, creeps_below},
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

/// An edge prepared for one contact angle: its wetting and turn, and its rounding.
#[derive(Debug, Clone, Copy)]
pub struct Prepared {
    /// Wetting and turn.
    pub edge: Edge,
    /// The rounding.
    pub rim: RimTerms,
}

/// The edge of this case, prepared for a contact angle (rad).
#[must_use]
pub fn prepare(case: &Case, contact_angle: f64) -> Prepared {
    Prepared {
        edge: Edge::new(case.coefficients, contact_angle, case.lip.edge.turn),
        rim: RimTerms::of(case.coefficients, case.lip.edge.radius),
    }
}

/// A stream with its numbers, before it meets an edge.
#[derive(Debug, Clone, Copy)]
pub struct Approach {
    /// The stream.
    pub stream: Stream,
    /// Its equivalent sheet.
    pub film: Film,
    /// Its numbers at an ideally sharp edge.
    pub numbers: Numbers,
    /// Its share of the closed form.
    pub terms: FilmTerms,
    /// ln We.
    pub ln_weber: f64,
}

impl Approach {
    /// A stream of `liquid`, with `thickness` (m) as its equivalent sheet.
    #[must_use]
    pub fn of(set: &CoefficientSet, liquid: &Liquid, stream: Stream, thickness: f64) -> Self {
        let film = Film { thickness, speed: stream.speed };
        let numbers = Numbers::of(film, liquid, 0.0);
        Self {
            stream,
            film,
            numbers,
            terms: FilmTerms::of(set, thickness, numbers.reynolds, numbers.froude),
            ln_weber: libm::log(numbers.weber),
        }
    }

    /// Its numbers at an edge of this radius, m.
    #[must_use]
    pub fn numbers_at(&self, liquid: &Liquid, radius: f64) -> Numbers {
        Numbers::of(self.film, liquid, radius)
    }
}

/// The stream of `case` at pour rate `flow` (m³/s).
///
/// # Errors
/// When the stream cannot be computed.
pub fn approach(case: &Case, flow: f64) -> Result<Approach, StreamFault> {
    let stream = approach_film(&case.lip.section, &case.lip.run, &case.liquid, flow)?;
    Ok(Approach::of(case.coefficients, &case.liquid, stream, stream.thickness))
}

/// The threshold of an edge for a stream, corrected by the calibration if there is one.
#[inline(always)]
#[must_use]
pub fn threshold(
    set: &CoefficientSet,
    calibration: Option<&Calibration>,
    film: &FilmTerms,
    (edge, rim): (&Edge, &RimTerms),
) -> Threshold {
    let threshold = edge.threshold_for(set, film, rim);
    match calibration {
        None => threshold,
        Some(calibration) => calibration.corrected(&threshold, &place(film, (edge, rim))),
    }
}

/// Where on the closed form a stream and an edge lie.
#[must_use]
pub fn place(film: &FilmTerms, (edge, rim): (&Edge, &RimTerms)) -> Place {
    Place {
        radius_ratio: rim.radius() / film.thickness(),
        contact_angle: edge.contact_angle(),
        turn: edge.turn(),
        reynolds: film.reynolds(),
        froude: film.froude(),
    }
}

/// The balance of `case` at pour rate `flow` (m³/s) on a prepared edge.
///
/// # Errors
/// When the stream cannot be computed.
pub fn balance(case: &Case, edge: &Prepared, flow: f64) -> Result<Balance, StreamFault> {
    let stream = approach_film(&case.lip.section, &case.lip.run, &case.liquid, flow)?;
    Ok(weigh(case, edge, stream, stream.thickness))
}

/// A level or rising sheet lip under one liquid: its stream is the critical section, so its numbers are powers of the pour rate per width, and the
/// balance needs no more than their logarithms. For many pours side by side, without branches; equal to [`balance`] up to rounding.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LevelSheet {
    ln_density_over_tension: f64,
    ln_density_over_viscosity: f64,
    ln_gravity: f64,
    ln_normal_gravity: f64,
    creeps_below: f64,
}

impl LevelSheet {
    /// Of this lip and liquid; `None` for another section and for a floor that falls.
    #[must_use]
    pub fn of(lip: &Lip, liquid: &Liquid) -> Option<Self> {
        let (sine, cosine) = libm::sincos(lip.run.slope);
        if sine > 0.0 || !matches!(lip.section, Section::Sheet { .. }) {
            return None;
        }
        let normal_gravity = GRAVITY * cosine;
        Some(Self {
            ln_density_over_tension: libm::log(liquid.density / liquid.surface_tension),
            ln_density_over_viscosity: libm::log(liquid.density / liquid.viscosity),
            ln_gravity: libm::log(GRAVITY),
            ln_normal_gravity: libm::log(normal_gravity),
            // A hair more, so that rounding cannot hide a film that creeps.
            creeps_below: creeps_below(liquid.kinematic_viscosity(), normal_gravity, sine) * (1.0 + 1e-9),
        })
    }

    /// Whether friction thickens the stream, so that it is more than the critical section and [`Self::ln_safety_factor`] does not hold.
    #[must_use]
    pub fn creeps(&self, flow_per_width: f64) -> bool {
        flow_per_width < self.creeps_below
    }

    /// ln(We/We_c) at a pour rate per width (m²/s), for an edge by its `ln_cling` and the ln of its radius in m.
    #[inline(always)]
    #[must_use]
    pub fn ln_safety_factor(
        &self,
        set: &CoefficientSet,
        (ln_cling, ln_radius): (f64, f64),
        flow_per_width: f64,
    ) -> f64 {
        // h = (q²/g_n)^⅓, U = q/h.
        let ln_flow = ln(flow_per_width);
        let ln_thickness = (2.0 * ln_flow - self.ln_normal_gravity) / 3.0;
        let ln_speed = ln_flow - ln_thickness;
        let numbers = LnNumbers {
            radius_ratio: ln_radius - ln_thickness,
            reynolds: self.ln_density_over_viscosity + ln_flow,
            froude: 2.0 * ln_speed - self.ln_gravity - ln_thickness,
        };
        let ln_weber = self.ln_density_over_tension + 2.0 * ln_speed + ln_thickness;
        ln_weber - ln_critical_weber(set, ln_cling, numbers)
    }
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
pub fn weigh(case: &Case, edge: &Prepared, stream: Stream, thickness: f64) -> Balance {
    let approach = Approach::of(case.coefficients, &case.liquid, stream, thickness);
    let threshold =
        threshold(case.coefficients, case.calibration.as_ref(), &approach.terms, (&edge.edge, &edge.rim));
    Balance {
        stream,
        numbers: approach.numbers_at(&case.liquid, case.lip.edge.radius),
        threshold,
        ln_safety_factor: approach.ln_weber - threshold.ln_critical_weber,
    }
}

/// Changes of ln(safety factor) per unit of ln thickness and of ln speed of the stream.
///
/// ln S = ln We − ln We_c with We = ρU²h/γ, Re = ρUh/μ, Fr = U²/(gh), r/h.
#[inline(always)]
#[must_use]
pub fn by_film(t: &Threshold) -> Pair {
    Pair {
        thickness: 1.0 - t.by_ln_reynolds + t.by_ln_froude + t.by_ln_radius_ratio,
        speed: 2.0 - t.by_ln_reynolds - 2.0 * t.by_ln_froude,
    }
}

/// Slopes of ln(safety factor) in the primary inputs. The threshold's are exact; for the stream's see [`StreamSlopes`].
#[must_use]
pub fn slopes(t: &Threshold, stream: &StreamSlopes, radius: f64) -> Slopes {
    let by = by_film(t);
    let by_kinematic_viscosity = by.through(stream.kinematic_viscosity);
    let mut slopes = [0.0; Primary::COUNT];
    let mut set = |primary: Primary, value: f64| slopes[primary as usize] = value;
    set(Primary::Density, 1.0 - t.by_ln_reynolds - by_kinematic_viscosity);
    set(Primary::Viscosity, t.by_ln_reynolds + by_kinematic_viscosity);
    set(Primary::SurfaceTension, -1.0);
    set(Primary::ContactAngle, -t.by_contact_angle);
    set(Primary::EdgeRadius, if radius > 0.0 { -t.by_ln_radius_ratio / radius } else { 0.0 });
    set(Primary::Turn, -t.by_turn);
    for primary in Primary::OF_THE_STREAM {
        set(primary, by.through(stream.of_primary(primary)));
    }
    Slopes(slopes)
}

/// Changes of ln thickness and ln speed per unit of an input.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Pair {
    /// Of ln thickness.
    pub thickness: f64,
    /// Of ln speed.
    pub speed: f64,
}

impl Pair {
    /// What an input that changes thickness and speed by `change` does.
    #[inline(always)]
    #[must_use]
    pub fn through(self, change: Self) -> f64 {
        self.thickness * change.thickness + self.speed * change.speed
    }
}

/// How thickness and speed of a stream change with what it depends on: exact for the critical section of a sheet lip, else forward differences.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct StreamSlopes {
    flow: Pair,
    /// Per unit of ln kinematic viscosity.
    pub kinematic_viscosity: Pair,
    section: Pair,
    slope: Pair,
    length: Pair,
}

/// Step of the forward differences, in ln or rad: large against the stream's root tolerance, small against its curvature.
const STEP: f64 = 1e-4;

impl StreamSlopes {
    /// The slopes of `stream`, which `flow` (m³/s) of `liquid` makes on this lip.
    ///
    /// # Errors
    /// When a neighbouring stream cannot be computed.
    pub fn of(lip: &Lip, liquid: &Liquid, stream: &Stream, flow: f64) -> Result<Self, StreamFault> {
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
        let by_flow = differ(&lip.section, &lip.run, liquid, flow * up, ln_up)?;
        let viscous = Liquid { viscosity: liquid.viscosity * up, ..*liquid };
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
            section: differ(&wider, &lip.run, liquid, flow, section_step)?,
            slope: differ(&lip.section, &steeper, liquid, flow, STEP)?,
            length: differ(&lip.section, &longer, liquid, flow, length_step)?,
        })
    }

    /// Changes by one of [`Primary::OF_THE_STREAM`]; none by any other.
    #[must_use]
    pub fn of_primary(&self, primary: Primary) -> Pair {
        match primary {
            Primary::Section => self.section,
            Primary::Slope => self.slope,
            Primary::RunLength => self.length,
            Primary::Flow => self.flow,
            // At a given pour rate a thicker stream is a slower one; the equivalent sheet is another reading of the same speed.
            Primary::Thickness => Pair { thickness: 1.0, speed: -1.0 },
            Primary::Equivalence => Pair { thickness: 1.0, speed: 0.0 },
            Primary::Density
            | Primary::Viscosity
            | Primary::SurfaceTension
            | Primary::ContactAngle
            | Primary::EdgeRadius
            | Primary::Turn => Pair::default(),
        }
    }
}
