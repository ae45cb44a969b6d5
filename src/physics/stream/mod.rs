//! From pour rate to the stream at the lip.
//!
//! [`approach_film`] gives thickness and mean speed on the floor a few thicknesses before the edge, and the
//! brink for information. Nothing here has been compared with a lip experiment at millimetre depth.
//!
//! # The approach film
//!
//! * **Level, uphill, mild** (sin σ ≤ S_f): the critical section, plug profile (β = 1): on a level sheet h =
//!   (q²/g)^⅓ and U²/(gh) = 1 exactly. Uphill gravity normal to the floor is g cos σ. Downhill it is taken as
//!   g, so that the slope of a mild run does not change the film (it would be thicker by at most 1/cos^⅓ σ).
//! * **Steep**: the developed film (β = 6/5) that starts at the crest and runs down: [`sheet_depth_after`] in
//!   closed form for a sheet, a quadrature for the others. Its limits are Bernoulli's and Nusselt's films.
//!   The crest is described in `crest.rs`.
//! * **The join**: the thinner of the two, rounded where their areas differ by less than 3 %. The developed
//!   film starts 6 % thicker than the plug at its critical depth, so a run too short or too flat to draw it
//!   below that is controlled by its brink; on a very long run the change comes at sin σ = S_f, where the
//!   normal depth is critical. β goes from 1 to 6/5 with the share of the developed film.
//! * **Very viscous films**: the critical depth can be thinner than a creeping film can be. One thickness
//!   before the brink of a level floor lubrication theory gives (12νq/g)^⅓; the area is raised softly (over
//!   10 %) to what a driving slope (1 + 3 sin σ)/4 gives (uphill see `friction.rs`). On a level sheet this
//!   acts below Re = q/ν = 12 and is flagged ([`Flags::VISCOUS_APPROACH_BOUND`]); U²/(gh) is then below 1. A
//!   steep film is normal or thicker and not touched (but for a tube above half depth near the vertical).
//! * **Tube**: part full it is a circle. Above the flow that washes the air cavity out (0.542 √(gD) full
//!   bore) it fills: a true tube jumps to full and slows; here it fills at constant speed until the bore is
//!   full, so that speed and ρU²h never fall. A tube with ρgD²/γ ≤ 4.5 is full; up to 6.75 a smooth join.
//!   Glugging is not covered.
//!
//! # What must hold, and where it does not
//!
//! With all else fixed, more flow never lowers the speed, the thickness or U²h; a steeper floor never lowers
//! the speed on a sheet; results are continuous in flow and slope. Tested over the accepted region.
//! Exceptions:
//!
//! * The speed of a sheet falls with the slope, by less than 1e-4 in all, above 82° when Re is 3 to 4 (sin σ
//!   just above S_f) and the run is shorter than 0.6 y_c: at a given depth a steeper floor has less gravity
//!   normal to it, so the film answers more slowly to the little drive that friction leaves. Round sections
//!   have the same exception.
//! * A tube's bore and surface tension decide whether it runs full, so We may move either way with them.
//! * `thickness_low` (A/P) of a tube falls by up to 18 % from 0.81 of the bore to full, because the wetted
//!   perimeter grows faster than the area.

mod brink;
mod crest;
mod critical;
mod flags;
mod free_stream;
mod friction;
mod join;
mod march;
mod newton;
mod rating;
mod sheet;
mod tube;

pub use brink::{brink_ratio, end_depth_ratio};
pub use critical::{critical_depth, critical_flow, critical_head, start_head};
pub use flags::Flags;
pub use free_stream::{Launch, ballistic_distance, jet_distance, sheet_distance};
pub use friction::{creeps_below, friction_slope, normal_depth};
pub use rating::{rated_flow, sill_height};
pub use sheet::depth_after as sheet_depth_after;
pub use tube::{CAVITY_SPEED, FULL_BOND};

use crate::physics::GRAVITY;
use crate::physics::lip::{Run, Section};
use crate::physics::liquid::Liquid;

