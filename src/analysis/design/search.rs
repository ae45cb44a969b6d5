//! Where one case is clean along one field.

use std::sync::atomic::{AtomicBool, Ordering};

use crate::analysis::{
    decision::{Verdict, decide},
    field::Field,
    spec::Spec,
    sweep::Cancelled,
};
use crate::physics::{numerics::normal_quantile, separation::numbers::FREE_SHEET_WEBER};

/// Width, as a share of the value or of the bracket, to which a change of sides is bracketed.
pub(super) const TOLERANCE: f64 = 1e-9;

/// Steps of a scan where the margin rises or falls throughout.
const COARSE: usize = 32;
/// Steps of a scan where it may turn.
const FINE: usize = 128;
/// From this ratio of the ends of a bracket on it is scanned in equal ratios (own judgement).
const WIDE: f64 = 20.0;

/// An interval of the field, ends included, in its unit.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Interval {
    /// Lower end.
    pub low: f64,
    /// Upper end.
    pub high: f64,
}

/// One case at one value.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Look {
    /// How far on the clean side, in standard uncertainties or ln We, whichever is nearer: at least 0 where clean; −∞ where impossible.
    pub slack: f64,
    /// The verdict; none where the case is impossible.
    pub verdict: Option<Verdict>,
    /// Weber number over critical Weber number.
    pub safety_factor: f64,
    /// Degree of belief that it dribbles.
    pub dribble_probability: f64,
    /// Code of the first fault, where the case is impossible.
    pub fault: Option<&'static str>,
}

impl Look {
    const fn impossible(fault: &'static str) -> Self {
        Self {
            slack: f64::NEG_INFINITY,
            verdict: None,
            safety_factor: f64::NAN,
            dribble_probability: f64::NAN,
            fault: Some(fault),
        }
    }
}

/// Decides the case with the field at `x`.
pub(super) fn look(case: &Spec, field: Field, x: f64) -> Look {
    let mut spec = *case;
    field.set(&mut spec, x);
    let resolved = match spec.resolve() {
        Ok(resolved) => resolved,
        Err(faults) => return Look::impossible(faults.first().map_or("invalid", |fault| fault.code)),
    };
    let Ok(d) = decide(&resolved.case) else { return Look::impossible("not_computable") };
    let wanted = normal_quantile(resolved.case.confidence.level);
    let free = libm::log(d.balance.numbers.weber / FREE_SHEET_WEBER);
    Look {
        slack: (d.margin / d.standard_uncertainty - wanted).min(free),
        verdict: Some(d.verdict),
        safety_factor: d.safety_factor(),
        dribble_probability: d.dribble_probability,
        fault: None,
    }
}

/// Whether the margin itself rises or falls throughout with this field (its doubt may still turn).
const fn margin_is_monotone(field: Field) -> bool {
    matches!(
        field,
        Field::EdgeRadius
            | Field::Turn
            | Field::MeasuredContact
            | Field::MeasuredAdvancing
            | Field::MeasuredReceding
            | Field::SheetWidth
            | Field::SurfaceTensionOverride
            | Field::MeasuredSurfaceTension
            | Field::Flow
    )
}

/// Where to look first.
#[derive(Debug, Clone, Copy)]
pub(super) struct Scan {
    low: f64,
    high: f64,
    steps: usize,
    geometric: bool,
}

impl Scan {
    pub(super) fn new(field: Field, low: f64, high: f64) -> Self {
        let steps = if margin_is_monotone(field) { COARSE } else { FINE };
        Self { low, high, steps, geometric: low > 0.0 && high / low > WIDE }
    }

    pub(super) fn points(&self) -> Vec<f64> {
        let Self { low, high, steps, geometric } = *self;
        let at = |i: usize| match (i, i as f64 / steps as f64) {
            (0, _) => low,
            (i, _) if i == steps => high,
            (_, share) if geometric => low * libm::pow(high / low, share),
            (_, share) => low + (high - low) * share,
        };
        (0..=steps).map(at).collect()
    }
}

/// Where a case is clean.
#[derive(Debug, Clone)]
pub(super) struct Found {
    pub(super) intervals: Vec<Interval>,
    /// The greatest slack seen.
    pub(super) best: f64,
    /// Slack at the ends of the bracket.
    pub(super) at_ends: (f64, f64),
}

