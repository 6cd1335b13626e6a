//! A reader of packs: set-points one a tick, from any stream of bytes, a block at a time.
//!
//! It never holds more than one block, whatever a file says of itself, and follows nothing that a damaged one says.

use super::bytes::{Cursor, crc32, unzigzag};
use super::fault::{PackFault, PackPoint};
use super::head::{LEAST_BYTES, PackForm, PackHead};
use super::motion::Motion;
use std::io::{self, Read};

/// Bytes of the smallest block.
const LEAST_BLOCK: usize = 11;

/// Reads a pack from `from`, tick by tick.
pub struct Reader<R> {
    from: R,
    head: PackHead,
    block: Vec<u8>,
    /// Where the block being read starts, and where in it the next number is.
    offset: u64,
    at: usize,
    /// Size of the block after it; 0 after the last.
    next: usize,
    /// Ticks left in the block.
    left: u64,
    tick: u64,
    motions: [Motion; 2],
    run: u64,
    beam: u8,
    cue: u32,
    /// Positions at the loop start.
    closing: Option<[i64; 2]>,
}

type Step<T> = Result<T, PackFault>;

impl<R: Read> Reader<R> {
    /// Reads the head.
    ///
    /// # Errors
    /// Where it is not whole or not known here.
    pub fn new(mut from: R) -> Step<Self> {
        let mut start = [0; 10];
        fill(&mut from, &mut start)?;
        let size = PackHead::size(&start)?;
        // At most 64 KiB, grown as bytes come in.
        let mut bytes = start.to_vec();
        let wanted = (size - start.len()) as u64;
        let got = from
            .by_ref()
            .take(wanted)
            .read_to_end(&mut bytes)
            .map_err(|error| stream(&error))?;
        if got as u64 != wanted {
            return Err(PackFault::Truncated);
        }
        let (head, first) = PackHead::decode(&bytes)?;
        debug_assert!(bytes.len() >= LEAST_BYTES);
        let motions = [head.rotors.a, head.rotors.b].map(|rotor| Motion {
            turn: i64::from(rotor.counts) << 32,
            ..Motion::default()
        });
        Ok(Self {
            from,
            head,
            block: Vec::new(),
            offset: size as u64,
            at: 0,
            next: first,
            left: 0,
            tick: 0,
            motions,
            run: 0,
            beam: 0,
            cue: 0,
            closing: None,
        })
    }

    /// What the table says of itself.
    pub fn head(&self) -> &PackHead {
        &self.head
    }

    /// Where the bytes come from.
    pub fn source(&mut self) -> &mut R {
        &mut self.from
    }

    /// The tick of the next set-point.
    pub fn tick(&self) -> u64 {
        self.tick
    }

    /// Ticks that [`Reader::skip`] may skip: neither rotor changes its speed in them, nothing starts and nothing ends.
    pub fn straight(&self) -> u64 {
        let still = self.head.form == PackForm::Knots
            && self.tick > 0
            && self.motions.iter().all(|motion| motion.change == 0);
        let lefts = self
            .motions
            .iter()
            .map(|motion| motion.left)
            .chain([self.run, self.left]);
        if still {
            lefts.min().unwrap_or(0).saturating_sub(1)
        } else {
            0
        }
    }

    /// Phase and speed of both rotors at the next tick, in 2⁻³² counts; phases within a turn.
    pub fn lines(&self) -> [[i64; 2]; 2] {
        self.motions.map(|motion| [motion.phase, motion.speed])
    }

    /// Goes on by so many ticks without giving their set-points; at most [`Reader::straight`].
    pub fn skip(&mut self, ticks: u64) {
        let ticks = ticks.min(self.straight());
        for motion in &mut self.motions {
            motion.skip(ticks);
        }
        self.run -= ticks;
        self.left -= ticks;
        self.tick += ticks;
    }

