//! The fields of the rotor blocks → rotors: `like`, the defaults, and what must be there.

use super::super::grammar::Rule;
use super::super::reader::Reader;
use super::super::span::Span;
use super::field::{Entry, Fields, Value};
use super::read::{Blocks, RotorBlock};
use super::stated;
use crate::exact::{Acceleration, Inertia, Jerk, Length, Speed, Torque, Turns};
use crate::finding::{Code, FileId, Finding};
use crate::rig::{Gear, Pair, Projection, Rotor, RotorId, Stated, Turning};

/// The fields that `like` does not take over: they belong to the mounting.
const MOUNTING: [&str; 2] = ["draws", "index"];

/// Both rotors, where they have what is required; what is missing is reported.
///
/// `projection` is `None` where its statement does not read: what belongs to either is let through then.
pub(super) fn resolve(
    reader: &mut Reader<'_>,
    file: FileId,
    blocks: &Blocks,
    projection: Option<Projection>,
) -> Pair<Option<Rotor>> {
    let mut rotors = Pair::default();
    let mut earlier: Pair<Option<Fields>> = Pair::default();
    for block in &blocks.rotors {
        let inherited = like(reader, block, &earlier);
        only_of_projection(reader, block, projection);
        let fields = merged(block, inherited.as_ref());
        if let Some(id) = block.id {
            let like_reads = block.like.is_none() || inherited.is_some();
            let work = Work {
                file,
                head: block.span,
                fields: &fields,
                quiet: !like_reads,
            };
            *rotors.of_mut(id) = work.rotor(reader, projection);
            *earlier.of_mut(id) = Some(fields);
        }
    }
    for id in RotorId::BOTH {
        if !blocks.broken_rotor && !blocks.rotors.iter().any(|block| block.id == Some(id)) {
            let head = blocks.head(reader.text);
            reader.findings.add_help(
                Code::TextMissing,
                head,
                format!("the rig has no rotor `{}`", id.name()),
                "a rig has two rotors, `rotor a { … }` and `rotor b { … }`",
            );
        }
    }
    rotors
}

/// The fields of the rotor that a block takes over.
fn like(
    reader: &mut Reader<'_>,
    block: &RotorBlock,
    earlier: &Pair<Option<Fields>>,
) -> Option<Fields> {
    let span = block.like?;
    let name = span.of(reader.text);
    let id = super::rotor_named(reader, name, span)?;
    let fields = earlier.of(id).clone();
    if fields.is_none() {
        reader.findings.add_help(
            Code::TextUnknownRotor,
            span,
            format!("there is no rotor `{name}` before this one"),
            "`like` takes the fields of a rotor that stands earlier in the file",
        );
    }
    fields
}

fn merged(block: &RotorBlock, inherited: Option<&Fields>) -> Fields {
    let mut fields = inherited.cloned().unwrap_or_default();
    for key in MOUNTING {
        fields.remove(key);
    }
    for (key, entry) in &block.fields {
        fields.insert(key, entry.clone());
    }
    fields
}

/// Reports fields that belong to the other projection.
fn only_of_projection(reader: &mut Reader<'_>, block: &RotorBlock, projection: Option<Projection>) {
    let wrong: &[(&str, &str, &str)] = match projection {
        None => &[],
        Some(Projection::Circular) => &[(
            "swing",
            "`swing` belongs to a crossed rig: here the mirrors spin, tilted on their shafts",
            "write `tilt`, or `projection crossed`",
        )],
        Some(Projection::Crossed) => &[
            (
                "tilt",
                "`tilt` belongs to a circular rig: here the mirrors swing",
                "write `swing`, the mirror's own angle each way",
            ),
            (
                "draws",
                "`draws` belongs to a circular rig: here forward advances the phase",
                "take it away",
            ),
        ],
    };
    for (key, message, help) in wrong {
        if let Some(entry) = block.fields.get(key) {
            let start = entry.span.start as usize;
            let word = Span::new(start, start + key.len());
            reader
                .findings
                .add_help(Code::TextSyntax, word, *message, *help);
        }
    }
}

/// "a, b and c".
fn all_of(words: &[String]) -> String {
    match words.split_last() {
        Some((last, rest)) if !rest.is_empty() => format!("{} and {last}", rest.join(", ")),
        _ => words.join(""),
    }
}

/// One rotor's fields, `like` done.
struct Work<'f> {
    file: FileId,
    head: Span,
    fields: &'f Fields,
    /// Whether fields are missing because a `like` does not read, which is reported already.
    quiet: bool,
}

