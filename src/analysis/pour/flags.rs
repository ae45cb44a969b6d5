//! Where a pour deserves less trust, or does not do what was asked.

use super::{
    course::{Course, Sample},
    spec::{PourSpec, Setup},
};
use crate::{
    analysis::{notice::Notice, warnings::warnings as lip_warnings},
    physics::{lip::Section, quantity},
};

/// The warnings of a pour: those of its stream at the largest flow, and its own.
pub(super) fn warnings(
    spec: &PourSpec,
    setup: &Setup,
    course: &Course,
    start_tilt: Option<f64>,
) -> Vec<Notice> {
    let mut found = Vec::with_capacity(12);
    if course.flowing.is_empty() {
        never_pours(setup, start_tilt, &mut found);
    } else {
        stream_at_peak(spec, setup, course, &mut found);
        of_the_pour(spec, setup, course, &mut found);
        slosh(setup, course, &mut found);
    }
    level_flags(setup, course, &mut found);
    found
}

fn degrees(angle: f64) -> f64 {
    angle / quantity::TILT.to_si
}

fn millilitres(volume: f64) -> f64 {
    volume / quantity::FILL.to_si
}

fn never_pours(setup: &Setup, start_tilt: Option<f64>, found: &mut Vec<Notice>) {
    let steepest = degrees(setup.programme.steepest());
    let reason = match start_tilt {
        Some(tilt) if degrees(tilt) > steepest => format!(
            "the level reaches the lip at {:.1}°, and the course goes no further than {steepest:.1}°",
            degrees(tilt)
        ),
        Some(tilt) => format!(
            "the level reaches the lip at {:.1}°, but does not rise over the floor's highest point and what surface tension holds back within the course",
            degrees(tilt)
        ),
        None => "at no tilt up to upside down does this fill reach the lip".to_owned(),
    };
    found.push(Notice::at("never_pours", "/tilt", format!("Nothing is poured: {reason}.")));
}

/// The warnings of the lip, of its stream where the flow is largest.
fn stream_at_peak(spec: &PourSpec, setup: &Setup, course: &Course, found: &mut Vec<Notice>) {
    let Some((peak, decision)) = &course.peak else { return };
    let mut lip = spec.lip;
    lip.slope_deg = degrees(peak.slope);
    lip.flow_ml_s = peak.flow / quantity::FLOW.to_si;
    let mut resolved = setup.dry.clone();
    resolved.case.flow = peak.flow;
    resolved.case.lip.run.slope = peak.slope;
    found.append(&mut lip_warnings(&lip, &resolved, decision));
}

