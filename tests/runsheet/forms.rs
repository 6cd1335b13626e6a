use crate::steady::steady;
use crate::{evening, sheet, there_and_back};
use insta::assert_snapshot;
use phasewright::finding::{Code, Finding, Place};
use phasewright::runsheet::Form;
use phasewright::show::WrittenCue;
use std::sync::Arc;

#[test]
fn text_of_a_loop() {
    assert_snapshot!(steady(&sheet(&evening(), &[], Form::Text)));
}

#[test]
fn text_of_a_show_with_a_run_down() {
    assert_snapshot!(steady(&sheet(&there_and_back(), &[], Form::Text)));
}

#[test]
fn markdown_of_a_loop() {
    assert_snapshot!(steady(&sheet(&evening(), &[], Form::Markdown)));
}

#[test]
fn json_of_a_loop() {
    assert_snapshot!(steady(&sheet(&evening(), &[], Form::Json)));
}

#[test]
fn csv_of_a_loop() {
    assert_snapshot!(sheet(&evening(), &[], Form::Csv));
}

#[test]
fn text_is_at_most_a_hundred_columns_wide() {
    for plan in [evening(), there_and_back()] {
        for line in sheet(&plan, &[], Form::Text).lines() {
            assert!(line.chars().count() <= 100, "{line}");
        }
    }
}

#[test]
fn a_warning_stands_at_its_cue() {
    let plan = there_and_back();
    let warning = Finding::new(Code::FlickerRepeat, Place::default(), "it flickers");
    let general = Place {
        file: phasewright::finding::FileId(7),
        start: 3,
        end: 5,
    };
    let usual = Finding::new(Code::StallCrossing, general, "it trembles");
    let text = sheet(&plan, &[warning, usual], Form::Text);
    let (head, cues) = text.split_once("THE SHOW").unwrap();
    assert!(
        head.contains("! it trembles") && !head.contains("flickers"),
        "{text}"
    );
    assert!(
        cues.contains("! it flickers") && !cues.contains("trembles"),
        "{text}"
    );
}

/// Names that would break out of a field: RFC 4180 and Markdown keep them whole.
#[test]
fn no_name_breaks_a_form() {
    let mut plan = there_and_back();
    let name = "say \"ah\", | <b>now</b>\u{1b}";
    let show = Arc::make_mut(&mut plan.show);
    if let Some(WrittenCue::Good(cue)) = show.cues.first_mut() {
        cue.name = Some(name.to_owned());
    }
    let csv = sheet(&plan, &[], Form::Csv);
    let mut reader = csv::Reader::from_reader(csv.as_bytes());
    let column = reader
        .headers()
        .unwrap()
        .iter()
        .position(|head| head == "name")
        .unwrap();
    let record = reader.records().next().unwrap().unwrap();
    assert_eq!(&record[column], name);
    let json: serde_json::Value = serde_json::from_str(&sheet(&plan, &[], Form::Json)).unwrap();
    assert_eq!(json["cues"][0]["name"], name);
    let markdown = sheet(&plan, &[], Form::Markdown);
    assert!(
        markdown.contains("say \"ah\", \\| \\<b\\>now\\</b\\>␛"),
        "{markdown}"
    );
    assert!(!sheet(&plan, &[], Form::Text).contains('\u{1b}'));
}