impl Work<'_> {
    fn entry(&self, key: &str) -> Option<&Entry> {
        self.fields.get(key)
    }
    /// Reports which of the required fields are missing.
    fn missing(&self, reader: &mut Reader<'_>, projection: Option<Projection>) {
        let required = [
            ("top-speed", "12000 rpm"),
            ("acceleration", "6000 rpm/s"),
            ("counts", "4096"),
            ("draws", "counter-clockwise"),
        ];
        let circular = projection == Some(Projection::Circular);
        let missing: Vec<_> = required
            .iter()
            .filter(|(key, _)| self.entry(key).is_none() && (circular || *key != "draws"))
            .collect();
        if missing.is_empty() || self.quiet {
            return;
        }
        let keys: Vec<String> = missing.iter().map(|(key, _)| format!("`{key}`")).collect();
        let examples: Vec<String> = missing
            .iter()
            .map(|(key, value)| format!("`{key} {value}`"))
            .collect();
        reader.findings.add_help(
            Code::TextMissing,
            self.head,
            format!("this rotor lacks {}", all_of(&keys)),
            format!("e.g. {}", examples.join(", ")),
        );
    }

    fn rotor(&self, reader: &mut Reader<'_>, projection: Option<Projection>) -> Option<Rotor> {
        self.missing(reader, projection);
        let value = |key| self.entry(key).and_then(|entry| entry.value.as_ref());
        let counts = match value("counts") {
            Some(Value::Counts(counts)) => Some(*counts),
            _ => None,
        };
        let sense = match (projection, value("draws")) {
            (Some(Projection::Circular), None) => None,
            (Some(Projection::Circular), Some(Value::Word(Rule::w_clockwise))) => Some(-1),
            _ => Some(1),
        };
        self.torque_needs(reader);
        let file = self.file;
        let top_speed = stated(file, self.entry("top-speed"), Speed::new);
        let stall_speed = stated(file, self.entry("stall-speed"), Speed::new);
        if let (Some(top), Some(stall)) = (&top_speed, &stall_speed)
            && stall.value > top.value
            && let Some(entry) = self.entry("stall-speed")
        {
            let finding = Finding::new(
                Code::TextNumber,
                reader.findings.place(entry.value_span),
                "`stall-speed` is above `top-speed`: the motor would run evenly at no speed",
            )
            .also_at(top.place, "the top speed");
            reader.findings.push(finding);
        }
        let acceleration = stated(file, self.entry("acceleration"), Acceleration::new)?;
        Some(Rotor {
            place: self.head.place(file),
            mirror: stated(file, self.entry("mirror"), Length::new),
            tilt: stated(file, self.entry("tilt"), Turns::new),
            swing: stated(file, self.entry("swing"), Turns::new),
            top_speed: top_speed?,
            stall_speed: stall_speed.unwrap_or_else(|| Stated::implied(Speed::zero())),
            deceleration: stated(file, self.entry("deceleration"), Acceleration::new)
                .unwrap_or_else(|| acceleration.clone()),
            acceleration,
            jerk: stated(file, self.entry("jerk"), Jerk::new),
            gear: self.gear(),
            turns: self.turns(),
            sense: sense?,
            counts: counts?,
            index: stated(file, self.entry("index"), Turns::new),
            torque: self.torque(),
            drag: stated(file, self.entry("drag"), Torque::new),
            inertia: stated(file, self.entry("inertia"), Inertia::new),
        })
    }

    /// `drag` and `inertia` are needed where `torque` is given.
    fn torque_needs(&self, reader: &mut Reader<'_>) {
        let Some(entry) = self.entry("torque") else {
            return;
        };
        if !matches!(entry.value, Some(Value::Curve(_))) || self.quiet {
            return;
        }
        let missing: Vec<String> = ["drag", "inertia"]
            .iter()
            .filter(|key| self.entry(key).is_none())
            .map(|key| format!("`{key}`"))
            .collect();
        if missing.is_empty() {
            return;
        }
        let finding = Finding::new(
            Code::TextMissing,
            reader.findings.place(self.head),
            format!(
                "this rotor has a torque curve, but lacks {}",
                all_of(&missing)
            ),
        )
        .also(reader.findings.place(entry.span), "the torque curve")
        .help("e.g. `drag 1.1 mN m`, `inertia 12 g cm^2`, or `torque none`");
        reader.findings.push(finding);
    }

    fn gear(&self) -> Stated<Gear> {
        match self.entry("gear") {
            Some(Entry {
                value: Some(Value::Gear(gear)),
                span,
                ..
            }) => Stated {
                value: *gear,
                place: Some(span.place(self.file)),
            },
            _ => Stated::implied(Gear {
                motor: 1,
                mirror: 1,
            }),
        }
    }

    fn turns(&self) -> Stated<Turning> {
        match self.entry("turns") {
            Some(Entry {
                value: Some(Value::Word(word)),
                span,
                ..
            }) => Stated {
                value: match word {
                    Rule::w_forward => Turning::Forward,
                    Rule::w_backward => Turning::Backward,
                    _ => Turning::Both,
                },
                place: Some(span.place(self.file)),
            },
            _ => Stated::implied(Turning::Both),
        }
    }

    fn torque(&self) -> Option<Stated<Vec<(Speed, Torque)>>> {
        match self.entry("torque") {
            Some(Entry {
                value: Some(Value::Curve(curve)),
                span,
                ..
            }) => Some(Stated {
                value: curve.clone(),
                place: Some(span.place(self.file)),
            }),
            _ => None,
        }
    }
}
