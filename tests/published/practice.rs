//! What everybody in the trade knows: common practice, no source, unless one is named.

use crate::support::{assert_close, codes, first_hold, planned};

fn rig(b: &str) -> String {
    format!(
        "
rotor a {{
  top-speed 12000 rpm
  acceleration 6000 rpm/s
  counts 4096
  draws counter-clockwise
}}
rotor b like a {{
  {b}
  draws clockwise
}}
controller {{ tick 1 ms }}
"
    )
}

/// Gears of 10 and 60 teeth give 1:6: motors at one speed draw that figure.
#[test]
fn ten_teeth_on_sixty_give_one_to_six() {
    let plan = planned(&rig("teeth 10 to 60"), "cue 6:-1 hold 1 s\nloop\n");
    let hold = first_hold(&plan);
    assert_close(
        hold.motor.a,
        180.0,
        1e-12,
        "working speed, 90 % of 12000 rpm",
    );
    assert_close(
        hold.motor.b,
        180.0,
        1e-12,
        "the same motor speed through 10 to 60 teeth",
    );
    assert_close(
        hold.speed.b,
        -30.0,
        1e-12,
        "a sixth of it at the mirror, clockwise",
    );
}

/// A gear of 3:2 and one of 2:1 (20 to 40 teeth): motor turns for mirror turns.
#[test]
fn gears_lead_from_mirror_to_motor() {
    let plan = planned(&rig("gear 3:2"), "cue 2:-3 rate 30 Hz hold 1 s\nloop\n");
    let hold = first_hold(&plan);
    assert_close(
        hold.motor.b,
        135.0,
        1e-12,
        "90 turns/s clockwise, forward for a motor that draws so",
    );
    let plan = planned(
        &rig("teeth 20 to 40"),
        "cue 2:-1 rate 30 Hz hold 1 s\nloop\n",
    );
    assert_close(
        first_hold(&plan).motor.b,
        60.0,
        1e-12,
        "30 turns/s at the mirror",
    );
}

/// A figure that repeats at 4 to 25 Hz is too slow for the eye to join.
#[test]
fn slow_figures_flicker() {
    for (rate, flickers) in [
        ("4 Hz", true),
        ("25 Hz", true),
        ("29.999999 Hz", true),
        ("30 Hz", false),
        ("60 Hz", false),
    ] {
        let found = codes(
            &rig(""),
            &format!("cue deltoid rate {rate} hold 1 s\nloop\n"),
        );
        assert_eq!(
            found.contains(&"flicker/repeat"),
            flickers,
            "{rate}: {found:?}"
        );
    }
}

/// d'Arcy 1765 (in Arago, *Astronomie populaire* I p. 142) saw a whirled ember close its ring from 8/60 s a turn on: even that
/// is far below the default, which is about a figure that does not flicker.
#[test]
fn a_whirled_ember_would_flicker() {
    let found = codes(&rig(""), "cue circle rate 7.5 Hz hold 1 s\nloop\n");
    assert!(found.contains(&"flicker/repeat"), "{found:?}");
}

/// Two mirrors on motors without an index start anywhere: where the figure stands is open.
#[test]
fn without_an_index_the_pose_is_open() {
    let found = codes(&rig(""), "cue deltoid hold 1 s\nloop\n");
    assert!(found.contains(&"pose/open"), "{found:?}");
}