/// Momentum factor of a developed laminar film (parabolic profile): 6/5, analytic.
pub const DEVELOPED: f64 = 1.2;

/// Total head below which ±20 % are allowed on the flow at a given head, m (own judgement).
pub const SMALL_HEAD: f64 = 0.010;

/// Reynolds number on 4 R_h above which laminar friction is doubtful (common practice for pipes, no source).
pub const LAMINAR_LIMIT: f64 = 2300.0;

/// Width in ln A of the join between the critical and the developed film, and of the rise to the viscous
/// bound (own judgement). The first is less than half of ln 1.0627, by which the developed film's critical
/// area exceeds the plug's.
const CONTROL_JOIN: f64 = 0.03;
const VISCOUS_JOIN: f64 = 0.10;

/// What sets depth and speed.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Control {
    /// Level, mild or adverse run: critical at the brink.
    Brink,
    /// Steep run: critical at the crest, marched down.
    Crest,
    /// Tube running full.
    Full,
}

/// The stream at the lip.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Stream {
    /// Thickness of the equivalent sheet, m: A/T (a trough above half depth and a tube above half: A/D, so
    /// πD/4 for a full tube).
    pub thickness: f64,
    /// Low estimate of the thickness, m: A/P.
    pub thickness_low: f64,
    /// High estimate of the thickness, m: the depth y.
    pub thickness_high: f64,
    /// Depth normal to the floor, m.
    pub depth: f64,
    /// Mean speed Q/A, m/s.
    pub speed: f64,
    /// Flow area, m².
    pub area: f64,
    /// Critical depth of the plug profile at the control, m; a tube's part-full one even when it fills.
    pub critical_depth: f64,
    /// Normal depth, m: downhill, and where a tube can carry the flow part full.
    pub normal_depth: Option<f64>,
    /// Momentum factor, 1 (plug) to 6/5 (developed).
    pub momentum_factor: f64,
    /// Thickness of the equivalent sheet at the brink, m; ±5 % on a level run.
    pub brink_thickness: f64,
    /// Depth at the brink, m.
    pub brink_depth: f64,
    /// Mean speed at the brink, m/s.
    pub brink_speed: f64,
    /// What sets depth and speed.
    pub control: Control,
    /// Remarks.
    pub flags: Flags,
}

/// Why no stream could be computed.
#[derive(Debug, Clone, Copy, PartialEq, Eq, thiserror::Error)]
pub enum StreamFault {
    /// An iteration did not converge.
    #[error("the {what} did not converge")]
    NotConverged {
        /// What was being solved for.
        what: &'static str,
    },
}

fn converged<T>(value: Option<T>, what: &'static str) -> Result<T, StreamFault> {
    value.ok_or(StreamFault::NotConverged { what })
}

