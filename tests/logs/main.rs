//! Logs of simulated machines. What a machine did is worked out here, from the rows of its table and the fault that the
//! test gives it; nothing expected comes from the code under test.
#![allow(
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::indexing_slicing,
    clippy::panic,
    clippy::cast_precision_loss,
    clippy::cast_possible_truncation
)]

#[path = "../common/mod.rs"]
mod common;

mod dirty;
mod drift;
mod honest;
mod machine;
mod refused;

/// Both indexed, they face each other.
pub(crate) const RIG: &str = r#"rig "Test bench"
rotor a {
  top-speed 12000 rpm
  acceleration 6000 rpm/s
  draws counter-clockwise
  counts 4096
  index at 0 deg
}
rotor b like a {
  draws clockwise
  index at 0 deg
}
controller { tick 2 ms }
"#;

/// Geared, other counts, other marks.
pub(crate) const GEARED: &str = r#"rig "Geared bench"
rotor a {
  top-speed 9000 rpm
  acceleration 9000 rpm/s
  teeth 20 to 40
  draws clockwise
  counts 1000
  index at 33 deg
}
rotor b like a {
  gear 3:2
  draws counter-clockwise
  index at -12.5 deg
}
controller { tick 2 ms }
"#;

/// Three figures of three ratios, one of them turning as planned.
pub(crate) const SHOW: &str = r#"
usual morph 4 s quintic, hold 12 s
run-up 6 s
cue 5:-4
cue deltoid morph 5 s cycloidal
cue 2:-3 spin 4 deg/s morph 5 s
loop morph 6 s septic
"#;
