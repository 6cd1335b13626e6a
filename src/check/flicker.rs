//! Whether a figure repeats often enough not to flicker.

use super::Standing;
use super::hold::highest_rate;
use super::words::{limit, rate_down};
use crate::exact::{Rational, decimal, exact_decimal};
use crate::finding::{Code, Finding};

pub(super) fn check(standing: &Standing) -> Option<Finding> {
    let least = &standing.rig.repeat;
    let repeats = &standing.speeds.repeat;
    if repeats >= &least.value {
        return None;
    }
    let message = format!(
        "the figure repeats at {} Hz and visibly flickers below {} Hz",
        shown(repeats.value()),
        limit(least.value.value())
    );
    let help = match highest_rate(standing) {
        Some(highest) if &highest >= least.value.value() => Some(format!(
            "`rate {} Hz` is the lowest repeat rate that passes",
            limit(least.value.value())
        )),
        Some(highest) => Some(format!(
            "the motors reach at most {} Hz with this figure",
            rate_down(&highest)
        )),
        None => None,
    };
    Some(
        Finding::new(Code::FlickerRepeat, standing.pace_place(), message)
            .also_at(least.place, "the least repeat rate")
            .help_if(help),
    )
}

fn shown(rate: &Rational) -> String {
    exact_decimal(rate, 3).unwrap_or_else(|| decimal(rate, 3))
}
