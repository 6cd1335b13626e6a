use crate::{SHOW, place_of, rendered, too_fast};
use insta::assert_snapshot;
use phasewright::finding::render::{Form, MOST_PRINTED, write};
use phasewright::finding::{Code, Finding, Place, Sources, ordered};

/// One finding at the first `words` of a file.
fn at(text: &str, words: &str) -> String {
    let mut sources = Sources::default();
    let file = sources.add("one.show", text);
    let finding = Finding::new(
        Code::TextSyntax,
        place_of(file, text, words),
        "this does not belong",
    );
    rendered(Form::Text, vec![finding], &sources)
}

/// The widest line of a rendering, in characters.
fn widest(text: &str) -> usize {
    text.lines().map(|line| line.chars().count()).max().unwrap()
}

#[test]
fn a_finding_shows_both_places_and_its_help() {
    let (sources, finding) = too_fast();
    assert_snapshot!(rendered(Form::Text, vec![finding], &sources));
}

#[test]
fn findings_of_one_code_at_one_place_are_one_with_a_count() {
    let (sources, finding) = too_fast();
    let text = rendered(Form::Text, vec![finding; 3], &sources);
    assert!(
        text.starts_with("harbour.show:5:11: error limit/acceleration, 3 times\n"),
        "{text}"
    );
    assert_eq!(text.matches("limit/acceleration").count(), 1);
}

#[test]
fn errors_come_before_warnings_before_notes() {
    let mut sources = Sources::default();
    let file = sources.add("harbour.show", SHOW);
    let found = |code, words| Finding::new(code, place_of(file, SHOW, words), "…");
    let text = rendered(
        Form::Text,
        vec![
            found(Code::TimeRounded, "cue deltoid"),
            found(Code::FlickerRepeat, "deltoid"),
            found(Code::StallHold, "eight"),
        ],
        &sources,
    );
    let heads: Vec<&str> = text
        .lines()
        .filter(|line| line.starts_with("harbour"))
        .collect();
    assert_eq!(
        heads,
        [
            "harbour.show:5:5: error stall/hold",
            "harbour.show:4:5: warning flicker/repeat",
            "harbour.show:4:1: note time/rounded",
        ]
    );
}

#[test]
fn help_is_never_wrapped() {
    let (sources, finding) = too_fast();
    let long = "value ".repeat(100);
    let text = rendered(Form::Text, vec![finding.help(long.trim_end())], &sources);
    assert!(text.contains(long.trim_end()), "{text}");
}

#[test]
fn the_place_may_be_the_end_of_the_file() {
    let mut sources = Sources::default();
    let text = "show \"x\"\ncue deltoid hold 5 s";
    let file = sources.add("one.show", text);
    let end = Place {
        file,
        start: text.len(),
        end: text.len(),
    };
    let finding = Finding::new(Code::TextMissing, end, "the show has no ending");
    assert_snapshot!(rendered(Form::Text, vec![finding], &sources));
}

#[test]
fn the_place_may_be_the_empty_last_line() {
    let mut sources = Sources::default();
    let file = sources.add("one.show", "show \"x\"\n");
    let end = Place {
        file,
        start: 9,
        end: 9,
    };
    let finding = Finding::new(Code::TextMissing, end, "the show has no ending");
    assert_snapshot!(rendered(Form::Text, vec![finding], &sources));
}

#[test]
fn an_empty_file_has_no_excerpt() {
    let mut sources = Sources::default();
    let file = sources.add("empty.show", "");
    let place = Place {
        file,
        start: 0,
        end: 0,
    };
    let finding = Finding::new(Code::TextMissing, place, "the show is empty");
    assert_snapshot!(rendered(Form::Text, vec![finding], &sources));
}

#[test]
fn tabs_and_wide_signs_keep_the_mark_under_its_words() {
    assert_snapshot!(at("cue 鏡の花\thold\tten s\n", "ten"));
}

