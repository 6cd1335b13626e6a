//! The page that plays the show: one file that needs nothing else and asks for nothing.
//!
//! The files of `page/` are put into one: markup with places for what is said of the show, style, script, and the
//! [`Scene`] as data. What a show file says reaches the page as escaped text or as data, never as markup; the page's own
//! policy allows its one script and its one style, by their hashes, and no request at all.

use super::scene::Scene;
use super::svg::{MARK, escape};
use super::{Show, numeral::Precise};
use crate::exact::{Seconds, Ticks};
use crate::finding::Severity;
use crate::finding::render::counted;
use crate::runsheet::words::{CAUTIONS, duration};
use base64::Engine;
use base64::prelude::BASE64_STANDARD;
use sha2::{Digest, Sha256};
use std::fmt::Write;

const MARKUP: &str = include_str!("page/page.html");
const STYLE: &str = concat!(
    include_str!("page/page.css"),
    include_str!("page/course.css"),
    include_str!("page/lists.css")
);
/// Plain scripts that share one scope, each using only those before it when it is read.
const SCRIPTS: [&str; 10] = [
    include_str!("page/words.js"),
    include_str!("page/motion.js"),
    include_str!("page/optics.js"),
    include_str!("page/eye.js"),
    include_str!("page/graph.js"),
    include_str!("page/strip.js"),
    include_str!("page/course.js"),
    include_str!("page/lists.js"),
    include_str!("page/player.js"),
    include_str!("page/controls.js"),
];
const MAIN: &str = include_str!("page/main.js");

/// What the run sheet says of itself, said of a page.
const NO_CLEARANCE: &str = "This page clears nothing, and light on a screen is no measure of light in a room. Local rules \
     and a competent laser safety person decide whether, where and how the show may run.";

/// The page of a show, from the scene that was made of the same plan and findings.
///
/// # Errors
///
/// None that a scene can cause; see [`Scene::json`].
pub fn page(show: &Show, scene: &Scene) -> serde_json::Result<String> {
    let script = script();
    // Nothing in a script element ends it, or starts a comment, without a `<`.
    let data = scene.json()?.replace('<', "\\u003c");
    Ok(filled(MARKUP, |place| match place {
        "mark" => MARK.to_owned(),
        "policy" => policy(&script),
        "title" => escape(&show.title).into_owned(),
        "rig" => escape(scene.rig.as_deref().unwrap_or("untitled rig")).into_owned(),
        "length" => length(show),
        "table" => scene.table.clone(),
        "verdict" => verdict(show),
        "from" => from(show).to_owned(),
        "none" => none(scene).to_owned(),
        "left-out" => left_out(scene),
        "cautions" => cautions(),
        "small-print" => escape(&small_print(show, scene)).into_owned(),
        "style" => STYLE.to_owned(),
        "script" => script.clone(),
        "scene" => data.clone(),
        _ => String::new(),
    }))
}

/// All scripts in a scope of their own.
fn script() -> String {
    format!(
        "\"use strict\";\n(() => {{\n{}\n{MAIN}}})();\n",
        SCRIPTS.concat()
    )
}

/// Only this script and this style, no request, no frame, no form.
fn policy(script: &str) -> String {
    let hash = |text: &str| BASE64_STANDARD.encode(Sha256::digest(text));
    format!(
        "default-src 'none'; script-src 'sha256-{}'; style-src 'sha256-{}'; img-src data:; base-uri 'none'; form-action 'none'",
        hash(script),
        hash(STYLE)
    )
}

/// The template with every `<!--@place-->` replaced; what is put in is not looked through again.
fn filled(template: &str, mut value: impl FnMut(&str) -> String) -> String {
    let mut out = String::new();
    let mut rest = template;
    while let Some((before, after)) = rest.split_once("<!--@") {
        out.push_str(before);
        let (place, after) = after.split_once("-->").unwrap_or((after, ""));
        out.push_str(&value(place));
        rest = after;
    }
    out.push_str(rest);
    out
}

fn length(show: &Show) -> String {
    let plan = show.plan;
    let time = |ticks: Ticks| -> Seconds { ticks.time(plan.tick()) };
    match plan.loop_start() {
        Some(start) => format!(
            "a round lasts {}, after a run-up of {}",
            duration(&time(Ticks(plan.total().0 - start.0))),
            duration(&time(plan.show_start()))
        ),
        None => format!(
            "lasts {}, run-up and run-down included",
            duration(&time(plan.total()))
        ),
    }
}

/// How many errors and warnings there are; nothing of a show without any, since that clears nothing.
fn verdict(show: &Show) -> String {
    let count = |severity: Severity| {
        let same = |found: &&(_, _)| found_severity(found) == severity;
        show.found.iter().filter(same).count()
    };
    let parts: Vec<String> = [(Severity::Error, "error"), (Severity::Warning, "warning")]
        .into_iter()
        .map(|(severity, word)| (count(severity), word))
        .filter(|(count, _)| *count > 0)
        .map(|(count, word)| counted(count, word))
        .collect();
    if parts.is_empty() {
        return String::new();
    }
    format!(
        "<p><a href=\"#findings-title\">{} found</a></p>",
        parts.join(" and ")
    )
}

fn found_severity(found: &(crate::finding::Finding, Vec<usize>)) -> Severity {
    found.0.severity
}

fn from(show: &Show) -> &'static str {
    if show.plan.loop_start().is_some() {
        "each round begins"
    } else {
        "the run-up ends"
    }
}

fn none(scene: &Scene) -> &'static str {
    if scene.findings.is_empty() {
        "<p>None. That says what this program looked at, no more.</p>"
    } else {
        ""
    }
}

fn left_out(scene: &Scene) -> String {
    if scene.left_out == 0 {
        return String::new();
    }
    let Precise(end) = scene.run_s;
    format!(
        "<p>This page plays the first {} cues, {:.0} s; {} more are not on it.</p>",
        scene.cues.len(),
        end,
        scene.left_out
    )
}

fn cautions() -> String {
    let mut out = String::new();
    for caution in [CAUTIONS[0], CAUTIONS[1], NO_CLEARANCE] {
        // Writing to a String cannot fail.
        let _ = writeln!(out, "<p>{}</p>", escape(caution));
    }
    out
}

fn small_print(show: &Show, scene: &Scene) -> String {
    format!(
        "Light is {}. A standing moment shows whole repeat periods, at least 1/50 s; while the show plays, light fades with \
         0.08 s of the show's time; brightness goes with the cube root of light per length. {}. Made by {}.",
        show.optics.model().words(),
        sentence(&show.beam_words()),
        scene.program
    )
}

/// With a capital letter.
fn sentence(words: &str) -> String {
    let mut signs = words.chars();
    signs.next().map_or_else(String::new, |first| {
        first.to_uppercase().chain(signs).collect()
    })
}
