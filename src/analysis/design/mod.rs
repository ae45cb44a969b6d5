//! Designs: between which values of one field a whole list of cases stays clean, and which case governs.

mod search;

use std::sync::atomic::{AtomicBool, Ordering};

use rayon::prelude::*;

pub use search::{Interval, Look};

use self::search::{Scan, clean_intervals, intersection, look};
use super::{decision::Verdict, field::Field, remedy::round_towards, spec::Spec, sweep::Cancelled};

/// What is asked: one field, the bracket it may move in (in its unit, `between[0] < between[1]`), and the cases, each a whole question whose
/// confidence says what counts as clean. The field must be one that every case has.
#[derive(Debug, Clone, Copy)]
pub struct Design<'a> {
    /// The field.
    pub field: Field,
    /// The bracket.
    pub between: [f64; 2],
    /// The cases.
    pub cases: &'a [Spec],
}

/// Which side of the limit is clean.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Sense {
    /// Clean up to the limit.
    AtMost,
    /// Clean from the limit on.
    AtLeast,
}

/// The limit of the field.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Limit {
    /// The last value at which every case is clean, rounded to six digits towards the clean side and verified there.
    pub value: f64,
    /// Which side of it is clean.
    pub sense: Sense,
    /// Where the clean interval ends on the other side, if within the bracket.
    pub other_end: Option<f64>,
    /// A value just beyond the limit at which the governing case is verified not to be clean; none where the bracket ends first.
    pub not_clean_at: Option<f64>,
    /// The case that is the first not to be clean beyond the limit; none where the bracket ends first.
    pub governing: Option<usize>,
}

/// What is said of one case.
#[derive(Debug, Clone, PartialEq)]
pub struct CaseOutcome {
    /// Where it is clean.
    pub intervals: Vec<Interval>,
    /// Its own limit, of the sense of the common one; none where it is clean nowhere.
    pub limit: Option<f64>,
    /// The case at the common limit, else at the nearest miss.
    pub at_limit: Look,
}

/// The value that comes nearest to clean for all, where there is none that reaches it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct NearMiss {
    /// The value.
    pub value: f64,
    /// The case that is worst there.
    pub worst: usize,
    /// What is said of it there.
    pub look: Look,
}

/// The answer.
#[derive(Debug, Clone, PartialEq)]
pub struct Outcome {
    /// Every interval in which all cases are clean.
    pub intervals: Vec<Interval>,
    /// The limit; none where no value in the bracket is clean for all.
    pub limit: Option<Limit>,
    /// The cases, in their order.
    pub cases: Vec<CaseOutcome>,
    /// The case in the way, where there is no limit: of those that are clean nowhere the one furthest from it, else the worst at the nearest miss.
    pub blocking: Option<usize>,
    /// The nearest miss, where there is no limit; none where no case can be computed anywhere in the bracket.
    pub nearest: Option<NearMiss>,
}

/// Finds the limit.
///
/// The margin rises or falls throughout with radius, turn and contact angle, but its doubt does not, so no field is taken on trust: every one is scanned
/// first (closely where even the margin may turn), turning points between the steps are looked for, and each change of sides is then bracketed.
/// Limits are verified by deciding the cases anew on both sides. `done` is called for each case that is through.
///
/// # Errors
/// [`Cancelled`] once the flag is set.
pub fn design(
    question: &Design<'_>,
    cancelled: &AtomicBool,
    done: &(impl Fn() + Sync),
) -> Result<Outcome, Cancelled> {
    let Design { field, between: [low, high], cases } = *question;
    let scan = Scan::new(field, low, high);
    let found = cases
        .par_iter()
        .map(|case| {
            let found = clean_intervals(case, field, &scan, cancelled)?;
            done();
            Ok(found)
        })
        .collect::<Result<Vec<_>, Cancelled>>()?;
    let mut intervals = vec![Interval { low, high }];
    for case in &found {
        intervals = intersection(&intervals, &case.intervals);
    }
    let own = cases.first().and_then(|case| field.get(case));
    let chosen = choose(&intervals, own);
    let limit = chosen.map(|interval| limit(question, interval, found_slacks(&found)));
    let nearest = match limit {
        Some(_) => None,
        None => nearest_miss(question, &scan, cancelled)?,
    };
    let blocking = match limit {
        Some(_) => None,
        None => found
            .iter()
            .enumerate()
            .filter(|(_, case)| case.intervals.is_empty())
            .min_by(|a, b| a.1.best.total_cmp(&b.1.best))
            .map(|(index, _)| index)
            .or(nearest.map(|miss| miss.worst)),
    };
    let at = limit.map(|limit| limit.value).or(nearest.map(|miss| miss.value)).unwrap_or(low);
    let sense = limit.map_or(Sense::AtMost, |limit| limit.sense);
    let outcomes = cases
        .iter()
        .zip(found)
        .map(|(case, found)| {
            let mine = chosen
                .and_then(|c| found.intervals.iter().copied().find(|i| i.low <= c.low && c.high <= i.high))
                .or_else(|| choose(&found.intervals, own));
            let limit = mine.map(|interval| match sense {
                Sense::AtMost => interval.high,
                Sense::AtLeast => interval.low,
            });
            CaseOutcome { intervals: found.intervals, limit, at_limit: look(case, field, at) }
        })
        .collect();
    Ok(Outcome { intervals, limit, cases: outcomes, blocking, nearest })
}

