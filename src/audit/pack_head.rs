//! The head of a pack against the rig and the plan, each field worked out here.

use super::wanted::nearest;
use super::{Problem, Report};
use crate::exact::Rational;
use crate::plan::Plan;
use crate::rig::{Rotor, RotorId};
use crate::setpoint::pack::{Content, PackForm, PackHead, PackRotor};
use num_bigint::BigInt;
use num_integer::Integer;
use num_traits::ToPrimitive;

/// Bytes of a block that the compiler fills at most.
const BLOCK_BYTES: u16 = 1024;

/// Bytes of a title at most.
const MOST_TITLE_BYTES: usize = 255;

/// Names every field of `found` that is not as it must be.
pub(super) fn check(
    plan: &Plan,
    id: &str,
    content: Content,
    found: &PackHead,
    report: &mut Report,
) {
    let mut same = |name: &str, wanted: String, found: String| {
        if wanted != found {
            report.add(Problem {
                tick: None,
                column: format!("head, {name}"),
                wanted,
                found,
            });
        }
    };
    let form = match content {
        Content::Rows => "rows".to_owned(),
        Content::Knots(tolerance) => format!("knots within {tolerance}"),
    };
    let found_form = match found.form {
        PackForm::Rows if found.tolerance == 0 => "rows".to_owned(),
        PackForm::Rows => format!("rows within {}", found.tolerance),
        PackForm::Knots => format!("knots within {}", found.tolerance),
    };
    same("form", form, found_form);
    same("table", id.to_owned(), format!("{:08x}", found.id));
    same("rows", plan.rows().to_string(), found.ticks.to_string());
    let start = |tick: Option<u64>| tick.map_or("none".to_owned(), |tick| tick.to_string());
    let loop_start = plan.loop_start().map(|tick| tick.0);
    same("loop start", start(loop_start), start(found.loop_start));
    let tick = plan.tick().value();
    same(
        "tick_s",
        format!("{}/{}", tick.numer(), tick.denom()),
        format!("{}/{}", found.tick.0, found.tick.1),
    );
    let latency = nearest(&(plan.rig.latency.value() / tick));
    same(
        "latency_ticks",
        latency.to_string(),
        found.latency.to_string(),
    );
    for id in RotorId::BOTH {
        let wanted = rotor_fields(plan.rig.rotor(id), tick);
        for ((name, wanted), found) in wanted.into_iter().zip(found_fields(found.rotors.of(id))) {
            same(&format!("rotor_{}.{name}", id.name()), wanted, found);
        }
    }
    let titles = [
        ("show", &plan.show.title, &found.show),
        ("rig", &plan.rig.title, &found.rig),
    ];
    for (name, wanted, found) in titles {
        let wanted = cut(wanted.as_deref().unwrap_or_default());
        same(
            &format!("{name}.title"),
            format!("`{wanted}`"),
            format!("`{found}`"),
        );
    }
    same(
        "largest block",
        BLOCK_BYTES.to_string(),
        found.largest.to_string(),
    );
    same("flags", "0".to_owned(), found.optional.to_string());
}

/// What the head must say of a rotor. It slows down by ⌊deceleration · tick² · counts · 2³²⌋ at most, at least by 1.
fn rotor_fields(rotor: &Rotor, tick: &Rational) -> [(&'static str, String); 5] {
    let slowing = rotor.deceleration.value.value();
    let over: BigInt = slowing.numer() * tick.numer() * tick.numer() * rotor.counts;
    let under: BigInt = slowing.denom() * tick.denom() * tick.denom();
    let slowed: BigInt = (over << 32_u32).div_floor(&under);
    let slowed = slowed.to_u64().unwrap_or(u64::MAX).clamp(1, (1 << 62) - 1);
    let gear = &rotor.gear.value;
    [
        ("counts", rotor.counts.to_string()),
        ("deceleration", slowed.to_string()),
        ("gear", format!("{}:{}", gear.motor, gear.mirror)),
        ("sense", if rotor.sense < 0 { "-1" } else { "1" }.to_owned()),
        ("index mark", mark(rotor.index.is_some())),
    ]
}

fn found_fields(rotor: &PackRotor) -> [String; 5] {
    [
        rotor.counts.to_string(),
        rotor.deceleration.to_string(),
        format!("{}:{}", rotor.gear.0, rotor.gear.1),
        rotor.sense.to_string(),
        mark(rotor.index),
    ]
}

fn mark(there: bool) -> String {
    if there { "yes" } else { "no" }.to_owned()
}

/// The whole characters of a title that fit.
fn cut(title: &str) -> &str {
    let ends = title.char_indices().map(|(at, sign)| at + sign.len_utf8());
    let end = ends.take_while(|end| *end <= MOST_TITLE_BYTES).last();
    title.get(..end.unwrap_or(0)).unwrap_or_default()
}