/// Every interval of the bracket in which the case is clean.
pub(super) fn clean_intervals(
    case: &Spec,
    field: Field,
    scan: &Scan,
    cancelled: &AtomicBool,
) -> Result<Found, Cancelled> {
    if cancelled.load(Ordering::Relaxed) {
        return Err(Cancelled);
    }
    let slack = |x: f64| look(case, field, x).slack;
    let is_clean = |x: f64| look(case, field, x).verdict == Some(Verdict::Clean);
    let mut points: Vec<(f64, f64)> = scan.points().into_iter().map(|x| (x, slack(x))).collect();
    let at_ends = (points.first().map_or(f64::NAN, |p| p.1), points.last().map_or(f64::NAN, |p| p.1));
    if cancelled.load(Ordering::Relaxed) {
        return Err(Cancelled);
    }
    // A clean window, or a gap in one, may hide between two steps where the slack turns.
    let hidden: Vec<(f64, f64)> = points
        .windows(3)
        .filter_map(|three| {
            let [a, b, c] = three else { return None };
            let turned = if b.1 < 0.0 && b.1 >= a.1 && b.1 >= c.1 {
                highest(slack, a.0, c.0)
            } else if b.1 >= 0.0 && b.1 <= a.1 && b.1 <= c.1 {
                highest(|x| -slack(x), a.0, c.0)
            } else {
                return None;
            };
            Some((turned, slack(turned)))
        })
        .collect();
    points.extend(hidden);
    points.sort_by(|a, b| a.0.total_cmp(&b.0));
    points.dedup_by(|a, b| a.0 == b.0);
    let best = points.iter().fold(f64::NEG_INFINITY, |best, point| best.max(point.1));
    let mut intervals = Vec::new();
    let mut open: Option<f64> = None;
    let mut before: Option<f64> = None;
    for (x, slack) in points {
        // Only near zero can rounding make slack and verdict differ.
        let clean = if slack.abs() > 1e-6 { slack > 0.0 } else { is_clean(x) };
        match (open, clean, before) {
            (None, true, None) => open = Some(x),
            (None, true, Some(last)) => open = Some(last_clean(is_clean, x, last, scan)),
            (Some(low), false, Some(last)) => {
                intervals.push(Interval { low, high: last_clean(is_clean, last, x, scan) });
                open = None;
            }
            _ => {}
        }
        before = Some(x);
    }
    if let (Some(low), Some(high)) = (open, before) {
        intervals.push(Interval { low, high });
    }
    Ok(Found { intervals, best, at_ends })
}

/// The last clean value on the way from a clean one to one that is not, by halving.
fn last_clean(is_clean: impl Fn(f64) -> bool, mut clean: f64, mut dirty: f64, scan: &Scan) -> f64 {
    for _ in 0..60 {
        let middle = 0.5 * (clean + dirty);
        let width = TOLERANCE * middle.abs().max(0.01 * (scan.high - scan.low));
        if (clean - dirty).abs() <= width {
            break;
        }
        *(if is_clean(middle) { &mut clean } else { &mut dirty }) = middle;
    }
    clean
}

/// Where `f` is highest between `a` and `b`, if it has one top there, by the golden section; good to about 1e-6 of the span.
pub(super) fn highest(f: impl Fn(f64) -> f64, mut a: f64, mut b: f64) -> f64 {
    const GOLDEN: f64 = 0.618_033_988_749_894_8;
    let (mut left, mut right) = (b - GOLDEN * (b - a), a + GOLDEN * (b - a));
    let (mut at_left, mut at_right) = (f(left), f(right));
    for _ in 0..30 {
        if at_left >= at_right {
            (b, right, at_right) = (right, left, at_left);
            left = b - GOLDEN * (b - a);
            at_left = f(left);
        } else {
            (a, left, at_left) = (left, right, at_right);
            right = a + GOLDEN * (b - a);
            at_right = f(right);
        }
    }
    if at_left >= at_right { left } else { right }
}

/// What is in both lists of intervals, each in rising order.
pub(super) fn intersection(a: &[Interval], b: &[Interval]) -> Vec<Interval> {
    let (mut i, mut j) = (0, 0);
    let mut both = Vec::new();
    while let (Some(x), Some(y)) = (a.get(i), b.get(j)) {
        let (low, high) = (x.low.max(y.low), x.high.min(y.high));
        if low <= high {
            both.push(Interval { low, high });
        }
        if x.high < y.high { i += 1 } else { j += 1 }
    }
    both
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn intervals_intersect() {
        let list = |ends: &[[f64; 2]]| -> Vec<Interval> {
            ends.iter().map(|[low, high]| Interval { low: *low, high: *high }).collect()
        };
        let a = list(&[[0.0, 2.0], [3.0, 5.0], [6.0, 7.0]]);
        let b = list(&[[1.0, 3.5], [4.0, 6.5]]);
        assert_eq!(intersection(&a, &b), list(&[[1.0, 2.0], [3.0, 3.5], [4.0, 5.0], [6.0, 6.5]]));
        assert!(intersection(&a, &[]).is_empty());
    }

    #[test]
    fn the_top_is_found() {
        assert!((highest(|x| -(x - 0.3) * (x - 0.3), 0.0, 1.0) - 0.3).abs() < 1e-6);
    }
}
