//! The picture of one cue: the figure as it holds, what is known of it, and the way into it.

use super::chart::{self, Mark, charts};
use super::facts::{Subject, class_of, clock_span, lobe_angle, of_cue, transition_words};
use super::still::Scenery;
use super::svg::{ERROR, FAINT, Frame, HAIR, ROTOR_A, ROTOR_B, Svg, TEXT, fitted, number, wrapped};
use super::tile::{Lit, Style, tile};
use super::{Look, Show};
use crate::check::{Peak, peaks};
use crate::finding::{Code, Finding, Severity};
use crate::rig::RotorId;

/// Width of the drawing.
const WIDTH: f64 = 1200.0;
/// Room at the edges.
const EDGE: f64 = 28.0;
/// Stills of a transition, both ends included.
pub const STILLS: usize = 9;
/// Findings that are written out; the rest is counted.
const MOST_FINDINGS: usize = 4;

/// The SVG file of a subject.
#[must_use]
pub fn picture(show: &Show, subject: &Subject, look: &Look) -> String {
    let plan = show.plan;
    let mut svg = Svg::new();
    let title = subject.title(plan);
    let number_of = if subject.hold.is_some() {
        format!("cue {}", subject.number)
    } else {
        show.title.clone()
    };
    svg.text((EDGE, 34.0), "s f", &number_of);
    svg.text((EDGE, 64.0), "xl", &fitted(&title, 26.0, 800.0));
    let span = clock_span(plan, subject.span(plan));
    svg.text((WIDTH - EDGE, 34.0), "s f e", "table time");
    svg.text((WIDTH - EDGE, 56.0), "e", &span);
    let findings = subject.findings(&show.found);
    let mut y = 84.0;
    if subject.hold.is_some() {
        figure(&mut svg, show, subject, y);
        let after = facts(&mut svg, show, subject, &findings, y);
        let used = uses(&mut svg, show, subject, (EDGE + 360.0 + 36.0 + 400.0, y));
        y = (y + 360.0).max(after).max(used) + 34.0;
    } else {
        y += 16.0;
    }
    if subject.hold.is_none() && !findings.is_empty() {
        y = list_findings(&mut svg, &findings, (EDGE, y + 8.0), WIDTH - 2.0 * EDGE) + 14.0;
    }
    if let Some(index) = subject.transition {
        y = transition(&mut svg, show, subject, index, &findings, y);
    } else {
        svg.text((EDGE, y), "f", "The run-up leads into it: see run-up.svg.");
        y += 10.0;
    }
    svg.text((EDGE, y + 16.0), "xs f", &show.small_print());
    let about = format!("{number_of}, {title}: {span}");
    svg.finish(WIDTH, y + 32.0, look.width.unwrap_or(WIDTH), &title, &about)
}

fn figure(svg: &mut Svg, show: &Show, subject: &Subject, y: f64) {
    let frame = Frame::square(EDGE, y, 360.0);
    let style = Style::new(&show.optics, frame.width);
    let (Some(index), Some(leg)) = (subject.hold, subject.hold_leg(show.plan)) else {
        return;
    };
    let pieces = Scenery::of(show.plan, index)
        .map(|scenery| scenery.figure(&show.optics, style.grain()))
        .unwrap_or_default();
    tile(svg, frame, style, &pieces, lit(leg.beam, false));
    let Some(cue) = show.plan.cue(leg) else {
        return;
    };
    let angle = lobe_angle(show.plan, leg, cue);
    let radius = frame.width * 0.472;
    if let Some(angle) = angle {
        pose_mark(svg, frame.centre(), radius, angle);
    }
    let spin = cue.spin.sign();
    if spin != 0 {
        spin_arrow(
            svg,
            frame.centre(),
            radius,
            angle.unwrap_or(90.0),
            f64::from(spin),
        );
    }
}

/// A pointer from the edge of the tile to where a lobe points.
fn pose_mark(svg: &mut Svg, centre: (f64, f64), radius: f64, angle: f64) {
    let (sin, cos) = libm::sincos(angle.to_radians());
    let tip = (
        centre.0 + (radius - 5.0) * cos,
        centre.1 - (radius - 5.0) * sin,
    );
    let foot = (
        centre.0 + (radius + 5.0) * cos,
        centre.1 - (radius + 5.0) * sin,
    );
    let side = (4.0 * sin, 4.0 * cos);
    let d = format!(
        "M{} {}L{} {}L{} {}z",
        number(tip.0),
        number(tip.1),
        number(foot.0 + side.0),
        number(foot.1 + side.1),
        number(foot.0 - side.0),
        number(foot.1 - side.1)
    );
    svg.shape(&d, "#e8ecf4");
}