    /// The next set-point; `None` after the last, once everything after it has been checked too: no bytes may follow,
    /// and a loop must close.
    ///
    /// # Errors
    /// The first thing that is wrong. Nothing can be read after it.
    pub fn next_point(&mut self) -> Step<Option<PackPoint>> {
        if self.tick == self.head.ticks {
            return self.finish().map(|()| None);
        }
        if self.tick == 0 {
            self.enter()?;
        }
        let counts = self.motions.map(|motion| motion.counts());
        let mut point = PackPoint {
            tick: self.tick,
            cue: self.cue,
            counts,
            steps: [0; 2],
            beam: self.beam,
        };
        point.steps = self.advance()?;
        Ok(Some(point))
    }

    /// Goes to the next tick; the counts that each rotor moves on the way.
    fn advance(&mut self) -> Step<[i64; 2]> {
        let mut steps = self.motions.each_mut().map(Motion::advance);
        self.tick += 1;
        self.left -= 1;
        let expected = self.motions.map(|motion| i64::from(motion.counts()));
        let found = if self.tick == self.head.ticks {
            self.closing.unwrap_or(expected)
        } else if self.left == 0 {
            self.enter()?;
            self.motions.map(|motion| i64::from(motion.counts()))
        } else {
            match self.head.form {
                PackForm::Rows => self.row()?,
                PackForm::Knots => self.due(&mut steps)?,
            }
            return Ok(steps);
        };
        // Rows say every step themselves; of knots the step over a cut is the nearest one.
        if self.head.form == PackForm::Knots {
            let ways = expected.into_iter().zip(found).zip(&self.motions);
            for (step, ((expected, found), motion)) in steps.iter_mut().zip(ways) {
                *step += motion.nearest(found - expected);
            }
        }
        Ok(steps)
    }

    fn fault(&self, what: &'static str) -> PackFault {
        PackFault::Block {
            offset: self.offset,
            what,
        }
    }

    /// Reads the next block into memory, its checksum checked, and takes what its head says.
    fn enter(&mut self) -> Step<()> {
        self.offset += self.block.len() as u64;
        let size = self.next;
        if size < LEAST_BLOCK || size > usize::from(self.head.largest) {
            return Err(self.fault(if size == 0 {
                "there is none, but ticks are missing"
            } else {
                "its size cannot be"
            }));
        }
        if !self.block.is_empty() && self.at != self.block.len() {
            return Err(self.fault("bytes are left in the block before it"));
        }
        self.block.clear();
        let got = self
            .from
            .by_ref()
            .take(size as u64)
            .read_to_end(&mut self.block)
            .map_err(|error| stream(&error))?;
        if got != size {
            return Err(PackFault::Truncated);
        }
        let mut cursor = Cursor::new(&self.block);
        let crc = cursor.u32().unwrap_or_default();
        if crc != crc32(0, self.block.get(4..).unwrap_or_default()) {
            return Err(self.fault("its checksum is wrong"));
        }
        let (stated, next, flags) = (cursor.u16(), cursor.u16(), cursor.byte());
        self.at = 9;
        self.next = next.map_or(0, usize::from);
        if stated.map(usize::from) != Some(size) {
            return Err(self.fault("it is not as long as it was said to be"));
        }
        let first = self.number(|cursor| cursor.unsigned())?;
        let ticks = self.number(|cursor| cursor.unsigned32())?;
        self.left = u64::from(ticks) + 1;
        if first != self.tick || self.left > self.head.ticks - first {
            return Err(self.fault("its ticks are not the next ones"));
        }
        let starts_loop = flags == Some(1);
        if flags.is_some_and(|flags| flags > 1)
            || starts_loop != (self.head.loop_start == Some(first))
        {
            return Err(self.fault("its flags cannot be"));
        }
        match self.head.form {
            PackForm::Rows => self.row_state()?,
            PackForm::Knots => self.knot_state()?,
        }
        if starts_loop {
            self.closing = Some(self.motions.map(|motion| i64::from(motion.counts())));
        }
        Ok(())
    }

