//! The pieces of a move that take fewest bytes.
//!
//! Where only the change is free, taking the longest piece each time is a poor rule: it ends at the edge of the corridor
//! with a speed that leads out of it. So a beam of states is kept: each is led on by pieces of several lengths and
//! changes, with and without a shift of the phase, and of all that come out those are kept that reach farthest, what
//! their bytes cost taken off. The corridor of each piece is tested tick by tick; only the look ahead, which ranks, skips
//! ticks of long pieces.

use super::corridor::{Changes, Corridor, Place, triangle};
use super::{Entry, FRACTION_BITS, Piece};
use crate::setpoint::pack::{signed_bytes, unsigned_bytes};

/// Steps of the scale that a typical interval of changes holds.
const STEPS: i64 = 64;
/// Ticks that the first look ahead looks at.
const COARSE: usize = 40;
/// So many times the width are looked at more closely.
const CLOSER: usize = 6;
/// A byte counts as much as this share of a typical piece, in hundredths.
const BYTE_WORTH: i64 = 1;

/// How much is tried for each piece.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct Effort {
    /// States kept from one piece to the next.
    width: usize,
    /// Lengths tried.
    lengths: usize,
    /// Changes tried for each length.
    changes: i64,
    /// Offsets tried for each shift.
    shifts: i64,
    /// Ticks that a look ahead looks at.
    looks: usize,
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
    typical: usize,
}

/// Where a stretch is entered, and with what change before it.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct Start {
    pub(super) place: Place,
    pub(super) change: i64,
    /// Whether phase and speed are set anew here.
    pub(super) set: bool,
}

/// A state in the beam: the end of one more piece.
#[derive(Clone, Copy, Debug)]
struct Node {
    /// After the shift that the next piece starts with.
    place: Place,
    /// The change of the piece that led here.
    change: i64,
    /// Its ticks.
    ticks: usize,
    /// Units of the shift that the next piece starts with.
    shift: i64,
    /// Bytes so far, the shift's included.
    bytes: i64,
    /// Tick up to which one more piece gets, as far as the look ahead sees.
    reach: usize,
    /// The node before, in the arena.
    from: usize,
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

/// One stretch of one rotor's move.
pub(super) struct Search<'c> {
    corridor: &'c Corridor,
    steps: Steps,
    effort: Effort,
    /// Ticks of the stretch.
    end: usize,
    /// Whether the move ends with it, so that nothing need go on from there.
    last: bool,
    arena: Vec<Node>,
}

const ROOT: usize = usize::MAX;

impl<'c> Search<'c> {
    pub(super) fn new(
        corridor: &'c Corridor,
        steps: Steps,
        effort: Effort,
        end: usize,
        last: bool,
    ) -> Self {
        Self {
            corridor,
            steps,
            effort,
            end,
            last,
            arena: Vec::new(),
        }
    }

    /// The pieces from `start` to the end of the stretch, and where they lead.
    pub(super) fn run(mut self, start: Start, row: i64) -> (Vec<Piece>, Start) {
        let root = Node {
            place: start.place,
            change: start.change,
            ticks: 0,
            shift: 0,
            bytes: 0,
            reach: 0,
            from: ROOT,
        };
        let mut frontier = vec![root];
        loop {
            let mut finished: Option<Node> = None;
            let mut candidates = Vec::new();
            let first = self.arena.len();
            self.arena.extend_from_slice(&frontier);
            for (index, node) in frontier.iter().enumerate() {
                self.expand(*node, first + index, &mut candidates, &mut finished);
            }
            if let Some(node) = finished {
                return self.unwind(node, start, row);
            }
            frontier = self.best(candidates);
            if frontier.is_empty() {
                // Cannot be: a piece of one tick always fits. Kept as an answer that the audit would refuse.
                return (Vec::new(), start);
            }
        }
    }

