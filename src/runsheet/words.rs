//! Times, durations, laws and standing sentences in words.

use super::{Sheet, geared};
use crate::exact::{
    Rational, Seconds, decimal, exact_decimal, from_f64, round_half_up, scaled_decimal, whole,
};
use crate::motion::{Law, LawKind};
use crate::rig::RotorId;
use crate::setpoint::most_sensitive;
use crate::show::Transition;
use num_bigint::BigInt;
use num_integer::Integer;
use num_traits::Signed;

/// Decimals of a number that no shorter decimal is equal to, in CSV and JSON.
const EXACT_PLACES: u32 = 12;

/// What everyone in the room must know; the same on every sheet.
pub(crate) const CAUTIONS: [&str; 3] = [
    "Laser light can injure an eye before it can blink, also by reflection. Nobody looks into the beam or \
     along it at the mirrors, and it never crosses where heads can be. A moving beam is no protection: \
     a mirror that stops leaves it standing still. Know how to switch it off.",
    "The mirrors spin fast enough to injure, and one that comes loose flies. See that they are fixed and behind \
     their guard before each start; keep hands, hair, cords and sleeves away until they have come to rest.",
    "This sheet clears nothing. Local rules and a competent laser safety person decide whether, where and \
     how the show may run.",
];

/// `0:04:21.330`: hours, minutes, seconds, milliseconds, rounded half up.
pub(crate) fn clock(time: &Seconds) -> String {
    clock_to(time.value(), 3)
}

/// `0:04:21.3`: the moment of a peak, in seconds, to a tenth.
pub(super) fn peak_clock(at_s: f64) -> String {
    from_f64(at_s).map_or_else(String::new, |at| clock_to(&at, 1))
}

/// Hours, minutes and seconds with this many decimals, rounded half up.
fn clock_to(time: &Rational, places: u32) -> String {
    let unit = BigInt::from(10).pow(places);
    let units = round_half_up(&(time * Rational::from_integer(unit.clone())));
    let sign = if units.is_negative() { "-" } else { "" };
    let (minutes, rest) = units.abs().div_rem(&(unit * 60));
    let (hours, minutes) = minutes.div_rem(&BigInt::from(60));
    let minutes = minutes.to_string();
    let seconds = scaled_decimal(&rest, places);
    let width = places as usize + 3;
    format!("{sign}{hours}:{minutes:0>2}:{seconds:0>width$}")
}

/// `12 s`, `4 min 21.33 s`, `8 h`.
pub(crate) fn duration(time: &Seconds) -> String {
    let minute = whole(60);
    let minutes = (time.value() / &minute).floor();
    let seconds = time.value() - &minutes * &minute;
    let hours = (&minutes / &minute).floor();
    let minutes = minutes - &hours * &minute;
    let parts = [(hours, "h"), (minutes, "min"), (seconds, "s")];
    let written: Vec<String> = parts
        .iter()
        .filter(|(amount, _)| amount.is_positive())
        .map(|(amount, unit)| format!("{} {unit}", short(amount, 6)))
        .collect();
    if written.is_empty() {
        "0 s".to_owned()
    } else {
        written.join(" ")
    }
}

/// The exact decimal, where it has at most this many places, else rounded to them.
pub(crate) fn short(value: &Rational, places: u32) -> String {
    exact_decimal(value, places).unwrap_or_else(|| decimal(value, places))
}

/// A decimal for programs: exact where twelve places are enough.
pub(super) fn exact(value: &Rational) -> String {
    short(value, EXACT_PLACES)
}

/// A share of a limit for programs, six decimals at most.
pub(super) fn share(share: f64) -> String {
    trimmed(format!("{share:.6}"))
}

/// A moment found by a check, in seconds from row 0, six decimals at most.
pub(super) fn moment(at_s: f64) -> String {
    trimmed(format!("{at_s:.6}"))
}

fn trimmed(text: String) -> String {
    let short = text.trim_end_matches('0').trim_end_matches('.');
    if short == "-0" {
        "0".to_owned()
    } else {
        short.to_owned()
    }
}

/// `quintic skew 30 %`, as a show writes it.
pub(super) fn law(law: &Law) -> String {
    let word = match &law.kind {
        LawKind::Linear => "linear",
        LawKind::Cubic => "cubic",
        LawKind::Quintic => "quintic",
        LawKind::Septic => "septic",
        LawKind::Harmonic => "harmonic",
        LawKind::Cycloidal => "cycloidal",
        LawKind::ModifiedSine => "modified-sine",
        LawKind::ModifiedTrapezoid => "modified-trapezoid",
        LawKind::Scurve => "scurve",
        LawKind::Bezier { x1, y1, x2, y2 } => {
            let [x1, y1, x2, y2] = [x1, y1, x2, y2].map(exact);
            return format!("bezier({x1} {y1} {x2} {y2})");
        }
    };
    if law.skew == crate::exact::ratio(1, 2) {
        word.to_owned()
    } else {
        format!("{word} skew {} %", exact(&(&law.skew * whole(100))))
    }
}

