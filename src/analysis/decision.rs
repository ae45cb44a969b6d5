//! The one function that decides a case.

use super::{
    balance::{Approach, Balance, StreamSlopes, approach, place, prepare, slopes, threshold},
    calibration::Calibration,
    case::{Case, Input, Primary, Shift, Slopes, Source},
    doubt::{Doubt, EdgeDoubt, StreamDoubt},
};
use crate::physics::{
    numerics::normal_cdf,
    separation::{
        closed_form::{CoefficientSet, Edge, FilmTerms, Reach, RimTerms, Threshold},
        numbers::FREE_SHEET_WEBER,
    },
    stream::{Stream, StreamFault},
};

/// The verdict.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Verdict {
    /// The stream leaves, at the confidence asked for.
    Clean,
    /// Neither can be said at the confidence asked for.
    Marginal,
    /// The liquid runs down the outside, at the confidence asked for.
    Dribbles,
}

impl Verdict {
    /// The verdict of this word.
    #[must_use]
    pub fn named(word: &str) -> Option<Self> {
        [Self::Clean, Self::Marginal, Self::Dribbles].into_iter().find(|verdict| verdict.as_str() == word)
    }

    /// The word used in answers.
    #[must_use]
    pub const fn as_str(self) -> &'static str {
        match self {
            Self::Clean => "clean",
            Self::Marginal => "marginal",
            Self::Dribbles => "dribbles",
        }
    }
}

/// What is decided of one case.
#[derive(Debug, Clone, Copy)]
pub struct Decision {
    /// The verdict.
    pub verdict: Verdict,
    /// p = Φ(−m/u): the degree of belief that this lip dribbles at this pour rate.
    pub dribble_probability: f64,
    /// m = ln(safety factor).
    pub margin: f64,
    /// u, standard uncertainty of m.
    pub standard_uncertainty: f64,
    /// Stream, numbers and threshold.
    pub balance: Balance,
    /// Where the separation model is used outside its range, and its own doubt.
    pub reach: Reach,
    /// Slopes of m in the primary inputs.
    pub slopes: Slopes,
}

impl Decision {
    /// Weber number over critical Weber number.
    #[must_use]
    pub fn safety_factor(&self) -> f64 {
        self.balance.numbers.weber / self.balance.threshold.critical_weber
    }

    /// The two-sided interval of the safety factor at the case's confidence.
    #[must_use]
    pub fn safety_interval(&self, case: &Case) -> (f64, f64) {
        let half = case.confidence.two_sided * self.standard_uncertainty;
        (libm::exp(self.margin - half), libm::exp(self.margin + half))
    }

    /// Whether a free sheet can leave at all.
    #[must_use]
    pub fn free_sheet(&self) -> bool {
        self.balance.numbers.weber >= FREE_SHEET_WEBER
    }

    /// Variance of m by source: the question's inputs, the stream model (in two parts), the separation model.
    pub fn variances<'a>(&'a self, case: &'a Case) -> impl Iterator<Item = (Source, f64)> + 'a {
        let square = |x: f64| x * x;
        case.inputs
            .iter()
            .copied()
            .chain(stream_inputs(&self.balance.stream))
            .map(move |input| (input.source, square(self.slopes.effect(&input.shift))))
            .chain([(Source::Model, square(self.reach.standard_uncertainty))])
    }
}

/// Standard uncertainty of ln thickness at a given pour rate. The rating of heads below 10 mm is good to ± 20 % on Q(h) (own judgement), which is
/// ± 13 % on h, read as two standard uncertainties; most lips pour below that head, so it is used throughout.
pub const STREAM_UNCERTAINTY: f64 = 0.065;

/// The uncertain inputs that come from the stream model rather than from the question.
#[must_use]
pub fn stream_inputs(stream: &Stream) -> [Input; 2] {
    // low..high of the equivalent sheet are read as ± 2 standard uncertainties.
    let equivalence = libm::log(stream.thickness_high / stream.thickness_low) / 4.0;
    [
        Input { source: Source::Stream, shift: Shift::One(Primary::Thickness, STREAM_UNCERTAINTY) },
        Input { source: Source::Stream, shift: Shift::One(Primary::Equivalence, equivalence) },
    ]
}

/// What follows once stream and edge are known.
#[derive(Debug, Clone, Copy)]
pub struct Judgement {
    /// Critical Weber number and slopes.
    pub threshold: Threshold,
    /// Where the separation model is used outside its range, and its own doubt.
    pub reach: Reach,
    /// m = ln(safety factor).
    pub margin: f64,
    /// u, standard uncertainty of m.
    pub standard_uncertainty: f64,
    /// p = Φ(−m/u).
    pub dribble_probability: f64,
    /// The verdict.
    pub verdict: Verdict,
}

