//! The data of the page.

use crate::show::planned;
use phasewright::finding::{Sources, ordered};
use phasewright::preview::scene::Scene;
use serde_json::Value;

const RIG: &str = include_str!("../../shows/mill-tower.rig");
const SHOW: &str = include_str!("../../shows/quillmere-evening.show");

fn scene(show: &str, rig: &str) -> Value {
    let mut sources = Sources::default();
    sources.add("x.rig", rig);
    sources.add("x.show", show);
    let (plan, findings) = planned(show, rig);
    let scene = Scene::new(&plan, &ordered(findings), &sources);
    serde_json::from_str(&scene.json().unwrap()).unwrap()
}

#[test]
fn legs_follow_each_other_and_phases_join() {
    let scene = scene(SHOW, RIG);
    let legs = scene["legs"].as_array().unwrap();
    assert_eq!(legs[0]["kind"], "run-up");
    assert_eq!(legs.last().unwrap()["kind"], "loop");
    let number = |value: &Value| value.as_f64().unwrap_or(0.0);
    for pair in legs.windows(2) {
        let (one, two) = (&pair[0], &pair[1]);
        let end = number(&one["start_s"]) + number(&one["length_s"]);
        assert!((end - number(&two["start_s"])).abs() < 1e-6, "{one} {two}");
        for rotor in ["a", "b"] {
            let (mirror, next) = (&one[rotor], &two[rotor]);
            let (from, change) = (number(&mirror["from"]), number(&mirror["change"]));
            assert!(
                (from + change - number(&next["from"])).abs() < 1e-6,
                "speeds join"
            );
            // The laws of this show are symmetric but for the skewed one: S(1) is read from the law itself.
            let area = match mirror["law"].as_u64() {
                None => 0.0,
                Some(law) => {
                    let law = &scene["laws"][usize::try_from(law).unwrap()];
                    match law["kind"].as_str().unwrap() {
                        "sampled" => number(law["area"].as_array().unwrap().last().unwrap()),
                        _ => 0.5,
                    }
                }
            };
            let length = number(&one["length_s"]);
            let end = number(&mirror["start"])
                + from * length
                + change * length * area
                + number(&mirror["correction"]);
            let off = end - number(&next["start"]);
            assert!((off - off.round()).abs() < 1e-5, "phases join: {one} {two}");
        }
    }
}

#[test]
fn a_show_is_small_and_tells_what_a_page_needs() {
    let scene = scene(SHOW, RIG);
    assert!(
        scene.to_string().len() < 100_000,
        "{}",
        scene.to_string().len()
    );
    assert_eq!(scene["cues"][0]["ratio"], serde_json::json!([4, -1]));
    assert_eq!(scene["cues"][0]["name"], "Anemone opens the evening");
    assert_eq!(scene["rotors"]["a"]["top_rpm"], 12000);
    assert_eq!(scene["rotors"]["b"]["motor_per_mirror"], -1);
    assert!(scene["optics"]["trace"].is_object(), "this rig is traced");
    // Green: 520 nm.
    let colour = scene["optics"]["colour"].as_str().unwrap();
    assert!(
        colour.starts_with("#00ff") || &colour[3..5] == "ff",
        "{colour}"
    );
}

/// A finding of a transition points at its leg.
#[test]
fn findings_point_at_their_legs() {
    let show = "show \"x\"\nrig \"x.rig\"\nusual hold 1 s\ncue circle\ncue deltoid morph 200 ms\nloop morph 9 s\n";
    let scene = scene(show, include_str!("../../shows/boathouse.rig"));
    let findings = scene["findings"].as_array().unwrap();
    let found = findings
        .iter()
        .find(|finding| finding["code"] == "limit/acceleration")
        .unwrap();
    assert_eq!(found["legs"], serde_json::json!([2]), "{found}");
    assert_eq!(found["line"], 5);
    assert_eq!(scene["legs"][2]["kind"], "morph");
}
