//! Command line.

fn main() {}