    /// Every way on from a node: into `finished` where it covers the rest of the stretch, else into `candidates`.
    fn expand(
        &self,
        node: Node,
        from: usize,
        candidates: &mut Vec<Node>,
        finished: &mut Option<Node>,
    ) {
        let mut found: Vec<Changes> = Vec::new();
        self.corridor.narrow(node.place, 1, |_, changes| {
            found.push(changes);
            true
        });
        let rest = self.end - node.place.tick;
        let needed = if self.last { rest - 1 } else { rest };
        if let Some(changes) = found.get(needed.min(self.corridor.len() - 1 - node.place.tick)) {
            self.finish(node, from, rest, *changes, finished);
        }
        if finished.is_some() {
            return;
        }
        let before = candidates.len();
        let reach = found.len();
        let pace = (reach / 20).max(1 << self.steps.pace);
        for index in 0..self.effort.lengths {
            let Some(ticks) = reach
                .checked_sub(index * pace)
                .and_then(|ticks| self.aligned(ticks, rest))
            else {
                continue;
            };
            self.of_length(node, from, ticks, &found, candidates);
        }
        let mut ticks = reach
            .saturating_sub(self.effort.lengths * pace)
            .min(rest - 1);
        while candidates.len() == before && ticks > 0 {
            self.of_length(node, from, ticks, &found, candidates);
            ticks -= 1;
        }
    }

    /// The longest length up to `ticks` after which the rest is a whole number of paces.
    fn aligned(&self, ticks: usize, rest: usize) -> Option<usize> {
        let size = 1 << self.steps.pace;
        let ticks = ticks.min(rest.checked_sub(1)?);
        let over = (rest - ticks) % size;
        let ticks = if over == 0 {
            ticks
        } else {
            (ticks + over).checked_sub(size)?
        };
        (ticks > 0).then_some(ticks)
    }

    fn finish(
        &self,
        node: Node,
        from: usize,
        ticks: usize,
        changes: Changes,
        finished: &mut Option<Node>,
    ) {
        let Some((least, most)) = self.stepped(node.change, changes) else {
            return;
        };
        let step = 0.clamp(least, most);
        let change = node.change + (step << self.steps.scale);
        let end = Node {
            place: self.corridor.after(node.place, change, ticks),
            change,
            ticks,
            shift: 0,
            bytes: node.bytes + self.piece_bytes(ticks, step),
            reach: 0,
            from,
        };
        if finished.is_none_or(|best| end.bytes < best.bytes) {
            *finished = Some(end);
        }
    }

    /// The steps of the scale, from the change before, that lead into an interval.
    fn stepped(&self, before: i64, changes: Changes) -> Option<(i64, i64)> {
        let size = 1_i64 << self.steps.scale;
        let least = -((before - changes.least).div_euclid(size));
        let most = (changes.most - before).div_euclid(size);
        (least <= most).then_some((least, most))
    }

    /// The ways on by pieces of one length.
    fn of_length(
        &self,
        node: Node,
        from: usize,
        ticks: usize,
        found: &[Changes],
        candidates: &mut Vec<Node>,
    ) {
        let without = found.get(ticks).copied();
        let Some(with) = found.get(ticks - 1).copied() else {
            return;
        };
        // A piece of one tick: its change is bounded by what comes after.
        let with = if ticks < 2 {
            found.get(1).copied().unwrap_or(with)
        } else {
            with
        };
        if let Some((least, most)) = self.stepped(node.change, with) {
            for step in spread(least, most, self.effort.changes) {
                self.arrive(node, from, ticks, step, without, candidates);
            }
        }
        if let Some((least, most)) = without.and_then(|changes| self.stepped(node.change, changes))
        {
            for step in spread(least, most, self.effort.changes) {
                self.arrive(node, from, ticks, step, without, candidates);
            }
        }
    }

