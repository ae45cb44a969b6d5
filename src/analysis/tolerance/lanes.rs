//! Many trials side by side, for the lip that most studies are about: a level or rising sheet whose liquid stays the same.

use crate::{
    analysis::{
        balance::LevelSheet,
        case::Case,
        field::Field,
        spec::{OuterFace, Spec, SurfaceSpec},
    },
    physics::{
        numerics::ln,
        separation::closed_form::{CoefficientSet, ln_cling},
    },
};

/// Trials side by side.
pub(super) const LANES: usize = 64;

type Lane = [f64; LANES];

/// Radius, turn, contact angle, width and pour rate: what may be drawn here.
const PLACES: usize = 5;

/// A level sheet some of whose numbers are drawn.
#[derive(Debug, Clone)]
pub(super) struct LevelTrials {
    sheet: LevelSheet,
    set: &'static CoefficientSet,
    /// Where each number stands among the drawn ones, and its factor to SI.
    drawn: [Option<(usize, f64)>; PLACES],
    /// The numbers that are not drawn, in SI; those that are, at the start.
    fixed: [f64; PLACES],
    /// The least turn, rad: above the rise of the floor.
    turn_above_deg: f64,
    arch: pulp::Arch,
}

impl LevelTrials {
    /// `None` where the question or the fields are not of this kind.
    pub(super) fn new(spec: &Spec, case: &Case, fields: &[Field], arch: pulp::Arch) -> Option<Self> {
        if case.calibration.is_some() {
            return None;
        }
        let sheet = LevelSheet::of(&case.lip, &case.liquid)?;
        let crate::physics::lip::Section::Sheet { width } = case.lip.section else { return None };
        let angle = angle_field(spec);
        let mut drawn = [None; PLACES];
        for (i, field) in fields.iter().enumerate() {
            let place = match *field {
                Field::EdgeRadius => 0,
                Field::Turn => 1,
                Field::SheetWidth => 3,
                Field::Flow => 4,
                other if Some(other) == angle => 2,
                _ => return None,
            };
            drawn[place] = Some((i, field.quantity().to_si));
        }
        let fixed = [case.lip.edge.radius, case.lip.edge.turn, case.contact_angle, width, case.flow];
        Some(Self { sheet, set: case.coefficients, drawn, fixed, turn_above_deg: -spec.slope_deg, arch })
    }

    /// Margins of the trials from `start` on, as many as `out` has room for (`LANES` at most). NaN where a trial is not of
    /// this kind after all, and must be looked at by itself.
    pub(super) fn margins(&self, columns: &[Vec<f64>], start: usize, out: &mut [f64]) {
        let mut given = [[0.0; LANES]; PLACES];
        let count = out.len().min(LANES);
        for ((lane, drawn), fixed) in given.iter_mut().zip(&self.drawn).zip(self.fixed) {
            lane.fill(fixed);
            if let Some((column, to_si)) = drawn {
                for (x, value) in lane.iter_mut().zip(&columns[*column][start..start + count]) {
                    *x = value * to_si;
                }
            }
        }
        let mut found = [0.0; LANES];
        self.arch.dispatch(Step { trials: self, given: &given, found: &mut found });
        let turns = self.drawn[1].map(|(column, _)| &columns[column][start..start + count]);
        for (i, (out, margin)) in out.iter_mut().zip(found).enumerate() {
            let creeps = self.sheet.creeps(given[4][i] / given[3][i]);
            let falls = turns.is_none_or(|turns| turns[i] > self.turn_above_deg);
            *out = if creeps || !falls { f64::NAN } else { margin };
        }
    }
}

/// The measured angle that alone makes the one that counts.
fn angle_field(spec: &Spec) -> Option<Field> {
    let SurfaceSpec::Measured { contact_angle_deg, advancing_deg, receding_deg } = spec.surface else {
        return None;
    };
    match (spec.outer_face, contact_angle_deg, advancing_deg, receding_deg) {
        (OuterFace::Dry, None, Some(_), None) => Some(Field::MeasuredAdvancing),
        (OuterFace::Wet, None, None, Some(_)) => Some(Field::MeasuredReceding),
        _ => None,
    }
}

/// One step of all lanes, as the vector dispatcher takes it.
struct Step<'a> {
    trials: &'a LevelTrials,
    given: &'a [Lane; PLACES],
    found: &'a mut Lane,
}

impl pulp::NullaryFnOnce for Step<'_> {
    type Output = ();

    #[inline(always)]
    fn call(self) {
        let Self { trials, given, found } = self;
        // Copies, so that the compiler sees that nothing in the loop changes them.
        let (sheet, set) = (trials.sheet, *trials.set);
        let [radius, turn, angle, width, flow] = given;
        for i in 0..LANES {
            // The logarithm wants a positive number; so sharp an edge has lost its radius anyway.
            let edge = (ln_cling(&set, angle[i], turn[i]), ln(radius[i].max(1e-300)));
            found[i] = sheet.ln_safety_factor(&set, edge, flow[i] / width[i]);
        }
    }
}
