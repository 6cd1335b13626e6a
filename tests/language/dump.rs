//! What a rig and a show mean, in lines that read well in a diff. Numbers are exact, in the units of their types
//! (turns, seconds, metres …).

use phasewright::exact::Rational;
use phasewright::finding::Place;
use phasewright::motion::{Law, LawKind};
use phasewright::rig::{Rig, RotorId, Stated};
use phasewright::show::{Cue, Ending, Hold, Land, Length, Pace, Show, Transition, WrittenCue};
use std::fmt::Write as _;

fn at(text: &str, place: Place) -> String {
    format!("line {}", text[..place.start].matches('\n').count() + 1)
}

fn stated<T>(text: &str, value: &Stated<T>, show: impl Fn(&T) -> String) -> String {
    match value.place {
        Some(place) => format!("{} ({})", show(&value.value), at(text, place)),
        None => format!("{} (left out)", show(&value.value)),
    }
}

fn maybe<T>(text: &str, value: Option<&Stated<T>>, show: impl Fn(&T) -> String) -> String {
    value.map_or("none".to_owned(), |value| stated(text, value, show))
}

fn law(law: &Law) -> String {
    let kind = match &law.kind {
        LawKind::Bezier { x1, y1, x2, y2 } => format!("bezier({x1} {y1} {x2} {y2})"),
        other => format!("{other:?}"),
    };
    format!("{kind} skew {}", law.skew)
}

fn transition(text: &str, transition: &Transition) -> String {
    let length = match &transition.length {
        Length::Given(time) => format!("{} s", time.value()),
        Length::Fastest { at_least: None } => "fastest".to_owned(),
        Length::Fastest {
            at_least: Some(time),
        } => format!("fastest at least {} s", time.value()),
    };
    let light = if transition.dark { "dark" } else { "lit" };
    format!(
        "{length} {} {light} ({})",
        law(&transition.law),
        at(text, transition.place)
    )
}

fn cue(text: &str, cue: &Cue) -> String {
    let mut out = format!(
        "`{}` {:?} {} lobes {}",
        cue.figure.written,
        cue.figure.form,
        cue.figure.ratio,
        cue.figure.ratio.lobes()
    );
    let _ = write!(out, "\n    morph {}", transition(text, &cue.morph));
    let hold = match &cue.hold {
        Hold::For(time) => format!("{} s", time.value()),
        Hold::Until(time) => format!("until {} s", time.value()),
    };
    let _ = write!(out, "\n    hold {hold} ({})", at(text, cue.hold_place));
    let pace = match &cue.pace {
        Pace::Working => "working speed".to_owned(),
        Pace::Rate(speed) => format!("rate {} Hz", speed.value()),
        Pace::Lead(speed) => format!("lead {} turns/s", speed.value()),
    };
    let land = match &cue.land {
        Land::Usual => "usual".to_owned(),
        Land::Free => "free".to_owned(),
        Land::Angle(angle) => format!("{} turn", angle.value()),
    };
    let place = |place: Option<Place>| {
        place.map_or(String::new(), |place| format!(" ({})", at(text, place)))
    };
    let _ = write!(
        out,
        "\n    {pace}{}, land {land}{}, spin {} turns/s, beam {}",
        place(cue.pace_place),
        place(cue.land_place),
        cue.spin.value(),
        cue.beam
    );
    if let Some(name) = &cue.name {
        let _ = write!(out, "\n    name {name:?}");
    }
    out
}

/// A show.
pub(crate) fn show(text: &str, show: &Show) -> String {
    let mut out = format!("title {:?}\n", show.title);
    let _ = writeln!(out, "run-up {}", transition(text, &show.run_up));
    for (index, written) in show.cues.iter().enumerate() {
        let line = match written {
            WrittenCue::Good(good) => format!("{} {}", at(text, good.place), cue(text, good)),
            WrittenCue::Broken(place) => format!("{} broken", at(text, *place)),
        };
        let _ = writeln!(out, "cue {index}: {line}");
    }
    if show.order.len() <= 100 {
        let _ = writeln!(out, "order {:?}", show.order);
    } else {
        let _ = writeln!(out, "order of {} cues", show.order.len());
    }
    match &show.ending {
        Some(Ending::Loop { place, morph }) => {
            let _ = writeln!(
                out,
                "loop ({}) {}",
                at(text, *place),
                transition(text, morph)
            );
        }
        Some(Ending::RunDown(run_down)) => {
            let _ = writeln!(out, "run-down {}", transition(text, run_down));
        }
        None => out.push_str("no ending\n"),
    }
    out
}

