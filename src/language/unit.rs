//! Units by kind, and what each is worth in the unit of its exact type.

use crate::exact::{Rational, ratio};

/// What a quantity measures.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Kind {
    /// In seconds.
    Duration,
    /// In turns per second.
    Speed,
    /// In turns per second squared.
    Acceleration,
    /// In turns per second cubed.
    Jerk,
    /// In turns.
    Angle,
    /// In radians: no exact part of a turn.
    Divergence,
    /// In metres.
    Length,
    /// In watts.
    Power,
    /// In newton metres.
    Torque,
    /// In kilogram square metres.
    Inertia,
    /// In bytes.
    Storage,
    /// As a part of one.
    Share,
}

impl Kind {
    /// "a duration", "an angle".
    pub(super) fn noun(self) -> &'static str {
        match self {
            Kind::Duration => "a duration",
            Kind::Speed => "a speed",
            Kind::Acceleration => "a change of speed",
            Kind::Jerk => "a jerk",
            Kind::Angle => "an angle",
            Kind::Divergence => "a divergence",
            Kind::Length => "a length",
            Kind::Power => "a power",
            Kind::Torque => "a torque",
            Kind::Inertia => "an inertia",
            Kind::Storage => "a size of storage",
            Kind::Share => "a share",
        }
    }
    /// Its units, in the order of the reference, for a help line: "`ms`, `s`, `min` or `h`".
    pub(super) fn units(self) -> String {
        let words: Vec<String> = UNITS
            .iter()
            .filter(|unit| unit.kind == self)
            .map(|unit| format!("`{}`", unit.text))
            .collect();
        one_of(&words)
    }
}

/// "a, b or c".
pub(super) fn one_of(words: &[String]) -> String {
    match words.split_last() {
        None => String::new(),
        Some((last, [])) => last.clone(),
        Some((last, rest)) => format!("{} or {last}", rest.join(", ")),
    }
}

/// One unit.
pub(super) struct Unit {
    /// As it is written, with one space where it has one.
    pub(super) text: &'static str,
    pub(super) kind: Kind,
    over: (i128, i128),
}

impl Unit {
    /// One of it, in the unit of its exact type.
    pub(super) fn worth(&self) -> Rational {
        ratio(self.over.0, self.over.1)
    }
}

const fn unit(text: &'static str, kind: Kind, upper: i128, lower: i128) -> Unit {
    Unit {
        text,
        kind,
        over: (upper, lower),
    }
}

/// Every unit there is, by kind.
pub(super) const UNITS: &[Unit] = &[
    unit("us", Kind::Duration, 1, 1_000_000),
    unit("ms", Kind::Duration, 1, 1000),
    unit("s", Kind::Duration, 1, 1),
    unit("min", Kind::Duration, 60, 1),
    unit("h", Kind::Duration, 3600, 1),
    unit("rpm", Kind::Speed, 1, 60),
    unit("Hz", Kind::Speed, 1, 1),
    unit("deg/s", Kind::Speed, 1, 360),
    unit("rpm/s", Kind::Acceleration, 1, 60),
    unit("Hz/s", Kind::Acceleration, 1, 1),
    unit("deg/s^2", Kind::Acceleration, 1, 360),
    unit("rpm/s^2", Kind::Jerk, 1, 60),
    unit("Hz/s^2", Kind::Jerk, 1, 1),
    unit("deg/s^3", Kind::Jerk, 1, 360),
    unit("deg", Kind::Angle, 1, 360),
    unit("turn", Kind::Angle, 1, 1),
    unit("mrad", Kind::Divergence, 1, 1000),
    unit("nm", Kind::Length, 1, 1_000_000_000),
    unit("um", Kind::Length, 1, 1_000_000),
    unit("mm", Kind::Length, 1, 1000),
    unit("cm", Kind::Length, 1, 100),
    unit("m", Kind::Length, 1, 1),
    unit("mW", Kind::Power, 1, 1000),
    unit("W", Kind::Power, 1, 1),
    unit("uN m", Kind::Torque, 1, 1_000_000),
    unit("mN m", Kind::Torque, 1, 1000),
    unit("N m", Kind::Torque, 1, 1),
    unit("g cm^2", Kind::Inertia, 1, 10_000_000),
    unit("kg m^2", Kind::Inertia, 1, 1),
    unit("B", Kind::Storage, 1, 1),
    unit("KiB", Kind::Storage, 1024, 1),
    unit("MiB", Kind::Storage, 1_048_576, 1),
    unit("%", Kind::Share, 1, 100),
];

/// The unit that is written `text`, any run of blanks inside.
pub(super) fn find(text: &str) -> Option<&'static Unit> {
    let plain = text.split_whitespace().collect::<Vec<_>>().join(" ");
    UNITS.iter().find(|unit| unit.text == plain)
}

#[cfg(test)]
mod tests {
    use super::super::grammar::{Rule, parse};
    use super::{Kind, UNITS, find};

    #[test]
    fn the_grammar_takes_every_unit_of_the_table_whole() {
        for unit in UNITS {
            let written = format!("7 {}", unit.text);
            let pair = parse(Rule::quantity, &written).ok();
            let read = pair
                .and_then(|pair| pair.into_inner().nth(1))
                .filter(|inner| inner.as_rule() == Rule::unit)
                .map(|inner| inner.as_str().to_owned());
            assert_eq!(read.as_deref(), Some(unit.text), "{written}");
        }
    }

    #[test]
    fn units_are_read_longest_first_and_end_where_no_name_sign_follows() {
        for (written, wanted) in [
            ("3 scurve", None),
            ("3 s curve", Some("s")),
            ("6s", Some("s")),
            ("2 mm", Some("mm")),
            ("2 m m", Some("m")),
            ("4 rpm/s^2", Some("rpm/s^2")),
            ("5 mN   m", Some("mN   m")),
            ("3 min", Some("min")),
        ] {
            let pair = parse(Rule::quantity, written).ok();
            let read = pair
                .and_then(|pair| pair.into_inner().nth(1))
                .filter(|inner| inner.as_rule() == Rule::unit)
                .map(|inner| inner.as_str().to_owned());
            assert_eq!(read.as_deref(), wanted, "{written}");
        }
        assert_eq!(find("mN \t m").map(|unit| unit.kind), Some(Kind::Torque));
    }
}