fn of_the_pour(spec: &PourSpec, setup: &Setup, course: &Course, found: &mut Vec<Notice>) {
    let left = course.served + course.dribbled[0];
    if course.began_above_lip {
        found.push(Notice::at(
            "starts_above_lip",
            "/tilt",
            "The course starts at a tilt at which the liquid already stands above the lip: the pour starts at once, with that head behind it.",
        ));
    }
    if course.samples.last().is_some_and(|sample| sample.flow > 0.0) {
        found.push(Notice::at(
            "still_flowing",
            "/tilt",
            "Liquid still runs over the lip when the course ends: its last part, and what it dribbles, is not counted.",
        ));
    }
    if spec.target_ml.is_some() && !course.reached_target {
        found.push(Notice::at(
            "target_not_reached",
            "/target_ml",
            format!("Only {:.1} mL left the vessel within the course.", millilitres(left)),
        ));
    }
    if course.undecided > 0.0 {
        found.push(Notice::at(
            "slope_outside_range",
            "/lip/run/slope_deg",
            format!(
                "For {:.1} mL the floor was tilted beyond what the stream model takes ({}° to {}°, and less uphill than the edge turns): whether that clings is not decided; low counts none of it as dribbled, high all.",
                millilitres(course.undecided),
                quantity::RUN_SLOPE.minimum,
                quantity::RUN_SLOPE.maximum
            ),
        ));
    }
    if course.small_head > 0.005 * left {
        found.push(Notice::at(
            "small_head",
            "/lip/section",
            format!(
                "{:.0} % of what left did so at a head below 10 mm, where the flow at a given head is good to ±20 % (own judgement).",
                (100.0 * course.small_head / left).min(100.0)
            ),
        ));
    }
    let tube_full =
        matches!(setup.dry.case.lip.section, Section::Tube { bore } if course.largest_head > bore);
    let covered =
        |sample: &Sample| sample.flow > 0.0 && sample.head > setup.vessel.brim_top_above_lip(sample.tilt);
    if let Some(sample) = course.samples.iter().find(|sample| covered(sample)) {
        found.push(Notice::at(
            "glugging",
            "/vessel",
            format!(
                "From {:.2} s the liquid covers the whole mouth, so that air can enter only through it: glugging is not covered, the vessel is taken as vented.",
                sample.time
            ),
        ));
    } else if tube_full {
        found.push(Notice::at(
            "tube_full",
            "/lip/section/tube",
            "The tube runs full: that needs a vented vessel; the glugging of a closed one is not covered.",
        ));
    }
    if let Section::Sheet { width: size }
    | Section::Trough { diameter: size }
    | Section::Tube { bore: size } = setup.dry.case.lip.section
    {
        let vessel = &setup.vessel;
        if size > 2.0 * vessel.half_width_at(vessel.lip().height.min(vessel.height())) * 1.001
            && !matches!(spec.vessel, super::VesselSpec::Box { .. })
        {
            found.push(Notice::at(
                "lip_wider_than_vessel",
                "/lip/section",
                "The lip is wider than the vessel: the rating supplies it as if it were not.",
            ));
        }
    }
}

/// Tilting faster than the liquid sloshes: the level is not flat, as it is taken to be.
fn slosh(setup: &Setup, course: &Course, found: &mut Vec<Notice>) {
    let (Some(first), Some(last)) = (course.flowing.first(), course.flowing.last()) else { return };
    for (from, to) in setup.programme.legs() {
        if from[1] == to[1] || to[0] < first.from || from[0] > last.to {
            continue;
        }
        let volume = course.samples.iter().rfind(|s| s.time <= from[0]).map_or(setup.fill, |s| s.volume);
        if volume <= 0.0 {
            continue;
        }
        let period = setup.vessel.slosh_period(volume);
        let back = to[1] < from[1];
        let until = if back { to[0].min(last.to) } else { to[0] };
        if until - from[0] < period {
            let what = if back { "the flow ends" } else { "the tilt changes" };
            let detail = format!(
                "From {:.2} s {what} within {:.2} s, less than the liquid needs to slosh once ({period:.2} s): the flow and what it dribbles there are an order of magnitude only.",
                from[0],
                until - from[0],
            );
            found.push(Notice::at("faster_than_slosh", "/tilt", detail));
            return;
        }
    }
}

/// The level beside the lip.
fn level_flags(setup: &Setup, course: &Course, found: &mut Vec<Notice>) {
    let section = setup.dry.case.lip.section;
    let spills = |sample: &&Sample| {
        let depth = sample.head.max(0.0);
        let half_mouth = match section {
            Section::Sheet { width } => 0.5 * width,
            Section::Vee { included_angle } => depth * libm::tan(0.5 * included_angle),
            Section::Trough { diameter } | Section::Tube { bore: diameter } => 0.5 * diameter,
        };
        let brim = setup.vessel.brim_above_lip(sample.tilt, half_mouth);
        // Surface tension holds a little above an edge; a capillary length is not counted as spilling.
        brim.is_some_and(|brim| sample.head > brim + setup.dry.case.liquid.capillary_length())
    };
    if let Some(sample) = course.samples.iter().find(spills) {
        found.push(Notice::at(
            "spills_over_brim",
            "/lip_position",
            format!(
                "From {:.2} s the level stands over the brim beside the lip: liquid also leaves there, which is not counted. Let the lip stand out further or lower, make it wider, or fill less.",
                sample.time
            ),
        ));
    }
}
