//! The fields of a rig file: where each may stand, how it is written, which values it can have.

use super::super::grammar::Rule;
use super::super::number::{whole_between, written};
use super::super::reader::Reader;
use super::super::span::{Span, Spanned};
use super::super::unit::Kind;
use crate::exact::{Rational, Speed, Torque, ratio};
use crate::figure::MOST_TERM;
use crate::finding::{Code, Finding};
use crate::rig::{Gear, Pair};
use num_integer::Integer;
use num_traits::{Signed, Zero};
use pest::iterators::Pair as Tree;
use std::collections::BTreeMap;

/// Most position counts of a motor turn.
const MOST_COUNTS: i64 = 1 << 24;

/// Where a field may stand.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Scope {
    Top,
    Rotor,
    Laser,
    Controller,
    Viewing,
}

impl Scope {
    /// "field of a rotor".
    pub(super) fn text(self) -> &'static str {
        match self {
            Scope::Top => "statement of a rig",
            Scope::Rotor => "field of a rotor",
            Scope::Laser => "field of a laser",
            Scope::Controller => "field of a controller",
            Scope::Viewing => "field of viewing",
        }
    }
    /// Where its fields belong.
    pub(super) fn block(self) -> &'static str {
        match self {
            Scope::Top => "outside all blocks",
            Scope::Rotor => "inside `rotor NAME { … }`",
            Scope::Laser => "inside `laser { … }`",
            Scope::Controller => "inside `controller { … }`",
            Scope::Viewing => "inside `viewing { … }`",
        }
    }
}

/// Which sizes a quantity can have.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Bound {
    NotNegative,
    Positive,
    /// Above zero and below 45 degrees: the beam leaves a mirror at twice the angle.
    Tilt,
    /// From zero to below 90 degrees.
    Incidence,
    /// Whole bytes.
    Bytes,
}

/// How a field is written.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Shape {
    Amount(Kind, Bound),
    /// An amount or `none`.
    Limit(Kind, Bound),
    Ratio,
    Teeth,
    /// One of the words that the grammar's rule takes.
    Word,
    Counts,
    Index,
    Torque,
    Incidence,
}

/// One field of the language.
pub(super) struct Field {
    pub(super) scope: Scope,
    pub(super) word: &'static str,
    /// What it sets: two words may set the same.
    pub(super) key: &'static str,
    pub(super) rule: Rule,
    pub(super) shape: Shape,
}

const fn field(scope: Scope, word: &'static str, rule: Rule, shape: Shape) -> Field {
    Field {
        scope,
        word,
        key: word,
        rule,
        shape,
    }
}

const fn amount(scope: Scope, word: &'static str, kind: Kind, bound: Bound) -> Field {
    field(scope, word, Rule::amount_line, Shape::Amount(kind, bound))
}

const fn limit(scope: Scope, word: &'static str, kind: Kind, bound: Bound) -> Field {
    field(scope, word, Rule::limit_line, Shape::Limit(kind, bound))
}