/// A rig.
pub(crate) fn rig(text: &str, rig: &Rig) -> String {
    let number = |value: &Rational| value.to_string();
    let mut out = format!("title {:?}\nprojection {:?}\n", rig.title, rig.projection);
    for id in RotorId::BOTH {
        let rotor = rig.rotor(id);
        let fields = [
            (
                "mirror",
                maybe(text, rotor.mirror.as_ref(), |value| number(value.value())),
            ),
            (
                "tilt",
                maybe(text, rotor.tilt.as_ref(), |value| number(value.value())),
            ),
            (
                "swing",
                maybe(text, rotor.swing.as_ref(), |value| number(value.value())),
            ),
            (
                "top-speed",
                stated(text, &rotor.top_speed, |value| number(value.value())),
            ),
            (
                "stall-speed",
                stated(text, &rotor.stall_speed, |value| number(value.value())),
            ),
            (
                "acceleration",
                stated(text, &rotor.acceleration, |value| number(value.value())),
            ),
            (
                "deceleration",
                stated(text, &rotor.deceleration, |value| number(value.value())),
            ),
            (
                "jerk",
                maybe(text, rotor.jerk.as_ref(), |value| number(value.value())),
            ),
            (
                "gear",
                stated(text, &rotor.gear, |gear| {
                    format!("{}:{}", gear.motor, gear.mirror)
                }),
            ),
            (
                "turns",
                stated(text, &rotor.turns, |turns| format!("{turns:?}")),
            ),
            ("sense", rotor.sense.to_string()),
            ("counts", rotor.counts.to_string()),
            (
                "index",
                maybe(text, rotor.index.as_ref(), |value| number(value.value())),
            ),
            (
                "torque",
                maybe(text, rotor.torque.as_ref(), |curve| {
                    let points: Vec<String> = curve
                        .iter()
                        .map(|(speed, torque)| format!("{} {}", speed.value(), torque.value()))
                        .collect();
                    points.join(", ")
                }),
            ),
            (
                "drag",
                maybe(text, rotor.drag.as_ref(), |value| number(value.value())),
            ),
            (
                "inertia",
                maybe(text, rotor.inertia.as_ref(), |value| number(value.value())),
            ),
        ];
        let _ = writeln!(out, "rotor {} ({})", id.name(), at(text, rotor.place));
        for (name, value) in fields {
            let _ = writeln!(out, "  {name} {value}");
        }
    }
    let length = |value: Option<&Stated<phasewright::exact::Length>>| {
        maybe(text, value, |value| number(value.value()))
    };
    let _ = writeln!(
        out,
        "throw {}\nspacing {}",
        length(rig.throw.as_ref()),
        length(rig.spacing.as_ref())
    );
    for id in RotorId::BOTH {
        let angle = rig.incidence.of(id).as_ref();
        let _ = writeln!(
            out,
            "incidence {} {}",
            id.name(),
            maybe(text, angle, |angle| number(angle.value()))
        );
    }
    let working = stated(text, &rig.working_speed, |value| number(value.value()));
    let _ = writeln!(out, "working-speed {working}");
    match &rig.laser {
        None => out.push_str("laser none\n"),
        Some(laser) => {
            let _ = writeln!(out, "laser ({})", at(text, laser.place));
            let _ = writeln!(
                out,
                "  power {}",
                maybe(text, laser.power.as_ref(), |value| number(value.value()))
            );
            let _ = writeln!(out, "  wavelength {}", length(laser.wavelength.as_ref()));
            let _ = writeln!(out, "  width {}", length(laser.width.as_ref()));
            let _ = writeln!(
                out,
                "  divergence {}",
                maybe(text, laser.divergence.as_ref(), number)
            );
        }
    }
    let _ = writeln!(
        out,
        "latency {}\ntick {}",
        rig.latency.value(),
        rig.tick.value()
    );
    let _ = writeln!(
        out,
        "storage {}",
        maybe(text, rig.storage.as_ref(), u64::to_string)
    );
    let _ = writeln!(out, "table {:?}", rig.table);
    let _ = writeln!(
        out,
        "repeat {}",
        stated(text, &rig.repeat, |value| number(value.value()))
    );
    out
}
