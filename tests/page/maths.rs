//! The page's scripts compute what the program computes.

use crate::pages::{EXAMPLES, example, made};
use crate::{missing, node, runs};
use phasewright::optics::Optics;
use phasewright::optics::path::LegPath;
use phasewright::rig::Pair;
use serde_json::{Value, json};

/// Instants a leg: its ends, and places that no law and no sampling has for a node.
const PLACES: [f64; 11] = [
    0.0, 0.003, 0.0517, 0.1331, 0.25, 0.3719, 0.5, 0.6247, 0.7773, 0.9461, 1.0,
];

fn probes(plan: &phasewright::plan::Plan) -> Vec<Value> {
    let optics = Optics::of(&plan.rig);
    let mut probes = Vec::new();
    for index in 0..plan.legs.len() {
        let path = LegPath::of(plan, index).unwrap();
        // Before its start and after its end a leg goes on: stills look there.
        for t in PLACES
            .iter()
            .map(|place| place * path.length)
            .chain([-0.013, path.length + 0.017])
        {
            let Pair { a, b } = path.at(t);
            let spot = optics.spot(path.phases(t));
            let mirror = |state: phasewright::optics::path::State| {
                json!([state.phase, state.speed, state.acceleration])
            };
            probes.push(json!({
                "leg": index, "t": t, "a": mirror(a), "b": mirror(b), "spot": [spot.x, spot.y],
            }));
        }
    }
    probes
}

#[test]
fn phases_speeds_and_spots_are_those_of_the_program() {
    if !runs("node") {
        missing("node", "the page's mathematics was not run");
        return;
    }
    let folder = tempfile::tempdir().unwrap();
    let mut cases = Vec::new();
    let mut count = 0;
    for (show, rig) in EXAMPLES {
        let made = made(&example(show), &example(rig));
        let probes = probes(&made.plan);
        count += probes.len();
        let scene: Value = serde_json::from_str(&made.scene.json().unwrap()).unwrap();
        cases.push(json!({ "show": show, "scene": scene, "probes": probes }));
    }
    let file = folder.path().join("cases.json");
    std::fs::write(&file, json!(cases).to_string()).unwrap();
    let said = node("maths.mjs", &[&file]);
    assert!(
        said.contains(&format!("{count} instants agree")),
        "{said}, of {count}"
    );
    assert!(count > 1000, "{count}");
}

/// The eye of the page under node, with nothing to draw on: light is neither lost nor made, whatever the rate of frames.
#[test]
fn light_is_kept_at_every_rate_of_frames() {
    if !runs("node") {
        missing("node", "the page's eye was not run");
        return;
    }
    let folder = tempfile::tempdir().unwrap();
    let made = made(
        &example("quillmere-evening.show"),
        &example("mill-tower.rig"),
    );
    let file = folder.path().join("scene.json");
    std::fs::write(&file, made.scene.json().unwrap()).unwrap();
    let said = node("light.mjs", &[&file]);
    assert!(said.contains("light is kept"), "{said}");
}
