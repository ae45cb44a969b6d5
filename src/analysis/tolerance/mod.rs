//! Tolerances: from the spreads of the inputs to the share of pours that dribble, and what drives it.
//!
//! Monte Carlo after JCGM 101:2008. Inputs are independent. Those not drawn stay as they are; their uncertainty and the
//! model's are common to all trials and make a band of their own, apart from the sampling error.

mod drivers;
mod lanes;
mod linear;
mod rate;
mod spread;
mod summary;
mod trial;
mod trials;

pub use drivers::{INDEX_POINTS, MOST_INPUTS};
pub use linear::Linear;
pub use rate::{Interval, Rate};
pub use spread::Spread;
pub use summary::{Histogram, QUANTILES, Summary};

use self::{spread::Drawn, trial::Trial, trials::Trials};
use super::{
    decision::decide,
    evaluation::stream_fault,
    fault::Fault,
    field::Field,
    notice::Notice,
    spec::Spec,
    statistics::{StatisticsFault, indices::Index},
    warnings::warnings,
    watch::{Cancelled, Watch},
};

/// A field that is drawn.
#[derive(Debug, Clone, PartialEq)]
pub struct Varying {
    /// Which field.
    pub field: Field,
    /// How it spreads, in the field's unit.
    pub spread: Spread,
}

/// A study of tolerances.
#[derive(Debug, Clone)]
pub struct Study {
    /// The question, with the fields that are not drawn.
    pub base: Spec,
    /// What is drawn: each field once, each a field of the question.
    pub varying: Vec<Varying>,
    /// How many trials, at least 1.
    pub trials: u64,
    /// Seed of the random numbers.
    pub seed: u64,
}

/// What a study finds.
#[derive(Debug, Clone)]
pub struct Outcome {
    /// Share of trials that dribble, with its sampling error.
    pub rate: Rate,
    /// The share at either end of the doubt that is common to all trials.
    pub rate_with_model_doubt: (f64, f64),
    /// Standard uncertainty of the margin from what was not drawn, and from the models.
    pub model_doubt: f64,
    /// The margin, ln(safety factor), over the trials.
    pub margin: Summary,
    /// Linear propagation of the spreads, as a check.
    pub linear: Linear,
    /// Which input drives the variance of the margin; `None` when the margin does not vary.
    pub drivers: Option<Vec<Index>>,
    /// Trials that were counted.
    pub counted: u64,
    /// Trials that made no case and were left out.
    pub left_out: u64,
    /// Where the numbers deserve less trust.
    pub warnings: Vec<Notice>,
}

/// Why there is no outcome.
#[derive(Debug, Clone, PartialEq)]
pub enum Failure {
    /// Faults of the spreads, with pointers into the request for tolerances.
    Varying(Vec<Fault>),
    /// Faults of the question, with pointers into it.
    Base(Vec<Fault>),
    /// A statistic that could not be computed: a fault of the service.
    Statistics(StatisticsFault),
    /// Nobody wants the result any more.
    Cancelled,
}

impl From<Cancelled> for Failure {
    fn from(_: Cancelled) -> Self {
        Self::Cancelled
    }
}

impl From<StatisticsFault> for Failure {
    fn from(fault: StatisticsFault) -> Self {
        Self::Statistics(fault)
    }
}

/// The largest share of a spread that may lie outside its field's range, and of trials that may make no case. Above it
/// the request is refused; up to it the spread is cut there, those trials are left out, and the answer says how often.
pub const MOST_OUTSIDE: f64 = 0.01;

impl Varying {
    /// The fault of the spread against the range of its field; `place` among what varies.
    #[must_use]
    pub fn fault(&self, place: usize) -> Option<Fault> {
        let quantity = self.field.quantity();
        let share = self.spread.outside(&quantity);
        let fits = share <= MOST_OUTSIDE;
        (!fits).then(|| {
            let detail = format!(
                "{} of this spread lies outside what the {} may be ({} to {} {}); at most 1 % may",
                percent(share),
                quantity.name,
                quantity.minimum,
                quantity.maximum,
                quantity.unit
            );
            let fault = Fault::new(format!("/varying/{place}/spread"), "outside_range", detail);
            fault.within(quantity.minimum, quantity.maximum)
        })
    }
}

impl Study {
    /// The faults of the spreads against the ranges of their fields.
    #[must_use]
    pub fn faults(&self) -> Vec<Fault> {
        self.varying.iter().enumerate().filter_map(|(i, varying)| varying.fault(i)).collect()
    }

    /// How much work a study is, in trials: what progress is counted in.
    #[must_use]
    pub fn work(&self) -> usize {
        self.trials as usize + INDEX_POINTS as usize * (self.varying.len() + 2)
    }