    /// One number of the block.
    fn number<T>(&mut self, read: impl FnOnce(&mut Cursor<'_>) -> Option<T>) -> Step<T> {
        let rest = self.block.get(self.at..).unwrap_or_default();
        let mut cursor = Cursor::new(rest);
        let value = read(&mut cursor);
        let left = cursor.rest();
        match value {
            Some(value) => {
                self.at = self.block.len() - left;
                Ok(value)
            }
            None => Err(self.fault("it ends within a number, or one is too large")),
        }
    }

    fn counts_below(&mut self, turn: i64) -> Step<i64> {
        let counts = self.number(|cursor| cursor.unsigned32())?;
        if i64::from(counts) << 32 >= turn {
            return Err(self.fault("a position is not within a turn"));
        }
        Ok(i64::from(counts) << 32)
    }

    fn row_state(&mut self) -> Step<()> {
        let [a, b] = self.motions;
        let phases = [self.counts_below(a.turn)?, self.counts_below(b.turn)?];
        let steps = [
            self.number(|cursor| cursor.signed())?,
            self.number(|cursor| cursor.signed())?,
        ];
        for ((motion, phase), step) in self.motions.iter_mut().zip(phases).zip(steps) {
            motion.phase = phase;
            motion.speed = step.wrapping_shl(32);
        }
        self.run = 0;
        self.row()
    }

    fn row(&mut self) -> Step<()> {
        if self.run == 0 {
            self.run = u64::from(self.number(|cursor| cursor.unsigned32())?);
            self.beam = self.number(|cursor| cursor.byte())?;
            self.cue = self.number(|cursor| cursor.unsigned32())?;
            if self.run == 0 || self.run > self.left {
                return Err(self.fault("a run of no rows, or of more than the block has"));
            }
        }
        self.run -= 1;
        let both = self.number(|cursor| cursor.byte())?;
        for (index, narrow) in [both >> 4, both & 15].into_iter().enumerate() {
            let change = match narrow {
                15 => self.number(|cursor| cursor.signed())?,
                narrow => i64::from(narrow) - 7,
            };
            if let Some(motion) = self.motions.get_mut(index) {
                motion.speed = motion.speed.wrapping_add(change.wrapping_shl(32));
            }
        }
        Ok(())
    }

    fn knot_state(&mut self) -> Step<()> {
        for index in 0..2 {
            let Some(before) = self.motions.get(index).copied() else {
                continue;
            };
            let phase = self.counts_below(before.turn)?;
            let motion = Motion {
                phase: phase | i64::from(self.number(|cursor| cursor.u32())?),
                speed: self.number(|cursor| cursor.signed())?,
                change: self.number(|cursor| cursor.signed())?,
                scale: self.shift()?,
                grain: self.shift()?,
                pace: self.shift()?,
                left: u64::from(self.number(|cursor| cursor.unsigned32())?) + 1,
                turn: before.turn,
            };
            if let Some(slot) = self.motions.get_mut(index) {
                *slot = motion;
            }
        }
        self.beam = self.number(|cursor| cursor.byte())?;
        self.cue = self.number(|cursor| cursor.unsigned32())?;
        self.run = u64::from(self.number(|cursor| cursor.unsigned32())?) + 1;
        Ok(())
    }

    fn shift(&mut self) -> Step<u8> {
        match self.number(|cursor| cursor.byte())? {
            shift @ 0..64 => Ok(shift),
            _ => Err(self.fault("a shift of more than 63 bits")),
        }
    }

    /// Takes the pieces, and the change of beam or cue, that are due.
    fn due(&mut self, steps: &mut [i64; 2]) -> Step<()> {
        for (index, step) in steps.iter_mut().enumerate() {
            let Some(mut motion) = self.motions.get(index).copied() else {
                continue;
            };
            motion.left -= 1;
            if motion.left == 0 {
                let before = motion.phase >> 32;
                self.piece(&mut motion)?;
                *step += (motion.phase >> 32) - before;
                motion.phase = motion.phase.rem_euclid(motion.turn);
            }
            if let Some(slot) = self.motions.get_mut(index) {
                *slot = motion;
            }
        }
        self.run -= 1;
        if self.run == 0 {
            let head = self.number(|cursor| cursor.unsigned())?;
            if head & 1 != 0 {
                self.beam = self.number(|cursor| cursor.byte())?;
            }
            if head & 2 != 0 {
                let change = self.number(|cursor| cursor.signed())?;
                self.cue = self.cue.wrapping_add(change as u32);
            }
            self.run = self.ticks(head >> 2)?;
        }
        Ok(())
    }

    /// A number of ticks, stored less one.
    fn ticks(&self, less_one: u64) -> Step<u64> {
        if less_one > u64::from(u32::MAX) {
            return Err(self.fault("a piece of more than 2^32 ticks"));
        }
        Ok(less_one + 1)
    }

    fn piece(&mut self, motion: &mut Motion) -> Step<()> {
        let head = self.number(|cursor| cursor.unsigned())?;
        if head != 0 {
            if head > (1 << 32) >> motion.pace {
                return Err(self.fault("a piece of more than 2^32 ticks"));
            }
            motion.left = head << motion.pace;
            let step = self.number(|cursor| cursor.unsigned())?;
            if step & 1 != 0 {
                let units = self.number(|cursor| cursor.signed())?;
                motion.phase = motion
                    .phase
                    .wrapping_add(units.wrapping_shl(motion.grain.into()));
            }
            let step = unzigzag(step >> 1).wrapping_shl(motion.scale.into());
            motion.change = motion.change.wrapping_add(step);
            motion.speed = motion.speed.wrapping_add(step);
            return Ok(());
        }
        let what = self.number(|cursor| cursor.byte())?;
        if what > 15 {
            return Err(self.fault("a piece gives something that is not known here"));
        }
        let ticks = self.number(|cursor| cursor.unsigned())?;
        motion.left = self.ticks(ticks)?;
        let before = std::mem::take(&mut motion.change);
        if what & 1 != 0 {
            let shift = self.shift()?;
            let way = self
                .number(|cursor| cursor.signed())?
                .wrapping_shl(shift.into());
            motion.phase = (motion.phase >> 32 << 32).wrapping_add(way);
        }
        let speed = if what & 2 != 0 {
            let shift = self.shift()?;
            let units = self.number(|cursor| cursor.signed())?;
            Some(units.wrapping_shl(shift.into()))
        } else {
            None
        };
        if what & 4 != 0 {
            motion.scale = self.shift()?;
            motion.grain = self.shift()?;
            motion.pace = self.shift()?;
        }
        if what & 8 != 0 {
            motion.change = self
                .number(|cursor| cursor.signed())?
                .wrapping_shl(motion.scale.into());
        }
        let more = motion.change.wrapping_sub(before);
        motion.speed = speed.unwrap_or(motion.speed.wrapping_add(more));
        Ok(())
    }

    fn finish(&mut self) -> Step<()> {
        if self.at != self.block.len() || self.next != 0 {
            return Err(PackFault::Trailing);
        }
        let mut one = [0];
        match self.from.read(&mut one) {
            Ok(0) => Ok(()),
            Ok(_) => Err(PackFault::Trailing),
            Err(error) => Err(stream(&error)),
        }
    }
}

/// Reads until a buffer is full.
fn fill(from: &mut impl Read, into: &mut [u8]) -> Step<()> {
    from.read_exact(into).map_err(|error| match error.kind() {
        io::ErrorKind::UnexpectedEof => PackFault::Truncated,
        _ => stream(&error),
    })
}

fn stream(error: &io::Error) -> PackFault {
    PackFault::Stream(error.to_string())
}
