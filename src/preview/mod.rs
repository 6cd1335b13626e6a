//! Plan + optics → pictures, and the data of a page that plays the show.
//!
//! ```text
//! Plan ──▶ optics (paths, trace) ──▶ light  (curves with brightness) ──▶ tiles ──▶ cue-NNN.svg, sheet.svg ──▶ PNG
//!   │                                                            └─────▶ braille, for the terminal
//!   └────▶ scene (JSON: moves, not rows) ──▶ the page
//! ```
//!
//! Everything here returns text or bytes; `cli/` writes them.

pub mod atlas;
pub mod chart;
pub mod cue;
pub mod facts;
pub mod light;
pub mod moments;
pub mod numeral;
pub mod page;
pub mod png;
pub mod scene;
pub mod sheet;
pub mod still;
pub mod svg;
pub mod terminal;
pub mod tile;

use crate::finding::Finding;
use crate::optics::Optics;
use crate::plan::Plan;

/// A show made ready for its pictures.
#[derive(Debug)]
pub struct Show<'p> {
    /// The plan; it may break limits.
    pub plan: &'p Plan,
    /// From phases to the wall.
    pub optics: Optics,
    /// Findings with the legs that they are about, in the order in which they are listed.
    pub found: Vec<(Finding, Vec<usize>)>,
    /// The show's title, or a stand-in.
    pub title: String,
}

/// What a user can choose about pictures.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Look {
    /// Width in pixels at which a picture shows itself, and of a PNG; each has its own where none is chosen.
    pub width: Option<f64>,
}

impl<'p> Show<'p> {
    /// Makes a plan ready, with its findings in the order in which they shall be listed.
    #[must_use]
    pub fn new(plan: &'p Plan, findings: Vec<Finding>) -> Self {
        let found = findings
            .into_iter()
            .map(|finding| {
                let legs = moments::legs_of(plan, &finding);
                (finding, legs)
            })
            .collect();
        Self {
            plan,
            optics: Optics::of(&plan.rig),
            found,
            title: plan
                .show
                .title
                .clone()
                .unwrap_or_else(|| "Untitled show".to_owned()),
        }
    }

    /// How wide the beam is drawn.
    #[must_use]
    pub fn beam_words(&self) -> String {
        let beam = self.optics.beam();
        if beam.known {
            format!("beam {:.1} mm wide on the wall", beam.width * 1000.0)
        } else {
            "beam width assumed, 1/80 of the largest radius".to_owned()
        }
    }

    /// How the pictures were made, for those who want to know.
    #[must_use]
    pub fn small_print(&self) -> String {
        format!(
            "{}; each picture is the light of one repeat period, at least 1/50 s; brightness goes with the cube root of time per length; {}",
            self.optics.model().words(),
            self.beam_words()
        )
    }
}
