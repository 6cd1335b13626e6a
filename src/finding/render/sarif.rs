//! Findings as SARIF 2.1.0 (OASIS, "Static Analysis Results Interchange Format"), for viewers and continuous integration.
//!
//! One run; one reporting descriptor ("rule") for each code that occurs, with its page as help in Markdown; columns in
//! Unicode code points, as `columnKind` says. Findings that are left out are counted in the run's property bag.

use super::printed;
use crate::finding::{Code, Finding, Locator, Place, Severity, Sources};
use serde_json::{Map, Value, json};
use std::fmt::Write as _;
use std::io::{self, Write};

/// Where the standard's schema is published.
const SCHEMA: &str =
    "https://docs.oasis-open.org/sarif/sarif/v2.1.0/errata01/os/schemas/sarif-schema-2.1.0.json";

pub(super) fn write(
    findings: &[Finding],
    sources: &Sources,
    out: &mut dyn Write,
) -> io::Result<()> {
    let locator = Locator::new(sources);
    let (shown, left_out) = printed(findings);
    let mut codes: Vec<Code> = shown.iter().map(|finding| finding.code).collect();
    codes.sort_unstable();
    codes.dedup();
    let results: Vec<Value> = shown
        .iter()
        .map(|finding| result(finding, &codes, &locator))
        .collect();
    let log = json!({
        "$schema": SCHEMA,
        "version": "2.1.0",
        "runs": [{
            "tool": { "driver": {
                "name": "phasewright",
                "version": env!("CARGO_PKG_VERSION"),
                "semanticVersion": env!("CARGO_PKG_VERSION"),
                "rules": codes.iter().map(|code| rule(*code)).collect::<Vec<_>>(),
            }},
            "columnKind": "unicodeCodePoints",
            "results": results,
            "properties": { "leftOut": left_out.total() },
        }],
    });
    serde_json::to_writer_pretty(&mut *out, &log)?;
    writeln!(out)
}

fn level(severity: Severity) -> &'static str {
    // The standard's words for the three levels happen to be ours.
    severity.word()
}

fn rule(code: Code) -> Value {
    json!({
        "id": code.text(),
        "shortDescription": { "text": code.summary() },
        "help": { "text": code.page(), "markdown": code.page() },
        "defaultConfiguration": { "level": level(code.severity()) },
    })
}

fn result(finding: &Finding, codes: &[Code], locator: &Locator<'_>) -> Value {
    let text = match &finding.help {
        Some(help) => format!("{}. Help: {help}", finding.message),
        None => finding.message.clone(),
    };
    let mut result = json!({
        "ruleId": finding.code.text(),
        "ruleIndex": codes.binary_search(&finding.code).unwrap_or_default(),
        "level": level(finding.severity),
        "message": { "text": text },
        "locations": [location(finding.place, locator)],
        "occurrenceCount": finding.count,
    });
    if let (Some(object), Some((place, label))) = (result.as_object_mut(), &finding.also) {
        let mut second = location(*place, locator);
        second.insert("message".to_owned(), json!({ "text": label }));
        object.insert("relatedLocations".to_owned(), json!([second]));
    }
    result
}

fn location(place: Place, locator: &Locator<'_>) -> Map<String, Value> {
    let mut physical = Map::new();
    let uri = uri_reference(locator.name(place.file));
    physical.insert("artifactLocation".to_owned(), json!({ "uri": uri }));
    // A file without text (it could not be read, or is empty) has no region.
    if !locator.text(place.file).is_empty() {
        let (start, end) = (locator.start(place), locator.end(place));
        let region = json!({
            "startLine": start.line,
            "startColumn": start.column,
            "endLine": end.line,
            "endColumn": end.column,
        });
        physical.insert("region".to_owned(), region);
    }
    let mut location = Map::new();
    location.insert("physicalLocation".to_owned(), Value::Object(physical));
    location
}

/// A file name as a URI reference (RFC 3986): what is not plain is percent-encoded, an absolute path becomes a `file:` URI.
fn uri_reference(name: &str) -> String {
    let slashed = if cfg!(windows) {
        name.replace('\\', "/")
    } else {
        name.to_owned()
    };
    let mut uri = if slashed.starts_with('/') {
        "file://".to_owned()
    } else {
        String::new()
    };
    for byte in slashed.bytes() {
        match byte {
            b'A'..=b'Z' | b'a'..=b'z' | b'0'..=b'9' | b'-' | b'.' | b'_' | b'~' | b'/' => {
                uri.push(char::from(byte));
            }
            // Writing to a String cannot fail.
            _ => drop(write!(uri, "%{byte:02X}")),
        }
    }
    uri
}
