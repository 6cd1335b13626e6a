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
    for code in Code::ALL {
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
