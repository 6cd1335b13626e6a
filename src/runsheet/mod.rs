//! Plan → run sheet: the show cue by cue, for the people who start it, watch it and mend it.
//!
//! One model, [`Sheet`] with its [`Entry`]s, in four forms: text for paper, CSV, JSON and Markdown. Entries are made one
//! at a time, so that a sheet of a million cues needs no more memory than its plan.

mod csv;
mod json;
mod markdown;
mod remarks;
mod text;
pub(crate) mod words;

use crate::check::{Peak, Peaks, peaks};
use crate::exact::{Rational, Seconds, Ticks, Turns, ratio, round_half_up, whole};
use crate::finding::{Finding, Locator};
use crate::plan::{CueSpeeds, Leg, LegKind, Plan};
use crate::rig::{Pair, Projection, RotorId};
use crate::setpoint::c_header::identifier;
use crate::setpoint::{Sizes, allowance, sizes, table_id};
use crate::show::{Cue, Land, Transition, WrittenCue};
use remarks::Remarks;
use std::io::{self, Write};
use std::path::Path;

/// How a run sheet is written.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Form {
    /// For paper, at most 100 columns wide.
    Text,
    /// RFC 4180, one line a cue after one header line, LF.
    Csv,
    /// One object; see the reference for its keys.
    Json,
    /// A page with one table.
    Markdown,
}

/// Writes the run sheet of a plan; `findings` are those of the plan, `locator` knows the show's lines.
///
/// # Errors
///
/// What `out` reports.
pub fn write(
    form: Form,
    plan: &Plan,
    findings: &[Finding],
    locator: &Locator<'_>,
    out: &mut dyn Write,
) -> io::Result<()> {
    let sheet = Sheet {
        plan,
        locator,
        remarks: Remarks::new(plan, findings),
        table_id: table_id(plan),
        // CSV has a line a cue, and no place for it.
        sizes: (form != Form::Csv).then(|| sizes(plan, &header_name(plan, locator))),
    };
    match form {
        Form::Text => text::write(&sheet, out),
        Form::Csv => csv::write(&sheet, out),
        Form::Json => json::write(&sheet, out),
        Form::Markdown => markdown::write(&sheet, out),
    }
}

/// The identifier that `compile` gives a C header of this show.
fn header_name(plan: &Plan, locator: &Locator<'_>) -> String {
    let file = plan.show.cues.iter().find_map(|cue| match cue {
        WrittenCue::Good(cue) => Some(cue.place.file),
        _ => None,
    });
    let name = file.map_or("", |file| locator.name(file));
    let stem = Path::new(name).file_stem().unwrap_or_default();
    match stem.to_string_lossy().as_ref() {
        "" | "-" => "show".to_owned(),
        stem => identifier(stem),
    }
}

/// What all forms of a run sheet are made from.
struct Sheet<'p> {
    plan: &'p Plan,
    locator: &'p Locator<'p>,
    remarks: Remarks,
    /// The ID of the table that belongs to the plan.
    table_id: String,
    /// What the table takes in each form, where it was measured.
    sizes: Option<Sizes>,
}

/// What an entry of a run sheet is.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Kind {
    RunUp,
    Cue,
    Loop,
    RunDown,
}

impl Kind {
    fn word(self) -> &'static str {
        match self {
            Kind::RunUp => "run-up",
            Kind::Cue => "cue",
            Kind::Loop => "loop",
            Kind::RunDown => "run-down",
        }
    }
}

/// One cue, or what stands before the first and after the last of them.
struct Entry<'p> {
    kind: Kind,
    /// As in the table's `cue` column.
    number: u32,
    /// What it shows; only of a cue.
    cue: Option<&'p Cue>,
    /// Its line in the show file.
    line: usize,
    /// Its first tick: of its morph, where it has one.
    start: Ticks,
    /// The transition into it, or that it is.
    morph: Option<(&'p Transition, Ticks)>,
    /// First tick and length of its hold; only of a cue.
    hold: Option<(Ticks, Ticks)>,
    /// Only of a cue.
    speeds: Option<&'p CueSpeeds>,
    /// Where a lobe points (crossed: the relative phase), in degrees; `None` where it is free.
    pose: Option<Rational>,
    /// Degrees each mirror may be off its mark for a degree of the pose; `None` where the pose is free.
    off_marks: Option<Rational>,
    /// The highest use of each limit, in transition and hold together.
    peaks: Pair<Peaks>,
}