/// Every field there is.
pub(super) const FIELDS: &[Field] = &[
    amount(Scope::Rotor, "mirror", Kind::Length, Bound::Positive),
    amount(Scope::Rotor, "tilt", Kind::Angle, Bound::Tilt),
    amount(Scope::Rotor, "swing", Kind::Angle, Bound::Tilt),
    amount(Scope::Rotor, "top-speed", Kind::Speed, Bound::Positive),
    amount(Scope::Rotor, "stall-speed", Kind::Speed, Bound::NotNegative),
    amount(
        Scope::Rotor,
        "acceleration",
        Kind::Acceleration,
        Bound::Positive,
    ),
    amount(
        Scope::Rotor,
        "deceleration",
        Kind::Acceleration,
        Bound::Positive,
    ),
    limit(Scope::Rotor, "jerk", Kind::Jerk, Bound::Positive),
    field(Scope::Rotor, "gear", Rule::gear_line, Shape::Ratio),
    Field {
        scope: Scope::Rotor,
        word: "teeth",
        key: "gear",
        rule: Rule::teeth_line,
        shape: Shape::Teeth,
    },
    field(Scope::Rotor, "turns", Rule::turns_line, Shape::Word),
    field(Scope::Rotor, "draws", Rule::draws_line, Shape::Word),
    field(Scope::Rotor, "counts", Rule::counts_line, Shape::Counts),
    field(Scope::Rotor, "index", Rule::index_line, Shape::Index),
    field(Scope::Rotor, "torque", Rule::torque_line, Shape::Torque),
    amount(Scope::Rotor, "drag", Kind::Torque, Bound::NotNegative),
    amount(Scope::Rotor, "inertia", Kind::Inertia, Bound::Positive),
    field(Scope::Top, "projection", Rule::projection_line, Shape::Word),
    amount(Scope::Top, "throw", Kind::Length, Bound::Positive),
    amount(Scope::Top, "spacing", Kind::Length, Bound::NotNegative),
    field(
        Scope::Top,
        "incidence",
        Rule::incidence_line,
        Shape::Incidence,
    ),
    amount(Scope::Top, "working-speed", Kind::Speed, Bound::Positive),
    amount(Scope::Laser, "power", Kind::Power, Bound::Positive),
    amount(Scope::Laser, "wavelength", Kind::Length, Bound::Positive),
    amount(Scope::Laser, "width", Kind::Length, Bound::Positive),
    amount(
        Scope::Laser,
        "divergence",
        Kind::Divergence,
        Bound::Positive,
    ),
    amount(Scope::Laser, "latency", Kind::Duration, Bound::NotNegative),
    amount(Scope::Controller, "tick", Kind::Duration, Bound::Positive),
    limit(Scope::Controller, "storage", Kind::Storage, Bound::Bytes),
    field(Scope::Controller, "table", Rule::table_line, Shape::Word),
    field(
        Scope::Viewing,
        "repeat",
        Rule::flicker_line,
        Shape::Amount(Kind::Speed, Bound::NotNegative),
    ),
];

/// What a field says.
#[derive(Clone, Debug)]
pub(super) enum Value {
    /// In the unit of its exact type.
    Amount(Rational),
    /// `none`: nothing limits it.
    Nothing,
    Gear(Gear),
    Word(Rule),
    Counts(u32),
    Curve(Vec<(Speed, Torque)>),
    Angles(Pair<Option<Rational>>),
}

/// A field that was written.
#[derive(Clone, Debug)]
pub(super) struct Entry {
    /// The whole statement.
    pub(super) span: Span,
    /// What stands behind its word.
    pub(super) value_span: Span,
    /// `None` where it does not read (reported).
    pub(super) value: Option<Value>,
}

/// The fields of one block, by key.
pub(super) type Fields = BTreeMap<&'static str, Entry>;

/// The value of a field that the grammar takes; what is wrong with it is reported.
pub(super) fn read(reader: &mut Reader<'_>, field: &Field, pair: Tree<'_, Rule>) -> Option<Value> {
    let mut inner = pair.into_inner();
    inner.next();
    match field.shape {
        Shape::Word => inner.next().map(|word| Value::Word(word.as_rule())),
        Shape::Amount(kind, bound) => {
            let written =
                inner.find(|inner| matches!(inner.as_rule(), Rule::duration | Rule::quantity))?;
            let value = quantity(reader, written, kind)?;
            bounded(reader, field.word, bound, value).map(Value::Amount)
        }
        Shape::Limit(kind, bound) => {
            let written = inner.next()?;
            if written.as_rule() == Rule::w_none {
                return Some(Value::Nothing);
            }
            let value = reader.quantity(written, kind)?;
            bounded(reader, field.word, bound, value).map(Value::Amount)
        }
        Shape::Ratio => {
            let [motor, mirror] = reader.terms(&inner.next()?)?;
            gear(reader, &motor, &mirror, "the turns of a gear")
        }
        Shape::Teeth => {
            let numbers: Vec<_> = inner
                .filter(|inner| inner.as_rule() == Rule::plain)
                .collect();
            let [motor, mirror] = <[_; 2]>::try_from(numbers).ok()?;
            let (motor, mirror) = (reader.plain(&motor), reader.plain(&mirror));
            // The wheel with twice the teeth turns half as often.
            gear(reader, &mirror?, &motor?, "the teeth of a wheel")
        }
        Shape::Counts => {
            let number = reader.plain(&inner.next()?)?;
            counts(reader, &number).map(Value::Counts)
        }
        Shape::Index => {
            let written = inner.last_but_end()?;
            if written.as_rule() == Rule::w_none {
                return Some(Value::Nothing);
            }
            let angle = reader.quantity(written, Kind::Angle)?;
            Some(Value::Amount(angle.value))
        }
        Shape::Torque => torque(reader, inner),
        Shape::Incidence => incidence(reader, inner),
    }
}