    /// Runs the study.
    ///
    /// # Errors
    /// Every fault of the spreads and of the question; too many trials that make no case; cancelled.
    pub fn run(&self, watch: Watch<'_>) -> Result<Outcome, Failure> {
        let faults = self.faults();
        if !faults.is_empty() {
            return Err(Failure::Varying(faults));
        }
        let fields: Vec<Field> = self.varying.iter().map(|v| v.field).collect();
        // More than 1 % within the range has been seen to by the faults above.
        let drawn: Vec<Drawn> =
            self.varying.iter().filter_map(|v| Drawn::new(&v.spread, &v.field.quantity())).collect();
        let start = Trial::new(&self.means(&drawn), &fields).map_err(Failure::Base)?;
        let trials = Trials::run(&start, &drawn, self.trials, self.seed, watch)?;
        trials.refuse_when_too_few(&start)?;
        let (decided, model_doubt) = self.at_means(&drawn)?;
        let rate = rate::Rates::of(&trials, &start, &drawn, self.seed, self.base.confidence, watch)?;
        let band = decided.case.confidence.two_sided * model_doubt;
        let margin = Summary::of(&trials.margins);
        let linear = Linear::at_means(&mut start.clone(), &drawn);
        let drivers = drivers::drivers(&start, &drawn, self.seed, watch)?;
        let mut outcome = Outcome {
            rate_with_model_doubt: (rate.below(-band), rate.below(band)),
            rate: rate.main,
            model_doubt,
            margin,
            linear,
            drivers,
            counted: trials.margins.len() as u64,
            left_out: trials.left_out,
            warnings: decided.warnings,
        };
        self.warn(&mut outcome, rate.disagree);
        Ok(outcome)
    }

    /// The question at the means of what is drawn.
    fn means(&self, drawn: &[Drawn]) -> Spec {
        let mut spec = self.base;
        for (varying, drawn) in self.varying.iter().zip(drawn) {
            varying.field.set(&mut spec, drawn.spread().mean());
        }
        spec
    }

    /// The question at the means of what is drawn, decided; and the uncertainty of the margin from everything else.
    fn at_means(&self, drawn: &[Drawn]) -> Result<(Decided, f64), Failure> {
        let mut spec = self.means(drawn);
        let resolved = spec.resolve().map_err(Failure::Base)?;
        let decision = decide(&resolved.case).map_err(|fault| Failure::Base(stream_fault(fault)))?;
        let warnings = warnings(&spec, &resolved, &decision);
        // What is drawn has no doubt beside its spread.
        for varying in &self.varying {
            spec.uncertainty.set(varying.field, 0.0);
        }
        let case = spec.resolve().map_err(Failure::Base)?.case;
        let doubt = decide(&case).map_err(|fault| Failure::Base(stream_fault(fault)))?.standard_uncertainty;
        Ok((Decided { case, warnings }, doubt))
    }

    fn warn(&self, outcome: &mut Outcome, disagree: bool) {
        let warnings = &mut outcome.warnings;
        for varying in &self.varying {
            let quantity = varying.field.quantity();
            let share = varying.spread.outside(&quantity);
            if share > SMALLEST_TOLD {
                let detail = format!(
                    "{} of the spread lies outside {} to {} {}; it is cut there",
                    percent(share),
                    quantity.minimum,
                    quantity.maximum,
                    quantity.unit
                );
                warnings.push(Notice::at("spread_cut", varying.field.pointer(), detail));
            }
        }
        if outcome.left_out > 0 {
            let detail =
                format!("{} of {} trials made no case and were left out", outcome.left_out, self.trials);
            warnings.push(Notice::new("trials_left_out", detail));
        }
        let (linear, sampled) = (outcome.linear.standard_uncertainty, outcome.margin.standard_deviation);
        if let Some(linear) = linear
            && (linear - sampled).abs() > 0.1 * sampled.max(1e-12)
        {
            let detail = format!(
                "linear propagation gives a standard uncertainty of {linear:.3}, the trials {sampled:.3}: the margin is not linear over these spreads; trust the trials"
            );
            warnings.push(Notice::new("not_linear", detail));
        }
        if disagree {
            warnings.push(Notice::new(
                "importance_sampling_disagrees",
                "importance sampling and plain counting do not agree, so a branch of the failures was missed; the plain count is given",
            ));
        }
    }
}

/// A question decided at the means.
struct Decided {
    case: super::case::Case,
    warnings: Vec<Notice>,
}

/// Shares outside the range that are not worth a word.
const SMALLEST_TOLD: f64 = 1e-9;

fn percent(share: f64) -> String {
    let percent = 100.0 * share;
    if percent >= 0.1 { format!("{percent:.1} %") } else { format!("{percent:.1e} %") }
}
