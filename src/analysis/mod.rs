//! What an engineer asks: is this lip clean, by what margin, how surely, and what would mend it?
//!
//! A [`spec::Spec`] holds a question in the caller's units. [`spec::Spec::resolve`] turns it into a [`case::Case`] in SI units, and that is the
//! only place where a question's faults are found. [`decision::decide`] is the one function that decides a case;
//! [`evaluation::evaluate`](fn@evaluation::evaluate) adds flows, remedies, shares and the last drop on top of it.

pub mod balance;
pub mod calibration;
pub mod case;
pub mod cautions;
pub mod decision;
pub mod design;
pub mod doubt;
pub mod evaluation;
pub mod fault;
pub mod field;
pub mod flow_limit;
pub mod lot;
pub mod notice;
pub mod pour;
pub mod remedy;
pub mod resolve;
pub mod spec;
pub mod statistics;
pub mod sweep;
pub mod tolerance;
pub mod uncertainty;
pub mod warnings;
pub mod watch;
