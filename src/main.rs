//! The command line, nothing else.

fn main() {}
