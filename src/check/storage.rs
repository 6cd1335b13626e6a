//! Whether the table fits the controller's storage.

use super::words::bytes;
use crate::finding::{Code, Finding, Severity};
use crate::plan::Plan;
use crate::rig::TableKind;
use crate::setpoint::pack::{Content, write_pack};
use std::io::{self, Write};

/// The largest tolerance that a help line proposes, in counts: past it the pieces of a show hardly get fewer.
const MOST_TOLERANCE: u32 = 1000;
/// Up to here every tolerance is tried.
const EACH: u32 = 64;

/// The finding of a table whose pack form is larger than the rig's `storage`.
///
/// `written` is what the pack form holds that is about to be written; `None` where none is (`validate`, and the forms that
/// no controller reads): then the shortest form decides, and rows that alone are too large are worth a note.
#[must_use]
pub fn check(plan: &Plan, written: Option<Content>) -> Option<Finding> {
    let storage = plan.rig.storage.as_ref()?;
    let room = storage.value;
    let over = |severity, message: String, help: Option<String>| {
        let place = storage.place.unwrap_or_default();
        Some(
            Finding::new(Code::StorageOver, place, message)
                .severity(severity)
                .help_if(help),
        )
    };
    if let Some(Content::Knots(tolerance)) = written {
        let size = size_up_to(plan, Content::Knots(tolerance), u64::MAX)?;
        if size <= room {
            return None;
        }
        return over(
            Severity::Error,
            too_large("as knots", size, room),
            help_within(plan, room, tolerance),
        );
    }
    // A rig whose table is knots never has its rows written, unless they are asked for.
    let rows = written == Some(Content::Rows) || plan.rig.table == TableKind::Rows;
    if rows && size_up_to(plan, Content::Rows, room).is_some() {
        return None;
    }
    let knots = size_up_to(plan, Content::Knots(1), u64::MAX)?;
    if knots > room && written.is_none() {
        return over(
            Severity::Error,
            too_large("even as knots", knots, room),
            help_within(plan, room, 1),
        );
    }
    if !rows {
        return None;
    }
    let message = format!(
        "the table as rows takes more than the {} that the controller has room for",
        bytes(room)
    );
    let help = if knots <= room {
        Some(format!(
            "`--knots` (or `table knots` in the rig) makes it {}",
            bytes(knots)
        ))
    } else {
        help_within(plan, room, 1)
    };
    let severity = if written.is_some() {
        Severity::Error
    } else {
        Severity::Note
    };
    over(severity, message, help)
}

fn too_large(how: &str, size: u64, room: u64) -> String {
    format!(
        "the table takes {} {how}, the controller has room for {}",
        bytes(size),
        bytes(room)
    )
}

/// The smallest tolerance above `tolerance` whose knots fit.
///
/// Sizes fall with the tolerance, but not at every step: a search that takes fewer pieces within 30 counts may take one more
/// within 31. So every tolerance is tried up to [`EACH`]; past it, where a count more or less is nothing, they are halved.
fn help_within(plan: &Plan, room: u64, tolerance: u32) -> Option<String> {
    let fits = |tolerance: u32| size_up_to(plan, Content::Knots(tolerance), room);
    let (mut fails, mut tried) = (tolerance, tolerance.saturating_mul(2));
    let mut fitting = loop {
        let within = tried.min(MOST_TOLERANCE);
        match fits(within) {
            Some(size) => break (within, size),
            None if within <= fails || within == MOST_TOLERANCE => return None,
            None => (fails, tried) = (within, within.saturating_mul(2)),
        }
    };
    let each = (fails + 1..fitting.0.min(EACH)).find_map(|within| Some((within, fits(within)?)));
    if let Some(found) = each {
        fitting = found;
    } else {
        fails = fails.max(fitting.0.min(EACH).saturating_sub(1));
        while fails + 1 < fitting.0 {
            let within = fails.midpoint(fitting.0);
            match fits(within) {
                Some(size) => fitting = (within, size),
                None => fails = within,
            }
        }
    }
    let (within, size) = fitting;
    Some(format!(
        "`--knots within {within} counts` is the closest that fits: {}",
        bytes(size)
    ))
}

/// The size of a pack; `None` where it is more than `most`, which is found out without writing it to the end.
fn size_up_to(plan: &Plan, content: Content, most: u64) -> Option<u64> {
    let mut room = Room { left: most };
    write_pack(plan, content, &mut room, &mut |_| {}).ok()
}

/// Takes so many bytes and no more.
struct Room {
    left: u64,
}

impl Write for Room {
    fn write(&mut self, bytes: &[u8]) -> io::Result<usize> {
        self.left = self
            .left
            .checked_sub(bytes.len() as u64)
            .ok_or(io::ErrorKind::StorageFull)?;
        Ok(bytes.len())
    }

    fn flush(&mut self) -> io::Result<()> {
        Ok(())
    }
}
