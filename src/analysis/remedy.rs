//! What would mend it: the smallest single change that reaches clean, one field at a time, found by root-finding and verified by deciding the changed case.

use super::{
    decision::{Decision, Verdict, decide},
    field::Field,
    notice::Notice,
    resolve::Resolved,
    spec::{OuterFace, Spec, SurfaceSpec},
};
use crate::physics::{
    numerics::{Bracket, find_root, normal_quantile},
    quantity::DEGREE,
    separation::numbers::FREE_SHEET_WEBER,
};

/// One change that reaches clean.
#[derive(Debug, Clone, PartialEq)]
pub struct Remedy {
    /// The field to change.
    pub field: Field,
    /// Its value now, in the field's unit.
    pub from: f64,
    /// The value that reaches clean, in the field's unit.
    pub to: f64,
    /// Why it helps.
    pub reason: Notice,
}

/// The remedies of a case, or why there are none.
#[derive(Debug, Clone, PartialEq)]
pub struct Remedies {
    /// Changes that each reach clean on their own.
    pub found: Vec<Remedy>,
    /// Why there are none.
    pub none_because: Option<Notice>,
}

/// The range in which a remedy may change a field, in the field's unit.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Limit {
    /// The field.
    pub field: Field,
    /// Smallest value that the caller can make.
    pub minimum: f64,
    /// Largest value that the caller can make.
    pub maximum: f64,
}

/// The fields that a remedy may change. With limits given only the fields that they name.
pub const LEVERS: &[Field] = &[
    Field::EdgeRadius,
    Field::Turn,
    Field::Slope,
    Field::RunLength,
    Field::SheetWidth,
    Field::VeeAngle,
    Field::TroughDiameter,
    Field::TubeBore,
    Field::MeasuredAdvancing,
    Field::MeasuredReceding,
    Field::Flow,
];

/// Rounding may add this share to a change.
const ROUNDING: f64 = 0.05;

/// Points scanned on each side before a root is sought.
const SCAN: u32 = 8;

/// Looks for remedies. `limits`: what the caller's tooling allows; empty: every lever within ordinary bounds.
#[must_use]
pub fn remedies(spec: &Spec, resolved: &Resolved, decision: &Decision, limits: &[Limit]) -> Remedies {
    if decision.verdict == Verdict::Clean {
        let reason = Notice::new("already_clean", "The verdict is clean; nothing needs to change.");
        return Remedies { found: Vec::new(), none_because: Some(reason) };
    }
    let wanted = normal_quantile(resolved.case.confidence.level);
    let found: Vec<Remedy> = LEVERS
        .iter()
        .filter_map(|&field| {
            let from = present_value(field, spec, resolved)?;
            let (low, high) = if limits.is_empty() {
                ordinary_bounds(field, from)
            } else {
                let limit = limits.iter().find(|limit| limit.field == field)?;
                (limit.minimum, limit.maximum)
            };
            Search { spec, resolved, field, from, wanted }.nearest_clean(low, high)
        })
        .collect();
    let none_because = found.is_empty().then(|| {
        let detail = if limits.is_empty() {
            "No single change within ordinary bounds reaches clean; several together may."
        } else {
            "No single change within the limits given reaches clean; several together may, or wider limits."
        };
        Notice::new("no_single_change_suffices", detail)
    });
    Remedies { found, none_because }
}

/// The lever's value now; `None` where the case has no such lever.
fn present_value(field: Field, spec: &Spec, resolved: &Resolved) -> Option<f64> {
    match (field, spec.outer_face) {
        (Field::MeasuredAdvancing, OuterFace::Dry) => Some(resolved.case.advancing / DEGREE),
        (Field::MeasuredReceding, OuterFace::Wet) => Some(resolved.case.receding / DEGREE),
        (Field::MeasuredAdvancing | Field::MeasuredReceding, _) => None,
        _ => field.get(spec),
    }
}

