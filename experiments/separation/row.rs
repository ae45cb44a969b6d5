//! Rows of the data files.

use std::error::Error;

use dribble_risk::physics::separation::free_surface::outcome::{Onset, Search};
use dribble_risk::physics::separation::free_surface::problem::Approach;

use crate::design::Case;

/// Columns of the design.
pub(crate) const DESIGN_HEADER: &str =
    "run,held_out,approach,radius_ratio,contact_angle_deg,turn_deg,reynolds,froude,slope_deg";

/// Columns of the results. `kind`: found; below (still separated at that We); choked (film choked there); above (clung there from the start);
/// or the reason why there is no answer. `attached_at`: highest We seen to attach. `quick_ramp`: We at which the stream attached on the quick way down.
/// `deflections`: We:degrees:contact position, by rising We.
pub(crate) const RESULT_HEADER: &str = "run,held_out,approach,radius_ratio,contact_angle_deg,turn_deg,reynolds,froude,slope_deg,\
kind,critical_weber,attached_at,quick_ramp,thickness_before,thickness_at_arc,flow,momentum,cells,density_ratio,seconds,deflections";

pub(crate) fn design(case: &Case) -> String {
    let approach = match case.approach {
        Approach::Film => "film",
        Approach::Flow => "flow",
    };
    format!(
        "{},{},{approach},{},{},{},{},{},{}",
        case.run,
        u8::from(case.held_out),
        case.radius_ratio,
        case.contact_angle_deg,
        case.turn_deg,
        case.reynolds,
        case.froude,
        case.slope_deg
    )
}

pub(crate) fn result(case: &Case, search: &Search, density_ratio: f64, seconds: f64) -> String {
    let (kind, critical, attached) = match search.onset {
        Onset::Found { critical, attached, .. } => ("found", critical, Some(attached)),
        Onset::Below { weber, choked: false } => ("below", weber, None),
        Onset::Below { weber, choked: true } => ("choked", weber, None),
        Onset::Above { weber } => ("above", weber, None),
        Onset::NotConverged { weber, reason } => (reason.as_str(), weber, None),
    };
    let [attached, passed] = [attached, search.on_the_way]
        .map(|weber| weber.map_or_else(String::new, |weber| format!("{weber:.3}")));
    let settled = search.settled.map_or_else(
        || ",,,".to_owned(),
        |read| {
            format!(
                "{:.3},{:.3},{:.3},{:.3}",
                read.thickness_before, read.thickness_at_arc, read.flow, read.momentum
            )
        },
    );
    let deflections: Vec<String> = search
        .deflections
        .iter()
        .map(|at| format!("{:.2}:{:.1}:{:.2}", at.weber, at.angle.to_degrees(), at.contact_position))
        .collect();
    format!(
        "{},{kind},{critical:.3},{attached},{passed},{settled},{},{density_ratio},{seconds:.0},{}",
        design(case),
        search.cells,
        deflections.join(" ")
    )
}

/// Earlier runs: run, r/h, angle, turn, Re, Fr.
pub(crate) fn read_earlier(text: &str) -> Result<Vec<Case>, Box<dyn Error>> {
    let mut cases = vec![];
    for line in text.lines().filter(|line| !line.starts_with('#')).skip(1) {
        let fields: Vec<&str> = line.split(',').collect();
        let number = |k: usize| -> Result<f64, Box<dyn Error>> {
            Ok(fields.get(k).ok_or("short row")?.parse::<f64>()?)
        };
        cases.push(Case {
            run: fields.first().ok_or("empty row")?.parse()?,
            held_out: false,
            radius_ratio: number(1)?,
            contact_angle_deg: number(2)?,
            turn_deg: number(3)?,
            reynolds: number(4)?,
            froude: number(5)?,
            slope_deg: 0.0,
            approach: Approach::Film,
        });
    }
    Ok(cases)
}
