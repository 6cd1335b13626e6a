//! The head of the JSON form against the plan, line by line.

use super::{Problem, Report, shown};
use crate::exact::{GRID_PER_TURN, Rational, whole};
use crate::plan::{Leg, LegKind, Plan};
use crate::rig::{Rotor, RotorId, Turning};
use crate::setpoint::COLUMNS;
use num_bigint::BigInt;
use num_traits::Zero;
use serde_json::{Value, json};

/// Version of the form that this auditor reads.
const FORMAT: u32 = 1;

/// What comes next in the head.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Next {
    Opening,
    Key(usize),
    Cues,
    Findings,
    Closed,
}

/// The keys of the head in their order; `cues` and `findings` go on for a line each entry.
const KEYS: [&str; 17] = [
    "format",
    "program",
    "table",
    "knots",
    "show",
    "rig",
    "tick_s",
    "row_count",
    "loop",
    "latency_ticks",
    "rotor_a",
    "rotor_b",
    "before",
    "cues",
    "end",
    "findings",
    "columns",
];

pub(super) struct Heads<'p> {
    plan: &'p Plan,
    id: String,
    next: Next,
    /// The leg that the next entry of the cue list stands for.
    leg: usize,
    /// The tolerance of knots; `None` for rows.
    knots: Option<u32>,
    /// Whether the finding before ended in a comma; `None` before the first.
    comma: Option<bool>,
}

impl<'p> Heads<'p> {
    pub(super) fn new(plan: &'p Plan, id: &str) -> Self {
        Self {
            plan,
            id: id.to_owned(),
            next: Next::Opening,
            leg: 0,
            knots: None,
            comma: None,
        }
    }

    /// The head of knots: what they are in place of the columns, then the first list.
    pub(super) fn of_knots(plan: &'p Plan, id: &str, tolerance: u32) -> Self {
        Self {
            knots: Some(tolerance),
            ..Self::new(plan, id)
        }
    }

    /// Takes a line of the head; true once it opens the rows.
    pub(super) fn line(&mut self, line: &[u8], report: &mut Report) -> bool {
        let text = line.strip_suffix(b"\n").unwrap_or(line);
        match self.next {
            Next::Opening => {
                expect("head", "{", text, report);
                self.next = Next::Key(0);
            }
            Next::Cues if text != b"]," => self.cue(text, report),
            Next::Cues => {
                if self.leg != self.plan.legs.len() {
                    let wanted = "an entry for every cue";
                    report.add(problem("cues", wanted.to_owned(), shown(text)));
                }
                self.next = self.after("cues");
            }
            Next::Findings => self.finding(text, report),
            Next::Key(index) => return self.key(index, text, report),
            Next::Closed => {}
        }
        false
    }

    /// A line of the findings: an object each, with a comma where another follows.
    fn finding(&mut self, text: &[u8], report: &mut Report) {
        let ends = text == b"],";
        if self.comma.is_some_and(|comma| comma == ends) {
            let wanted = if ends {
                "no comma after the last one"
            } else {
                "a comma after each that another follows"
            };
            report.add(problem("findings", wanted.to_owned(), shown(text)));
        }
        if ends {
            self.next = self.after("findings");
            return;
        }
        self.comma = Some(text.ends_with(b","));
        if !is_finding(text.strip_suffix(b",").unwrap_or(text)) {
            let wanted = "a finding as one JSON object without blanks";
            report.add(problem("findings", wanted.to_owned(), shown(text)));
        }
    }

    /// Takes the line after the rows; whether it is the end of the document.
    pub(super) fn close(&mut self, line: &[u8]) -> bool {
        let first = self.next != Next::Closed;
        self.next = Next::Closed;
        first && line == b"]}\n"
    }

    pub(super) fn is_closed(&self) -> bool {
        self.next == Next::Closed
    }

    fn key(&mut self, index: usize, text: &[u8], report: &mut Report) -> bool {
        let Some(name) = self.keys().nth(index) else {
            let first = if self.knots.is_some() { "a" } else { "rows" };
            expect(first, &format!("\"{first}\":["), text, report);
            return true;
        };

        self.next = match name {
            "cues" => Next::Cues,
            "findings" => Next::Findings,
            _ => Next::Key(index + 1),
        };
        if matches!(name, "cues" | "findings") {
            expect(name, &format!("\"{name}\":["), text, report);
            return false;
        }
        let wanted = self.wanted(name);
        match value_of(name, text) {
            Some(found) => differences(name, &wanted, &found, report),
            None => report.add(problem(
                &format!("the line of {name}"),
                format!("`\"{name}\":{wanted},`"),
                shown(text),
            )),
        }
        false
    }