/// Bounds of a lever where the caller gives none, in the field's unit: what tooling and materials ordinarily allow (own judgement).
fn ordinary_bounds(field: Field, from: f64) -> (f64, f64) {
    match field {
        Field::EdgeRadius => (from.min(0.05), from),
        Field::Turn => (from, from.max(160.0)),
        Field::Slope => (from, from.max(60.0)),
        Field::RunLength => (from, from.max(100.0)),
        Field::VeeAngle => (from.min(30.0), from),
        Field::SheetWidth | Field::TroughDiameter | Field::TubeBore => {
            (field.quantity().minimum.max(from / 4.0).min(from), from)
        }
        // The highest advancing angle on a smooth solid is near 120° (common practice, no source).
        Field::MeasuredAdvancing | Field::MeasuredReceding => (from, from.max(120.0)),
        _ => (from, (from * 5.0).min(field.quantity().maximum)),
    }
}

fn reason(field: Field) -> Notice {
    let (code, detail) = match field {
        Field::EdgeRadius => ("sharpen_edge", "A sharper edge leaves less wall for the stream to follow."),
        Field::Turn => (
            "turn_further",
            "An outer wall that turns further back (an undercut) asks more of the liquid that would follow it.",
        ),
        Field::Slope => ("steepen_floor", "A steeper floor before the edge speeds the stream up."),
        Field::RunLength => {
            ("lengthen_floor", "A longer downhill floor speeds the stream up before the edge.")
        }
        Field::SheetWidth | Field::TroughDiameter | Field::TubeBore => {
            ("narrow_section", "A narrower section makes the same pour thicker and faster at the edge.")
        }
        Field::VeeAngle => {
            ("pinch_section", "A tighter pinch makes the same pour thicker and faster at the edge.")
        }
        Field::MeasuredAdvancing => (
            "finish_with_larger_advancing_angle",
            "A finish with a larger advancing angle, measured with this liquid, is wetted less readily.",
        ),
        Field::MeasuredReceding => (
            "finish_with_larger_receding_angle",
            "A finish with a larger receding angle, measured with this liquid, lets go more readily once wet.",
        ),
        _ => ("pour_faster", "A faster pour carries more inertia over the edge."),
    };
    Notice::new(code, detail)
}

struct Search<'a> {
    spec: &'a Spec,
    resolved: &'a Resolved,
    field: Field,
    from: f64,
    /// Normal quantile that m/u must reach.
    wanted: f64,
}

