//! Findings of the light: still/spot, optics/walk-off, optics/shape, optics/skipped, and light that cannot arrive.

use crate::show::planned;
use phasewright::finding::{Code, Finding, Severity};

const RIG: &str = include_str!("../../shows/mill-tower.rig");

fn show(cues: &str) -> String {
    format!("show \"x\"\nrig \"x.rig\"\nusual hold 5 s, morph 9 s\ncue 3:-2\n{cues}loop\n")
}

fn found(cues: &str, rig: &str, code: Code) -> Vec<Finding> {
    let (_, findings) = planned(&show(cues), rig);
    findings
        .into_iter()
        .filter(|finding| finding.code == code)
        .collect()
}

/// The help's tilt, put into the rig, draws the shape: the note is gone. Proportions of the cycloids and of flat sides are
/// those of hypotrochoids and epitrochoids (J. D. Lawrence, *A Catalog of Special Plane Curves*, from memory).
#[test]
fn the_proposed_tilt_draws_the_true_curve() {
    let figures = [
        "deltoid",
        "astroid",
        "cardioid",
        "nephroid",
        "star 5/2",
        "ring 5 wheel 2",
        "ring 3 outside wheel 1",
    ];
    for figure in figures {
        let cue = format!("cue {figure}\n");
        let notes = found(&cue, RIG, Code::OpticsShape);
        assert_eq!(notes.len(), 1, "{figure}: {notes:?}");
        assert_eq!(notes[0].severity, Severity::Note);
        let help = notes[0].help.clone().unwrap();
        let tilt = help.split('`').nth(1).unwrap();
        assert!(
            tilt.starts_with("tilt ") && help.contains("rotor b"),
            "{help}"
        );
        let rig = RIG.replace(
            "  draws clockwise ",
            &format!("  {tilt}\n  draws clockwise "),
        );
        assert_ne!(rig, RIG);
        assert!(
            found(&cue, &rig, Code::OpticsShape).is_empty(),
            "{figure} with {tilt}"
        );
    }
}

/// Equal tilts reach 4.03 : 4.00, which is within 2 % of 1 : 1.
#[test]
fn equal_reaches_draw_roses_and_lines() {
    let cues = "cue rose 5/3\ncue line\ncue trifolium\ncue circle\ncue 1:2\n";
    assert!(found(cues, RIG, Code::OpticsShape).is_empty());
}

/// The published proportion: a true deltoid needs 2 : 1, so tan 2τb = tan 2τa·(throw + spacing)/(2·throw).
#[test]
fn the_deltoid_asks_for_half_the_reach() {
    let notes = found("cue deltoid\n", RIG, Code::OpticsShape);
    let wanted = (8_f64.to_radians().tan() * 4.03 / 8.0).atan().to_degrees() / 2.0;
    let help = notes[0].help.clone().unwrap();
    assert!(
        help.contains(&format!("tilt {wanted:.3} deg")),
        "{help}, {wanted}"
    );
    assert!(notes[0].message.contains("2 : 1"), "{}", notes[0].message);
}

#[test]
fn a_crossed_rig_says_what_it_draws() {
    let rig = include_str!("../../shows/school-hall.rig");
    let notes = found("cue deltoid\n", rig, Code::OpticsShape);
    assert_eq!(notes.len(), 1);
    assert!(notes[0].help.as_deref().unwrap().contains("`1:-2`"));
    assert!(found("cue 1:2\n", rig, Code::OpticsShape).is_empty());
}

/// The beam wanders by spacing·tan 2τ = 30·tan 8° = 4.216 mm and is 0.75 mm more to its edge, on a mirror met at 10°:
/// 2·4.966/cos 10° = 10.09 mm.
#[test]
fn the_beam_stays_on_a_mirror_that_is_large_enough() {
    let mirror = |size: &str| {
        RIG.replace(
            "  draws clockwise ",
            &format!("  mirror {size}\n  draws clockwise "),
        )
    };
    assert!(found("", RIG, Code::OpticsWalkOff).is_empty());
    assert!(found("", &mirror("10.1 mm"), Code::OpticsWalkOff).is_empty());
    let warned = found("", &mirror("10.0 mm"), Code::OpticsWalkOff);
    assert_eq!(warned.len(), 1);
    assert_eq!(warned[0].severity, Severity::Warning);
    assert!(
        warned[0].help.as_deref().unwrap().contains("10.1 mm"),
        "{warned:?}"
    );
}

