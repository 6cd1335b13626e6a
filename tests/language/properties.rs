//! What holds for every text, whatever stands in it.

use crate::cases;
use phasewright::finding::{FileId, Finding, Place};
use phasewright::language::{parse_show, read_rig, resolve_show};
use phasewright::show::WrittenCue;
use proptest::prelude::*;
use proptest::test_runner::RngSeed;
use std::sync::LazyLock;

fn config(cases: u32, seed: u64) -> ProptestConfig {
    ProptestConfig {
        cases,
        rng_seed: RngSeed::Fixed(seed),
        failure_persistence: None,
        ..ProptestConfig::default()
    }
}

fn inside(text: &str, place: Place) -> bool {
    place.start <= place.end
        && text.is_char_boundary(place.start)
        && text.is_char_boundary(place.end)
        && place.file == FileId(3)
}

/// Reads `text` as a show and as a rig; every place must lie in it.
fn read(text: &str) -> Vec<Finding> {
    let (script, mut findings) = parse_show(FileId(3), text);
    let (show, more) = resolve_show(&script, String::new(), false);
    findings.extend(more);
    for cue in &show.cues {
        let places = match cue {
            WrittenCue::Broken(place) => vec![*place],
            WrittenCue::Good(cue) => vec![
                cue.place,
                cue.figure_place,
                cue.hold_place,
                cue.morph.place,
                cue.land_place.unwrap_or(cue.place),
                cue.pace_place.unwrap_or(cue.place),
            ],
        };
        for place in places {
            assert!(inside(text, place), "{place:?} of a cue in {text:?}");
        }
    }
    for index in &show.order {
        assert!((*index as usize) < show.cues.len());
    }
    // A show that lacks anything says so.
    let complete = show.ending.is_some()
        && !show.order.is_empty()
        && show
            .cues
            .iter()
            .all(|cue| matches!(cue, WrittenCue::Good(_)));
    assert!(
        complete || !findings.is_empty(),
        "nothing found in {text:?}"
    );
    let (rig, more) = read_rig(FileId(3), text, String::new());
    assert!(
        rig.is_some() || !more.is_empty(),
        "no rig and nothing found in {text:?}"
    );
    findings.extend(more);
    for finding in &findings {
        assert!(inside(text, finding.place), "{finding:?} in {text:?}");
        if let Some((place, _)) = &finding.also {
            assert!(inside(text, *place), "{finding:?} in {text:?}");
        }
        assert!(!finding.message.is_empty());
    }
    findings
}

/// Signs and words of both languages, and some that belong to neither.
const WORDS: [&str; 96] = [
    "show",
    "rig",
    "figure",
    "usual",
    "part",
    "play",
    "repeat",
    "run-up",
    "run-down",
    "cue",
    "loop",
    "morph",
    "hold",
    "until",
    "rate",
    "lead",
    "land",
    "free",
    "spin",
    "beam",
    "on",
    "off",
    "name",
    "fastest",
    "at",
    "least",
    "skew",
    "dark",
    "lit",
    "linear",
    "quintic",
    "scurve",
    "bezier",
    "(",
    ")",
    "rose",
    "ring",
    "wheel",
    "outside",
    "star",
    "ratio",
    "circle",
    "deltoid",
    "rotor",
    "a",
    "b",
    "like",
    "{",
    "}",
    "\n",
    "\n",
    "\n",
    "\r\n",
    ",",
    ",\n",
    "#",
    "\"x\"",
    "\"",
    "\\",
    "=",
    ":",
    "/",
    "-",
    "5",
    "3",
    "0",
    "1/3",
    "5:-4",
    "0:0",
    "1e9",
    "0.25",
    "s",
    "ms",
    "min",
    "rpm",
    "rpm/s",
    "Hz",
    "deg",
    "deg/s",
    "%",
    "mN m",
    "none",
    "tick",
    "controller",
    "counts",
    "top-speed",
    "acceleration",
    "draws",
    "clockwise",
    "gear",
    "teeth",
    "to",
    "index",
    "torque",
    "é",
    "\u{feff}",
];

/// The texts of all cases, read once.
static TEXTS: LazyLock<Vec<String>> = LazyLock::new(|| {
    cases::all()
        .iter()
        .map(|path| std::fs::read_to_string(path).unwrap())
        .collect()
});

proptest! {
    #![proptest_config(config(2_000, 1))]

    #[test]
    fn any_bytes_are_read_without_harm(bytes in proptest::collection::vec(any::<u8>(), 0..300)) {
        read(&String::from_utf8_lossy(&bytes));
    }

    #[test]
    fn any_order_of_the_words_is_read_without_harm(
        picks in proptest::collection::vec((0..WORDS.len(), any::<bool>()), 0..120)
    ) {
        let mut text = String::new();
        for (pick, blank) in picks {
            text.push_str(WORDS[pick]);
            if blank {
                text.push(' ');
            }
        }
        read(&text);
    }
}

proptest! {
    #![proptest_config(config(3_000, 2))]

    #[test]
    fn any_change_of_a_case_is_read_without_harm(
        pick in any::<prop::sample::Index>(),
        changes in proptest::collection::vec(
            (any::<prop::sample::Index>(), 0..4_usize, 0..WORDS.len()),
            1..6,
        )
    ) {
        let mut signs: Vec<char> = pick.get(&TEXTS).chars().collect();
        for (at, what, word) in changes {
            let at = at.index(signs.len() + 1);
            match what {
                0 => drop(signs.drain(at..(at + 3).min(signs.len()))),
                1 => drop(signs.splice(at..at, WORDS[word].chars())),
                2 => signs.truncate(at.max(1)),
                _ => {
                    let end = (at + 20).min(signs.len());
                    let again: Vec<char> = signs[at..end].to_vec();
                    signs.splice(at..at, again);
                }
            }
        }
        read(&signs.into_iter().collect::<String>());
    }
}

/// Findings and values without their places.
fn meaning(text: &str) -> (Vec<(String, Option<String>)>, String) {
    let (script, mut findings) = parse_show(FileId(0), text);
    let (show, more) = resolve_show(&script, String::new(), false);
    findings.extend(more);
    let said = findings
        .into_iter()
        .map(|finding| (finding.message, finding.help))
        .collect();
    let values: Vec<String> = show
        .cues
        .iter()
        .map(|cue| match cue {
            WrittenCue::Broken(_) => "broken".to_owned(),
            WrittenCue::Good(cue) => format!(
                "{:?} {:?} {:?} {:?} {:?} {:?} {:?} {} {}",
                cue.figure,
                cue.morph.length,
                cue.morph.law,
                cue.morph.dark,
                cue.hold,
                cue.pace,
                cue.land,
                cue.spin.value(),
                cue.beam
            ),
        })
        .collect();
    (said, format!("{values:?} {:?}", show.order))
}

#[test]
fn line_ends_comments_and_blanks_change_nothing() {
    for path in cases::all() {
        let text = std::fs::read_to_string(&path)
            .unwrap()
            .replace("\r\n", "\n");
        // Texts whose errors are about line ends or comments mean something else with others.
        let plain = meaning(&text);
        assert_eq!(
            meaning(&text.replace('\n', "\r\n")),
            plain,
            "{}",
            path.display()
        );
        assert_eq!(
            meaning(&text.replace('\n', " \t\n\n# more\n")),
            plain,
            "{}",
            path.display()
        );
        assert_eq!(
            meaning(&format!("\u{feff}{}", text.trim_start_matches('\u{feff}'))),
            plain
        );
    }
}
