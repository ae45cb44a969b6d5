//! Statistics of samples, plans and random trials: only what no well-kept crate gives on portable functions.
//!
//! Everything here is pure: numbers in, numbers out. Transcendental functions come from `libm`, so that the same
//! sample gives the same bytes everywhere; random numbers come from pinned generators ([`random`]).

pub mod attribute_plan;
pub mod beta;
pub mod capability;
pub mod guard_band;
pub mod hypergeometric;
pub mod indices;
pub mod moments;
pub mod noncentral_t;
pub mod normal;
pub mod normality;
pub mod order;
pub mod proportion;
pub mod random;
pub mod rare;
pub mod student;
pub mod tolerance_factor;
pub mod variables_plan;

/// Why a statistic could not be had.
#[derive(Debug, Clone, Copy, PartialEq, thiserror::Error)]
pub enum StatisticsFault {
    /// An iteration did not converge.
    #[error("the {what} did not converge")]
    NotConverged {
        /// What was being solved for.
        what: &'static str,
    },
    /// No plan of a practicable size tells these two qualities apart.
    #[error("no plan with at most {most} pieces tells these two qualities apart at these risks")]
    PlanTooLarge {
        /// The most pieces that were looked at.
        most: u64,
    },
}