    /// The keys in their order: knots say so after the table's ID, and have no columns.
    fn keys(&self) -> impl Iterator<Item = &'static str> {
        let knots = self.knots.is_some();
        KEYS.into_iter()
            .filter(move |key| !matches!((*key, knots), ("knots", false) | ("columns", true)))
    }

    /// The key that follows the list `name`.
    fn after(&self, name: &str) -> Next {
        let place = self.keys().position(|key| key == name);
        Next::Key(place.map_or(0, |place| place + 1))
    }

    /// What a key must say.
    fn wanted(&self, name: &str) -> Value {
        let (plan, rig) = (self.plan, &self.plan.rig);
        match name {
            "format" => json!(FORMAT),
            "program" => json!(format!(
                "{} {}",
                env!("CARGO_PKG_NAME"),
                env!("CARGO_PKG_VERSION")
            )),
            "table" => json!(self.id),
            "show" => json!({"title": plan.show.title, "sha256": plan.show.sha256}),
            "rig" => json!({"title": rig.title, "sha256": rig.sha256}),
            "tick_s" => json!(written(plan.tick().value())),
            "row_count" => json!(plan.rows()),
            "loop" => plan.loop_start().map_or(
                Value::Null,
                |start| json!({"start": start.0, "length": plan.total().0 - start.0}),
            ),
            "latency_ticks" => {
                let ticks = rig.latency.value() / plan.tick().value();
                json!(u64::try_from(super::wanted::nearest(&ticks)).unwrap_or(0))
            }
            "rotor_a" => rotor(&rig.rotors.a),
            "rotor_b" => rotor(&rig.rotors.b),
            "before" => before(plan),
            "end" => json!({
                "tick": plan.total().0,
                "a_turns": self.mirror(plan.legs.len(), RotorId::A),
                "b_turns": self.mirror(plan.legs.len(), RotorId::B),
            }),
            "columns" => json!(COLUMNS),
            "knots" => json!({"tolerance": self.knots, "fraction_bits": 32}),
            _ => Value::Null,
        }
    }

    /// An entry of the cue list.
    fn cue(&mut self, text: &[u8], report: &mut Report) {
        let index = self.leg;
        let Some(leg) = self.plan.legs.get(index) else {
            if !text.is_empty() {
                report.add(problem("cues", "no more cues".to_owned(), shown(text)));
            }
            return;
        };
        let holds = self
            .plan
            .legs
            .get(index + 1)
            .is_some_and(|next| next.kind == LegKind::Hold && next.cue == leg.cue);
        self.leg += if holds { 2 } else { 1 };
        let wanted = self.entry(index, leg, index + usize::from(holds));
        let last = self.leg >= self.plan.legs.len();
        let entry = if last {
            Some(text)
        } else {
            text.strip_suffix(b",")
        };
        let name = format!("cues, cue {}", leg.cue);
        match entry.and_then(plain) {
            Some(found) => differences(&name, &wanted, &found, report),
            None => {
                let comma = if last { "" } else { "," };
                report.add(problem(&name, format!("`{wanted}{comma}`"), shown(text)));
            }
        }
    }

    fn entry(&self, index: usize, leg: &Leg, standing: usize) -> Value {
        let plan = self.plan;
        let kind = match leg.kind {
            LegKind::RunUp => "run-up",
            LegKind::Morph | LegKind::Hold => "cue",
            LegKind::LoopMorph => "loop",
            LegKind::RunDown => "run-down",
        };
        let cue = plan.cue(leg).filter(|_| kind == "cue");
        let hold = plan
            .legs
            .get(standing)
            .filter(|leg| leg.kind == LegKind::Hold);
        let there = |id| hold.map(|_| self.mirror(standing, id));
        json!({
            "cue": leg.cue,
            "kind": kind,
            "name": cue.and_then(|cue| cue.name.clone()),
            "figure": cue.map(|cue| cue.figure.written.clone()),
            "ratio": cue.map(|cue| [cue.figure.ratio.p(), cue.figure.ratio.q()]),
            "start": leg.start.0,
            "a_turns": self.mirror(index, RotorId::A),
            "b_turns": self.mirror(index, RotorId::B),
            "hold": hold.map(|hold| hold.start.0),
            "hold_a_turns": there(RotorId::A),
            "hold_b_turns": there(RotorId::B),
            "beam": hold.map(|hold| hold.beam),
        })
    }

    /// The mirror's phase at the start of a leg, from where the leg before lands: on the grid after every morph, and where
    /// a hold ends its start and its turns since.
    fn mirror(&self, index: usize, id: RotorId) -> String {
        let plan = self.plan;
        let rotor = plan.rig.rotor(id);
        let before = index.checked_sub(1).and_then(|at| plan.legs.get(at));
        let landing = |leg: &Leg| {
            Rational::new(
                BigInt::from(leg.landing.of(id).0),
                BigInt::from(GRID_PER_TURN),
            )
        };
        let phase = match before {
            None => rotor.index_angle().value().clone(),
            Some(leg) if leg.kind == LegKind::Hold => {
                let speed = plan.speeds_of(leg).map_or_else(Rational::zero, |speeds| {
                    speeds.mirror.of(id).value().clone()
                });
                landing(leg) + speed * plan.tick().value() * whole(leg.ticks.0.into())
            }
            Some(leg) if leg.kind == LegKind::RunDown => {
                rotor.mirror_phase(plan.rest.of(id)).value().clone()
            }
            Some(leg) => landing(leg),
        };
        phase.to_string()
    }
}

fn problem(column: &str, wanted: String, found: String) -> Problem {
    Problem {
        tick: None,
        column: format!("head, {column}"),
        wanted,
        found,
    }
}

