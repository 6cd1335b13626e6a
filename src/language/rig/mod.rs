//! The text of a rig file → the rig: fields are read block by block, then `like` and the defaults fill in the rest.

mod field;
mod read;
mod rotor;

use super::reader::Reader;
use super::span::{Span, Spanned};
use crate::exact::{Length, Power, Rational, Seconds, Speed, Turns, exact_decimal, ratio, whole};
use crate::finding::{Code, FileId, Finding};
use crate::rig::{Laser, Pair, Projection, Rig, RotorId, Stated, TableKind};
use field::{Entry, Fields, Value};
use num_traits::ToPrimitive;
use read::{Blocks, read_blocks};

/// Most decimal places of a tick in seconds.
const MOST_TICK_PLACES: u32 = 12;

/// Reads a rig; `None` only where it is unusable: without a tick, or without a rotor's required fields.
#[must_use]
pub fn read_rig(file: FileId, text: &str, sha256: String) -> (Option<Rig>, Vec<Finding>) {
    let mut reader = Reader::new(file, text);
    if super::too_large(text, &mut reader.findings) {
        return (None, reader.findings.finish());
    }
    let blocks = read_blocks(&mut reader);
    if reader.findings.over() {
        return (None, reader.findings.finish());
    }
    let rig = Resolver { file, blocks }.rig(&mut reader, sha256);
    (rig, reader.findings.finish())
}

/// The rotor that is called `name`; any other name is reported.
fn rotor_named(reader: &mut Reader<'_>, name: &str, span: Span) -> Option<RotorId> {
    let id = RotorId::BOTH.into_iter().find(|id| id.name() == name);
    if id.is_none() {
        reader.findings.add_help(
            Code::TextUnknownRotor,
            span,
            format!("there is no rotor `{}`", super::diagnose::clip(name)),
            "the rotors are named `a` and `b`; the beam meets `a` first",
        );
    }
    id
}

/// An amount and the statement that gives it.
fn stated<T>(
    file: FileId,
    entry: Option<&Entry>,
    make: impl Fn(Rational) -> T,
) -> Option<Stated<T>> {
    let entry = entry?;
    match &entry.value {
        Some(Value::Amount(value)) => Some(Stated {
            value: make(value.clone()),
            place: Some(entry.span.place(file)),
        }),
        _ => None,
    }
}

struct Resolver {
    file: FileId,
    blocks: Blocks,
}

impl Resolver {
    fn rig(&self, reader: &mut Reader<'_>, sha256: String) -> Option<Rig> {
        let blocks = &self.blocks;
        let top = |key| blocks.top.get(key);
        let projection = match top("projection").map(|entry| &entry.value) {
            Some(Some(Value::Word(super::grammar::Rule::w_crossed))) => Projection::Crossed,
            _ => Projection::Circular,
        };
        // Where the projection does not read, what belongs to either is let through.
        let known = top("projection").is_none_or(|entry| entry.value.is_some());
        let tick = self.tick(reader);
        let rotors = rotor::resolve(reader, self.file, blocks, known.then_some(projection));
        if let Some(tick) = &tick {
            for id in RotorId::BOTH {
                if let (Some(rotor), Some(span)) = (rotors.of(id), self.counts_span(id)) {
                    let speed = &rotor.top_speed.value;
                    field::too_many_counts(reader, span, rotor.counts, speed, tick.value());
                }
            }
        }
        self.narrow_mirrors(reader);
        let (a, b) = (rotors.a?, rotors.b?);
        let lower = a.top_speed.value.clone().min(b.top_speed.value.clone());
        let working = stated(self.file, top("working-speed"), Speed::new);
        Some(Rig {
            title: blocks.title.as_ref().map(|title| title.value.clone()),
            sha256,
            rotors: Pair { a, b },
            projection,
            throw: stated(self.file, top("throw"), Length::new),
            spacing: stated(self.file, top("spacing"), Length::new),
            incidence: self.incidence(),
            working_speed: working.unwrap_or_else(|| Stated::implied(lower.times(&ratio(9, 10)))),
            laser: self.laser(),
            latency: stated(
                self.file,
                self.field_of(&blocks.laser, "latency"),
                Seconds::new,
            )
            .map_or_else(Seconds::zero, |latency| latency.value),
            tick: tick?,
            storage: self.storage(),
            table: match self
                .field_of(&blocks.controller, "table")
                .and_then(|entry| entry.value.as_ref())
            {
                Some(Value::Word(super::grammar::Rule::w_knots)) => TableKind::Knots,
                _ => TableKind::Rows,
            },
            repeat: stated(
                self.file,
                self.field_of(&blocks.viewing, "repeat"),
                Speed::new,
            )
            .unwrap_or_else(|| Stated::implied(Speed::new(whole(30)))),
        })
    }

