use crate::{place_of, rendered, too_fast};
use phasewright::finding::render::Form;
use phasewright::finding::{Code, Finding, Sources};
use serde_json::{Value, json};

fn log(findings: Vec<Finding>, sources: &Sources) -> Value {
    serde_json::from_str(&rendered(Form::Sarif, findings, sources)).unwrap()
}

/// What SARIF 2.1.0 requires of the objects we write (sections 3.13, 3.14, 3.19, 3.27, 3.30, 3.49; from memory).
#[test]
fn every_required_property_is_there() {
    let (sources, finding) = too_fast();
    let log = log(vec![finding], &sources);
    assert_eq!(log["version"], "2.1.0");
    let run = &log["runs"][0];
    assert_eq!(run["tool"]["driver"]["name"], "phasewright");
    let rules = run["tool"]["driver"]["rules"].as_array().unwrap();
    let results = run["results"].as_array().unwrap();
    assert_eq!(results.len(), 1);
    for result in results {
        let rule = &rules[result["ruleIndex"].as_u64().unwrap() as usize];
        assert_eq!(rule["id"], result["ruleId"]);
        assert!(["none", "note", "warning", "error"].contains(&result["level"].as_str().unwrap()));
        assert!(!result["message"]["text"].as_str().unwrap().is_empty());
    }
}

#[test]
fn places_are_regions_in_code_points() {
    let (sources, finding) = too_fast();
    let log = log(vec![finding], &sources);
    assert_eq!(log["runs"][0]["columnKind"], "unicodeCodePoints");
    let result = &log["runs"][0]["results"][0];
    let physical = &result["locations"][0]["physicalLocation"];
    assert_eq!(physical["artifactLocation"]["uri"], "harbour.show");
    let region = json!({ "startLine": 5, "startColumn": 11, "endLine": 5, "endColumn": 20 });
    assert_eq!(physical["region"], region);
    let second = &result["relatedLocations"][0];
    assert_eq!(
        second["physicalLocation"]["artifactLocation"]["uri"],
        "rigs/wall.rig"
    );
    assert_eq!(second["message"]["text"], "the limit");
}

#[test]
fn file_names_become_uri_references() {
    // RFC 3986, sections 2.1 and 2.3: all but the unreserved signs are percent-encoded, by their UTF-8 bytes.
    let mut sources = Sources::default();
    let file = sources.add("my shows/é#1.show", "x");
    let absolute = sources.add("/srv/a.show", "x");
    let found = |file| Finding::new(Code::TextSyntax, place_of(file, "x", "x"), "…");
    let log = log(vec![found(file), found(absolute)], &sources);
    let uri = |at: usize| {
        let result = &log["runs"][0]["results"][at];
        result["locations"][0]["physicalLocation"]["artifactLocation"]["uri"].clone()
    };
    assert_eq!(uri(0), "my%20shows/%C3%A9%231.show");
    assert_eq!(uri(1), "file:///srv/a.show");
}

#[test]
fn merged_findings_tell_their_count() {
    let (sources, finding) = too_fast();
    let log = log(vec![finding; 4], &sources);
    assert_eq!(log["runs"][0]["results"][0]["occurrenceCount"], 4);
}
