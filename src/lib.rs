//! phasewright: a cue script for two spinning mirrors becomes a verified set-point table.

pub mod audit;
pub mod check;
pub mod cli;
pub mod exact;
pub mod figure;
pub mod finding;
pub mod language;
pub mod motion;
pub mod plan;
pub mod rig;
pub mod setpoint;
pub mod show;