/// An arc with a head, from the pose on, the way the figure turns.
fn spin_arrow(svg: &mut Svg, centre: (f64, f64), radius: f64, angle: f64, sense: f64) {
    let at = |degrees: f64, radius: f64| {
        let (sin, cos) = libm::sincos(degrees.to_radians());
        (centre.0 + radius * cos, centre.1 - radius * sin)
    };
    let (from, to) = (angle + sense * 4.0, angle + sense * 26.0);
    let (start, end) = (at(from, radius), at(to, radius));
    let sweep = u8::from(sense < 0.0);
    let d = format!(
        "M{} {}A{r} {r} 0 0 {sweep} {} {}",
        number(start.0),
        number(start.1),
        number(end.0),
        number(end.1),
        r = number(radius)
    );
    svg.path(&d, "#aab3c2", 1.8, "");
    let (tip, inner, outer) = (
        at(to + sense * 3.5, radius),
        at(to, radius - 4.5),
        at(to, radius + 4.5),
    );
    let head = format!(
        "M{} {}L{} {}L{} {}z",
        number(tip.0),
        number(tip.1),
        number(inner.0),
        number(inner.1),
        number(outer.0),
        number(outer.1)
    );
    svg.shape(&head, "#aab3c2");
}

/// How much of each limit the way into a cue and its hold use, as bars up to the limit; returns where they end.
fn uses(svg: &mut Svg, show: &Show, subject: &Subject, at: (f64, f64)) -> f64 {
    let (x, mut y) = (at.0, at.1 + 16.0);
    let all: Vec<_> = [subject.transition, subject.hold]
        .into_iter()
        .flatten()
        .filter_map(|leg| peaks(show.plan, leg))
        .collect();
    svg.text((x, y), "f", "most of each limit that is used");
    y += 10.0;
    let wide = WIDTH - EDGE - x - 140.0;
    type Pick = fn(&crate::check::Peaks) -> Option<Peak>;
    let limits: [(&str, Pick); 3] = [
        ("speed", |peaks| Some(peaks.speed)),
        ("acceleration", |peaks| Some(peaks.acceleration)),
        ("jerk", |peaks| peaks.jerk),
    ];
    for (name, pick) in limits {
        for id in RotorId::BOTH {
            let share = all
                .iter()
                .filter_map(|peaks| pick(peaks.of(id)))
                .map(|peak| peak.share)
                .reduce(f64::max);
            let Some(share) = share else { continue };
            let (ink, class) = match id {
                RotorId::A => (ROTOR_A, "s ra"),
                RotorId::B => (ROTOR_B, "s rb"),
            };
            let label = format!("{} {name}", id.name());
            svg.text((x, y + 10.0), class, &label);
            let bar = Frame {
                x: x + 92.0,
                y: y + 1.0,
                width: wide,
                height: 9.0,
            };
            svg.area(bar, 2.0, HAIR);
            let over = share > 1.0 + 1e-6;
            let filled = Frame {
                width: (wide * share.min(1.0)).max(1.0),
                ..bar
            };
            svg.area(filled, 2.0, if over { ERROR } else { ink });
            let class = if over { "s b err e" } else { "s e" };
            let percent = format!("{:.0} %", share * 100.0);
            svg.text((WIDTH - EDGE, y + 10.0), class, &percent);
            y += 17.0;
        }
        y += 6.0;
    }
    y
}

/// Facts and findings beside the figure; returns where they end.
fn facts(svg: &mut Svg, show: &Show, subject: &Subject, findings: &[&Finding], y: f64) -> f64 {
    let x = EDGE + 360.0 + 36.0;
    let mut y = y + 16.0;
    for (label, value) in of_cue(show.plan, subject) {
        svg.text((x, y), "f", label);
        svg.text(
            (x + 84.0, y),
            "",
            &fitted(&value, 13.0, WIDTH - EDGE - x - 84.0),
        );
        y += 24.0;
    }
    list_findings(svg, findings, (x, y + 10.0), WIDTH - EDGE - x)
}

fn list_findings(svg: &mut Svg, findings: &[&Finding], at: (f64, f64), width: f64) -> f64 {
    let (x, mut y) = at;
    for finding in findings.iter().take(MOST_FINDINGS) {
        let class = class_of(finding.severity);
        let head = format!("{} {}", finding.severity.word(), finding.code.text());
        svg.text((x, y), &format!("s b {class}"), &head);
        y += 16.0;
        for line in wrapped(&finding.message, 13.0, width, 2) {
            svg.text((x, y), "", &line);
            y += 17.0;
        }
        if let Some(help) = &finding.help {
            for line in wrapped(help, 11.0, width, 2) {
                svg.text((x, y - 1.0), "s f", &line);
                y += 15.0;
            }
        }
        y += 9.0;
    }
    if let Some(more) = findings
        .len()
        .checked_sub(MOST_FINDINGS)
        .filter(|more| *more > 0)
    {
        svg.text((x, y), "s f", &format!("and {more} more"));
        y += 18.0;
    }
    y
}

