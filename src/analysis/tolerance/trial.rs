//! One trial: the margin of a question with some of its fields at drawn values.
//!
//! Stands on the parts of a decision ([`crate::analysis::balance`], the closed form) and computes anew only those that
//! the drawn fields move. No slopes, no uncertainty: a trial needs the margin alone.

use super::lanes::{LANES, LevelTrials};
use crate::{
    analysis::{
        balance::{Approach, Prepared, approach, prepare, threshold},
        case::Case,
        evaluation::stream_fault,
        fault::Fault,
        field::Field,
        resolve::{Resolved, resolve_liquid},
        spec::{Spec, SurfaceSpec},
    },
    physics::{
        liquid::Properties,
        quantity,
        separation::closed_form::{Edge, RimTerms},
    },
};

/// What the drawn fields move.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
struct Moves {
    liquid: bool,
    angle: bool,
    stream: bool,
    turn: bool,
    wall: bool,
    rim: bool,
}

impl Moves {
    fn of(fields: &[Field], spec: &Spec) -> Self {
        let any = |prefix: &str| fields.iter().any(|f| f.pointer().starts_with(prefix));
        let liquid = any("/liquid/");
        // Measured angles hold for the liquid as it is; the others are worked out for its properties.
        let angle_follows = !matches!(spec.surface, SurfaceSpec::Measured { .. });
        Self {
            liquid,
            angle: any("/surface/") || (liquid && angle_follows),
            stream: liquid || any("/lip/section/") || any("/lip/run/") || any("/pour/"),
            turn: fields.contains(&Field::Turn),
            wall: fields.contains(&Field::Turn) || fields.contains(&Field::Slope),
            rim: fields.contains(&Field::EdgeRadius),
        }
    }
}

/// A question some of whose fields are drawn.
#[derive(Debug, Clone)]
pub struct Trial<'a> {
    fields: &'a [Field],
    moves: Moves,
    spec: Spec,
    case: Case,
    properties: Properties,
    edge: Prepared,
    approach: Approach,
    /// Where trials can be done side by side.
    level: Option<LevelTrials>,
    arch: pulp::Arch,
}

impl<'a> Trial<'a> {
    /// The question with these fields to be drawn; every one must be a field of the question, whose own values stand
    /// for the start.
    ///
    /// # Errors
    /// Every fault of the question itself.
    pub fn new(spec: &Spec, fields: &'a [Field]) -> Result<Self, Vec<Fault>> {
        let Resolved { case, liquid: properties, .. } = spec.resolve()?;
        let edge = prepare(&case, case.contact_angle);
        let approach = approach(&case, case.flow).map_err(stream_fault)?;
        let arch = pulp::Arch::new();
        let level = LevelTrials::new(spec, &case, fields, arch);
        let moves = Moves::of(fields, spec);
        Ok(Self { fields, moves, spec: *spec, case, properties, edge, approach, level, arch })
    }

    /// ln(safety factor) with the fields at these values; `None` where they make no case: contradicting angles, a liquid
    /// that freezes, a floor that rises more than the edge turns.
    #[inline]
    pub fn margin(&mut self, values: &[f64]) -> Option<f64> {
        let Self { fields, moves, spec, case, properties, edge, approach: stream, .. } = self;
        for (field, value) in fields.iter().zip(values) {
            field.set(spec, *value);
        }
        if moves.wall && !spec.wall_falls() {
            return None;
        }
        if moves.liquid {
            *properties = resolve_liquid(&spec.liquid).ok()?;
            case.liquid = properties.liquid();
        }
        if moves.angle {
            case.contact_angle = spec.contact_angle(properties)?;
        }
        if moves.stream {
            case.lip = spec.lip();
            case.flow = spec.flow_ml_s * quantity::FLOW.to_si;
            *stream = approach(case, case.flow).ok()?;
        }
        let set = case.coefficients;
        if moves.turn || moves.angle {
            edge.edge = Edge::new(set, case.contact_angle, spec.turn_deg * quantity::TURN.to_si);
        }
        if moves.rim {
            edge.rim = RimTerms::of(set, spec.radius_mm * quantity::EDGE_RADIUS.to_si);
        }
        let threshold = threshold(set, case.calibration.as_ref(), &stream.terms, (&edge.edge, &edge.rim));
        Some(stream.ln_weber - threshold.ln_critical_weber)
    }

    /// The margins of many trials, whose values stand in columns, one for each field; NaN where they make no case.
    pub fn margins(&mut self, columns: &[Vec<f64>], out: &mut [f64]) {
        for (start, out) in (0..).step_by(LANES).zip(out.chunks_mut(LANES)) {
            match &self.level {
                Some(level) => level.margins(columns, start, out),
                None => out.fill(f64::NAN),
            }
            for (i, out) in out.iter_mut().enumerate().filter(|(_, out)| out.is_nan()) {
                let mut values = [0.0; Field::COUNT];
                for (value, column) in values.iter_mut().zip(columns) {
                    *value = column[start + i];
                }
                *out = self.margin(&values[..columns.len().min(Field::COUNT)]).unwrap_or(f64::NAN);
            }
        }
    }

    /// What the vector parts of a trial are dispatched by.
    #[must_use]
    pub fn arch(&self) -> pulp::Arch {
        self.arch
    }

    /// Why values make no case: the faults of the question with the fields at these values.
    #[must_use]
    pub fn faults(&self, values: &[f64]) -> Vec<Fault> {
        let mut spec = self.spec;
        for (field, value) in self.fields.iter().zip(values) {
            field.set(&mut spec, *value);
        }
        spec.resolve().err().unwrap_or_default()
    }
}