/// The approach film and the brink of a pour of `flow`, m³/s (> 0), over a lip: see the [module](self).
///
/// Valid for laminar films; the accepted region of [`quantity`](crate::physics::quantity) gives finite
/// positive results throughout.
///
/// # Errors
///
/// [`StreamFault::NotConverged`] if an iteration fails, which no accepted input is known to cause.
pub fn approach_film(
    section: &Section,
    run: &Run,
    liquid: &Liquid,
    flow: f64,
) -> Result<Stream, StreamFault> {
    let viscosity = liquid.kinematic_viscosity();
    let (sine, cosine) = libm::sincos(run.slope);
    let film = part_full(section, run, viscosity, carried(section, flow))?;

    let (area, mut flags) = fill(section, liquid, flow, sine, &film)?;
    let full = area >= section.full_area();
    let depth = if area == film.area {
        film.depth
    } else {
        converged(section.depth_of_area(area), "depth of the stream")?
    };
    let wetted = section.wetted(depth);
    let speed = flow / area;

    let (brink_depth, brink_bound) = brink(section, flow, viscosity, &film, (depth, area), cosine)?;
    let brink_area = if brink_depth < depth { section.area(brink_depth) } else { area };

    let energy = depth + 0.5 * speed * speed / GRAVITY;
    let reynolds = 4.0 * wetted.hydraulic_radius() * speed / viscosity;
    let trough_above_half = matches!(*section, Section::Trough { diameter } if depth > 0.5 * diameter);
    flags = flags
        .with(Flags::BRINK_BELOW_CAPILLARY_LENGTH, brink_depth < liquid.capillary_length())
        .with(Flags::SMALL_HEAD, critical_head(section, film.critical_depth) < SMALL_HEAD)
        .with(Flags::VISCOUS_BRINK_BOUND, brink_bound)
        .with(Flags::TURBULENT, film.developed > 0.0 && reynolds > LAMINAR_LIMIT)
        .with(Flags::TROUGH_ABOVE_HALF, trough_above_half)
        .with(
            Flags::FRICTION_NEGLIGIBLE,
            friction_slope(section, depth, flow, viscosity) * run.length < 0.01 * energy,
        );
    Ok(Stream {
        thickness: equivalent_sheet(section, depth, area),
        thickness_low: wetted.hydraulic_radius(),
        thickness_high: depth,
        depth,
        speed,
        area,
        critical_depth: film.critical_depth,
        normal_depth: film.normal_depth,
        momentum_factor: 1.0 + (DEVELOPED - 1.0) * film.developed,
        brink_thickness: equivalent_sheet(section, brink_depth, brink_area),
        brink_depth,
        brink_speed: flow / brink_area,
        control: match (full, film.developed >= 0.5) {
            (true, _) => Control::Full,
            (false, true) => Control::Crest,
            (false, false) => Control::Brink,
        },
        flags,
    })
}

/// Thickness of the equivalent sheet, m.
fn equivalent_sheet(section: &Section, depth: f64, area: f64) -> f64 {
    match *section {
        Section::Tube { bore: diameter } | Section::Trough { diameter } if depth > 0.5 * diameter => {
            area / diameter
        }
        Section::Sheet { .. } | Section::Vee { .. } | Section::Trough { .. } | Section::Tube { .. } => {
            area / section.top_width(depth)
        }
    }
}

/// Flow, m³/s, that the section carries with a free surface: a tube only up to the flow that washes its
/// cavity out.
fn carried(section: &Section, flow: f64) -> f64 {
    match *section {
        Section::Tube { bore } => flow.min(tube::cavity_flow(bore)),
        Section::Sheet { .. } | Section::Vee { .. } | Section::Trough { .. } => flow,
    }
}

/// The film before viscous bound and filling.
struct PartFull {
    /// m³/s.
    flow: f64,
    depth: f64,
    area: f64,
    critical_depth: f64,
    normal_depth: Option<f64>,
    /// Share of the developed film, 0..1.
    developed: f64,
}

/// The thinner of the critical film and the developed film from the crest.
fn part_full(section: &Section, run: &Run, viscosity: f64, flow: f64) -> Result<PartFull, StreamFault> {
    let (sine, cosine) = libm::sincos(run.slope);
    let gravity = if sine > 0.0 { GRAVITY } else { GRAVITY * cosine };
    let critical_depth = converged(critical_depth(section, flow, 1.0, gravity), "critical depth")?;
    let control = section.wetted(critical_depth);
    let mut film = PartFull {
        flow,
        depth: critical_depth,
        area: control.area,
        critical_depth,
        normal_depth: None,
        developed: 0.0,
    };
    if sine <= 0.0 {
        return Ok(film);
    }
    film.normal_depth = normal_depth(section, flow, viscosity, sine);
    let Some(normal_depth) = film.normal_depth else { return Ok(film) };
    if section.area(normal_depth) >= control.area * libm::exp(CONTROL_JOIN) {
        return Ok(film);
    }
    let steep = crest::SteepRun {
        sine,
        cosine,
        slope: run.slope,
        length: run.length,
        steepness: libm::log(sine / friction_slope(section, critical_depth, flow, viscosity)),
        normal_depth,
    };
    let developed = converged(crest::end_depth(section, &steep, flow, viscosity), "film on the run")?;
    let developed_area = section.area(developed);
    let (log_ratio, share) = join::smooth_min(0.0, libm::log(developed_area / control.area), CONTROL_JOIN);
    film.developed = share;
    if share >= 1.0 {
        (film.depth, film.area) = (developed, developed_area);
    } else if share > 0.0 {
        film.area = control.area * libm::exp(log_ratio);
        film.depth = converged(section.depth_of_area(film.area), "depth of the stream")?;
    }
    Ok(film)
}

