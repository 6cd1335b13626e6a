//! What the time stamps alone tell: lost, late and doubled samples, and where the logger's clock steps.

use super::read::{LogKind, Value};
use crate::rig::RotorId;

/// Events kept in full; the totals go on.
const MOST_EVENTS: usize = 1 << 16;
/// Stretches of steady time stamps that are told apart; what comes after that many steps is not used.
pub(super) const MOST_SEGMENTS: u32 = 64;
/// Differences from which the usual one is learnt.
const LEARNT_FROM: usize = 63;

/// Something about one sample.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Event {
    /// When, in seconds since the log's origin.
    pub(super) time: f64,
    /// The stretch of steady time stamps it is in.
    pub(super) segment: u32,
    pub(super) kind: EventKind,
}

/// What happened to a sample.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum EventKind {
    /// So many samples are missing before this one.
    Lost(u64),
    /// It came between its turn and the next.
    Late,
    /// It says what another said already.
    Doubled,
}

/// Where the time stamps stop being steady.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Seam {
    /// The last time before it.
    pub(super) before: f64,
    /// The first time after it.
    pub(super) after: f64,
}

/// Watches the time stamps as they come.
#[derive(Clone, Debug)]
pub(super) struct Cadence {
    kind: LogKind,
    last: Option<(f64, Value)>,
    last_pulse: [Option<f64>; 2],
    /// Seconds from one sample to the next, once learnt; positions only.
    pub(super) period: Option<f64>,
    early: Vec<(f64, f64, f64)>,
    pub(super) events: Vec<Event>,
    pub(super) lost: u64,
    pub(super) late: u64,
    pub(super) doubled: u64,
    pub(super) seams: Vec<Seam>,
    torn: bool,
}

impl Cadence {
    pub(super) fn new(kind: LogKind) -> Self {
        Self {
            kind,
            last: None,
            last_pulse: [None; 2],
            period: None,
            early: Vec::new(),
            events: Vec::new(),
            lost: 0,
            late: 0,
            doubled: 0,
            seams: Vec::new(),
            torn: false,
        }
    }

    /// The stretch of steady time stamps that the sample seen last belongs to.
    pub(super) fn segment(&self) -> u32 {
        u32::try_from(self.seams.len()).unwrap_or(MOST_SEGMENTS)
    }

    /// Whether the time stamps have stepped too often to be of any use from here on.
    pub(super) fn is_torn(&self) -> bool {
        self.torn
    }

    /// Takes the next sample; `step` is the last digit of its time. Says whether it only repeats the one before.
    pub(super) fn see(&mut self, time: f64, step: f64, value: Value) -> bool {
        match value {
            Value::Positions(..) => self.see_position(time, step, value),
            Value::Pulse(rotor) => self.see_pulse(time, rotor),
        }
    }

    fn see_position(&mut self, time: f64, step: f64, value: Value) -> bool {
        let Some((before, _)) = self.last.replace((time, value)) else {
            return false;
        };
        let apart = time - before;
        if apart == 0.0 {
            self.event(time, EventKind::Doubled);
            return true;
        }
        if apart < 0.0 {
            self.seam(before, time);
            return false;
        }
        match self.period {
            Some(period) => self.judge(time, apart, step, period),
            None => {
                self.early.push((time, apart, step));
                if self.early.len() >= LEARNT_FROM {
                    self.learn();
                }
            }
        }
        false
    }

    fn see_pulse(&mut self, time: f64, rotor: RotorId) -> bool {
        let own = match rotor {
            RotorId::A => 0,
            RotorId::B => 1,
        };
        let last = self.last_pulse.get(own).copied().flatten();
        if let Some(slot) = self.last_pulse.get_mut(own) {
            *slot = Some(time);
        }
        match last {
            Some(before) if time < before => {
                self.last_pulse = [None; 2];
                if let Some(slot) = self.last_pulse.get_mut(own) {
                    *slot = Some(time);
                }
                self.seam(before, time);
                false
            }
            // The very same line twice; a pulse that bounces is found later, against the plan.
            Some(before) if before.total_cmp(&time).is_eq() => {
                self.event(time, EventKind::Doubled);
                true
            }
            _ => false,
        }
    }

    fn learn(&mut self) {
        let mut apart: Vec<f64> = self.early.iter().map(|(_, apart, _)| *apart).collect();
        let Some(period) = super::robust::median(&mut apart) else {
            return;
        };
        self.period = Some(period);
        for (time, apart, step) in std::mem::take(&mut self.early) {
            self.judge(time, apart, step, period);
        }
    }

    fn judge(&mut self, time: f64, apart: f64, step: f64, period: f64) {
        if apart <= 1.35 * period + step {
            return;
        }
        // 1.6 periods are one sample that came late, 1.8 are one that is missing.
        let periods = apart / period;
        let whole = (periods + 0.3).floor();
        if periods - whole > 0.35 {
            self.event(time, EventKind::Late);
        }
        if whole < 2.0 {
            return;
        }
        #[expect(
            clippy::cast_possible_truncation,
            clippy::cast_sign_loss,
            reason = "at least 2, and saturating is right for a gap without bounds"
        )]
        let missing = whole as u64 - 1;
        self.event(time, EventKind::Lost(missing));
        if apart > (20.0 * period).max(0.5) && self.early.is_empty() {
            self.seam(time - apart, time);
        }
    }

    fn seam(&mut self, before: f64, after: f64) {
        if self.segment() + 1 >= MOST_SEGMENTS {
            self.torn = true;
        } else {
            self.seams.push(Seam { before, after });
        }
    }

    fn event(&mut self, time: f64, kind: EventKind) {
        match kind {
            EventKind::Lost(count) => self.lost = self.lost.saturating_add(count),
            EventKind::Late => self.late += 1,
            EventKind::Doubled => self.doubled += 1,
        }
        if self.events.len() < MOST_EVENTS {
            let segment = self.segment();
            self.events.push(Event {
                time,
                segment,
                kind,
            });
        }
    }

    /// The log is over.
    pub(super) fn finish(&mut self) {
        if self.kind == LogKind::Positions && self.period.is_none() {
            self.learn();
        }
    }
}