#[cfg(test)]
pub(super) mod tests {
    use super::*;
    use crate::analysis::{
        calibration::{Calibration, Moments, Symmetric},
        decision::decide,
        spec::{LiquidSpec, OuterFace, SectionSpec, Uncertainties},
    };
    use crate::physics::{
        liquid,
        separation::closed_form::DEFAULT_SET,
        surface::{self, State},
    };

    fn spec() -> Spec {
        Spec {
            section: SectionSpec::Sheet { width_mm: 24.0 },
            radius_mm: 0.8,
            turn_deg: 110.0,
            slope_deg: 8.0,
            length_mm: 20.0,
            surface: SurfaceSpec::Catalogue {
                material: surface::catalogue().iter().find(|m| m.id == "porcelain-glazed").unwrap(),
                state: State::InUse,
            },
            liquid: LiquidSpec::Catalogue {
                entry: liquid::catalogue().iter().find(|e| e.id == "sucrose-solution").unwrap(),
                conditions: liquid::Conditions {
                    temperature_c: 20.0,
                    mass_fraction: Some(0.3),
                    ..liquid::Conditions::default()
                },
                overrides: Default::default(),
            },
            flow_ml_s: 25.0,
            outer_face: OuterFace::Dry,
            confidence: 0.95,
            uncertainty: Uncertainties::default(),
            calibration: None,
            coefficients: DEFAULT_SET,
        }
    }

    pub(in crate::analysis::tolerance) fn measured() -> Spec {
        Spec {
            surface: SurfaceSpec::Measured {
                contact_angle_deg: Some(60.0),
                advancing_deg: Some(70.0),
                receding_deg: Some(30.0),
            },
            ..spec()
        }
    }

    /// Side by side they are the decider's margins up to rounding, and where they make no case they make none.
    #[test]
    fn trials_side_by_side_agree_with_single_ones() {
        let sheet = Spec {
            slope_deg: 0.0,
            surface: SurfaceSpec::Measured {
                contact_angle_deg: None,
                advancing_deg: Some(84.0),
                receding_deg: None,
            },
            ..measured()
        };
        let rising = Spec { slope_deg: -29.0, ..sheet };
        let fields =
            [Field::EdgeRadius, Field::Turn, Field::MeasuredAdvancing, Field::SheetWidth, Field::Flow];
        let mut numbers = crate::analysis::statistics::random::Sequence::new(5, 0).from(0);
        let mut creeping = 0;
        for (base, level) in [(sheet, true), (rising, true), (measured(), false)] {
            let mut trial = Trial::new(&base, &fields).unwrap();
            assert_eq!(trial.level.is_some(), level);
            let mut between = |low: f64, high: f64| -> Vec<f64> {
                (0..1000).map(|_| low * libm::pow(high / low, numbers.next_open())).collect()
            };
            let mut columns = vec![
                between(1e-3, 50.0),
                between(20.0, 180.0),
                between(1.0, 180.0),
                between(1.0, 2000.0),
                between(0.01, 20_000.0),
            ];
            columns[0][17] = 0.0;
            columns[2][18] = 180.0;
            let mut found = vec![0.0; 1000];
            trial.margins(&columns, &mut found);
            for i in 0..1000 {
                let values: Vec<f64> = columns.iter().map(|c| c[i]).collect();
                match trial.margin(&values) {
                    None => assert!(found[i].is_nan()),
                    Some(margin) => {
                        let off = (found[i] - margin).abs();
                        assert!(off < 1e-11 * (1.0 + margin.abs()), "{values:?} {margin} {}", found[i]);
                        creeping += u32::from(off == 0.0);
                    }
                }
            }
        }
        assert!(creeping > 100);
    }

    fn calibration() -> Calibration {
        let moments = Moments {
            mean: [0.25, -0.1, 0.15],
            covariance: Symmetric::diagonal([0.01, 0.02, 0.03]),
            scatter_variance: 0.02,
            ln_scatter: -2.0,
            ln_scatter_sd: 0.2,
        };
        let covered = [[-1.5, -0.5], [-0.5, 0.6], [-0.2, 0.3], [4.0, 7.0], [0.0, 1.5]];
        Calibration::new(&moments, [-0.8, 0.1], covered)
    }

    /// A trial is the decider's margin, whichever fields are drawn and whatever was drawn before.
    #[test]
    fn a_trial_agrees_with_the_decider() {
        let calibrated = Spec { calibration: Some(calibration()), ..measured() };
        for base in [
            spec(),
            measured(),
            calibrated,
            Spec { section: SectionSpec::Tube { bore_mm: 9.0 }, ..measured() },
        ] {
            let fields: Vec<Field> = Field::all().filter(|f| f.get(&base).is_some()).collect();
            for skip in 0..fields.len() {
                for count in 1..=3.min(fields.len() - skip) {
                    let drawn = &fields[skip..skip + count];
                    let mut trial = Trial::new(&base, drawn).unwrap();
                    for factor in [1.0, 1.07, 0.98, 1.0] {
                        let values: Vec<f64> = drawn.iter().map(|f| factor * f.get(&base).unwrap()).collect();
                        let mut moved = base;
                        drawn.iter().zip(&values).for_each(|(f, v)| {
                            f.set(&mut moved, *v);
                        });
                        let whole = moved.resolve().ok().map(|r| decide(&r.case).unwrap().margin);
                        assert_eq!(trial.margin(&values), whole, "{drawn:?} {values:?}");
                        assert_eq!(trial.faults(&values).is_empty(), whole.is_some());
                    }
                }
            }
        }
    }
}