/// Flow area after filling of a tube and the viscous bound, m².
fn fill(
    section: &Section,
    liquid: &Liquid,
    flow: f64,
    sine: f64,
    film: &PartFull,
) -> Result<(f64, Flags), StreamFault> {
    let full_area = section.full_area();
    let viscosity = liquid.kinematic_viscosity();
    let mut flags = Flags::NONE;
    // More than the cavity lets through is carried at constant speed.
    let mut area = if flow > film.flow { film.area * (flow / film.flow) } else { film.area };
    let driving = friction::brink_driving(sine);
    if friction::may_creep(section, film.depth, film.flow, viscosity, driving) || flow > film.flow {
        let floor = converged(friction::viscous_area(section, flow, viscosity, driving), "viscous film")?;
        if floor > area {
            area *= libm::exp(join::soft_floor(0.0, libm::log(floor / area), VISCOUS_JOIN));
            flags = flags | Flags::VISCOUS_APPROACH_BOUND;
        }
    }
    if let Section::Tube { bore } = *section {
        let capillary = tube::capillary_filling(liquid, bore);
        area = area.min(full_area);
        if capillary >= 1.0 {
            area = full_area;
        } else if capillary > 0.0 {
            area *= libm::exp(capillary * libm::log(full_area / area));
        }
        let filling = flow > film.flow || capillary > 0.0;
        flags = flags
            .with(Flags::TUBE_FULL, area >= full_area)
            .with(Flags::TUBE_FILLING, filling && area < full_area);
    }
    Ok((area, flags))
}

/// Depth at the brink, m, and whether it is the viscous bound.
///
/// F² = βQ²T/(g A³) of the film before filling, at least 1; with g cos σ as far as the film is developed. A
/// tube that fills loses its fall with the part of the bore (in ln A) that it has filled.
fn brink(
    section: &Section,
    flow: f64,
    viscosity: f64,
    film: &PartFull,
    (depth, area): (f64, f64),
    cosine: f64,
) -> Result<(f64, bool), StreamFault> {
    let wetted = section.wetted(film.depth);
    let normal_gravity = GRAVITY * (1.0 - film.developed * (1.0 - cosine));
    let momentum_factor = 1.0 + (DEVELOPED - 1.0) * film.developed;
    let froude_squared = momentum_factor * film.flow * film.flow * wetted.top_width
        / (normal_gravity * film.area * film.area * film.area);
    let mut ratio = brink_ratio(froude_squared.max(1.0), end_depth_ratio(section));
    let full_area = section.full_area();
    if full_area.is_finite() && area > film.area {
        let filled = libm::log(area / film.area) / libm::log(full_area / film.area);
        ratio = libm::exp(libm::log(ratio) * (1.0 - filled));
    }
    let inertial = ratio * depth;
    // A film falls no faster than under gravity whole.
    if !friction::may_creep(section, inertial, flow, viscosity, 1.0) {
        return Ok((inertial, false));
    }
    let creeping = converged(friction::viscous_area(section, flow, viscosity, 1.0), "creeping brink")?;
    let creeping = converged(section.depth_of_area(creeping), "creeping brink")?.min(depth);
    Ok((inertial.max(creeping), creeping > inertial))
}

#[cfg(test)]
mod tests;
