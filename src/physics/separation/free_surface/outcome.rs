//! What a computation ends in.

use super::lattice::LatticeFault;
use super::problem::ProblemFault;
use super::stream::Reading;

/// What the stream does at one Weber number.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum State {
    /// It leaves, and its contact line rests within two thicknesses of the end of the arc.
    Separated,
    /// It clings: the contact line has run more than two thicknesses down the outer wall.
    Attached,
    /// It chokes: the film has thickened into a jump before the edge, so the approach asked for does not exist at this Weber number.
    Choked,
    /// No answer, and why.
    NotConverged(Reason),
}

/// Why there is no answer.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Reason {
    /// A field ceased to be finite, or faster than the lattice carries. A finer grid may cure it.
    Diverged,
    /// The contact line or the stream still moved when the time allowed was over.
    StillMoving,
    /// No liquid reaches the edge.
    Dry,
    /// Cancelled.
    Cancelled,
}

impl Reason {
    /// One word for it.
    #[must_use]
    pub const fn as_str(self) -> &'static str {
        match self {
            Self::Diverged => "diverged",
            Self::StillMoving => "still moving",
            Self::Dry => "dry",
            Self::Cancelled => "cancelled",
        }
    }
}

/// The stream at one Weber number.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Outcome {
    /// What it does.
    pub state: State,
    /// Weber number.
    pub weber: f64,
    /// What was read at the end (not finite numbers after [`Reason::Diverged`]).
    pub reading: Reading,
    /// Steps taken.
    pub steps: u64,
}

/// The stream's direction at a Weber number, while it still leaves.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Deflection {
    /// Weber number.
    pub weber: f64,
    /// Angle of the stream below the floor's direction, rad.
    pub angle: f64,
    /// Contact position from the start of the arc, in h.
    pub contact_position: f64,
}

/// How the search for the critical Weber number ended.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Onset {
    /// The stream clings below and leaves above.
    Found {
        /// The critical Weber number: geometric mean of the two below.
        critical: f64,
        /// Highest Weber number at which the stream was seen to attach.
        attached: f64,
        /// Lowest Weber number at which it was seen to rest separated.
        separated: f64,
    },
    /// It still left at the lowest Weber number tried, or the film choked below it.
    Below {
        /// Lowest Weber number at which the stream rested separated.
        weber: f64,
        /// Whether the film choked just below.
        choked: bool,
    },
    /// It clung at the highest Weber number tried, from the start.
    Above {
        /// That Weber number.
        weber: f64,
    },
    /// No answer.
    NotConverged {
        /// Weber number at which it failed.
        weber: f64,
        /// Why.
        reason: Reason,
    },
}

/// The critical Weber number of a problem, from one grid.
#[derive(Debug, Clone, PartialEq)]
pub struct Search {
    /// How it ended.
    pub onset: Onset,
    /// Weber number at which the stream attached on the quick way down, if it did. It lags: by about 0.5 in ln We at 0.05 per h/U.
    pub on_the_way: Option<f64>,
    /// Directions of the stream at rest, by rising Weber number.
    pub deflections: Vec<Deflection>,
    /// What was read at the first station, where the stream is settled and far from the threshold.
    pub settled: Option<Reading>,
    /// Cells per thickness.
    pub cells: u32,
    /// Steps taken.
    pub steps: u64,
}

/// The critical Weber number of a problem, with the difference of two grids as its error.
#[derive(Debug, Clone, PartialEq)]
pub struct Threshold {
    /// From the finer grid.
    pub fine: Search,
    /// From the coarser grid.
    pub coarse: Search,
    /// |ln We_c,fine − ln We_c,coarse|, if both found it: the error of the coarser, an upper estimate of that of the finer.
    pub grid_error: Option<f64>,
}

/// What stops a computation before it starts, or a budget.
#[derive(Debug, Clone, Copy, PartialEq, thiserror::Error)]
pub enum SolverFault {
    /// The problem.
    #[error(transparent)]
    Problem(#[from] ProblemFault),
    /// The lattice.
    #[error(transparent)]
    Lattice(#[from] LatticeFault),
    /// A Weber number out of range.
    #[error("a Weber number of {0} is outside 0.5..1000")]
    Weber(f64),
    /// It would take more work than allowed.
    #[error("the computation needs about {needed:.2e} cell updates, the budget is {allowed:.2e}")]
    Budget {
        /// Cell updates needed.
        needed: f64,
        /// Cell updates allowed.
        allowed: f64,
    },
}