/// `5 s quintic, dark`.
pub(crate) fn transition(transition: &Transition, time: &Seconds) -> String {
    let dark = if transition.dark { ", dark" } else { "" };
    format!("{} {}{dark}", duration(time), law(&transition.law))
}

/// What must be done before row 0, a sentence a step.
pub(super) fn before(sheet: &Sheet<'_>) -> Vec<String> {
    let rest = "Both motors at rest".to_owned();
    match marked(sheet).as_slice() {
        [] => vec![format!(
            "{rest}. This rig has no marks: the mirrors may stand as they like."
        )],
        [one] => vec![format!("{rest}, mirror {one} on its mark.")],
        _ => {
            let mut steps = vec![format!("{rest}, both mirrors on their marks.")];
            steps.extend(off_marks(sheet));
            steps
        }
    }
}

/// How exactly the mirrors must stand on their marks.
fn off_marks(sheet: &Sheet<'_>) -> Option<String> {
    let (allowed, cue) = most_sensitive(sheet.plan)?;
    let degrees = if allowed == whole(1) {
        "degree"
    } else {
        "degrees"
    };
    Some(format!(
        "For each degree that a figure may lie askew, no mirror more than {} {degrees} off its mark (cue {cue} asks for most).",
        short(&allowed, 4)
    ))
}

/// What to do after a stop or a power loss.
pub(super) fn after_stop(sheet: &Sheet<'_>) -> String {
    let marked = marked(sheet);
    let home = match marked.as_slice() {
        [] => String::new(),
        [one] => format!(", bring mirror {one} home to its mark again"),
        _ => ", bring both mirrors home to their marks again".to_owned(),
    };
    format!(
        "Wait until both motors are at rest{home}, and start at row 0. Never go on from the middle."
    )
}

/// The names of the rotors that have a mark.
fn marked(sheet: &Sheet<'_>) -> Vec<&'static str> {
    RotorId::BOTH
        .iter()
        .filter(|id| sheet.plan.rig.rotor(**id).index.is_some())
        .map(|id| id.name())
        .collect()
}

/// `Rotor a: 1 mirror turn = 2 motor turns`, for each geared rotor.
pub(super) fn gears(sheet: &Sheet<'_>) -> Vec<String> {
    RotorId::BOTH
        .iter()
        .filter_map(|id| geared(sheet.plan, *id).map(|gear| (id, gear)))
        .map(|(id, (motor, mirror))| {
            let turns = |count| if count == 1 { "turn" } else { "turns" };
            let name = id.name();
            format!(
                "Rotor {name}: {mirror} mirror {} = {motor} motor {}",
                turns(mirror),
                turns(motor)
            )
        })
        .collect()
}

/// What the table takes in each form, in bytes.
pub(super) fn sizes(sheet: &Sheet<'_>) -> Vec<String> {
    let Some(sizes) = sheet.sizes else {
        return Vec::new();
    };
    let room = sheet.plan.rig.storage.as_ref().map(|storage| {
        let room = grouped(storage.value);
        format!("; the controller has room for a pack of {room} B")
    });
    let part = |form: &str, bytes: Option<u64>, more: &str| {
        bytes.map(|bytes| format!("{form} {} B{more}", grouped(bytes)))
    };
    let parts = |all: [Option<String>; 4]| {
        let all: Vec<String> = all.into_iter().flatten().collect();
        all.join(", ")
    };
    let rows = parts([
        part("pack", sizes.rows.map(|rows| rows.pack), ""),
        part("C header", sizes.rows.map(|rows| rows.c), ""),
        part("CSV", sizes.csv, ""),
        part("JSON", sizes.json, " and its findings"),
    ]);
    let knots = parts([
        part("pack", Some(sizes.knots.pack), ""),
        part("C header", Some(sizes.knots.c), ""),
        part("JSON", sizes.json_knots, " and its findings"),
        None,
    ]);
    let mut lines = Vec::new();
    if sizes.rows.is_some() {
        let uncounted = if sizes.csv.is_none() {
            " (CSV and JSON are not counted in so long a table)"
        } else {
            ""
        };
        lines.push(format!("as rows: {rows}{uncounted}"));
    }
    lines.push(format!("as knots: {knots}{}", room.unwrap_or_default()));
    lines
}

/// A number with a blank before each group of three digits.
fn grouped(number: u64) -> String {
    let digits = number.to_string();
    let mut text = String::new();
    for (index, digit) in digits.chars().enumerate() {
        if index > 0 && (digits.len() - index).is_multiple_of(3) {
            text.push(' ');
        }
        text.push(digit);
    }
    text
}
