//! Where a number deserves less trust, said in words with a stable code.

use super::{
    balance::{prepare, weigh},
    calibration::{Calibration, Place},
    decision::Decision,
    field::Field,
    notice::Notice,
    resolve::Resolved,
    spec::{LiquidSpec, SectionSpec, Spec, SurfaceSpec},
};
use crate::physics::{
    liquid::Property,
    separation::closed_form::SET_1,
    stream::{Control, Flags},
};

/// The warnings of a decided case.
#[must_use]
pub fn warnings(spec: &Spec, resolved: &Resolved, decision: &Decision) -> Vec<Notice> {
    let mut found = Vec::with_capacity(8);
    model_warnings(decision, &mut found);
    stream_warnings(spec, resolved, decision, &mut found);
    liquid_warnings(spec, resolved, &mut found);
    surface_warnings(spec, resolved, &mut found);
    let case = &resolved.case;
    let own_offset = case.calibration.is_some_and(|c| c.knows_offset(case.coefficients));
    if case.coefficients.id == SET_1.id && !own_offset {
        found.push(Notice::at(
            "coefficients_under_review",
            "/coefficients",
            "Flow computations under way, with streams held at rest near the threshold, put the critical Weber number above set-1 by something like 0.2 to 0.4 in ln: count a safety factor below about 1.5 as no margin.",
        ));
    }
    if let Some(calibration) = &case.calibration {
        calibration_warnings(calibration, resolved, decision, &mut found);
        return found;
    }
    found.push(Notice::new(
        "not_compared_with_experiment",
        "Neither the stream at millimetre depth nor the critical Weber number has been compared with a measured lip; the doubt stated includes that by judgement.",
    ));
    found
}

fn calibration_warnings(
    calibration: &Calibration,
    resolved: &Resolved,
    decision: &Decision,
    found: &mut Vec<Notice>,
) {
    let case = &resolved.case;
    let place = Place::of(&decision.balance.numbers, case.contact_angle, case.lip.edge.turn);
    let names = [
        "edge radius over film thickness",
        "contact angle",
        "turn of the edge",
        "Reynolds number",
        "Froude number",
    ];
    let beyond: Vec<&str> = names
        .into_iter()
        .zip(calibration.beyond(&place))
        .filter(|(_, beyond)| *beyond)
        .map(|(n, _)| n)
        .collect();
    if !beyond.is_empty() {
        found.push(Notice::at(
            "beyond_calibration",
            "/calibration",
            format!(
                "Outside what the bench rows of the calibration covered: {}; doubt widened the further out it lies.",
                beyond.join(", ")
            ),
        ));
    }
    let threshold = &decision.balance.threshold;
    if threshold.by_ln_radius_ratio < 0.0 || threshold.by_contact_angle > 0.0 {
        found.push(Notice::at(
            "trend_reversed",
            "/calibration",
            "As calibrated, a sharper edge or a less wettable lip makes it worse here, against the closed form and all experience; look at the rows behind the calibration.",
        ));
    }
    found.push(Notice::at(
        "calibrated_by_caller",
        "/calibration",
        "The critical Weber number follows the calibration sent with the request; what its bench rows did not show has not been compared with a measured lip.",
    ));
}

fn model_warnings(decision: &Decision, found: &mut Vec<Notice>) {
    let reach = &decision.reach;
    if !decision.free_sheet() {
        found.push(Notice::new(
            "no_free_sheet",
            "Weber number below 2: no free sheet can leave, the liquid drips, beads or runs; the verdict is never clean here.",
        ));
    }
    let outside = [
        (
            reach.froude,
            "froude_outside_range",
            None,
            "Froude number below 2.2 (level or mild lips): the coefficients rest on faster approach streams; doubt widened.",
        ),
        (
            reach.reynolds_low,
            "reynolds_outside_range",
            None,
            "Reynolds number below 25 (thick liquids or thin films): outside the runs behind the coefficients; doubt widened.",
        ),
        (
            reach.reynolds_high,
            "reynolds_outside_range",
            None,
            "Reynolds number above 800: outside the runs behind the coefficients; doubt widened.",
        ),
        (
            reach.radius_ratio,
            "radius_ratio_outside_range",
            Some(Field::EdgeRadius),
            "Edge radius below 0.1 or above 3 film thicknesses: outside the runs behind the coefficients; doubt widened.",
        ),
        (
            reach.turn,
            "turn_outside_range",
            Some(Field::Turn),
            "Turn outside 45° to 150°: outside the runs behind the coefficients; doubt widened.",
        ),
    ];
    for (applies, code, field, detail) in outside {
        if applies {
            found.push(Notice { code, pointer: field.map(Field::pointer), detail: detail.into() });
        }
    }
    if reach.contact_angle {
        found.push(Notice::at(
            "contact_angle_outside_range",
            "/surface",
            "Contact angle below 20° or above 160°: outside the runs behind the coefficients.",
        ));
    }
}

