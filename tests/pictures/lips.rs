//! Lips.

use dribble_risk::{
    analysis::{decision::Verdict, spec::SectionSpec},
    service::render::{Between, Heading, LipPicture, lip},
};

use crate::Picture;

fn base(facts: &[(String, String)]) -> LipPicture<'_> {
    LipPicture {
        heading: Heading {
            title: "Marginal: dribble probability 31 %",
            subtitle: "Water at 20 °C on glazed porcelain, in use, outer face dry; 25 mL/s",
            note: "dribble-risk 0.1.0, set-1, fingerprint 0123456789abcdef",
        },
        verdict: Verdict::Marginal,
        section: SectionSpec::Sheet { width_mm: 24.0 },
        radius_mm: 0.8,
        turn_deg: 110.0,
        slope_deg: 8.0,
        length_mm: 20.0,
        depth_mm: 2.3,
        brink_mm: 1.8,
        brink_speed_m_s: 0.58,
        deflection_deg: Some(Between { value: 32.0, low: 20.0, high: 44.0 }),
        facts,
    }
}

fn leaving(value: f64, low: f64, high: f64) -> Option<Between> {
    Some(Between { value, low, high })
}

pub fn all() -> Vec<Picture> {
    let facts: Vec<_> = [
        ("Safety factor (Weber over critical)", "1.2 (0.6 to 2.4)"),
        ("Weber number, critical", "11, 9.2"),
        ("Stream", "2.3 mm thick, 0.45 m/s, inertial"),
        ("Dribbling begins below", "21 mL/s"),
        ("Once wet, clears above at least", "31 mL/s"),
        ("Deflection", "32° (20 to 44)"),
        ("Contact angle, advancing", "45° ± 10°"),
    ]
    .map(|(name, value)| (name.to_owned(), value.to_owned()))
    .to_vec();
    let long = vec![("name ".repeat(60), "value <b>".repeat(60)); 30];
    let lip_of = |change: &dyn Fn(&mut LipPicture<'_>)| {
        let mut picture = base(&facts);
        change(&mut picture);
        lip(&picture)
    };
    [
        ("lip-marginal", lip_of(&|_| {})),
        (
            "lip-clean-steep",
            lip_of(&|p| {
                (p.verdict, p.slope_deg, p.radius_mm, p.turn_deg) = (Verdict::Clean, 35.0, 0.1, 120.0);
                (p.depth_mm, p.brink_mm, p.brink_speed_m_s) = (1.1, 1.0, 1.0);
                p.section = SectionSpec::Trough { diameter_mm: 16.0 };
                p.deflection_deg = leaving(9.0, 4.0, 14.0);
            }),
        ),
        (
            "lip-dribbles",
            lip_of(&|p| {
                (p.verdict, p.deflection_deg) = (Verdict::Dribbles, None);
                p.section = SectionSpec::Vee { included_angle_deg: 70.0 };
            }),
        ),
        (
            "lip-folded",
            lip_of(&|p| {
                (p.verdict, p.turn_deg, p.radius_mm) = (Verdict::Clean, 180.0, 1.5);
                p.section = SectionSpec::Tube { bore_mm: 9.0 };
            }),
        ),
        (
            "lip-folded-drips",
            lip_of(&|p| {
                (p.verdict, p.turn_deg, p.radius_mm, p.deflection_deg) =
                    (Verdict::Dribbles, 180.0, 1.5, None);
            }),
        ),
        (
            "lip-sharp-level",
            lip_of(&|p| {
                (p.radius_mm, p.slope_deg, p.turn_deg, p.length_mm) = (0.0, 0.0, 90.0, 0.0);
            }),
        ),
        (
            "lip-blunt",
            lip_of(&|p| {
                (p.radius_mm, p.depth_mm, p.brink_mm, p.length_mm) = (50.0, 1.2, 0.9, 1000.0);
                (p.verdict, p.deflection_deg) = (Verdict::Dribbles, None);
            }),
        ),
        (
            "lip-trickle",
            lip_of(&|p| {
                (p.radius_mm, p.depth_mm, p.brink_mm, p.brink_speed_m_s) = (20.0, 0.03, 0.02, 0.02);
                (p.verdict, p.deflection_deg) = (Verdict::Dribbles, None);
                p.section = SectionSpec::Sheet { width_mm: 2000.0 };
            }),
        ),
        (
            "lip-rising",
            lip_of(&|p| {
                (p.slope_deg, p.turn_deg) = (-30.0, 45.0);
                p.deflection_deg = leaving(25.0, 10.0, 45.0);
            }),
        ),
        (
            "lip-down",
            lip_of(&|p| {
                (p.slope_deg, p.turn_deg, p.verdict) = (85.0, 180.0, Verdict::Clean);
                p.deflection_deg = leaving(3.0, 0.0, 8.0);
            }),
        ),
        (
            "lip-down-drips",
            lip_of(&|p| {
                (p.slope_deg, p.turn_deg, p.verdict) = (85.0, 180.0, Verdict::Dribbles);
                p.deflection_deg = None;
            }),
        ),
        (
            "lip-shallow-turn",
            lip_of(&|p| {
                (p.slope_deg, p.turn_deg) = (0.0, 20.0);
                p.deflection_deg = leaving(19.0, 8.0, 20.0);
                p.brink_speed_m_s = 0.1;
            }),
        ),
        (
            "lip-large",
            lip_of(&|p| {
                (p.depth_mm, p.brink_mm, p.brink_speed_m_s, p.verdict) = (180.0, 130.0, 1.6, Verdict::Clean);
                p.section = SectionSpec::Tube { bore_mm: 180.0 };
                p.deflection_deg = leaving(2.0, 0.0, 6.0);
            }),
        ),
        (
            "lip-long-words",
            lip(&LipPicture {
                heading: Heading {
                    title: &"<i>".repeat(90),
                    subtitle: &"& \"".repeat(90),
                    note: &"x".repeat(900),
                },
                ..base(&long)
            }),
        ),
    ]
    .map(|(name, svg)| (name.to_owned(), svg))
    .to_vec()
}
