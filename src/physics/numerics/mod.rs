//! Numerical methods, only what no well-kept crate gives: a bracketing root-finder and quadrature without allocation, a portable normal
//! distribution, and what of it goes into vector instructions.

mod lanes;
mod normal;
mod quadrature;
mod root;

pub use lanes::{exp, ln, normal_cdf, quarter_sine};
pub use normal::{ln_normal_cdf, normal_hazard_below, normal_quantile};
pub use quadrature::gauss_legendre_8;
pub use root::{Bracket, find_root};