/// The last pair that is not the end of the statement.
trait LastButEnd<'p> {
    fn last_but_end(self) -> Option<Tree<'p, Rule>>;
}

impl<'p, I: Iterator<Item = Tree<'p, Rule>>> LastButEnd<'p> for I {
    fn last_but_end(self) -> Option<Tree<'p, Rule>> {
        self.filter(|pair| pair.as_rule() != Rule::EOI).last()
    }
}

fn quantity(
    reader: &mut Reader<'_>,
    pair: Tree<'_, Rule>,
    kind: Kind,
) -> Option<Spanned<Rational>> {
    if pair.as_rule() == Rule::duration {
        reader.amount(pair, kind)
    } else {
        reader.quantity(pair, kind)
    }
}

/// A size, where it can be; reported if not.
fn bounded(
    reader: &mut Reader<'_>,
    word: &str,
    bound: Bound,
    value: Spanned<Rational>,
) -> Option<Rational> {
    let size = &value.value;
    let (fits, message) = match bound {
        Bound::NotNegative => (
            !size.is_negative(),
            format!("`{word}` cannot be below zero"),
        ),
        Bound::Positive => (size.is_positive(), format!("`{word}` must be above zero")),
        Bound::Tilt => (
            size.is_positive() && *size < ratio(1, 8),
            format!("`{word}` lies above 0 deg and below 45 deg: the beam is turned by twice that"),
        ),
        Bound::Incidence => (
            !size.is_negative() && *size < ratio(1, 4),
            format!("an angle of `{word}` lies from 0 deg to below 90 deg"),
        ),
        Bound::Bytes => (
            size.is_positive() && size.is_integer(),
            format!("`{word}` is a whole number of bytes, at least one"),
        ),
    };
    if fits {
        return Some(value.value);
    }
    reader.findings.add(Code::TextNumber, value.span, message);
    None
}

fn gear(
    reader: &mut Reader<'_>,
    motor: &Spanned<Rational>,
    mirror: &Spanned<Rational>,
    what: &str,
) -> Option<Value> {
    let mut term = |number: &Spanned<Rational>| {
        let term = whole_between(&number.value, 1, MOST_TERM);
        if term.is_none() {
            reader.findings.add(
                Code::TextNumber,
                number.span,
                format!("{what} are whole numbers from 1 to {MOST_TERM}"),
            );
        }
        term.and_then(|term| u32::try_from(term).ok())
    };
    let (motor, mirror) = (term(motor), term(mirror));
    let (motor, mirror) = (motor?, mirror?);
    let common = motor.gcd(&mirror);
    Some(Value::Gear(Gear {
        motor: motor / common,
        mirror: mirror / common,
    }))
}

fn counts(reader: &mut Reader<'_>, number: &Spanned<Rational>) -> Option<u32> {
    let counts = whole_between(&number.value, 1, MOST_COUNTS);
    if counts.is_none() {
        reader.findings.add(
            Code::TextNumber,
            number.span,
            format!("`counts` is a whole number from 1 to {MOST_COUNTS}"),
        );
    }
    counts.and_then(|counts| u32::try_from(counts).ok())
}

