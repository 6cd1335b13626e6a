//! Speeds and accelerations of both motors over a transition, against their limits.

use super::svg::{ERROR, FAINT, Frame, HAIR, ROTOR_A, ROTOR_B, Svg, WARNING, number};
use crate::exact::to_f64;
use crate::motion::profile::Limits;
use crate::optics::path::LegPath;
use crate::plan::Plan;
use crate::rig::{Pair, RotorId};
use std::fmt::Write;

/// Cubic pieces of a curve.
const PIECES: u32 = 60;
/// Places at which a limit is looked at, for the marks of what is past it.
const LOOKS: u32 = 600;
/// Most of what counts as within a limit.
const WITHIN: f64 = 1.0 + 1e-6;

/// Room for labels at the left of the charts.
pub const LEFT: f64 = 62.0;
/// Room for labels at their right.
pub const RIGHT: f64 = 96.0;

/// The dash of rotor b's curves: told apart without colour too.
pub const DASH_B: &str = "7 3";

/// One motor over a leg.
#[derive(Clone, Copy)]
struct Motor<'a> {
    path: &'a LegPath,
    id: RotorId,
    /// Motor turns to a mirror turn, signed.
    gear: f64,
    limits: Limits,
}

impl Motor<'_> {
    /// Speed in rpm and its slope.
    fn speed(&self, t: f64) -> (f64, f64) {
        let state = *self.path.at(t).of(self.id);
        (
            state.speed * self.gear * 60.0,
            state.acceleration * self.gear * 60.0,
        )
    }
    /// Acceleration as a share of the limit that applies at the moment, signed.
    fn share(&self, t: f64) -> f64 {
        let (speed, acceleration) = self.speed(t);
        let limit = if speed * acceleration < 0.0 {
            self.limits.deceleration
        } else {
            self.limits.acceleration
        };
        acceleration / (limit * 60.0)
    }
    fn ink(&self) -> (&'static str, &'static str) {
        match self.id {
            RotorId::A => (ROTOR_A, ""),
            RotorId::B => (ROTOR_B, DASH_B),
        }
    }
}

/// What happened where, to be marked on the time axis.
#[derive(Clone, Debug)]
pub struct Mark {
    /// Seconds from the leg's start.
    pub at: f64,
    /// Short text, such as a finding's code.
    pub text: String,
    /// Whether it is an error.
    pub error: bool,
}

/// The plane of one chart.
struct Plane {
    frame: Frame,
    length: f64,
    low: f64,
    high: f64,
}

impl Plane {
    fn x(&self, t: f64) -> f64 {
        self.frame.x + self.frame.width * t / self.length
    }
    fn y(&self, value: f64) -> f64 {
        self.frame.bottom() - self.frame.height * (value - self.low) / (self.high - self.low)
    }
    fn level(&self, svg: &mut Svg, value: f64, ink: &str, dash: &str, label: &str) {
        let y = self.y(value);
        svg.line((self.frame.x, y), (self.frame.right(), y), ink, 1.0, dash);
        svg.text((self.frame.x - 6.0, y + 4.0), "s f e", label);
    }
}

/// Draws both charts into a frame: speeds above, accelerations below, one time axis.
pub fn charts(svg: &mut Svg, frame: Frame, plan: &Plan, path: &LegPath, marks: &[Mark]) {
    let motors = Pair::each(|id| {
        let rotor = plan.rig.rotor(id);
        Motor {
            path,
            id,
            gear: to_f64(&rotor.motor_per_mirror()),
            limits: Limits::of(rotor),
        }
    });
    let inner = Frame {
        x: frame.x + LEFT,
        width: frame.width - LEFT - RIGHT,
        ..frame
    };
    let gap = 30.0;
    let upper = Frame {
        height: (inner.height - gap - 38.0) * 0.56,
        y: inner.y + 16.0,
        ..inner
    };
    let lower = Frame {
        y: upper.bottom() + gap,
        height: (inner.height - gap - 38.0) * 0.44,
        ..inner
    };
    speeds(svg, upper, &motors);
    accelerations(svg, lower, &motors);
    time_axis(svg, upper, lower, path);
    mark(svg, upper, lower, path, marks);
}

