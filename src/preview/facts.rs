//! What is written beside a picture.

use crate::exact::{Seconds, Ticks, decimal, to_f64};
use crate::figure::Ratio;
use crate::finding::{Finding, Severity};
use crate::plan::{Leg, LegKind, Plan};
use crate::rig::{Projection, RotorId};
use crate::runsheet::words;
use crate::show::Cue;

/// A picture's subject: one or two legs with one number.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Subject {
    /// The number in the table's cue column.
    pub number: u32,
    /// The transition's leg, if it has one.
    pub transition: Option<usize>,
    /// The hold's leg, if it has one.
    pub hold: Option<usize>,
}

/// Every subject in the order of play: the run-up, each cue, the loop's morph or the run-down.
#[must_use]
pub fn subjects(plan: &Plan) -> Vec<Subject> {
    let mut all: Vec<Subject> = Vec::new();
    for (index, leg) in plan.legs.iter().enumerate() {
        let hold = leg.kind == LegKind::Hold;
        match all.last_mut() {
            Some(last) if hold && last.number == leg.cue && last.hold.is_none() => {
                last.hold = Some(index);
            }
            _ => all.push(Subject {
                number: leg.cue,
                transition: (!hold).then_some(index),
                hold: hold.then_some(index),
            }),
        }
    }
    all
}

impl Subject {
    /// The transition's leg.
    #[must_use]
    pub fn transition_leg<'p>(&self, plan: &'p Plan) -> Option<&'p Leg> {
        plan.legs.get(self.transition?)
    }
    /// The hold's leg.
    #[must_use]
    pub fn hold_leg<'p>(&self, plan: &'p Plan) -> Option<&'p Leg> {
        plan.legs.get(self.hold?)
    }
    /// The cue that it shows, if it is one.
    #[must_use]
    pub fn cue<'p>(&self, plan: &'p Plan) -> Option<&'p Cue> {
        plan.cue(self.hold_leg(plan)?)
    }
    /// `Run-up`, `Loop`, `Run-down`, or the cue's name or figure.
    #[must_use]
    pub fn title(&self, plan: &Plan) -> String {
        if let Some(cue) = self.cue(plan) {
            return cue
                .name
                .clone()
                .unwrap_or_else(|| cue.figure.written.clone());
        }
        match self.transition_leg(plan).map(|leg| leg.kind) {
            Some(LegKind::RunUp) => "Run-up".to_owned(),
            Some(LegKind::LoopMorph) => "Loop".to_owned(),
            Some(LegKind::RunDown) => "Run-down".to_owned(),
            _ => "Hold".to_owned(),
        }
    }
    /// The name of its picture's file.
    #[must_use]
    pub fn file(&self, plan: &Plan) -> String {
        match self.transition_leg(plan).map(|leg| leg.kind) {
            _ if self.hold.is_some() => format!("cue-{:03}.svg", self.number),
            Some(LegKind::RunUp) => "run-up.svg".to_owned(),
            Some(LegKind::RunDown) => "run-down.svg".to_owned(),
            _ => "loop.svg".to_owned(),
        }
    }
    /// First and last tick.
    #[must_use]
    pub fn span(&self, plan: &Plan) -> (Ticks, Ticks) {
        let first = self.transition_leg(plan).or(self.hold_leg(plan));
        let last = self.hold_leg(plan).or(self.transition_leg(plan));
        let end = |leg: &Leg| Ticks(leg.start.0 + leg.ticks.0);
        (
            first.map_or(Ticks(0), |leg| leg.start),
            last.map_or(Ticks(0), end),
        )
    }
    /// What the same picture would be made from: the written cue before, the written cue, the kind.
    #[must_use]
    pub fn likeness(&self, plan: &Plan) -> (Option<u32>, u32, bool) {
        let leg = self.transition_leg(plan).or(self.hold_leg(plan));
        let written = leg.map_or(0, |leg| leg.written);
        let before = self
            .transition
            .and_then(|index| index.checked_sub(1))
            .and_then(|index| plan.legs.get(index))
            .map(|leg| leg.written);
        (before, written, self.hold.is_some())
    }
    /// Findings that are about it, errors first.
    #[must_use]
    pub fn findings<'f>(&self, found: &'f [(Finding, Vec<usize>)]) -> Vec<&'f Finding> {
        let mine = |legs: &[usize]| {
            [self.transition, self.hold]
                .into_iter()
                .flatten()
                .any(|leg| legs.contains(&leg))
        };
        let mut list: Vec<&Finding> = found
            .iter()
            .filter(|(_, legs)| mine(legs))
            .map(|(finding, _)| finding)
            .collect();
        list.sort_by_key(|finding| finding.severity);
        list
    }
}

