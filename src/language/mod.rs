//! Text → syntax tree → resolved rig and show.
