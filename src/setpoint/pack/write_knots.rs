//! Knots → blocks: the pieces of both rotors and the changes of beam and cue in the order in which a player needs them,
//! so that no piece says whose it is.

use super::BLOCK_BYTES;
use super::blocks::{BlockHead, Blocks};
use super::bytes::{put_signed, put_unsigned, zigzag};
use crate::plan::Plan;
use crate::rig::{Pair, RotorId};
use crate::setpoint::events::{Event, events};
use crate::setpoint::knots::{Entry, FRACTION_BITS, LegPieces, Piece, Tolerance, each_leg};
use std::io;

/// Ticks of one block, at most.
const MOST_BLOCK_TICKS: u64 = 1 << 32;

/// What a piece that starts anew gives: a phase, a speed, scale, grain and pace, a change.
const PHASE: u8 = 1;
const SPEED: u8 = 2;
const STEPS: u8 = 4;
const CHANGE: u8 = 8;

/// Writes the knots of a plan.
pub(super) fn write(
    plan: &Plan,
    tolerance: Tolerance,
    blocks: &mut Blocks<'_>,
    progress: &mut dyn FnMut(u64),
) -> io::Result<()> {
    let mut writer = Writer::new(plan, events(plan), blocks);
    each_leg(plan, tolerance, |leg| {
        progress(leg.start);
        writer.leg(&leg)
    })?;
    writer.close(plan.rows())?;
    progress(plan.rows());
    Ok(())
}

/// A rotor as the player has it at the tick that `Writer::now` says.
#[derive(Clone, Copy, Debug, Default)]
struct Running {
    /// Modulo the counts of a turn, in 2⁻³² counts.
    phase: i128,
    speed: i64,
    change: i64,
    scale: u8,
    grain: u8,
    pace: u8,
    /// First tick after its present piece.
    until: u64,
    /// 2³² · counts of a turn.
    turn: i128,
}

struct Writer<'b, 'w, E> {
    events: E,
    blocks: &'b mut Blocks<'w>,
    loop_start: Option<u64>,
    /// The tick of the running states.
    now: u64,
    rotors: Pair<Running>,
    event: Event,
    open: Option<(BlockHead, Vec<u8>)>,
}

impl<'b, 'w, E: Iterator<Item = Event>> Writer<'b, 'w, E> {
    fn new(plan: &Plan, events: E, blocks: &'b mut Blocks<'w>) -> Self {
        let rotors = Pair::each(|id| Running {
            phase: 1 << (FRACTION_BITS - 1),
            turn: i128::from(plan.rig.rotor(id).counts) << FRACTION_BITS,
            ..Running::default()
        });
        Self {
            events,
            loop_start: blocks.head().loop_start,
            blocks,
            now: 0,
            rotors,
            event: Event {
                start: 0,
                ticks: 0,
                cue: 0,
                beam: 0,
            },
            open: None,
        }
    }

    /// Takes the pieces of one leg, which starts where both rotors' pieces end.
    fn leg(&mut self, leg: &LegPieces) -> io::Result<()> {
        let mut lists = Pair {
            a: leg.pieces.a.iter(),
            b: leg.pieces.b.iter(),
        };
        let [a, b] = [&leg.pieces.a, &leg.pieces.b]
            .map(|pieces| pieces.iter().map(|piece| piece.ticks).sum::<u64>());
        if a != b {
            return Err(io::Error::other("the pieces of a leg do not fill it"));
        }
        let end = leg.start + a;
        let mut tick = leg.start;
        while tick < end {
            self.run_to(tick);
            let mut due: Pair<Option<Piece>> = Pair::default();
            for id in RotorId::BOTH {
                if self.rotors.of(id).until == tick {
                    *due.of_mut(id) = lists.of_mut(id).next().copied();
                }
            }
            let event = if self.event.end() == tick {
                self.events.next()
            } else {
                None
            };
            self.group(tick, &due, event)?;
            let next = self
                .rotors
                .a
                .until
                .min(self.rotors.b.until)
                .min(self.event.end());
            // Only a list that does not fill its leg could stand still.
            if next <= tick {
                return Err(io::Error::other("the pieces of a leg do not fill it"));
            }
            tick = next;
        }
        Ok(())
    }

    fn run_to(&mut self, tick: u64) {
        let ticks = tick - self.now;
        for id in RotorId::BOTH {
            self.rotors.of_mut(id).run(ticks);
        }
        self.now = tick;
    }

    /// Writes what is due at a tick: into the open block, or as the head of a new one.
    fn group(
        &mut self,
        tick: u64,
        due: &Pair<Option<Piece>>,
        event: Option<Event>,
    ) -> io::Result<()> {
        let mut records = Vec::new();
        for id in RotorId::BOTH {
            if let Some(piece) = due.of(id) {
                self.rotors.of_mut(id).take(piece, tick, &mut records);
            }
        }
        if let Some(event) = event {
            put_event(&mut records, self.event, event, tick);
            self.event = event;
        }
        let starts_loop = self.loop_start == Some(tick);
        let fits = self.open.as_ref().is_some_and(|(head, body)| {
            let grown = BlockHead {
                ticks: MOST_BLOCK_TICKS,
                ..*head
            };
            let longest = self
                .rotors
                .a
                .until
                .max(self.rotors.b.until)
                .max(self.event.end());
            grown.bytes() + body.len() + records.len() <= BLOCK_BYTES
                && longest - head.first_tick <= MOST_BLOCK_TICKS
        });
        if fits && !starts_loop {
            if let Some((_, body)) = self.open.as_mut() {
                body.append(&mut records);
            }
            return Ok(());
        }
        self.close(tick)?;
        let head = BlockHead {
            first_tick: tick,
            ticks: 0,
            loop_start: starts_loop,
        };
        let mut body = Vec::with_capacity(BLOCK_BYTES);
        for id in RotorId::BOTH {
            self.rotors.of(id).put(tick, &mut body);
        }
        body.push(self.event.beam);
        put_unsigned(&mut body, u64::from(self.event.cue));
        put_unsigned(&mut body, self.event.end() - tick - 1);
        self.open = Some((head, body));
        Ok(())
    }

