//! Numerical methods, only what no well-kept crate gives: a bracketing root-finder without allocation.

mod root;

pub use root::{Bracket, find_root};
