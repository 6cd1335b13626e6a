//! Parse arguments, run one command, render findings, set the exit code.

fn main() {}