#[test]
fn one_note_names_what_a_rig_does_not_tell() {
    let rig = include_str!("../../shows/travelling-case.rig");
    let notes = found("cue deltoid\n", rig, Code::OpticsSkipped);
    assert_eq!(notes.len(), 1);
    for word in [
        "still/spot",
        "optics/walk-off",
        "optics/shape",
        "tilt",
        "throw",
        "laser width",
    ] {
        assert!(
            notes[0].message.contains(word),
            "{word}: {}",
            notes[0].message
        );
    }
    assert!(found("cue deltoid\n", RIG, Code::OpticsSkipped).is_empty());
    let notes = found(
        "",
        include_str!("../../shows/boathouse.rig"),
        Code::OpticsSkipped,
    );
    assert!(
        !notes[0].message.contains("optics/shape"),
        "{}",
        notes[0].message
    );
}

/// Two mirrors alike, thrown opposite ways: the circle shrinks to a spot, which rests for as long as the cue holds.
#[test]
fn a_spot_that_rests_is_reported() {
    let rig = RIG.replace("spacing       30 mm", "spacing       1 mm");
    assert_ne!(rig, RIG);
    let spots = found("cue 1:1 land 180 deg\n", &rig, Code::StillSpot);
    assert!(!spots.is_empty());
    let held = spots
        .iter()
        .find(|spot| spot.message.contains("holds"))
        .unwrap();
    assert_eq!(held.severity, Severity::Warning);
    assert!(held.message.contains("5.00 s"), "{}", held.message);
    // Dark, or with the largest circle, there is nothing to see or nothing at rest.
    assert!(
        found(
            "cue 1:1 land 180 deg morph 9 s dark beam off\n",
            &rig,
            Code::StillSpot
        )
        .iter()
        .all(|spot| !spot.message.contains("holds"))
    );
    assert!(found("cue 1:1 morph 9 s dark\n", &rig, Code::StillSpot).is_empty());
}

/// A circle of radius R at f turns a second stays within w of a point for 2·2·asin(w/2R)/(2πf): from a chord's length.
#[test]
fn a_crawling_spot_is_reported_with_its_time() {
    // Reach 4.03·tan 8° = 566.4 mm, beam 1.5 + 1.2e-3·4000 = 6.3 mm; the first mirror alone at 0.3 rpm = 0.005 Hz.
    let rig = RIG.replace("stall-speed   150 rpm ", "stall-speed   0 rpm ");
    let cue = "cue circle lead 0.3 rpm hold 60 s morph 20 s dark\ncue circle morph 20 s dark\n";
    let spots = found(cue, &rig, Code::StillSpot);
    assert_eq!(spots.len(), 1, "{spots:#?}");
    // From a point on: within one beam width before and after it, as far as the search goes back (0.05 s).
    let one_way = 2.0 * (6.3_f64 / 2.0 / 566.4).asin() / (std::f64::consts::TAU * 0.005);
    let words: f64 = spots[0]
        .message
        .split("rests for ")
        .nth(1)
        .and_then(|rest| rest.split(' ').next())
        .unwrap()
        .parse()
        .unwrap();
    assert!(
        words >= one_way - 0.02 && words <= one_way + 0.08,
        "{words} {one_way}"
    );
}

#[test]
fn figures_at_speed_never_rest() {
    let cues =
        "cue 5:-4\ncue 1:-1\ncue deltoid\ncue 9:-7 spin 4 deg/s\ncue circle morph 9 s dark\n";
    assert!(found(cues, RIG, Code::StillSpot).is_empty());
}

/// Light that would graze a mirror or miss the wall is an error at the rig's line, never a picture without numbers.
#[test]
fn light_that_cannot_arrive_is_an_error() {
    let rig = RIG.replace(
        "incidence     a 10 deg, b 10 deg",
        "incidence     a 88 deg, b 10 deg",
    );
    let errors = found("", &rig, Code::TextNumber);
    assert_eq!(errors.len(), 1);
    assert!(
        errors[0].message.contains("mirror a"),
        "{}",
        errors[0].message
    );
    let rig = RIG.replace("tilt          4 deg", "tilt          30 deg");
    let errors = found("", &rig, Code::TextNumber);
    assert_eq!(errors.len(), 1);
    assert!(found("", RIG, Code::TextNumber).is_empty());
}
