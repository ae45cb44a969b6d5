//! Numerical methods, only what no well-kept crate gives: a bracketing root-finder and a quadrature, both without
//! allocation.

mod quadrature;
mod root;

pub use quadrature::gauss_legendre_8;
pub use root::{Bracket, find_root};