fn expect(column: &str, wanted: &str, found: &[u8], report: &mut Report) {
    if found != wanted.as_bytes() {
        report.add(problem(column, format!("`{wanted}`"), shown(found)));
    }
}

/// The value of a line `"name":value,`.
fn value_of(name: &str, text: &[u8]) -> Option<Value> {
    let start = format!("\"{name}\":");
    plain(text.strip_prefix(start.as_bytes())?.strip_suffix(b",")?)
}

/// A JSON value written without blanks, needless escapes and keys that stand twice: as long as it must be.
fn plain(text: &[u8]) -> Option<Value> {
    let value: Value = serde_json::from_slice(text).ok()?;
    (value.to_string().len() == text.len()).then_some(value)
}

/// Whether a line is a finding as `--findings json` gives it: no keys but those, `code` and `message` always.
fn is_finding(text: &[u8]) -> bool {
    const KNOWN: [&str; 7] = [
        "code", "severity", "message", "count", "place", "also", "help",
    ];
    let Some(Value::Object(found)) = plain(text) else {
        return false;
    };
    let texts = |key: &str| found.get(key).is_some_and(Value::is_string);
    texts("code") && texts("message") && found.keys().all(|key| KNOWN.contains(&key.as_str()))
}

/// Two values key by key.
fn differences(name: &str, wanted: &Value, found: &Value, report: &mut Report) {
    let (Value::Object(wants), Value::Object(finds)) = (wanted, found) else {
        if wanted != found {
            report.add(problem(name, brief(wanted), brief(found)));
        }
        return;
    };
    for (key, wanted) in wants {
        match finds.get(key) {
            Some(found) => differences(&format!("{name}.{key}"), wanted, found, report),
            None => report.add(problem(
                &format!("the keys of {name}"),
                format!("`{key}`"),
                "no such key".to_owned(),
            )),
        }
    }
    for key in finds.keys().filter(|key| !wants.contains_key(*key)) {
        let path = format!("{name}.{key}");
        report.add(problem(
            &path,
            "no such key".to_owned(),
            shown(key.as_bytes()),
        ));
    }
}

/// A value as a message shows it: numbers and words bare, all else as JSON, cut where it is long.
fn brief(value: &Value) -> String {
    match value {
        Value::Null => "null".to_owned(),
        Value::Bool(_) | Value::Number(_) => value.to_string(),
        Value::String(text) => shown(text.as_bytes()),
        value => shown(value.to_string().as_bytes()),
    }
}

/// An exact number as the head writes it: a decimal of at most twelve places, else a fraction.
fn written(value: &Rational) -> String {
    let decimal = (0..=12).find_map(|places| {
        let units = value * Rational::from_integer(BigInt::from(10).pow(places));
        units
            .is_integer()
            .then(|| crate::exact::scaled_decimal(units.numer(), places))
    });
    decimal.unwrap_or_else(|| value.to_string())
}

fn rotor(rotor: &Rotor) -> Value {
    let rpm = |value: &Rational| written(&(value * whole(60)));
    let turns = match rotor.turns.value {
        Turning::Both => "both",
        Turning::Forward => "forward",
        Turning::Backward => "backward",
    };
    json!({
        "gear": [rotor.gear.value.motor, rotor.gear.value.mirror],
        "counts": rotor.counts,
        "sense": rotor.sense,
        "index_deg": rotor.index.as_ref().map(|index| written(&(index.value.value() * whole(360)))),
        "turns": turns,
        "top_speed_rpm": rpm(rotor.top_speed.value.value()),
        "acceleration_rpm_s": rpm(rotor.acceleration.value.value()),
        "deceleration_rpm_s": rpm(rotor.deceleration.value.value()),
        "jerk_rpm_s2": rotor.jerk.as_ref().map(|jerk| rpm(jerk.value.value())),
    })
}

/// What the machine must be before row 0; which cue is the most sensitive is a look over all holds.
fn before(plan: &Plan) -> Value {
    let crossed = plan.rig.projection == crate::rig::Projection::Crossed;
    let holds = plan.legs.iter().filter(|leg| leg.kind == LegKind::Hold);
    let mut least: Option<(Rational, u32)> = None;
    for leg in holds {
        let Some(cue) = plan.cue(leg) else { continue };
        let (p, q) = (cue.figure.ratio.p(), cue.figure.ratio.q());
        let lobes = if crossed || p == q { 1 } else { (p - q).abs() };
        let terms = p.abs() + q.abs();
        let allowed = Rational::new(BigInt::from(lobes), BigInt::from(terms.max(1)));
        if least.as_ref().is_none_or(|(best, _)| allowed < *best) {
            least = Some((allowed, leg.cue));
        }
    }
    json!({
        "at_rest": true,
        "a_on_mark": plan.rig.rotors.a.index.is_some(),
        "b_on_mark": plan.rig.rotors.b.index.is_some(),
        "off_deg_per_pose_deg": least.as_ref().map(|(allowed, _)| allowed.to_string()),
        "most_sensitive_cue": least.as_ref().map(|(_, cue)| cue),
    })
}