#[test]
fn carriage_returns_are_not_shown() {
    assert_snapshot!(at("show \"x\"\r\ncue deltoid holt\r\nloop\r\n", "holt"));
}

#[test]
fn a_place_over_several_lines_is_marked_in_its_first() {
    assert_snapshot!(at(
        "cue deltoid,\n    hold 5 s\nloop\n",
        "deltoid,\n    hold 5 s"
    ));
}

#[test]
fn of_a_very_long_line_a_window_is_shown() {
    let line = format!("{}WRONG{}", "a ".repeat(250_000), " b".repeat(250_000));
    let text = at(&line, "WRONG");
    assert!(text.starts_with("one.show:1:500001: error text/syntax\n"));
    assert!(text.contains("WRONG"));
    assert!(widest(&text) < 140, "{text}");
}

#[test]
fn of_a_very_long_place_the_start_is_shown() {
    let text = at(&"a".repeat(1_000_000), &"a".repeat(1_000_000));
    assert!(widest(&text) < 140, "{text}");
}

#[test]
fn nothing_in_a_file_can_steer_the_terminal() {
    let text = at("cue \u{1b}[2J\u{7}\u{202e}evil\u{0}\n", "evil");
    let steering = |sign: char| sign.is_control() && sign != '\n';
    assert!(
        !text.contains(steering) && !text.contains('\u{202e}'),
        "{text:?}"
    );
    assert_snapshot!(text);
}

#[test]
fn colour_comes_only_when_asked_for() {
    let (sources, finding) = too_fast();
    let mut colored = Vec::new();
    write(
        Form::Text,
        std::slice::from_ref(&finding),
        &sources,
        true,
        &mut colored,
    )
    .unwrap();
    assert!(colored.contains(&0x1b));
    assert!(!rendered(Form::Text, vec![finding], &sources).contains('\u{1b}'));
}

#[test]
fn past_a_thousand_the_rest_is_counted() {
    let mut sources = Sources::default();
    let text = "x\n".repeat(1500);
    let file = sources.add("many.show", text);
    let found = |line: usize| {
        let place = Place {
            file,
            start: line * 2,
            end: line * 2 + 1,
        };
        let code = if line < 1200 {
            Code::TextSyntax
        } else {
            Code::FlickerRepeat
        };
        Finding::new(code, place, "…")
    };
    let text = rendered(Form::Text, (0..1500).map(found).collect(), &sources);
    assert_eq!(text.matches("many.show:").count(), MOST_PRINTED);
    let last = text.trim_end().lines().last().unwrap();
    assert_eq!(
        last,
        "500 more findings not printed: 200 errors, 300 warnings"
    );
}

#[test]
fn no_findings_are_no_text() {
    assert_eq!(rendered(Form::Text, Vec::new(), &Sources::default()), "");
}

#[test]
fn merging_keeps_what_the_findings_say_differently() {
    let mut sources = Sources::default();
    let file = sources.add("harbour.show", SHOW);
    let place = place_of(file, SHOW, "show");
    let found = |message| Finding::new(Code::TextMissing, place, message);
    let all = ordered(vec![
        found("no rig").help("write one"),
        found("no ending").help("write `loop`"),
        found("no rig").help("write one"),
    ]);
    assert_eq!(all.len(), 1);
    assert_eq!(all[0].message, "no rig; no ending");
    assert_eq!(all[0].help.as_deref(), Some("write one; write `loop`"));
    assert_eq!(all[0].count, 3);
}

#[test]
fn a_cue_repeated_for_ever_keeps_a_short_message() {
    let place = Place {
        file: Sources::default().add("x", "x"),
        start: 0,
        end: 1,
    };
    let found = |value| Finding::new(Code::LimitSpeed, place, format!("{value} rpm"));
    let all = ordered((0..10_000).map(found).collect());
    assert_eq!((all.len(), all[0].count), (1, 10_000));
    assert_eq!(all[0].message, "0 rpm; 1 rpm; 2 rpm; 3 rpm");
}
