//! Pages for the tests, from shows and rigs of the project and from some made here.

use crate::show::planned;
use phasewright::finding::{Finding, Sources, ordered};
use phasewright::plan::Plan;
use phasewright::preview::Show;
use phasewright::preview::page::page;
use phasewright::preview::scene::Scene;
use std::path::Path;

/// A plan with its findings and its scene.
pub(crate) struct Made {
    pub(crate) plan: Plan,
    pub(crate) findings: Vec<Finding>,
    pub(crate) scene: Scene,
}

pub(crate) fn made(show: &str, rig: &str) -> Made {
    let mut sources = Sources::default();
    sources.add("x.rig", rig);
    sources.add("x.show", show);
    let (plan, findings) = planned(show, rig);
    let findings = ordered(findings);
    let scene = Scene::new(&plan, &findings, &sources);
    Made {
        plan,
        findings,
        scene,
    }
}

impl Made {
    pub(crate) fn page(&self) -> String {
        page(&Show::new(&self.plan, self.findings.clone()), &self.scene).unwrap()
    }
}

pub(crate) fn example(name: &str) -> String {
    let shows = Path::new(env!("CARGO_MANIFEST_DIR")).join("shows");
    std::fs::read_to_string(shows.join(name)).unwrap()
}

/// The example shows with their rigs.
pub(crate) const EXAMPLES: [(&str, &str); 5] = [
    ("quillmere-evening.show", "mill-tower.rig"),
    ("brackhead-opening.show", "mill-tower.rig"),
    ("ostrel-regatta.show", "boathouse.rig"),
    ("karrow-fair.show", "travelling-case.rig"),
    ("velloe-lissajous.show", "school-hall.rig"),
];

/// Two motors without a stall band; mirrors whose reaches stand 2 : 1, so that a deltoid is a true one; first-order optics,
/// since no incidence is told.
pub(crate) const BENCH: &str = "rig \"Test bench\"
rotor a {
  tilt 4 deg
  top-speed 12000 rpm
  acceleration 6000 rpm/s
  counts 4096
  draws counter-clockwise
  index at 0 deg
}
rotor b like a {
  tilt 2 deg
  draws clockwise
  index at 0 deg
}
throw 4 m
spacing 0 mm
working-speed 9000 rpm
laser {
  wavelength 532 nm
  width 20 mm
  divergence 1 mrad
}
controller { tick 10 ms }
";