    /// The ways on by one piece: as it arrives, and with a shift.
    fn arrive(
        &self,
        node: Node,
        from: usize,
        ticks: usize,
        step: i64,
        without: Option<Changes>,
        candidates: &mut Vec<Node>,
    ) {
        let change = node.change + (step << self.steps.scale);
        let place = self.corridor.after(node.place, change, ticks);
        let bytes = node.bytes + self.piece_bytes(ticks, step);
        let stride = (self.steps.typical / COARSE).max(1);
        let make = |place: Place, shift: i64, bytes: i64| Node {
            place,
            change,
            ticks,
            shift,
            bytes,
            reach: place.tick + self.corridor.reach(place, stride),
            from,
        };
        let goes_on =
            without.is_some_and(|changes| changes.least <= change && change <= changes.most);
        if goes_on {
            let next = make(place, 0, bytes);
            if next.reach > next.place.tick {
                candidates.push(next);
            }
        }
        let (least, most) = self.corridor.span();
        let mut best: Option<Node> = None;
        for index in 0..self.effort.shifts {
            let wanted = least + (most - least) / (self.effort.shifts - 1) * index;
            let shift = (wanted - place.off) >> self.steps.grain;
            let off = place.off + (shift << self.steps.grain);
            if shift == 0 || off < least || off > most {
                continue;
            }
            let next = make(
                Place { off, ..place },
                shift,
                bytes + signed_bytes(shift) as i64,
            );
            if next.reach > place.tick && best.is_none_or(|best| next.reach > best.reach) {
                best = Some(next);
            }
        }
        candidates.extend(best);
    }

    /// What a piece that goes on or shifts takes in bytes, its shift left out: that was counted when it was chosen.
    fn piece_bytes(&self, ticks: usize, step: i64) -> i64 {
        let paces = ticks as u64 >> self.steps.pace;
        let whole = ticks.is_multiple_of(1 << self.steps.pace);
        (unsigned_bytes(paces) + signed_bytes(step.saturating_mul(2))) as i64
            + if whole { 0 } else { 3 }
    }

    /// The nodes to go on with: those that get farthest for their bytes.
    fn best(&self, mut candidates: Vec<Node>) -> Vec<Node> {
        let worth = self.steps.typical as i64 * BYTE_WORTH;
        let score = |node: &Node| node.reach as i64 * 100 - node.bytes * worth;
        let rank = |candidates: &mut Vec<Node>| {
            candidates.sort_by_key(|node| (-score(node), node.place.tick, node.bytes))
        };
        rank(&mut candidates);
        candidates.truncate(self.effort.width * CLOSER);
        let stride = (self.steps.typical / self.effort.looks).max(1);
        for node in &mut candidates {
            node.reach = node.place.tick + self.corridor.reach(node.place, stride);
        }
        rank(&mut candidates);
        let mut kept: Vec<Node> = Vec::with_capacity(self.effort.width);
        for node in candidates {
            let alike = |other: &&Node| other.place.tick == node.place.tick;
            if kept.len() < self.effort.width && kept.iter().filter(alike).count() < 3 {
                kept.push(node);
            }
        }
        kept
    }

    /// The pieces that lead to a node, from the first on.
    fn unwind(&self, end: Node, start: Start, row: i64) -> (Vec<Piece>, Start) {
        let mut pieces = Vec::new();
        let mut node = end;
        while let Some(before) = self.arena.get(node.from) {
            let entry = match before.shift {
                0 => Entry::GoesOn,
                units => Entry::Shifts { units },
            };
            pieces.push(Piece {
                ticks: node.ticks as u64,
                entry,
                change: node.change,
                scale: self.steps.scale,
                grain: self.steps.grain,
                pace: self.steps.pace,
            });
            node = *before;
        }
        pieces.reverse();
        if let (true, Some(first)) = (start.set, pieces.first_mut()) {
            first.entry = Entry::Sets {
                phase: (i128::from(row) << FRACTION_BITS) + i128::from(start.place.off),
                speed: start.place.speed + first.change,
            };
        }
        let leads = Start {
            place: Place {
                tick: 0,
                ..end.place
            },
            change: end.change,
            set: false,
        };
        (pieces, leads)
    }
}

/// Up to `count` whole numbers spread over [least, most], both ends among them.
fn spread(least: i64, most: i64, count: i64) -> impl Iterator<Item = i64> {
    let width = most - least;
    let parts = width.min(count - 1);
    (0..=parts).map(move |index| {
        if parts == 0 {
            least
        } else {
            least + (i128::from(width) * i128::from(index) / i128::from(parts)) as i64
        }
    })
}
