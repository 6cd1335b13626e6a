//! How finely a move is searched: the steps of changes and shifts, how much is tried, and how far a fresh piece gets.

use super::FRACTION_BITS;
use super::corridor::{Corridor, Place, triangle};

/// Steps of the scale that a typical interval of changes holds.
const STEPS: i64 = 64;

/// How much is tried for each piece.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct Effort {
    /// States kept from one piece to the next.
    pub(super) width: usize,
    /// Lengths tried.
    pub(super) lengths: usize,
    /// Changes tried for each length.
    pub(super) changes: i64,
    /// Offsets tried for each shift.
    pub(super) shifts: i64,
    /// Ticks that a look ahead looks at.
    pub(super) looks: usize,
}

impl Effort {
    /// The effort for a show of so many legs: a show of a million cues shall not take a day.
    pub(super) fn of(legs: usize) -> Self {
        match legs {
            ..1000 => Self {
                width: 10,
                lengths: 8,
                changes: 5,
                shifts: 7,
                looks: 200,
            },
            1000..10_000 => Self {
                width: 4,
                lengths: 5,
                changes: 4,
                shifts: 7,
                looks: 32,
            },
            _ => Self {
                width: 1,
                lengths: 4,
                changes: 3,
                shifts: 5,
                looks: 16,
            },
        }
    }
}

/// How finely the changes and shifts of a move are stepped.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct Steps {
    pub(super) scale: u8,
    pub(super) grain: u8,
    /// Ticks are whole multiples of 2^pace, those of the first piece aside.
    pub(super) pace: u8,
    /// Ticks of a typical piece.
    pub(super) typical: usize,
}

impl Steps {
    /// The steps that suit this stretch: from how far single pieces get in it.
    pub(super) fn of(corridor: &Corridor) -> Self {
        let mut lengths = Vec::new();
        let mut tick = 0;
        while tick + 2 < corridor.len() {
            let (_, reach) = fresh(corridor, tick);
            lengths.push(reach);
            tick += reach.max(2);
        }
        lengths.sort_unstable();
        let typical = lengths.get(lengths.len() / 2).copied().unwrap_or(2).max(2);
        let (least, most) = corridor.span();
        let interval = (most - least) / triangle(typical) / STEPS;
        let shift = (most - least) / 24;
        Self {
            scale: (interval.max(1).ilog2() as u8).min(30),
            grain: shift.max(1).ilog2() as u8,
            pace: (typical * 4 / 3 / 127 + 1)
                .next_power_of_two()
                .ilog2()
                .min(12) as u8,
            typical,
        }
    }
}

impl Steps {
    /// These steps, going on from those of the stretch before: changes stay whole multiples of a scale that only gets finer.
    pub(super) fn after(self, before: Option<Self>) -> Self {
        Self {
            scale: before.map_or(self.scale, |before| before.scale.min(self.scale)),
            ..self
        }
    }
}

/// A place at a tick from which a long piece leads on, with a speed of its own, and how far.
pub(super) fn fresh(corridor: &Corridor, tick: usize) -> (Place, usize) {
    let half = 1_i64 << (FRACTION_BITS - 1);
    let mut best = Place {
        tick,
        off: half,
        speed: (corridor.row(tick + 1) - corridor.row(tick)) << FRACTION_BITS,
    };
    let mut farthest = corridor.reach(best, 1);
    let mut ticks = 2;
    while tick + ticks < corridor.len() {
        let place = through(corridor, best, ticks);
        let reach = corridor.reach(place, 1);
        if reach > farthest {
            (best, farthest) = (place, reach);
        }
        if reach * 2 < ticks {
            break;
        }
        ticks += (ticks / 4).max(1);
    }
    (best, farthest)
}

/// The place with the speed of the piece through the rows now, in the middle of and after `ticks`.
fn through(corridor: &Corridor, place: Place, ticks: usize) -> Place {
    let [first, mid, last] =
        [0, ticks / 2, ticks].map(|k| i128::from(corridor.row(place.tick + k)));
    let (n, m) = (ticks as i128, (ticks / 2) as i128);
    // r(n) − r(0) = n·s + n(n+1)/2·c, and the same for m.
    let bend = ((last - first) * m - (mid - first) * n) << FRACTION_BITS;
    let change = 2 * bend / (n * m * (n - m));
    let speed = ((last - first) << FRACTION_BITS) / n - change * (n + 1) / 2;
    Place {
        speed: i64::try_from(speed).unwrap_or(place.speed),
        ..place
    }
}