/// Slacks of the worst case at the ends of the bracket: which way the field helps.
fn found_slacks(found: &[search::Found]) -> (f64, f64) {
    found.iter().fold((f64::INFINITY, f64::INFINITY), |(low, high), case| {
        (low.min(case.at_ends.0), high.min(case.at_ends.1))
    })
}

/// The interval that holds the field's present value, else the widest.
fn choose(intervals: &[Interval], own: Option<f64>) -> Option<Interval> {
    let holding = intervals.iter().find(|i| own.is_some_and(|own| i.low <= own && own <= i.high));
    let widest = intervals.iter().max_by(|a, b| (a.high - a.low).total_cmp(&(b.high - b.low)));
    holding.or(widest).copied()
}

fn limit(question: &Design<'_>, interval: Interval, at_ends: (f64, f64)) -> Limit {
    let [low, high] = question.between;
    let (from_low, to_high) = (interval.low <= low, interval.high >= high);
    let sense = match (from_low, to_high) {
        (false, true) => Sense::AtLeast,
        (true, true) if at_ends.0 < at_ends.1 => Sense::AtLeast,
        _ => Sense::AtMost,
    };
    let (value, bracket_end, other, inside) = match sense {
        Sense::AtMost => (interval.high, to_high, (!from_low).then_some(interval.low), interval.low),
        Sense::AtLeast => (interval.low, from_low, (!to_high).then_some(interval.high), interval.high),
    };
    if bracket_end {
        return Limit { value, sense, other_end: other, not_clean_at: None, governing: None };
    }
    let all_clean = |x: f64| first_not_clean(question, x).is_none();
    let rounded = round_towards(value, inside, DIGITS);
    let is_inside = (rounded - value) * (rounded - inside) <= 0.0;
    let value = if is_inside && all_clean(rounded) { rounded } else { value };
    // Ever further beyond, until a case is not clean: the first step is the rounding of the search.
    let outward = if sense == Sense::AtMost { 1.0 } else { -1.0 };
    let beyond = (0..40).find_map(|doubling: i32| {
        let step = search::TOLERANCE * value.abs().max(high - low) * libm::ldexp(2.0, doubling);
        let x = (value + outward * step).clamp(low, high);
        first_not_clean(question, x).map(|case| (x, case))
    });
    Limit {
        value,
        sense,
        other_end: other,
        not_clean_at: beyond.map(|(x, _)| x),
        governing: beyond.map(|(_, case)| case),
    }
}

/// Digits of a limit.
const DIGITS: i32 = 6;

/// The case that is worst at this value, if it is not clean.
fn first_not_clean(question: &Design<'_>, x: f64) -> Option<usize> {
    question
        .cases
        .iter()
        .map(|case| look(case, question.field, x))
        .enumerate()
        .filter(|(_, look)| look.verdict != Some(Verdict::Clean))
        .min_by(|a, b| a.1.slack.total_cmp(&b.1.slack))
        .map(|(index, _)| index)
}

/// The value at which the worst case is best.
fn nearest_miss(
    question: &Design<'_>,
    scan: &Scan,
    cancelled: &AtomicBool,
) -> Result<Option<NearMiss>, Cancelled> {
    let Design { field, cases, .. } = *question;
    let worst = |x: f64| {
        let looks = cases.iter().map(|case| look(case, field, x)).enumerate();
        looks.min_by(|a, b| a.1.slack.total_cmp(&b.1.slack))
    };
    let slack = |x: f64| worst(x).map_or(f64::NEG_INFINITY, |(_, look)| look.slack);
    let points = scan
        .points()
        .into_par_iter()
        .map(|x| if cancelled.load(Ordering::Relaxed) { Err(Cancelled) } else { Ok((x, slack(x))) })
        .collect::<Result<Vec<_>, Cancelled>>()?;
    let Some(best) = (0..points.len()).max_by(|a, b| points[*a].1.total_cmp(&points[*b].1)) else {
        return Ok(None);
    };
    if !points[best].1.is_finite() {
        return Ok(None);
    }
    let (before, after) = (best.saturating_sub(1), (best + 1).min(points.len() - 1));
    let refined = search::highest(slack, points[before].0, points[after].0);
    let value = if slack(refined) > points[best].1 { refined } else { points[best].0 };
    Ok(worst(value).map(|(worst, look)| NearMiss { value, worst, look }))
}
