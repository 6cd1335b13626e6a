use crate::{rendered, too_fast};
use insta::assert_snapshot;
use phasewright::finding::Sources;
use phasewright::finding::render::Form;

#[test]
fn the_shape_is_the_documented_one() {
    let (sources, finding) = too_fast();
    assert_snapshot!(rendered(Form::Json, vec![finding], &sources));
}

#[test]
fn no_findings_are_a_whole_document_too() {
    let text = rendered(Form::Json, Vec::new(), &Sources::default());
    let value: serde_json::Value = serde_json::from_str(&text).unwrap();
    assert_eq!(value["findings"], serde_json::json!([]));
    assert_eq!(value["errors"], 0);
}
