//! What is said beside a calibration.

use super::fit::{Fit, TAUGHT_BELOW};
use crate::analysis::notice::Notice;

/// Names of the coefficients, in their order: b0, b1, b2, ln s.
pub const COEFFICIENTS: [&str; 4] = ["offset", "radius_ratio", "wetting", "ln_scatter"];

/// Above this condition number the effects of radius and of wetting are hard to tell apart on these rows (common practice, no source).
const ILL_CONDITIONED: f64 = 30.0;

/// Above this leverage a row all but decides its own prediction (own judgement).
const LEVERAGE: f64 = 0.7;

/// Most names in one sentence.
const MOST_NAMES: usize = 10;

fn listed(names: &[&str]) -> String {
    let shown = names.iter().take(MOST_NAMES).copied().collect::<Vec<_>>().join(", ");
    match names.len().checked_sub(MOST_NAMES) {
        Some(more) if more > 0 => format!("{shown} and {more} more"),
        _ => shown,
    }
}

/// Remarks on a fit. `names`: of its rows; `without_sheet`: whether each row was seen clean where no free sheet exists.
#[must_use]
pub fn remarks(fit: &Fit, names: &[&str], without_sheet: &[bool]) -> Vec<Notice> {
    let mut found = Vec::new();
    let untaught: Vec<&str> = COEFFICIENTS
        .into_iter()
        .zip(fit.sd_ratio)
        .filter(|(_, ratio)| *ratio > TAUGHT_BELOW)
        .map(|(name, _)| name)
        .collect();
    if untaught.len() == COEFFICIENTS.len() {
        found.push(Notice::new(
            "nothing_learned",
            "The rows teach nothing: every coefficient is as unsure as before them. The calibration is the prior.",
        ));
    } else if !untaught.is_empty() {
        found.push(Notice::new(
            "coefficients_not_learned",
            format!(
                "The rows teach next to nothing of {}: posterior over prior standard deviation above {TAUGHT_BELOW}.",
                listed(&untaught)
            ),
        ));
    }
    let counts = &fit.counts;
    let two_sided = counts.onset + counts.bracket > 0;
    if !two_sided && counts.clean == 0 {
        found.push(Notice::new(
            "one_outcome_only",
            "Every row dribbled: the onset is bounded on one side only. Pour faster until it is clean.",
        ));
    } else if !two_sided && counts.dribbled == 0 {
        found.push(Notice::new(
            "one_outcome_only",
            "Every row was clean: the onset is bounded on one side only. Pour slower until it dribbles.",
        ));
    } else if !two_sided && fit.separable {
        found.push(Notice::new(
            "separable",
            "Clean and dribbled rows can be told apart without error, so the rows alone do not bound the scatter: the prior does. Pour between them, or note onsets.",
        ));
    }
    match fit.condition_number {
        None => found.push(Notice::new(
            "covariates_do_not_vary",
            "Edge radius over thickness and wetting do not vary over the rows, or vary together: their effects cannot be told apart. Pour over lips that differ in both.",
        )),
        Some(number) if number > ILL_CONDITIONED => found.push(Notice::new(
            "ill_conditioned",
            format!("Edge radius over thickness and wetting vary nearly together over the rows (condition number {number:.0})."),
        )),
        Some(_) => {}
    }
    let rows = |pick: &dyn Fn(usize) -> bool| -> Vec<&str> {
        names.iter().enumerate().filter(|(i, _)| pick(*i)).map(|(_, name)| *name).collect()
    };
    let flagged = rows(&|i| fit.standings[i].z.abs() > fit.flag_beyond);
    if !flagged.is_empty() {
        found.push(Notice::new(
            "rows_flagged",
            format!(
                "Not what the other rows foretell: {}. They were kept; look at the notes of these pours.",
                listed(&flagged)
            ),
        ));
    }
    let heavy = rows(&|i| fit.standings[i].leverage > LEVERAGE);
    if !heavy.is_empty() && names.len() > 1 {
        found.push(Notice::new(
            "high_leverage",
            format!("The fit hangs on single rows: {}. Pour them again.", listed(&heavy)),
        ));
    }
    let without_sheet = rows(&|i| without_sheet[i]);
    if !without_sheet.is_empty() {
        found.push(Notice::new(
            "clean_without_free_sheet",
            format!("Seen clean at a Weber number below 2, where no free sheet can leave: {}. Check pour rate and lip of these rows.", listed(&without_sheet)),
        ));
    }
    found
}
