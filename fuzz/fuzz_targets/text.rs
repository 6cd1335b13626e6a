//! A show and a rig, parted by a line `====`, read, planned and checked.
#![no_main]

#[path = "common.rs"]
mod common;

use libfuzzer_sys::fuzz_target;

fuzz_target!(|text: &str| {
    let (show, rig) = text.split_once("\n====\n").unwrap_or((text, ""));
    drop(common::read(rig, show));
});
