//! How many pieces knots take against the least possible, and how many bytes against rows, on ten shows.
//!
//! `cargo bench --bench knots`. The least number comes from an exact test of the longest piece that fits, one after
//! the other (`tests/pack/least.rs`), which shares nothing with the search.
#![allow(
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::indexing_slicing,
    clippy::panic,
    clippy::print_stdout,
    missing_docs
)]

#[path = "../tests/pack/least.rs"]
mod least;
#[path = "../tests/pack/load.rs"]
mod load;

use phasewright::plan::Plan;
use phasewright::setpoint::knots;
use phasewright::setpoint::pack::{Content, pack_size};
use std::time::Instant;

const HARBOUR: (&str, &str) = (
    include_str!("shows/harbour-hall.show"),
    include_str!("shows/harbour-hall.rig"),
);

/// The harbour show with another line in its rig.
fn harbour(line: &str, other: &str) -> Plan {
    assert!(HARBOUR.1.contains(line));
    load::plan_of_texts(HARBOUR.0, &HARBOUR.1.replace(line, other))
}

fn main() {
    let example = |name: &str| load::plan_of(&load::examples().join(format!("{name}.show")));
    let tick = "tick        2 ms";
    let counts = "counts        4096";
    let shows = [
        ("harbour hall", harbour(tick, tick)),
        ("harbour hall, 1 ms", harbour(tick, "tick 1 ms")),
        ("harbour hall, 10 ms", harbour(tick, "tick 10 ms")),
        ("harbour hall, 400 counts", harbour(counts, "counts 400")),
        (
            "harbour hall, 65 536 counts",
            harbour(counts, "counts 65536"),
        ),
        ("quillmere evening", example("quillmere-evening")),
        ("brackhead opening", example("brackhead-opening")),
        ("karrow fair", example("karrow-fair")),
        ("ostrel regatta", example("ostrel-regatta")),
        ("velloe lissajous", example("velloe-lissajous")),
    ];
    println!(
        "show                          ticks    rows, B  knots, B  pieces   least  ratio  time"
    );
    let mut worst = 0.0_f64;
    for (name, plan) in &shows {
        let started = Instant::now();
        let bytes = pack_size(plan, Content::Knots(1));
        let took = started.elapsed();
        let (pieces, least) = (knots::count(plan, 1), least::of_plan(plan, 1));
        let ratio = pieces as f64 / least as f64;
        worst = worst.max(ratio);
        println!(
            "{name:28} {:7} {:9} {bytes:9} {pieces:7} {least:7} {ratio:6.3}  {took:.2?}",
            plan.rows(),
            pack_size(plan, Content::Rows),
        );
    }
    println!("the worst ratio is {worst:.3}; 1.1 is allowed");
}