impl<'p> Sheet<'p> {
    /// Every entry in the order of play.
    fn entries(&self) -> impl Iterator<Item = Entry<'p>> {
        let mut index = 0;
        std::iter::from_fn(move || {
            let leg = self.plan.legs.get(index)?;
            let entry = self.entry(index, leg);
            index += if entry.hold.is_some() && entry.morph.is_some() {
                2
            } else {
                1
            };
            Some(entry)
        })
    }
    /// The exact time of a tick from row 0.
    fn table_time(&self, tick: Ticks) -> Seconds {
        tick.time(self.plan.tick())
    }
    /// The exact time of a tick from the end of the run-up; below zero before it.
    fn show_time(&self, tick: Ticks) -> Seconds {
        &self.table_time(tick) - &self.table_time(self.plan.show_start())
    }
    /// Length of a round of the loop in ticks; `None` with a run-down.
    fn round(&self) -> Option<Ticks> {
        let start = self.plan.loop_start()?;
        Some(Ticks(self.plan.total().0.saturating_sub(start.0)))
    }

    fn entry(&self, index: usize, leg: &'p Leg) -> Entry<'p> {
        let plan = self.plan;
        let next = plan.legs.get(index + 1);
        let (kind, hold) = match leg.kind {
            LegKind::RunUp => (Kind::RunUp, None),
            LegKind::LoopMorph => (Kind::Loop, None),
            LegKind::RunDown => (Kind::RunDown, None),
            LegKind::Hold => (Kind::Cue, Some(leg)),
            LegKind::Morph => (Kind::Cue, next.filter(|next| next.kind == LegKind::Hold)),
        };
        let cue = plan.cue(leg).filter(|_| kind == Kind::Cue);
        let speeds = plan.speeds_of(leg).filter(|_| kind == Kind::Cue);
        let transition = plan.transition(leg);
        let place = match (cue, transition) {
            (Some(cue), _) => cue.place,
            (None, Some(transition)) => transition.place,
            (None, None) => Default::default(),
        };
        let mut highest = peaks(plan, index).unwrap_or(UNUSED);
        if leg.kind == LegKind::Morph && hold.is_some() {
            highest = higher(highest, peaks(plan, index + 1).unwrap_or(UNUSED));
        }
        let wanted = speeds.and_then(|speeds| speeds.pose.as_ref());
        Entry {
            kind,
            number: leg.cue,
            cue,
            line: self.locator.start(place).line,
            start: leg.start,
            morph: transition.map(|transition| (transition, leg.ticks)),
            hold: hold.map(|hold| (hold.start, hold.ticks)),
            speeds,
            pose: cue.zip(wanted).map(|(cue, phase)| self.pose(cue, phase)),
            off_marks: cue
                .filter(|_| wanted.is_some())
                .map(|cue| allowance(cue.figure.ratio, plan.rig.projection)),
            peaks: highest,
        }
    }

    /// The landing in degrees, in [0, 360): of the directions that a figure's lobes point to, the one that was asked for.
    fn pose(&self, cue: &Cue, phase: &Turns) -> Rational {
        let figure = cue.figure.ratio;
        if self.plan.rig.projection == Projection::Crossed || figure.lobes() == 0 {
            return phase.degrees();
        }
        let least = figure.pose_of_phase(phase).degrees();
        let asked = match &cue.land {
            Land::Angle(angle) => angle.degrees(),
            Land::Usual | Land::Free => whole(90),
        };
        let apart = ratio(360, i128::from(figure.lobes()));
        let steps = Rational::from_integer(round_half_up(&((asked - &least) / &apart)));
        let nearest = least + steps * apart;
        &nearest - (&nearest / whole(360)).floor() * whole(360)
    }
}

impl Entry<'_> {
    /// The tick from which the figure stands; the end of the transition, where there is none.
    fn stands(&self) -> Ticks {
        let end = self.morph.map_or(0, |(_, ticks)| ticks.0);
        self.hold
            .map_or(Ticks(self.start.0 + end), |(start, _)| start)
    }
}

/// What a leg past the last one uses of the limits.
const UNUSED: Pair<Peaks> = Pair {
    a: NO_PEAKS,
    b: NO_PEAKS,
};
const NO_PEAK: Peak = Peak {
    share: 0.0,
    at_s: 0.0,
};
const NO_PEAKS: Peaks = Peaks {
    speed: NO_PEAK,
    acceleration: NO_PEAK,
    jerk: None,
};

/// Of each limit the higher use of two; the first one where both are alike.
fn higher(first: Pair<Peaks>, second: Pair<Peaks>) -> Pair<Peaks> {
    let of = |one: Peak, other: Peak| if other.share > one.share { other } else { one };
    Pair::each(|id| {
        let (one, other) = (first.of(id), second.of(id));
        Peaks {
            speed: of(one.speed, other.speed),
            acceleration: of(one.acceleration, other.acceleration),
            jerk: match (one.jerk, other.jerk) {
                (Some(one), Some(other)) => Some(of(one, other)),
                (one, other) => one.or(other),
            },
        }
    })
}

/// Each limit's name and its peak; `None` where the rig sets no such limit.
fn named(peaks: &Peaks) -> [(&'static str, Option<Peak>); 3] {
    [
        ("speed", Some(peaks.speed)),
        ("acceleration", Some(peaks.acceleration)),
        ("jerk", peaks.jerk),
    ]
}

/// The gear of a rotor that has one: motor turns and mirror turns.
fn geared(plan: &Plan, id: RotorId) -> Option<(u32, u32)> {
    let gear = plan.rig.rotor(id).gear.value;
    (gear.motor != gear.mirror).then_some((gear.motor, gear.mirror))
}
