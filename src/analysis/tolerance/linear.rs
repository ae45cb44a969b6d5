//! Linear propagation of the spreads (JCGM 100:2008, equation 10): a check of the standard uncertainty, no guide to rare
//! events.

use super::{spread::Drawn, trial::Trial};

/// What linear propagation gives.
#[derive(Debug, Clone, PartialEq)]
pub struct Linear {
    /// √Σ(cᵢ sdᵢ)²; `None` where a slope could not be had.
    pub standard_uncertainty: Option<f64>,
    /// cᵢ, slope of the margin per unit of the field, at the means; `None` where the neighbourhood makes no case.
    pub sensitivities: Vec<Option<f64>>,
}

/// Step of the differences, in standard deviations.
const STEP: f64 = 0.01;

impl Linear {
    /// At the means of the spreads, by central differences; one-sided where one side makes no case.
    pub(super) fn at_means(trial: &mut Trial<'_>, drawn: &[Drawn]) -> Self {
        let means: Vec<f64> = drawn.iter().map(|d| d.spread().mean()).collect();
        let at_means = trial.margin(&means);
        let mut sensitivities = Vec::with_capacity(drawn.len());
        for (i, drawn) in drawn.iter().enumerate() {
            let step = STEP * drawn.spread().standard_deviation();
            let mut at = |by: f64| {
                let mut values = means.clone();
                values[i] += by;
                let within = drawn.allows(values[i]);
                let margin = if within { trial.margin(&values) } else { None };
                // The step really taken, after rounding.
                margin.map(|margin| (margin, values[i] - means[i]))
            };
            let (up, down) = (at(step), at(-step));
            let centre = at_means.map(|margin| (margin, 0.0));
            let slope = |a: Option<(f64, f64)>, b: Option<(f64, f64)>| {
                let (a, b) = (a?, b?);
                let run = a.1 - b.1;
                (run > 0.0).then(|| (a.0 - b.0) / run)
            };
            let flat = (step == 0.0).then_some(0.0);
            sensitivities.push(
                flat.or_else(|| slope(up, down))
                    .or_else(|| slope(up, centre))
                    .or_else(|| slope(centre, down)),
            );
        }
        let effects = sensitivities.iter().zip(drawn).map(|(c, d)| {
            c.map(|c| {
                let effect = c * d.spread().standard_deviation();
                effect * effect
            })
        });
        let standard_uncertainty = effects.sum::<Option<f64>>().map(f64::sqrt);
        Self { standard_uncertainty, sensitivities }
    }
}
