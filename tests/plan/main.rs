//! The plan: exact ends, poses, the seam, `fastest`, hints.
#![allow(
    clippy::unwrap_used,
    clippy::panic,
    clippy::indexing_slicing,
    clippy::expect_used
)]

#[path = "../common/mod.rs"]
mod common;

mod ends;
mod fastest;
mod hints;
mod one_way;
mod stall;
mod starts;

/// A rig with everything: index on both, unequal limits, jerk.
pub(crate) const RIG: &str = r#"rig "Test bench"
rotor a {
  top-speed 12000 rpm
  stall-speed 150 rpm
  acceleration 6000 rpm/s
  deceleration 4800 rpm/s
  jerk 40000 rpm/s^2
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

/// The same, geared: `teeth 20 to 40` makes two motor turns a mirror turn.
pub(crate) const GEARED: &str = r#"rig "Geared bench"
rotor a {
  top-speed 9000 rpm
  acceleration 9000 rpm/s
  jerk 60000 rpm/s^2
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
controller { tick 1 ms }
"#;
