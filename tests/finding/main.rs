//! Findings: places as people count them, the three renderings, the pages.
#![allow(
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::indexing_slicing,
    clippy::panic
)]

mod json;
mod lines;
mod pages;
mod sarif;
mod text;

use phasewright::finding::render::{Form, write};
use phasewright::finding::{Code, FileId, Finding, Place, Sources, ordered};

/// The place of the first `words` in a text.
fn place_of(file: FileId, text: &str, words: &str) -> Place {
    let start = text.find(words).unwrap();
    Place {
        file,
        start,
        end: start + words.len(),
    }
}

/// Findings in their order, as one of the forms shows them, without colour.
fn rendered(form: Form, findings: Vec<Finding>, sources: &Sources) -> String {
    let mut out = Vec::new();
    write(form, &ordered(findings), sources, false, &mut out).unwrap();
    String::from_utf8(out).unwrap()
}

const SHOW: &str = "show \"Harbour Hall\"\nrig \"wall.rig\"\n\ncue deltoid hold 20 s\ncue eight morph 2 s hold 20 s\nloop\n";
const RIG: &str = "rig \"Wall\"\nrotor b {\n  acceleration 6000 rpm/s\n}\n";

/// A show and a rig, and an error that has everything a finding can have.
fn too_fast() -> (Sources, Finding) {
    let mut sources = Sources::default();
    let show = sources.add("harbour.show", SHOW);
    let rig = sources.add("rigs/wall.rig", RIG);
    let finding = Finding::new(
        Code::LimitAcceleration,
        place_of(show, SHOW, "morph 2 s"),
        "rotor b would need 7336 rpm/s, the limit is 6000 rpm/s",
    )
    .also(place_of(rig, RIG, "acceleration 6000 rpm/s"), "the limit")
    .help("`morph 3.058 s` is the shortest quintic morph that fits whatever the pose before; or write `morph fastest`");
    (sources, finding)
}