impl Search<'_> {
    /// The clean value nearest to the present one between `low` and `high`.
    fn nearest_clean(&self, low: f64, high: f64) -> Option<Remedy> {
        let below = if low < self.from { self.first_clean(self.from.min(high), low) } else { None };
        let above = if high > self.from { self.first_clean(self.from.max(low), high) } else { None };
        let distance = |to: &f64| (to - self.from).abs();
        let to = match (below, above) {
            (Some(b), Some(a)) => Some(if distance(&b) <= distance(&a) { b } else { a }),
            (b, a) => b.or(a),
        }?;
        Some(Remedy { field: self.field, from: self.from, to, reason: reason(self.field) })
    }

    /// Scans from `start` towards `end`, then refines the first change to clean by root-finding, rounds it to the clean side and verifies it.
    fn first_clean(&self, start: f64, end: f64) -> Option<f64> {
        let mut last = (start, self.slack(start)?);
        if last.1 >= 0.0 && start != self.from {
            return self.verified(start, end);
        }
        if start == end {
            return None;
        }
        let geometric = start > 0.0 && end > 0.0;
        let point = |i: u32| {
            let share = f64::from(i) / f64::from(SCAN);
            if i == SCAN {
                end
            } else if geometric {
                start * libm::pow(end / start, share)
            } else {
                start + (end - start) * share
            }
        };
        for i in 1..=SCAN {
            let x = point(i);
            let Some(slack) = self.slack(x) else { continue };
            if slack >= 0.0 {
                let (low, high) = if last.0 < x { (last, (x, slack)) } else { ((x, slack), last) };
                let tolerance = 1e-4 * (x - last.0).abs();
                let root = find_root(|x| self.slack(x).unwrap_or(f64::NAN), Bracket { low, high }, tolerance)
                    .unwrap_or(x);
                return self.verified(root, x);
            }
            last = (x, slack);
        }
        None
    }

    /// How far the case with the lever at `x` is on the clean side: at least 0 there. `None` where there is no such case.
    fn slack(&self, x: f64) -> Option<f64> {
        let d = decide(&self.moved(x)?.resolve().ok()?.case).ok()?;
        let slack = d.margin / d.standard_uncertainty - self.wanted;
        Some(slack.min(libm::log(d.balance.numbers.weber / FREE_SHEET_WEBER)))
    }

    /// `x` rounded towards `clean_side` to as few digits as add little to the change and keep the verdict clean.
    fn verified(&self, x: f64, clean_side: f64) -> Option<f64> {
        let is_clean = |x: f64| {
            self.moved(x)
                .and_then(|spec| spec.resolve().ok())
                .and_then(|resolved| decide(&resolved.case).ok())
                .is_some_and(|d| d.verdict == Verdict::Clean)
        };
        let little = ROUNDING * (x - self.from).abs();
        let within = |y: f64| (y - x) * (y - clean_side) <= 0.0 && (y - x).abs() <= little;
        let rounded = (2..=8).map(|digits| round_towards(x, clean_side, digits)).filter(|y| within(*y));
        rounded.chain([clean_side]).find(|y| is_clean(*y))
    }

    /// The question with the lever at `x`. A finish is moved as angles measured with this liquid.
    fn moved(&self, x: f64) -> Option<Spec> {
        let mut changed = *self.spec;
        let case = &self.resolved.case;
        let angles = |advancing: f64, receding: f64| SurfaceSpec::Measured {
            contact_angle_deg: None,
            advancing_deg: Some(advancing),
            receding_deg: Some(receding),
        };
        match self.field {
            Field::MeasuredAdvancing => changed.surface = angles(x, (case.receding / DEGREE).min(x)),
            Field::MeasuredReceding => changed.surface = angles((case.advancing / DEGREE).max(x), x),
            field => {
                field.set(&mut changed, x);
            }
        }
        self.field.quantity().accepts(x).then_some(changed)
    }
}

/// `x` rounded to `digits` significant digits in the direction of `target`.
pub(super) fn round_towards(x: f64, target: f64, digits: i32) -> f64 {
    if x == 0.0 {
        return 0.0;
    }
    let decade = libm::floor(libm::log10(x.abs())) as i32;
    let places = digits - 1 - decade;
    // Powers of ten up to 22 are exact, so dividing by one gives the nearest number to the decimal.
    let scale = libm::pow(10.0, f64::from(places.abs()));
    let (scaled, back): (f64, fn(f64, f64) -> f64) =
        if places >= 0 { (x * scale, |y, s| y / s) } else { (x / scale, |y, s| y * s) };
    let rounded = if target > x { libm::ceil(scaled) } else { libm::floor(scaled) };
    back(rounded, scale)
}

#[cfg(test)]
mod tests {
    use super::round_towards;

    #[test]
    fn rounds_to_the_clean_side() {
        assert_eq!(round_towards(0.123_456, 0.0, 2), 0.12);
        assert_eq!(round_towards(0.123_456, 1.0, 2), 0.13);
        assert_eq!(round_towards(123.456, 200.0, 2), 130.0);
        assert_eq!(round_towards(-3.21, 0.0, 2), -3.2);
        assert_eq!(round_towards(0.0, 1.0, 2), 0.0);
        assert_eq!(round_towards(8.0, 9.0, 2), 8.0);
    }
}
