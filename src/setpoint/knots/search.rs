//! The pieces of a move that take fewest bytes.
//!
//! Where only the change is free, taking the longest piece each time is a poor rule: it ends at the edge of the corridor
//! with a speed that leads out of it. So a beam of states is kept: each is led on by pieces of several lengths and
//! changes, with and without a shift of the phase, and of all that come out those are kept that reach farthest, what
//! their bytes cost taken off. The corridor of each piece is tested tick by tick; only the look ahead, which ranks, skips
//! ticks of long pieces.

use super::corridor::{Changes, Corridor, Place, triangle};
use super::steps::{Effort, Steps, fresh};
use super::{Entry, FRACTION_BITS, Piece};
use crate::setpoint::pack::{signed_bytes, unsigned_bytes};

/// Ticks that the first look ahead looks at.
const COARSE: usize = 40;
/// So many times the width are looked at more closely.
const CLOSER: usize = 6;
/// A byte counts as much as this share of a typical piece, in hundredths.
const BYTE_WORTH: i64 = 1;

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
    /// Whether the next piece sets phase and speed anew.
    set: bool,
    /// Bytes so far, the shift's included.
    bytes: i64,
    /// Tick up to which one more piece gets, as far as the look ahead sees.
    reach: usize,
    /// The node before, in the arena.
    from: usize,
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

impl Node {
    /// The change from which that of the next piece is counted.
    fn base(&self) -> i64 {
        if self.set { 0 } else { self.change }
    }
}

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
            set: start.set,
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
                return self.unwind(node, row);
            }
            let next = self.best(candidates);
            frontier = match frontier.into_iter().max_by_key(|node| node.place.tick) {
                Some(stuck) if next.is_empty() => vec![self.anew(stuck)],
                _ => next,
            };
            // Led on tick by tick, up to the end.
            if let Some(node) = frontier.iter().find(|node| node.place.tick == self.end) {
                return self.unwind(*node, row);
            }
        }
    }

    /// A way on where no change fits: phase and speed anew, and where even these lead nowhere, one tick to the next row.
    fn anew(&mut self, node: Node) -> Node {
        let tick = node.place.tick;
        if !node.set {
            return Node {
                place: fresh(self.corridor, tick).0,
                shift: 0,
                set: true,
                ..node
            };
        }
        let exact = Node {
            place: Place {
                tick,
                off: 1 << (FRACTION_BITS - 1),
                speed: (self.corridor.row(tick + 1) - self.corridor.row(tick)) << FRACTION_BITS,
            },
            ..node
        };
        self.arena.push(exact);
        Node {
            place: self.corridor.after(exact.place, 0, 1),
            change: 0,
            ticks: 1,
            shift: 0,
            set: false,
            bytes: node.bytes,
            reach: tick + 1,
            from: self.arena.len() - 1,
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
        self.finish(node, from, &found, finished);
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
        let mut ticks = reach.min(rest - 1);
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

    /// The piece that covers the rest of the stretch, where one does.
    fn finish(&self, node: Node, from: usize, found: &[Changes], finished: &mut Option<Node>) {
        let ticks = self.end - node.place.tick;
        let steps = |k: usize| self.stepped(node.base(), *found.get(k)?);
        let mut step = steps(ticks).map(|(least, most)| 0.clamp(least, most));
        if step.is_none() && self.last {
            // What comes after sets its own phase, so the last tick's own is enough, as long as the way there is not longer
            // than half a turn.
            let wanted = self.towards(node, ticks);
            step = steps(ticks - 1).map(|(least, most)| wanted.clamp(least, most));
        }
        let Some(step) = step else {
            return;
        };
        let change = node.base() + (step << self.steps.scale);
        let place = self.corridor.after(node.place, change, ticks);
        if !self.corridor.finds_its_row(place.off) {
            return;
        }
        let end = Node {
            place,
            change,
            ticks,
            shift: 0,
            set: false,
            bytes: node.bytes + self.piece_bytes(ticks, step),
            reach: 0,
            from,
        };
        if finished.is_none_or(|best| end.bytes < best.bytes) {
            *finished = Some(end);
        }
    }

    /// The step of the scale that leads nearest to the row `ticks` on.
    fn towards(&self, node: Node, ticks: usize) -> i64 {
        let straight = self.corridor.after(node.place, node.base(), ticks);
        let missing = (1_i64 << (FRACTION_BITS - 1)).saturating_sub(straight.off);
        (missing / triangle(ticks)) >> self.steps.scale
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
        if let Some((least, most)) = self.stepped(node.base(), with) {
            for step in spread(least, most, self.effort.changes) {
                self.arrive(node, from, ticks, step, without, candidates);
            }
        }
        if let Some((least, most)) = without.and_then(|changes| self.stepped(node.base(), changes))
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
        let change = node.base() + (step << self.steps.scale);
        let place = self.corridor.after(node.place, change, ticks);
        let bytes = node.bytes + self.piece_bytes(ticks, step);
        let stride = (self.steps.typical / COARSE).max(1);
        let make = |place: Place, shift: i64, bytes: i64| Node {
            place,
            change,
            ticks,
            shift,
            set: false,
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
    fn unwind(&self, end: Node, row: i64) -> (Vec<Piece>, Start) {
        let mut pieces = Vec::new();
        let mut node = end;
        while let Some(before) = self.arena.get(node.from) {
            let entry = match before.shift {
                _ if before.set => {
                    let counts = i128::from(row) + i128::from(self.corridor.row(before.place.tick));
                    Entry::Sets {
                        phase: (counts << FRACTION_BITS) + i128::from(before.place.off),
                        speed: before.place.speed + node.change,
                    }
                }
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