/// A torque-speed curve: speeds ascending, nothing below zero.
fn torque<'p>(
    reader: &mut Reader<'_>,
    pairs: impl Iterator<Item = Tree<'p, Rule>>,
) -> Option<Value> {
    let mut curve: Vec<(Speed, Torque)> = Vec::new();
    let mut reads = true;
    let mut before: Option<Spanned<Rational>> = None;
    for pair in pairs {
        match pair.as_rule() {
            Rule::w_none => return Some(Value::Nothing),
            Rule::torque_point => {}
            _ => continue,
        }
        let mut inner = pair.into_inner();
        let speed = inner
            .next()
            .and_then(|speed| reader.quantity(speed, Kind::Speed));
        let torque = inner
            .next()
            .and_then(|torque| reader.quantity(torque, Kind::Torque));
        let (Some(speed), Some(torque)) = (speed, torque) else {
            reads = false;
            continue;
        };
        for (value, what) in [(&speed, "speeds"), (&torque, "torques")] {
            if value.value.is_negative() {
                let message = format!("the {what} of a torque curve are not below zero");
                reader.findings.add(Code::TextNumber, value.span, message);
                reads = false;
            }
        }
        if let Some(last) = before.as_ref().filter(|last| last.value >= speed.value) {
            let finding = Finding::new(
                Code::TextNumber,
                reader.findings.place(speed.span),
                "the speeds of a torque curve go up from point to point",
            )
            .also(reader.findings.place(last.span), "the point before");
            reader.findings.push(finding);
            reads = false;
        }
        curve.push((Speed::new(speed.value.clone()), Torque::new(torque.value)));
        before = Some(speed);
    }
    (reads && !curve.is_empty()).then_some(Value::Curve(curve))
}

fn incidence<'p>(
    reader: &mut Reader<'_>,
    pairs: impl Iterator<Item = Tree<'p, Rule>>,
) -> Option<Value> {
    let mut angles: Pair<Option<Rational>> = Pair::default();
    let mut seen: Pair<Option<Span>> = Pair::default();
    let mut reads = true;
    for pair in pairs.filter(|pair| pair.as_rule() == Rule::rotor_angle) {
        let span = reader.span(&pair);
        let mut inner = pair.into_inner();
        let (Some(name), Some(angle)) = (inner.next(), inner.next()) else {
            continue;
        };
        let name_span = reader.span(&name);
        let angle = reader.quantity(angle, Kind::Angle);
        let angle = angle.and_then(|angle| bounded(reader, "incidence", Bound::Incidence, angle));
        reads &= angle.is_some();
        let Some(id) = super::rotor_named(reader, name.as_str(), name_span) else {
            reads = false;
            continue;
        };
        if let Some(first) = seen.of(id) {
            let what = format!("the incidence at `{}`", id.name());
            reader.findings.twice(name_span, *first, &what);
            reads = false;
            continue;
        }
        *seen.of_mut(id) = Some(span);
        *angles.of_mut(id) = angle;
    }
    reads.then_some(Value::Angles(angles))
}

/// Where `counts` times the turns of a tick at top speed passes what a table can hold.
pub(super) fn too_many_counts(
    reader: &mut Reader<'_>,
    span: Span,
    counts: u32,
    top_speed: &Speed,
    tick: &Rational,
) {
    const MOST_IN_A_TICK: i128 = 1 << 30;
    let a_tick = top_speed.value() * tick * Rational::from_integer(counts.into());
    if a_tick > Rational::from_integer(MOST_IN_A_TICK.into()) && !a_tick.is_zero() {
        reader.findings.add(
            Code::TextTooMuch,
            span,
            format!(
                "at top speed the motor would move {} counts in one tick, {MOST_IN_A_TICK} are the most",
                written(&a_tick.ceil())
            ),
        );
    }
}