/// What a judgement looks at of a stream.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Approaching {
    /// Its share of the closed form.
    pub terms: FilmTerms,
    /// ln We.
    pub ln_weber: f64,
    /// We.
    pub weber: f64,
}

impl From<&Approach> for Approaching {
    #[inline(always)]
    fn from(approach: &Approach) -> Self {
        Self { terms: approach.terms, ln_weber: approach.ln_weber, weber: approach.numbers.weber }
    }
}

/// Judges a stream at an edge: the last step of every decision, single or one of many.
#[inline(always)]
#[must_use]
pub fn judge(
    set: &CoefficientSet,
    calibration: Option<&Calibration>,
    confidence: f64,
    approach: &Approaching,
    (edge, rim): (&Edge, &RimTerms),
    (doubt, edge_doubt, stream_doubt): (&Doubt, EdgeDoubt, &StreamDoubt),
) -> Judgement {
    let threshold = threshold(set, calibration, &approach.terms, (edge, rim));
    let mut reach = edge.reach_for(set, &approach.terms, rim);
    if let Some(calibration) = calibration {
        let place = place(&approach.terms, (edge, rim));
        reach.standard_uncertainty =
            calibration.standard_uncertainty(reach.standard_uncertainty, set, &place);
    }
    let margin = approach.ln_weber - threshold.ln_critical_weber;
    let own = reach.standard_uncertainty * reach.standard_uncertainty;
    let standard_uncertainty = (doubt.variance(&threshold, edge_doubt, stream_doubt) + own).sqrt();
    let dribble_probability = normal_cdf(-margin / standard_uncertainty);
    let free_sheet = approach.weber >= FREE_SHEET_WEBER;
    let verdict = verdict(dribble_probability, confidence, free_sheet);
    Judgement { threshold, reach, margin, standard_uncertainty, dribble_probability, verdict }
}

/// Decides one case. No allocation; every other answer stands on this function, or on its twin for many cases at once
/// ([`super::sweep`]), which shares [`judge`] with it.
///
/// # Errors
/// When the stream at the lip cannot be computed.
pub fn decide(case: &Case) -> Result<Decision, StreamFault> {
    let edge = prepare(case, case.contact_angle);
    let approach = approach(case, case.flow)?;
    let stream_slopes = StreamSlopes::of(&case.lip, &case.liquid, &approach.stream, case.flow)?;
    let radius = case.lip.edge.radius;
    let (mut doubt, mut edge_doubt) = (Doubt::default(), EdgeDoubt::default());
    let mut stream_doubt = StreamDoubt::new(&stream_slopes);
    for input in case.inputs.iter().chain(&stream_inputs(&approach.stream)) {
        doubt.add(&input.shift);
        edge_doubt.add(&input.shift, radius);
        stream_doubt.add(&input.shift, &stream_slopes);
    }
    let judged = judge(
        case.coefficients,
        case.calibration.as_ref(),
        case.confidence.level,
        &Approaching::from(&approach),
        (&edge.edge, &edge.rim),
        (&doubt, edge_doubt, &stream_doubt),
    );
    Ok(Decision {
        verdict: judged.verdict,
        dribble_probability: judged.dribble_probability,
        margin: judged.margin,
        standard_uncertainty: judged.standard_uncertainty,
        balance: Balance {
            stream: approach.stream,
            numbers: approach.numbers_at(&case.liquid, radius),
            threshold: judged.threshold,
            ln_safety_factor: judged.margin,
        },
        reach: judged.reach,
        slopes: slopes(&judged.threshold, &stream_slopes, radius),
    })
}

#[inline(always)]
pub(super) fn verdict(probability: f64, confidence: f64, free_sheet: bool) -> Verdict {
    if probability >= confidence {
        Verdict::Dribbles
    } else if probability <= 1.0 - confidence && free_sheet {
        Verdict::Clean
    } else {
        Verdict::Marginal
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn verdict_rule() {
        assert_eq!(verdict(0.05, 0.95, true), Verdict::Clean);
        assert_eq!(verdict(0.051, 0.95, true), Verdict::Marginal);
        assert_eq!(verdict(0.95, 0.95, true), Verdict::Dribbles);
        assert_eq!(verdict(0.001, 0.95, false), Verdict::Marginal);
        assert_eq!(verdict(0.99, 0.95, false), Verdict::Dribbles);
    }
}