fn speeds(svg: &mut Svg, frame: Frame, motors: &Pair<Motor>) {
    let each = [motors.a, motors.b];
    let length = motors.a.path.length;
    let values: Vec<f64> = each
        .iter()
        .flat_map(|motor| (0..=LOOKS).map(|look| motor.speed(at(length, look)).0))
        .collect();
    let lowest = values.iter().copied().fold(0.0, f64::min);
    let highest = values.iter().copied().fold(0.0, f64::max);
    let tops = each.map(|motor| motor.limits.speed * 60.0);
    // A limit is in the picture where the motor comes anywhere near it.
    let top = tops[0].max(tops[1]);
    let reach = |far: f64| {
        if far > 0.3 * top {
            far.max(top)
        } else {
            far * 1.25
        }
    };
    let low = if lowest < 0.0 { -reach(-lowest) } else { 0.0 };
    let high = if highest > 0.0 { reach(highest) } else { 0.0 };
    let plane = Plane {
        frame,
        length,
        low,
        high: high.max(low + 1.0),
    };
    svg.text((frame.x, frame.y - 7.0), "s b hl", "motor speed, rpm");
    plane.level(svg, 0.0, HAIR, "", "0");
    for (index, top) in tops.iter().enumerate() {
        if index == 1 && (tops[0] - top).abs() < 1e-9 {
            continue;
        }
        for value in [*top, -top] {
            if value > plane.low - 1e-6 * top && value < plane.high + 1e-6 * top {
                plane.level(svg, value, FAINT, "2 3", &signed(value));
            }
        }
    }
    let mut ends = Vec::new();
    for motor in each {
        let (ink, dash) = motor.ink();
        let d = smooth(&plane, |t| motor.speed(t));
        svg.path(&d, ink, 2.0, dash);
        let limit = motor.limits.speed * 60.0;
        past(
            svg,
            &plane,
            |t| motor.speed(t).0,
            |v| v.abs() > limit * WITHIN,
        );
        let (end, _) = motor.speed(length);
        ends.push((
            plane.y(end) + 4.0,
            motor.id,
            format!("{} {}", motor.id.name(), signed(end)),
        ));
    }
    end_labels(svg, frame, ends);
}

fn accelerations(svg: &mut Svg, frame: Frame, motors: &Pair<Motor>) {
    let each = [motors.a, motors.b];
    let length = motors.a.path.length;
    let shares: Vec<f64> = each
        .iter()
        .flat_map(|motor| (0..=LOOKS).map(|look| motor.share(at(length, look))))
        .filter(|share| share.is_finite())
        .collect();
    let highest = shares.iter().copied().fold(0.0, f64::max);
    let lowest = shares.iter().copied().fold(0.0, f64::min);
    let most = highest.max(-lowest);
    // The limit is in the picture where a motor comes anywhere near it.
    let edge = if most > 0.3 { 1.0 } else { most.max(0.016) };
    let room = if most > 0.3 { 1.0 } else { 1.25 };
    let plane = Plane {
        frame,
        length,
        low: lowest.min(-edge * room),
        high: highest.max(edge * room),
    };
    svg.text(
        (frame.x, frame.y - 7.0),
        "s b hl",
        "motor acceleration, share of the limit that applies",
    );
    // Labels that would stand on each other are left to the one above.
    let apart = plane.y(-edge) - plane.y(edge);
    plane.level(svg, 0.0, HAIR, "", if apart < 26.0 { "" } else { "0" });
    let (dash, ink) = if most > 0.3 {
        ("2 3", FAINT)
    } else {
        ("", HAIR)
    };
    plane.level(svg, edge, ink, dash, &percent(edge));
    let below = if apart < 13.0 {
        String::new()
    } else {
        percent(-edge)
    };
    plane.level(svg, -edge, ink, dash, &below);
    let mut ends = Vec::new();
    for motor in each {
        let (ink, dash) = motor.ink();
        let d = straight(&plane, |t| motor.share(t));
        svg.path(&d, ink, 1.6, dash);
        past(svg, &plane, |t| motor.share(t), |v| v.abs() > WITHIN);
        let peak =
            (0..=LOOKS)
                .map(|look| motor.share(at(length, look)))
                .fold(
                    0.0_f64,
                    |one, two| if two.abs() > one.abs() { two } else { one },
                );
        let label = format!("{} peak {}", motor.id.name(), percent(peak));
        ends.push((plane.y(peak * 0.5) + 4.0, motor.id, label));
    }
    end_labels(svg, frame, ends);
}

/// Labels at the right edge, moved apart where they would touch.
fn end_labels(svg: &mut Svg, frame: Frame, mut ends: Vec<(f64, RotorId, String)>) {
    ends.sort_by(|one, two| one.0.total_cmp(&two.0));
    if let [one, two] = ends.as_mut_slice() {
        let short = (14.0 - (two.0 - one.0)).max(0.0);
        one.0 -= short / 2.0;
        two.0 += short / 2.0;
    }
    for (y, id, text) in ends {
        let class = match id {
            RotorId::A => "s b ra",
            RotorId::B => "s b rb",
        };
        svg.text((frame.right() + 6.0, y), class, &text);
    }
}

