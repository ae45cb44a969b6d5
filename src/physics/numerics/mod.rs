//! Numerical methods, only what no well-kept crate gives: a bracketing root-finder without allocation, and a portable normal distribution.

mod normal;
mod root;

pub use normal::{normal_cdf, normal_quantile};
pub use root::{Bracket, find_root};