/// The strip of stills, leaders to their moments, and the charts; returns where it ends.
fn transition(
    svg: &mut Svg,
    show: &Show,
    subject: &Subject,
    index: usize,
    findings: &[&Finding],
    y: f64,
) -> f64 {
    let plan = show.plan;
    let (Some(leg), Some(scenery)) = (plan.legs.get(index), Scenery::of(plan, index)) else {
        return y;
    };
    let dark = plan
        .transition(leg)
        .is_some_and(|transition| transition.dark);
    let words = transition_words(plan, leg).unwrap_or_default();
    let head = if subject.hold.is_some() {
        format!("the way into it: {words}")
    } else {
        words
    };
    svg.text((EDGE, y), "b", &head);
    let whole = WIDTH - 2.0 * EDGE;
    let gap = 8.0;
    #[expect(clippy::cast_precision_loss, reason = "nine")]
    let side = (whole - gap * (STILLS - 1) as f64) / STILLS as f64;
    let style = Style::new(&show.optics, side);
    let strip = y + 14.0;
    let frame = Frame {
        x: EDGE,
        y: strip + side + 44.0,
        width: whole,
        height: 360.0,
    };
    let axis = (
        frame.x + chart::LEFT,
        frame.width - chart::LEFT - chart::RIGHT,
    );
    let mut x = EDGE;
    for moment in scenery.moments(STILLS) {
        let still = scenery.still(&show.optics, moment, style.grain());
        let tile_frame = Frame::square(x, strip, side);
        tile(svg, tile_frame, style, &still.pieces, lit(leg.beam, dark));
        let middle = x + side / 2.0;
        let foot = strip + side + 15.0;
        svg.text((middle, foot), "s m", &format!("{moment:.2} s"));
        let target = axis.0 + axis.1 * moment / scenery.path.length;
        svg.line(
            (middle, foot + 5.0),
            (target, frame.y + 14.0),
            HAIR,
            1.0,
            "",
        );
        svg.line(
            (target, frame.y + 14.0),
            (target, frame.y + 20.0),
            FAINT,
            1.0,
            "",
        );
        x += side + gap;
    }
    if dark {
        svg.text(
            (WIDTH - EDGE, y),
            "s f e",
            "dark: the grey traces are where the light would be",
        );
    }
    let marks = marks(show, index, findings);
    charts(svg, frame, plan, &scenery.path, &marks);
    let rule = frame.bottom() + if marks.is_empty() { 6.0 } else { 22.0 };
    svg.line((EDGE, rule), (WIDTH - EDGE, rule), TEXT, 0.4, "");
    rule + 2.0
}

/// Findings at the moment of their peak.
fn marks(show: &Show, index: usize, findings: &[&Finding]) -> Vec<Mark> {
    let Some(peaks) = peaks(show.plan, index) else {
        return Vec::new();
    };
    let start = show
        .plan
        .legs
        .get(index)
        .map_or(0.0, |leg| leg.start.time(show.plan.tick()).to_f64());
    let higher = |pick: fn(&crate::check::Peaks) -> Option<Peak>| {
        RotorId::BOTH
            .into_iter()
            .filter_map(|id| pick(peaks.of(id)))
            .reduce(|one, two| if two.share > one.share { two } else { one })
    };
    let mut marks: Vec<Mark> = Vec::new();
    for finding in findings {
        let peak = match finding.code {
            Code::LimitSpeed => higher(|peaks| Some(peaks.speed)),
            Code::LimitAcceleration | Code::LoopSeam => higher(|peaks| Some(peaks.acceleration)),
            Code::LimitJerk => higher(|peaks| peaks.jerk),
            _ => None,
        };
        if let Some(peak) = peak.filter(|peak| peak.share > 1.0) {
            marks.push(Mark {
                at: peak.at_s - start,
                text: finding.code.text().to_owned(),
                error: finding.severity == Severity::Error,
            });
        }
    }
    marks
}

/// Whether a leg's light is on, and how bright.
#[must_use]
pub fn lit(beam: u8, dark: bool) -> Lit {
    if dark || beam == 0 {
        Lit::Dark
    } else {
        Lit::On(f64::from(beam) / 255.0)
    }
}