fn time_axis(svg: &mut Svg, upper: Frame, lower: Frame, path: &LegPath) {
    let step = nice(path.length / 8.0);
    let y = lower.bottom();
    let mut tick = 0.0;
    while tick <= path.length * 1.0001 {
        let x = lower.x + lower.width * tick / path.length;
        svg.line((x, upper.y), (x, upper.bottom()), HAIR, 0.5, "");
        svg.line((x, lower.y), (x, y + 4.0), HAIR, 0.5, "");
        svg.text((x, y + 17.0), "s f m", &format!("{} s", number(tick)));
        tick += step;
    }
}

fn mark(svg: &mut Svg, upper: Frame, lower: Frame, path: &LegPath, marks: &[Mark]) {
    for mark in marks {
        let x = lower.x + lower.width * (mark.at / path.length).clamp(0.0, 1.0);
        let ink = if mark.error { ERROR } else { WARNING };
        svg.line((x, upper.y), (x, lower.bottom() + 4.0), ink, 1.2, "1 2");
        let tip = lower.bottom() + 20.0;
        let d = format!("M{} {}l5 9h-10z", number(x), number(tip));
        svg.shape(&d, ink);
        let class = if mark.error { "s b err" } else { "s b warn" };
        let right = x > lower.x + lower.width * 0.6;
        let (class, x) = if right {
            (format!("{class} e"), x - 9.0)
        } else {
            (class.to_owned(), x + 9.0)
        };
        svg.text((x, tip + 9.0), &class, &mark.text);
    }
}

fn at(length: f64, look: u32) -> f64 {
    length * f64::from(look) / f64::from(LOOKS)
}

/// A curve through values with their slopes, as cubic pieces.
fn smooth(plane: &Plane, value: impl Fn(f64) -> (f64, f64)) -> String {
    let step = plane.length / f64::from(PIECES);
    let (mut last, mut slope) = value(0.0);
    let mut d = format!("M{} {}", number(plane.x(0.0)), number(plane.y(last)));
    for piece in 1..=PIECES {
        let t = step * f64::from(piece);
        let (next, after) = value(t);
        let third = step / 3.0;
        let points = [
            (t - 2.0 * third, last + slope * third),
            (t - third, next - after * third),
            (t, next),
        ];
        d.push('C');
        for (index, (t, value)) in points.into_iter().enumerate() {
            let gap = if index == 0 { "" } else { " " };
            let _ = write!(d, "{gap}{} {}", number(plane.x(t)), number(plane.y(value)));
        }
        (last, slope) = (next, after);
    }
    d
}

/// A curve that may step: straight from look to look.
fn straight(plane: &Plane, value: impl Fn(f64) -> f64) -> String {
    let mut d = String::new();
    for look in (0..=LOOKS).step_by(3) {
        let t = at(plane.length, look);
        let sign = if look == 0 { "M" } else { "L" };
        let _ = write!(
            d,
            "{sign}{} {}",
            number(plane.x(t)),
            number(plane.y(value(t)))
        );
    }
    d
}

/// Draws over, in red, what is past a limit.
fn past(svg: &mut Svg, plane: &Plane, value: impl Fn(f64) -> f64, over: impl Fn(f64) -> bool) {
    let mut d = String::new();
    let mut down = false;
    for look in 0..=LOOKS {
        let t = at(plane.length, look);
        let here = value(t);
        if over(here) {
            let sign = if down { "L" } else { "M" };
            let _ = write!(d, "{sign}{} {}", number(plane.x(t)), number(plane.y(here)));
        }
        down = over(here);
    }
    if !d.is_empty() {
        svg.path(&d, ERROR, 4.0, "");
    }
}

/// A round step near `value`: 1, 2 or 5 times a power of ten.
fn nice(value: f64) -> f64 {
    let power = libm::pow(10.0, libm::floor(libm::log10(value.max(1e-9))));
    let lead = value / power;
    let round = [1.0, 2.0, 5.0].into_iter().find(|round| *round >= lead);
    round.unwrap_or(10.0) * power
}

/// A whole number in groups of three.
fn signed(value: f64) -> String {
    let digits = format!("{}", libm::round(value.abs()));
    let mut grouped = String::new();
    for (index, digit) in digits.chars().enumerate() {
        if index > 0 && (digits.len() - index) % 3 == 0 && digits.len() > 4 {
            grouped.push('\u{a0}');
        }
        grouped.push(digit);
    }
    if value <= -0.5 {
        format!("-{grouped}")
    } else {
        grouped
    }
}

fn percent(share: f64) -> String {
    let percent = share * 100.0;
    if percent.abs() < 9.95 {
        let text = format!("{:.1} %", percent.abs());
        return if percent < 0.0 {
            format!("-{text}")
        } else {
            text
        };
    }
    format!("{} %", signed(percent))
}
