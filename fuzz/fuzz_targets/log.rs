//! A log measured on a machine, against a small show.
#![no_main]

#[path = "common.rs"]
mod common;

use libfuzzer_sys::fuzz_target;
use phasewright::audit::log;
use phasewright::finding::Place;
use phasewright::plan::Plan;
use std::sync::LazyLock;

static PLAN: LazyLock<Plan> = LazyLock::new(common::plan);

fuzz_target!(|bytes: &[u8]| {
    let mut file = bytes;
    if let Ok((Some(report), _)) = log::audit(&mut file, &PLAN, Place::default()) {
        drop((report.text(), report.json(), report.plot()));
    }
});
