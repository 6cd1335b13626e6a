//! What a file is, as its first bytes tell.

use crate::setpoint::c_header;
use crate::setpoint::pack::{Content, PackForm, PackHead};
use crate::setpoint::{Form, Output};
use std::ops::RangeInclusive;

/// Counts by which knots may differ from the rows: what a pack's head has room for.
const TOLERANCES: RangeInclusive<u32> = 1..=65_535;

/// What a file is.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(super) enum Kind {
    /// A table of this form.
    Table(Output),
    /// It starts like a table, and does not go on like one.
    Broken(String),
    /// Anything else.
    Log,
}

/// A table is known by its first line or sign; all else is taken for a log, whose reader says what is wrong with it.
pub(super) fn kind(start: &[u8]) -> Kind {
    if start.starts_with(b"PHWT") {
        return match pack_content(start) {
            Ok(content) => Kind::Table(Output::Pack(content)),
            Err(what) => Kind::Broken(what),
        };
    }
    let text = start.strip_prefix(b"\xef\xbb\xbf").unwrap_or(start);
    let text = text.trim_ascii_start();
    if text.starts_with(b"/*") {
        header(text)
    } else if text.starts_with(b"{") {
        match tolerance_within(text) {
            Some(Ok(tolerance)) => Kind::Table(Output::JsonKnots(tolerance)),
            Some(Err(what)) => Kind::Broken(what),
            None => Kind::Table(Output::Rows(Form::Json)),
        }
    } else if text.starts_with(b"tick,") {
        Kind::Table(Output::Rows(Form::Csv))
    } else {
        Kind::Log
    }
}

/// What a pack that starts like this holds.
fn pack_content(start: &[u8]) -> Result<Content, String> {
    let head = PackHead::read(start).map_err(|fault| fault.to_string())?;
    match head.form {
        PackForm::Rows => Ok(Content::Rows),
        PackForm::Knots => tolerance(&head.tolerance.to_string()).map(Content::Knots),
    }
}

/// The tolerance that a table states, where knots can have it.
fn tolerance(stated: &str) -> Result<u32, String> {
    let number = stated.parse().ok().filter(|n| TOLERANCES.contains(n));
    number.ok_or_else(|| {
        let (least, most) = TOLERANCES.into_inner();
        format!("its knots are within `{stated}` counts of its rows, not {least} to {most}")
    })
}

/// A C header: the table's identifier, and what it holds, from the first lines of its table.
fn header(text: &[u8]) -> Kind {
    let text = String::from_utf8_lossy(text);
    let table = text
        .split_once("static const uint8_t ")
        .and_then(|(_, rest)| {
            let (name, rest) = rest.split_once("_table[] PHW_STORE = {")?;
            let bytes = rest.split_once("};").map_or(rest, |(bytes, _)| bytes);
            Some((name.to_owned(), c_header::elements(bytes)))
        });
    match table {
        None => Kind::Broken("it starts like a C header, but has no table".to_owned()),
        Some((name, start)) => match pack_content(&start) {
            Ok(content) => Kind::Table(Output::Header(content, name)),
            Err(what) => Kind::Broken(format!("the first bytes of its table: {what}")),
        },
    }
}

/// The tolerance of knots, where a JSON table has them in place of rows.
fn tolerance_within(start: &[u8]) -> Option<Result<u32, String>> {
    let text = String::from_utf8_lossy(start);
    let (_, after) = text.split_once("\n\"knots\":{\"tolerance\":")?;
    let (number, _) = after.split_once(',')?;
    let number: String = number.chars().take(20).collect();
    Some(tolerance(&number))
}

/// The ID in the start of a table: eight hexadecimal digits.
pub(super) fn id_within(start: &[u8]) -> Option<String> {
    match kind(start) {
        Kind::Table(Output::Pack(_)) => {
            let head = PackHead::read(start).ok()?;
            Some(format!("{:08x}", head.id))
        }
        Kind::Table(Output::Header(..)) => {
            let text = String::from_utf8_lossy(start);
            let (_, bytes) = text.split_once("_table[] PHW_STORE = {")?;
            let head = PackHead::read(&c_header::elements(bytes)).ok()?;
            Some(format!("{:08x}", head.id))
        }
        Kind::Table(Output::Rows(Form::Json) | Output::JsonKnots(_)) => {
            let text = String::from_utf8_lossy(start);
            let (_, after) = text.split_once("\"table\"")?;
            let value = after.trim_start().strip_prefix(':')?.trim_start();
            let (id, _) = value.strip_prefix('"')?.split_once('"')?;
            let right = id.len() == 8 && id.bytes().all(|sign| sign.is_ascii_hexdigit());
            right.then(|| id.to_owned())
        }
        _ => None,
    }
}
