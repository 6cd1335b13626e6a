//! The SVG and PNG files: well-formed, the same every time, small, with their text as text.

use crate::show::planned;
use phasewright::finding::ordered;
use phasewright::preview::{Look, Show, atlas, cue, facts, png, sheet, terminal};
use std::fmt::Write;

const RIG: &str = include_str!("../../shows/mill-tower.rig");

#[test]
fn every_picture_of_a_show_that_breaks_limits_is_drawn() {
    let text = include_str!("broken.show");
    let (plan, findings) = planned(text, RIG);
    let show = Show::new(&plan, ordered(findings));
    let mut files = Vec::new();
    for subject in facts::subjects(&plan) {
        let svg = cue::picture(&show, &subject, &Look::default());
        let again = cue::picture(&show, &subject, &Look::default());
        assert_eq!(svg, again, "the same bytes every time");
        assert!(
            svg.contains("<title") && svg.contains("<text"),
            "text is text"
        );
        assert!(
            !svg.contains("NaN") && !svg.contains("inf"),
            "{}",
            subject.file(&plan)
        );
        let bytes = png::png(&svg).unwrap();
        assert!(bytes.starts_with(b"\x89PNG"));
        files.push(subject.file(&plan));
    }
    assert_eq!(
        files,
        [
            "run-up.svg",
            "cue-001.svg",
            "cue-002.svg",
            "cue-003.svg",
            "cue-004.svg",
            "cue-005.svg",
            "cue-006.svg",
            "loop.svg"
        ]
    );
    let second = cue::picture(&show, &facts::subjects(&plan)[2], &Look::default());
    assert!(
        second.contains("limit/acceleration"),
        "findings are in the picture"
    );
}

/// Forty cues, all different: the sheet stays below 1.5 MB.
#[test]
fn a_sheet_of_forty_cues_is_small() {
    let mut text = "show \"Forty\"\nrig \"x.rig\"\nusual morph 5 s, hold 10 s\n".to_owned();
    for number in 0..40 {
        let (p, q) = (1 + number % 8, 1 + (number * 7) % 9);
        let _ = writeln!(text, "cue {p}:-{q} spin {number} deg/s");
    }
    text.push_str("loop\n");
    let (plan, findings) = planned(&text, RIG);
    let show = Show::new(&plan, ordered(findings));
    let svg = sheet::sheet(&show, &Look::default());
    assert!(
        svg.len() < 1_500_000 && svg.len() > 200_000,
        "{} bytes",
        svg.len()
    );
    assert_eq!(svg, sheet::sheet(&show, &Look::default()));
}

/// A cue played again from the same cue before is drawn once.
#[test]
fn what_is_alike_is_drawn_once() {
    let one = "show \"x\"\nrig \"x.rig\"\nusual morph 5 s, hold 10 s\nrepeat 2 {\ncue deltoid\ncue 5:-4\n}\nloop\n";
    let many = one.replace("repeat 2", "repeat 30");
    let sheet = |text: &str| {
        let (plan, findings) = planned(text, RIG);
        let show = Show::new(&plan, ordered(findings));
        sheet::sheet(&show, &Look::default())
    };
    let (few, many) = (sheet(one), sheet(&many));
    assert!(many.matches("<use href=\"#c").count() >= 56);
    assert!(
        many.len() < few.len() + 60 * 1200,
        "{} {}",
        few.len(),
        many.len()
    );
}

#[test]
fn titles_are_escaped_and_sizes_obeyed() {
    let text = "show \"<Tom & 'Ann'>\"\nrig \"x.rig\"\ncue deltoid hold 5 s name \"a < b\"\nloop morph 9 s\n";
    let (plan, findings) = planned(text, RIG);
    let show = Show::new(&plan, ordered(findings));
    let look = Look { width: Some(640.0) };
    let svg = sheet::sheet(&show, &look);
    assert!(svg.contains("&lt;Tom &amp; 'Ann'&gt;"));
    assert!(svg.contains("width=\"640\""));
    assert!(png::png(&svg).is_ok());
}

#[test]
fn the_atlas_greys_what_a_one_way_rig_cannot_draw() {
    let rig = include_str!("../../shows/travelling-case.rig");
    let (plan, _) = planned(
        "show \"x\"\nrig \"x\"\ncue deltoid hold 5 s land free\nloop morph 20 s\n",
        rig,
    );
    let svg = atlas::atlas(&plan.rig, 3, &Look::default());
    // Both motors turn forward only and draw opposite ways: 1:2 is out of reach, 1:-2 is not.
    assert_eq!(
        svg.matches("b wrong way").count(),
        7,
        "1:1 1:2 1:3 2:1 2:3 3:1 3:2"
    );
    assert!(
        svg.contains("3 lobes, 67.5 Hz"),
        "135 turns a second at 8100 rpm"
    );
    assert!(png::png(&svg).is_ok());
}

#[test]
fn the_terminal_is_never_too_narrow() {
    let (plan, findings) = planned(include_str!("../../shows/quillmere-evening.show"), RIG);
    let show = Show::new(&plan, ordered(findings));
    for columns in [20, 40, 80, 160] {
        let screen = terminal::Screen {
            columns,
            colour: false,
        };
        let text = terminal::pictures(&show, screen, &[3]);
        assert!(text.contains("weave"));
        let widest = text.lines().map(|line| line.chars().count()).max().unwrap();
        assert!(widest <= columns, "{widest} of {columns}");
        assert!(
            text.chars()
                .filter(|sign| ('\u{2801}'..='\u{28ff}').contains(sign))
                .count()
                > 20
        );
    }
    let screen = terminal::Screen {
        columns: 80,
        colour: true,
    };
    assert!(terminal::pictures(&show, screen, &[3]).contains("\u{1b}[38;2;"));
}
