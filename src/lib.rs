//! phasewright: a cue script for two spinning mirrors becomes a verified set-point table.
//!
//! Text flows down, one stage a folder. Each stage's result is a type of its own, and nothing lower knows anything
//! higher:
//!
//! ```text
//!   evening.show, wall.rig                                       what a maker writes
//!          │
//!          │  language    (grammar/*.pest → syntax with places → names looked up)
//!          ▼
//!   Show, Rig             show, rig, figure                      what it means: exact rationals, every default filled in
//!          │
//!          │  plan        (poses, landing, seam, fastest; motion has the laws)
//!          ▼
//!        Plan             plan                                   exact moves of both rotors, in whole ticks
//!          │
//!          ├──────────▶ runsheet   ─────▶ text, CSV, JSON, MD    what a person needs who runs it
//!          │
//!          ├──────────▶ check      ─────▶ findings               what the motors could not do, with the value that would pass
//!          │
//!          │  setpoint    (integer fixed point; blocks in parallel, in order)
//!          ▼
//!        rows, knots      setpoint ─────▶ CSV, JSON, pack, C     what a controller plays
//!          │
//!          └──────────▶ audit      ─────▶ findings               the finished table read again, by an evaluator of its own
//! ```
//!
//! [`exact`] holds the quantities with their units in the type and every conversion between number worlds;
//! [`finding`] is the one neutral form of all that the stages have to say. A stage returns its value *and* its findings;
//! [`cli`] reads and writes files, and only `main` prints.
//!
//! The reference of both languages, the formulas and the reasons behind the decisions are in the project's `docs/`.

#![warn(clippy::disallowed_methods, clippy::disallowed_types)]

pub mod audit;
pub mod check;
#[allow(
    clippy::disallowed_methods,
    clippy::disallowed_types,
    reason = "the commands are where files, the terminal and the environment are met"
)]
pub mod cli;
pub mod exact;
pub mod figure;
pub mod finding;
pub mod language;
pub mod motion;
pub mod optics;
pub mod plan;
pub mod preview;
pub mod rig;
pub mod runsheet;
pub mod setpoint;
pub mod show;
