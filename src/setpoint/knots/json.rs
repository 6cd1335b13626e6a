//! Knots as JSON: the head of every JSON table, then one line a piece.
//!
//! `[ticks, change]` goes on from the piece before (its change counts in its first speed already), `[ticks, phase, speed, change]` starts anew, all but the ticks in
//! 2⁻³² counts, phases within one turn. `events` holds `[ticks, cue, beam]`. A last line holds the CRC-32 of all before
//! it: another digit may leave every tick within the tolerance, and is another table all the same.

use super::{Entry, FRACTION_BITS, LegPieces, Tolerance, each_leg};
use crate::plan::Plan;
use crate::rig::{Pair, RotorId};
use crate::setpoint::events::events;
use crate::setpoint::head::Head;
use crate::setpoint::pack::crc32;
use std::io::{self, Write};

/// Writes the knots of a plan.
///
/// # Errors
/// Those of `out`.
pub fn write_json_knots(
    plan: &Plan,
    tolerance: Tolerance,
    head: &Head<'_>,
    out: &mut dyn Write,
    progress: &mut dyn FnMut(u64),
) -> io::Result<()> {
    let mut summed = Summed { out, crc: 0 };
    let out = &mut summed;
    head.write_knots(plan, tolerance, out)?;
    // Rotor b's list is kept until a's is written: a few dozen bytes a piece.
    let mut lists = Pair::each(|id| List {
        phase: 1 << (FRACTION_BITS - 1),
        speed: 0,
        change: 0,
        turn: i128::from(plan.rig.rotor(id).counts) << FRACTION_BITS,
        text: Vec::new(),
        first: true,
    });
    writeln!(out, "\"a\":[")?;
    each_leg(plan, tolerance, |leg| {
        progress(leg.start);
        for id in RotorId::BOTH {
            lists.of_mut(id).leg(&leg, id)?;
        }
        out.write_all(&lists.a.text)?;
        lists.a.text.clear();
        io::Result::Ok(())
    })?;
    out.write_all(b"\n],\n\"b\":[\n")?;
    out.write_all(&lists.b.text)?;
    out.write_all(b"\n],\n\"events\":[\n")?;
    for (index, event) in events(plan).enumerate() {
        let comma = if index == 0 { "" } else { ",\n" };
        write!(out, "{comma}[{},{},{}]", event.ticks, event.cue, event.beam)?;
    }
    out.write_all(b"\n],\n")?;
    let crc = out.crc;
    writeln!(out, "\"crc32\":\"{crc:08x}\"}}")?;
    progress(plan.rows());
    Ok(())
}

/// Hands on what it is given, and sums it.
struct Summed<'w> {
    out: &'w mut dyn Write,
    crc: u32,
}

impl Write for Summed<'_> {
    fn write(&mut self, bytes: &[u8]) -> io::Result<usize> {
        let taken = self.out.write(bytes)?;
        self.crc = crc32(self.crc, bytes.get(..taken).unwrap_or_default());
        Ok(taken)
    }

    fn flush(&mut self) -> io::Result<()> {
        self.out.flush()
    }
}

/// The pieces of a rotor as text, and where they have run to.
struct List {
    phase: i128,
    speed: i64,
    change: i64,
    turn: i128,
    text: Vec<u8>,
    first: bool,
}

impl List {
    fn leg(&mut self, leg: &LegPieces, id: RotorId) -> io::Result<()> {
        for piece in leg.pieces.of(id) {
            let comma = if self.first { "" } else { ",\n" };
            self.first = false;
            let gone_on = self.speed + (piece.change - self.change);
            self.change = piece.change;
            let set = match piece.entry {
                Entry::GoesOn => {
                    self.speed = gone_on;
                    false
                }
                Entry::Shifts { units } => {
                    self.speed = gone_on;
                    self.phase += i128::from(units) << piece.grain;
                    true
                }
                Entry::Sets { phase, speed } => {
                    (self.phase, self.speed) = (phase, speed);
                    true
                }
            };
            self.phase = self.phase.rem_euclid(self.turn);
            if set {
                write!(
                    self.text,
                    "{comma}[{},{},{},{}]",
                    piece.ticks, self.phase, self.speed, piece.change
                )?;
            } else {
                write!(self.text, "{comma}[{},{}]", piece.ticks, piece.change)?;
            }
            let n = i128::from(piece.ticks);
            self.phase += i128::from(self.speed) * n + i128::from(piece.change) * (n * (n - 1) / 2);
            self.speed += piece.change * piece.ticks.cast_signed();
        }
        Ok(())
    }
}
