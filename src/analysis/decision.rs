//! The one function that decides a case.

use super::{
    balance::{Balance, balance, prepare},
    calibration::Place,
    case::{Case, Input, Primary, Shift, Slopes, Source},
};
use crate::physics::{
    numerics::normal_cdf,
    separation::{closed_form::Reach, numbers::FREE_SHEET_WEBER},
    stream::StreamFault,
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
        libm::exp(self.margin)
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

    /// The uncertain inputs that come from the models rather than from the question.
    fn model_inputs(&self) -> [Input; 2] {
        let stream = &self.balance.stream;
        // low..high of the equivalent sheet are read as ± 2 standard uncertainties.
        let equivalence = libm::log(stream.thickness_high / stream.thickness_low) / 4.0;
        [
            Input { source: Source::Stream, shift: Shift::One(Primary::Thickness, STREAM_UNCERTAINTY) },
            Input { source: Source::Stream, shift: Shift::One(Primary::Equivalence, equivalence) },
        ]
    }

    /// Variance of m by source: the question's inputs, the stream model (in two parts), the separation model.
    pub fn variances<'a>(&'a self, case: &'a Case) -> impl Iterator<Item = (Source, f64)> + 'a {
        let square = |x: f64| x * x;
        case.inputs
            .iter()
            .copied()
            .chain(self.model_inputs())
            .map(move |input| (input.source, square(self.slopes.effect(&input.shift))))
            .chain([(Source::Model, square(self.reach.standard_uncertainty))])
    }
}

/// Standard uncertainty of ln thickness at a given pour rate. The rating of heads below 10 mm is good to ± 20 % on Q(h) (own judgement), which is
/// ± 13 % on h, read as two standard uncertainties; most lips pour below that head, so it is used throughout.
pub const STREAM_UNCERTAINTY: f64 = 0.065;

/// Decides one case. No allocation; every other answer stands on this function.
///
/// # Errors
/// When the stream at the lip cannot be computed.
pub fn decide(case: &Case) -> Result<Decision, StreamFault> {
    let edge = prepare(case, case.contact_angle);
    let balance = balance(case, &edge, case.flow)?;
    let slopes = balance.slopes(case, case.flow)?;
    let mut reach = edge.reach(case.coefficients, &balance.numbers);
    if let Some(calibration) = &case.calibration {
        let place = Place::of(&balance.numbers, case.contact_angle, case.lip.edge.turn);
        reach.standard_uncertainty =
            calibration.standard_uncertainty(reach.standard_uncertainty, case.coefficients, &place);
    }
    let mut decision = Decision {
        verdict: Verdict::Marginal,
        dribble_probability: 0.5,
        margin: balance.ln_safety_factor,
        standard_uncertainty: 0.0,
        balance,
        reach,
        slopes,
    };
    decision.standard_uncertainty =
        decision.variances(case).map(|(_, variance)| variance).sum::<f64>().sqrt();
    decision.dribble_probability = normal_cdf(-decision.margin / decision.standard_uncertainty);
    decision.verdict = verdict(decision.dribble_probability, case.confidence.level, decision.free_sheet());
    Ok(decision)
}

fn verdict(probability: f64, confidence: f64, free_sheet: bool) -> Verdict {
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
