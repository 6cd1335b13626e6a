//! Draws the example shows into a folder, to be looked at: `LOOK=/tmp/look cargo test --test preview -- --ignored look`.

use crate::show::planned;
use phasewright::finding::ordered;
use phasewright::preview::{Look, Show, atlas, cue, facts, png, sheet, terminal};
use std::fs;
use std::path::Path;

const SHOWS: [(&str, &str, &str); 6] = [
    (
        "broken",
        include_str!("broken.show"),
        include_str!("../../shows/mill-tower.rig"),
    ),
    (
        "mill",
        include_str!("../../shows/quillmere-evening.show"),
        include_str!("../../shows/mill-tower.rig"),
    ),
    (
        "brackhead",
        include_str!("../../shows/brackhead-opening.show"),
        include_str!("../../shows/mill-tower.rig"),
    ),
    (
        "velloe",
        include_str!("../../shows/velloe-lissajous.show"),
        include_str!("../../shows/school-hall.rig"),
    ),
    (
        "ostrel",
        include_str!("../../shows/ostrel-regatta.show"),
        include_str!("../../shows/boathouse.rig"),
    ),
    (
        "karrow",
        include_str!("../../shows/karrow-fair.show"),
        include_str!("../../shows/travelling-case.rig"),
    ),
];

#[test]
#[ignore = "writes pictures for people"]
fn look() {
    let folder = std::env::var("LOOK").unwrap();
    for (name, show, rig) in SHOWS {
        let folder = Path::new(&folder).join(name);
        fs::create_dir_all(&folder).unwrap();
        let (plan, findings) = planned(show, rig);
        let show = Show::new(&plan, ordered(findings));
        let text = sheet::sheet(&show, &Look::default());
        fs::write(folder.join("sheet.svg"), &text).unwrap();
        fs::write(folder.join("sheet.png"), png::png(&text).unwrap()).unwrap();
        for subject in facts::subjects(&plan).iter().take(7) {
            let text = cue::picture(&show, subject, &Look::default());
            let file = folder.join(subject.file(&plan));
            fs::write(file.with_extension("png"), png::png(&text).unwrap()).unwrap();
            fs::write(file, text).unwrap();
        }
        let text = atlas::atlas(&plan.rig, 6, &Look::default());
        fs::write(folder.join("atlas.svg"), &text).unwrap();
        fs::write(folder.join("atlas.png"), png::png(&text).unwrap()).unwrap();
        let screen = terminal::Screen {
            columns: 120,
            colour: false,
        };
        fs::write(
            folder.join("terminal.txt"),
            terminal::pictures(&show, screen, &[]),
        )
        .unwrap();
    }
}
