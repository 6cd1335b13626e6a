//! Every page's example really draws the finding that it explains.

use crate::builder::{RIG, Run};
use phasewright::finding::Code;
use serde_json::Value;

/// The first block of a page that is fenced as `kind`.
fn block<'p>(page: &'p str, kind: &str) -> Option<&'p str> {
    let (_, rest) = page.split_once(&format!("```{kind}\n"))?;
    rest.split_once("```").map(|(text, _)| text)
}

#[test]
fn every_example_draws_its_finding() {
    for code in Code::ALL.iter().filter(|code| !is_of_a_log(**code)) {
        let rig = block(code.page(), "rig").unwrap_or(RIG);
        let ran = Run::new(&["validate", "--findings", "json", "example.show"])
            .with("example.show", block(code.page(), "show").unwrap())
            .with("north-wall.rig", rig)
            .run();
        let document: Value = serde_json::from_str(&ran.stdout).unwrap();
        let findings = document["findings"].as_array().unwrap();
        let drawn = findings
            .iter()
            .any(|finding| finding["code"] == code.text());
        assert!(drawn, "the example of {} draws {:#}", code.text(), document);
    }
}

/// Whether a finding is about something measured on a machine, which a show alone cannot draw.
fn is_of_a_log(code: Code) -> bool {
    code.text().starts_with("audit/") || code.text().starts_with("drift/")
}

/// Logs short enough to stand on a page are audited; the others come from simulated machines, see `tests/logs`.
#[test]
fn every_log_on_a_page_draws_its_finding() {
    let mut logs = 0;
    for code in Code::ALL.iter().filter(|code| is_of_a_log(**code)) {
        let Some(log) = block(code.page(), "csv") else {
            continue;
        };
        let ran = Run::new(&[
            "audit",
            "log.csv",
            "--show",
            "example.show",
            "--findings",
            "json",
        ])
        .with("example.show", block(code.page(), "show").unwrap())
        .with("north-wall.rig", RIG)
        .with("log.csv", log)
        .run();
        let document: Value = serde_json::from_str(&ran.stderr).unwrap();
        let findings = document["findings"].as_array().unwrap();
        let drawn = findings
            .iter()
            .any(|finding| finding["code"] == code.text());
        assert!(drawn, "the log of {} draws {:#}", code.text(), document);
        logs += 1;
    }
    assert_eq!(logs, 2);
}