    fn field_of<'f>(&self, block: &'f Option<Spanned<Fields>>, key: &str) -> Option<&'f Entry> {
        block.as_ref().and_then(|block| block.value.get(key))
    }

    /// The tick, which every rig has: 10 µs to 1 s, in seconds a decimal of at most 12 places.
    fn tick(&self, reader: &mut Reader<'_>) -> Option<Seconds> {
        let entry = self.field_of(&self.blocks.controller, "tick");
        let Some(entry) = entry else {
            let (span, message) = match &self.blocks.controller {
                Some(controller) => (controller.span, "the controller has no `tick`"),
                None => (
                    self.blocks.head(reader.text),
                    "the rig has no `controller` with its `tick`",
                ),
            };
            if !self.blocks.broken_controller {
                reader.findings.add_help(
                    Code::TextMissing,
                    span,
                    message,
                    "e.g. `controller {`, `tick 2 ms`, `}`: the spacing of set-points",
                );
            }
            return None;
        };
        let Some(Value::Amount(value)) = &entry.value else {
            return None;
        };
        let help = if *value < ratio(1, 100_000) || *value > whole(1) {
            "`tick` lies from 0.01 ms (10 us) to 1 s".to_owned()
        } else if exact_decimal(value, MOST_TICK_PLACES).is_none() {
            let nearest = crate::exact::decimal(value, MOST_TICK_PLACES);
            format!("nearest is `tick {} s`", nearest.trim_end_matches('0'))
        } else {
            return Some(Seconds::new(value.clone()));
        };
        let message = if help.starts_with("nearest") {
            format!("`tick` is in seconds a decimal of at most {MOST_TICK_PLACES} places")
        } else {
            "`tick` is out of range".to_owned()
        };
        reader
            .findings
            .add_help(Code::TextNumber, entry.value_span, message, help);
        None
    }

    fn counts_span(&self, id: RotorId) -> Option<Span> {
        let rotors = self.blocks.rotors.iter();
        let named = rotors.filter(|rotor| rotor.id == Some(id));
        // An inherited one is reported at the earlier rotor's line.
        named
            .filter_map(|rotor| rotor.fields.get("counts"))
            .chain(
                self.blocks
                    .rotors
                    .iter()
                    .filter_map(|rotor| rotor.fields.get("counts")),
            )
            .next()
            .map(|entry| entry.value_span)
    }

    /// A mirror that the beam does not fit on.
    fn narrow_mirrors(&self, reader: &mut Reader<'_>) {
        let amount = |entry: &Entry| match &entry.value {
            Some(Value::Amount(value)) => Some((value.clone(), entry.value_span)),
            _ => None,
        };
        let width = self.field_of(&self.blocks.laser, "width").and_then(amount);
        let Some((width, width_span)) = width else {
            return;
        };
        for rotor in &self.blocks.rotors {
            let mirror = rotor.fields.get("mirror").and_then(amount);
            if let Some((_, span)) = mirror.filter(|(mirror, _)| *mirror < width) {
                let finding = Finding::new(
                    Code::TextNumber,
                    reader.findings.place(span),
                    "this mirror is smaller than the laser's beam is wide",
                )
                .also(reader.findings.place(width_span), "the width of the beam");
                reader.findings.push(finding);
            }
        }
    }

    fn incidence(&self) -> Pair<Option<Stated<Turns>>> {
        let entry = self.blocks.top.get("incidence");
        let angles = entry.and_then(|entry| match &entry.value {
            Some(Value::Angles(angles)) => Some((angles, entry.span.place(self.file))),
            _ => None,
        });
        Pair::each(|id| {
            let (angles, place) = angles?;
            let angle = angles.of(id).clone()?;
            Some(Stated {
                value: Turns::new(angle),
                place: Some(place),
            })
        })
    }

    fn laser(&self) -> Option<Laser> {
        let block = self.blocks.laser.as_ref()?;
        let field = |key| block.value.get(key);
        Some(Laser {
            place: block.span.place(self.file),
            power: stated(self.file, field("power"), Power::new),
            wavelength: stated(self.file, field("wavelength"), Length::new),
            width: stated(self.file, field("width"), Length::new),
            divergence: stated(self.file, field("divergence"), |value| value),
        })
    }

    fn storage(&self) -> Option<Stated<u64>> {
        let entry = self.field_of(&self.blocks.controller, "storage");
        let bytes = stated(self.file, entry, |value| value.to_integer().to_u64())?;
        Some(Stated {
            value: bytes.value?,
            place: bytes.place,
        })
    }
}