/// `0:00:34.500 – 0:00:54.500`.
#[must_use]
pub fn clock_span(plan: &Plan, (from, to): (Ticks, Ticks)) -> String {
    let clock = |ticks: Ticks| words::clock(&ticks.time(plan.tick()));
    format!("{} – {}", clock(from), clock(to))
}

/// `5 s quintic, dark`.
#[must_use]
pub fn transition_words(plan: &Plan, leg: &Leg) -> Option<String> {
    let time: Seconds = leg.ticks.time(plan.tick());
    plan.transition(leg)
        .map(|transition| words::transition(transition, &time))
}

/// `five lobes` … as a person says it.
#[must_use]
pub fn lobes(ratio: Ratio, projection: Projection) -> String {
    if projection == Projection::Crossed {
        return format!("{} across, {} up", ratio.p().abs(), ratio.q().abs());
    }
    match ratio.lobes() {
        _ if ratio.p() == 0 || ratio.q() == 0 => "circle".to_owned(),
        0 => "circle".to_owned(),
        1 => "1 lobe".to_owned(),
        count => format!("{count} lobes"),
    }
}

/// Label and value of everything that is known of a cue.
#[must_use]
pub fn of_cue(plan: &Plan, subject: &Subject) -> Vec<(&'static str, String)> {
    let (Some(leg), Some(cue)) = (subject.hold_leg(plan), subject.cue(plan)) else {
        return Vec::new();
    };
    let Some(speeds) = plan.speeds_of(leg) else {
        return Vec::new();
    };
    let figure = cue.figure.ratio;
    let projection = plan.rig.projection;
    let rpm = |id: RotorId| {
        let text = decimal(&speeds.motor.of(id).rpm(), 1);
        text.trim_end_matches(".0").to_owned()
    };
    let repeat = decimal(speeds.repeat.value(), 2);
    let repeat = if repeat.contains('.') {
        repeat
            .trim_end_matches('0')
            .trim_end_matches('.')
            .to_owned()
    } else {
        repeat
    };
    let mut facts = vec![
        ("figure", cue.figure.written.clone()),
        (
            "mirrors",
            format!("{figure}, {}", lobes(figure, projection)),
        ),
        ("repeats", format!("{repeat} times a second")),
        (
            "motors",
            format!("a {} rpm, b {} rpm", rpm(RotorId::A), rpm(RotorId::B)),
        ),
        ("stands", words::duration(&leg.ticks.time(plan.tick()))),
    ];
    facts.push(("pose", pose(plan, leg, cue)));
    if !cue.spin.is_zero() {
        let degrees = to_f64(cue.spin.value()) * 360.0;
        facts.push(("spin", format!("{} deg/s", super::svg::number(degrees))));
    }
    if leg.beam < 255 {
        let percent = to_f64(&cue.beam) * 100.0;
        facts.push(("beam", format!("{percent:.0} %")));
    }
    facts
}

/// Where a lobe points at the start of a hold, in degrees counter-clockwise from the right: the one nearest to up.
#[must_use]
pub fn lobe_angle(plan: &Plan, leg: &Leg, cue: &Cue) -> Option<f64> {
    let figure = cue.figure.ratio;
    let plain = figure.p() == 0 || figure.q() == 0 || figure.lobes() == 0;
    if plain || plan.rig.projection == Projection::Crossed || !plan.rig.knows_pose() {
        return None;
    }
    let phase = figure.pose_phase(&leg.landing.a.turns(), &leg.landing.b.turns());
    let least = to_f64(figure.pose_of_phase(&phase).value()) * 360.0;
    let apart = 360.0 / f64::from(figure.lobes());
    let steps = libm::round((90.0 - least) / apart);
    Some(least + steps * apart)
}

fn pose(plan: &Plan, leg: &Leg, cue: &Cue) -> String {
    let free = plan
        .speeds_of(leg)
        .is_none_or(|speeds| speeds.pose.is_none());
    if free {
        return "free".to_owned();
    }
    if let Some(angle) = lobe_angle(plan, leg, cue) {
        return format!("a lobe at {} deg", super::svg::number(angle));
    }
    let figure = cue.figure.ratio;
    let phase = figure.pose_phase(&leg.landing.a.turns(), &leg.landing.b.turns());
    let degrees = to_f64(phase.value()) * 360.0;
    format!("{} deg between the mirrors", super::svg::number(degrees))
}

/// The class of a finding's text.
#[must_use]
pub fn class_of(severity: Severity) -> &'static str {
    match severity {
        Severity::Error => "err",
        Severity::Warning => "warn",
        Severity::Note => "f",
    }
}