    /// Ends the open block before a tick.
    fn close(&mut self, tick: u64) -> io::Result<()> {
        match self.open.take() {
            Some((head, body)) => {
                let head = BlockHead {
                    ticks: tick - head.first_tick,
                    ..head
                };
                self.blocks.push(&head, &body)
            }
            None => Ok(()),
        }
    }
}

impl Running {
    fn run(&mut self, ticks: u64) {
        let n = i128::from(ticks);
        // At most 2³² ticks of 2⁶² each, and 2⁶³ · 2⁶²: within 128 bits.
        let grown = i128::from(self.speed) * n + i128::from(self.change) * (n * (n - 1) / 2);
        self.phase = (self.phase + grown).rem_euclid(self.turn);
        self.speed += self.change * ticks.cast_signed();
    }

    /// Takes a piece on, and writes it as a record.
    fn take(&mut self, piece: &Piece, tick: u64, out: &mut Vec<u8>) {
        self.until = tick + piece.ticks;
        let paced = piece.ticks.is_multiple_of(1 << self.pace);
        let stepped = piece.change == self.change
            || (self.scale, self.grain, self.pace) == (piece.scale, piece.grain, piece.pace);
        let more = piece.change - self.change;
        let step = more >> self.scale;
        self.speed += more;
        match piece.entry {
            Entry::GoesOn if paced && stepped => {
                put_unsigned(out, piece.ticks >> self.pace);
                put_unsigned(out, zigzag(step) << 1);
            }
            Entry::Shifts { units } if paced && stepped && self.grain == piece.grain => {
                put_unsigned(out, piece.ticks >> self.pace);
                put_unsigned(out, zigzag(step) << 1 | 1);
                put_signed(out, units);
                self.phase =
                    (self.phase + (i128::from(units) << piece.grain)).rem_euclid(self.turn);
            }
            _ => self.set(piece, out),
        }
        self.change = piece.change;
    }

    fn set(&mut self, piece: &Piece, out: &mut Vec<u8>) {
        let (phase, speed) = match piece.entry {
            Entry::GoesOn => (self.phase, self.speed),
            Entry::Shifts { units } => {
                (self.phase + (i128::from(units) << piece.grain), self.speed)
            }
            Entry::Sets { phase, speed } => (phase, speed),
        };
        let phase = phase.rem_euclid(self.turn);
        let wanted = (piece.scale, piece.grain, piece.pace);
        let steps = piece.change != 0 && (self.scale, self.grain, self.pace) != wanted;
        let what = [
            (phase != self.phase, PHASE),
            (speed != self.speed, SPEED),
            (steps, STEPS),
            (piece.change != 0, CHANGE),
        ];
        out.push(0);
        out.push(what.iter().filter(|(is, _)| *is).map(|(_, bit)| bit).sum());
        put_unsigned(out, piece.ticks - 1);
        if phase != self.phase {
            let whole = self.phase >> FRACTION_BITS << FRACTION_BITS;
            let way = (phase - whole + self.turn / 2).rem_euclid(self.turn) - self.turn / 2;
            put_rounded(out, i64::try_from(way).unwrap_or_default());
        }
        if speed != self.speed {
            put_rounded(out, speed);
        }
        if steps {
            out.extend([piece.scale, piece.grain, piece.pace]);
            (self.scale, self.grain, self.pace) = wanted;
        }
        if piece.change != 0 {
            put_signed(out, piece.change >> piece.scale);
        }
        (self.phase, self.speed) = (phase, speed);
    }

    /// The whole state, as the head of a block has it.
    fn put(&self, tick: u64, out: &mut Vec<u8>) {
        let phase = self.phase.cast_unsigned();
        put_unsigned(out, (phase >> FRACTION_BITS) as u64);
        out.extend((phase as u32).to_le_bytes());
        put_signed(out, self.speed);
        put_signed(out, self.change);
        out.extend([self.scale, self.grain, self.pace]);
        put_unsigned(out, self.until - tick - 1);
    }
}

/// A number without the zero bits at its end, and how many those are.
fn put_rounded(out: &mut Vec<u8>, value: i64) {
    let shift = if value == 0 {
        0
    } else {
        value.trailing_zeros()
    };
    out.push(shift as u8);
    put_signed(out, value >> shift);
}

fn put_event(out: &mut Vec<u8>, before: Event, event: Event, tick: u64) {
    let beam = event.beam != before.beam;
    let cue = event.cue != before.cue;
    let ticks = event.end() - tick - 1;
    put_unsigned(out, ticks << 2 | u64::from(cue) << 1 | u64::from(beam));
    if beam {
        out.push(event.beam);
    }
    if cue {
        put_signed(out, i64::from(event.cue) - i64::from(before.cue));
    }
}