fn stream_warnings(spec: &Spec, resolved: &Resolved, decision: &Decision, found: &mut Vec<Notice>) {
    let stream = &decision.balance.stream;
    let remarks: [(Flags, &str, &str); 6] = [
        (
            Flags::BRINK_BELOW_CAPILLARY_LENGTH,
            "brink_below_capillary_length",
            "The stream at the brink is thinner than the capillary length: surface tension shapes it, which the stream model leaves out.",
        ),
        (
            Flags::VISCOUS_BRINK_BOUND,
            "viscous_brink_bound",
            "The brink is set by viscosity: its thickness is good to ± 30 % only.",
        ),
        (
            Flags::VISCOUS_APPROACH_BOUND,
            "viscous_approach_bound",
            "The approach film is set by viscosity, not by a critical section: its thickness is good to ± 30 % only.",
        ),
        (
            Flags::TURBULENT,
            "turbulent",
            "Reynolds number high enough for turbulence on the floor: laminar friction is doubtful.",
        ),
        (
            Flags::TROUGH_ABOVE_HALF,
            "trough_above_half",
            "The stream stands above half the trough's depth: its walls are taken to go on vertically.",
        ),
        (Flags::TUBE_FILLING, "tube_filling", "The tube is between part full and full: an interpolation."),
    ];
    for (flag, code, detail) in remarks {
        if stream.flags.contains(flag) {
            found.push(Notice::new(code, detail));
        }
    }
    match spec.section {
        SectionSpec::Tube { .. } => found.push(Notice::at(
            "glugging_not_covered",
            "/lip/section/tube",
            "A steady stream is assumed: the glugging of a closed vessel without a vent is not covered.",
        )),
        SectionSpec::Sheet { width_mm } if stream.thickness > 0.25 * width_mm * 1e-3 => found.push(Notice::at(
            "not_a_wide_sheet",
            "/lip/section/sheet/width_mm",
            "The stream is thicker than a quarter of the lip's width: side walls, which are left out, matter.",
        )),
        _ => {}
    }
    if stream.control != Control::Full && stream.flags.contains(Flags::SMALL_HEAD) {
        found.push(Notice::new(
            "small_head",
            "Head over the lip below 10 mm: the same pour rate may need a head that differs by some ± 13 %.",
        ));
    }
    // Vee, trough and tube are judged as an equivalent sheet: would another definition change sides?
    if !matches!(spec.section, SectionSpec::Sheet { .. }) {
        let edge = prepare(&resolved.case, resolved.case.contact_angle);
        let side = |thickness: f64| weigh(&resolved.case, &edge, *stream, thickness).ln_safety_factor > 0.0;
        if side(stream.thickness_low) != side(stream.thickness_high) {
            found.push(Notice::at(
                "equivalent_sheet_decides",
                "/lip/section",
                "The equivalent sheet of this section is a convention, and between its thin and thick reading the safety factor crosses 1.",
            ));
        }
    }
}

fn liquid_warnings(spec: &Spec, resolved: &Resolved, found: &mut Vec<Notice>) {
    let LiquidSpec::Catalogue { entry, .. } = &spec.liquid else { return };
    let rows: [(&Property, &str); 3] = [
        (&resolved.liquid.density, "density"),
        (&resolved.liquid.viscosity, "viscosity"),
        (&resolved.liquid.surface_tension, "surface tension"),
    ];
    for (property, name) in rows {
        if !property.within_range {
            found.push(Notice::at(
                "outside_correlation_range",
                "/liquid/catalogue",
                format!("The {name} is extrapolated: {} covers {}.", property.source, property.range),
            ));
        }
    }
    if !entry.note.is_empty() {
        found.push(Notice::at("liquid_note", "/liquid/catalogue/id", entry.note));
    }
    if entry.wetting.leaves_film {
        found.push(Notice::at(
            "leaves_film",
            "/liquid/catalogue/id",
            "This liquid leaves protein, fat, surfactant or alcohol on the lip: after the first wetting expect a receding angle near 0°, and ask for measured angles.",
        ));
    }
}

fn surface_warnings(spec: &Spec, resolved: &Resolved, found: &mut Vec<Notice>) {
    match &spec.surface {
        SurfaceSpec::Catalogue { material, state } => {
            if !resolved.wetting_liquid.is_water {
                found.push(Notice::at(
                    "angles_re_estimated",
                    "/surface/catalogue",
                    "The catalogue's angles are for water; they were re-estimated for this liquid, with a wider band. Measured angles are better.",
                ));
            }
            if let Some(finish) = material.state(*state)
                && finish.confidence == crate::physics::surface::Confidence::Low
            {
                found.push(Notice::at(
                    "surface_low_confidence",
                    "/surface/catalogue",
                    "The catalogue's angles for this finish are recalled or judged, not measured; ask for measured angles.",
                ));
            }
        }
        SurfaceSpec::Estimated { .. } => found.push(Notice::at(
            "angles_from_energy",
            "/surface/estimated",
            "Surface energy gives one equilibrium angle; advancing and receding angles around it are a rule of judgement. Measured angles are better.",
        )),
        SurfaceSpec::Measured { .. } => {
            let rows = [
                (resolved.assumed.advancing, Field::MeasuredAdvancing, "advancing"),
                (resolved.assumed.receding, Field::MeasuredReceding, "receding"),
            ];
            for (assumed, field, name) in rows {
                if assumed {
                    found.push(Notice::at(
                        "angle_assumed",
                        field.pointer(),
                        format!("The {name} angle was not measured and is assumed by rule from the others (own judgement)."),
                    ));
                }
            }
        }
    }
}
