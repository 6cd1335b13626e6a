//! Rows → blocks: a byte a row, as long as the speeds change little from one tick to the next.

use super::BLOCK_BYTES;
use super::blocks::{BlockHead, Blocks};
use super::bytes::{put_signed, put_unsigned, signed_bytes, unsigned_bytes};
use crate::plan::Plan;
use crate::rig::RotorId;
use crate::setpoint::rows::{Row, Rows};
use crate::setpoint::table::BLOCK_ROWS;
use rayon::prelude::{IndexedParallelIterator, IntoParallelRefMutIterator, ParallelIterator};
use std::io;

/// Largest change of a step, either way, that half a byte holds.
const NARROW: i64 = 7;
/// Stands in half a byte for a change that follows as a number.
const WIDE: u8 = 15;

/// Two blocks are shared out anew only where they have fewer bytes than this together, so that each half fits for sure: half of
/// them, one row of at most 21 bytes, and the head, state and run of a block of its own.
const SHARED_BYTES: usize = 2 * (BLOCK_BYTES - 128);

/// Writes every row of a plan.
pub(super) fn write(
    plan: &Plan,
    blocks: &mut Blocks<'_>,
    progress: &mut dyn FnMut(u64),
) -> io::Result<()> {
    let rows = Rows::new(plan);
    let count = rows.count();
    let mut writer = Writer {
        loop_start: blocks.head().loop_start,
        blocks,
        before: None,
        open: None,
    };
    let mut buffers = vec![Vec::new(); rayon::current_num_threads().clamp(1, 16)];
    let mut first = 0;
    while first < count {
        buffers
            .par_iter_mut()
            .enumerate()
            .for_each(|(index, buffer)| {
                buffer.clear();
                let start = first + index as u64 * BLOCK_ROWS;
                rows.each(start..start + BLOCK_ROWS, |row| buffer.push(*row));
            });
        for row in buffers.iter().flatten() {
            writer.row(row)?;
        }
        first = (first + buffers.len() as u64 * BLOCK_ROWS).min(count);
        progress(first);
    }
    writer.end()
}

struct Writer<'b, 'w> {
    blocks: &'b mut Blocks<'w>,
    loop_start: Option<u64>,
    /// The block before the open one, which waits since the two may be shared out anew.
    before: Option<Open>,
    open: Option<Open>,
}

/// The block being filled.
struct Open {
    head: BlockHead,
    /// Positions, the steps before the first row, and every run that is done.
    body: Vec<u8>,
    /// Rows of the run being filled, its beam and cue, and its rows as bytes.
    run: (u64, u8, u32),
    rows: Vec<u8>,
    /// Steps of the row before.
    steps: [i64; 2],
    /// Every row so far, as it came.
    taken: Vec<Row>,
}

impl Writer<'_, '_> {
    fn row(&mut self, row: &Row) -> io::Result<()> {
        let cut = self.loop_start == Some(row.tick);
        if cut {
            self.end()?;
        }
        if self.open.as_ref().is_some_and(|open| !open.has_room(row)) {
            let full = self.open.take();
            self.send_before()?;
            self.before = full;
        }
        let open = self.open.get_or_insert_with(|| Open::at(row, cut));
        open.push(row);
        Ok(())
    }

    /// Nothing more comes before the loop starts, or at all. What is open may be a block of very few ticks, and a player that
    /// streams would have no more than those to fetch and to check the block after it: the last two then share what they have.
    fn end(&mut self) -> io::Result<()> {
        if let (Some(before), Some(open)) = (&self.before, &self.open) {
            let bytes = before.bytes() + open.bytes();
            if open.head.ticks < before.head.ticks / 2 && bytes < SHARED_BYTES {
                let (first, second) = Open::shared(before, open, bytes / 2);
                self.before = first;
                self.open = second;
            }
        }
        self.send_before()?;
        self.before = self.open.take();
        self.send_before()
    }

    fn send_before(&mut self) -> io::Result<()> {
        match self.before.take() {
            Some(mut block) => {
                block.end_run();
                self.blocks.push(&block.head, &block.body)
            }
            None => Ok(()),
        }
    }
}

impl Open {
    /// A block that starts with this row: the row's own steps are the ones before it, so that it changes nothing.
    fn at(row: &Row, loop_start: bool) -> Self {
        let (a, b) = (&row.rotors.a, &row.rotors.b);
        let mut body = Vec::with_capacity(BLOCK_BYTES);
        put_unsigned(&mut body, u64::from(a.counts));
        put_unsigned(&mut body, u64::from(b.counts));
        put_signed(&mut body, a.step);
        put_signed(&mut body, b.step);
        Self {
            head: BlockHead {
                first_tick: row.tick,
                ticks: 0,
                loop_start,
            },
            body,
            run: (0, row.beam, row.cue),
            rows: Vec::with_capacity(BLOCK_BYTES),
            steps: [a.step, b.step],
            taken: Vec::with_capacity(BLOCK_BYTES),
        }
    }

    /// Two blocks with the rows of these two, the first of which is full as soon as it has so many bytes.
    fn shared(before: &Self, open: &Self, bytes: usize) -> (Option<Self>, Option<Self>) {
        let mut blocks: (Option<Self>, Option<Self>) = (None, None);
        for row in before.taken.iter().chain(&open.taken) {
            let (first, second) = &mut blocks;
            let full = first.as_ref().is_some_and(|first| first.bytes() >= bytes);
            let (slot, starts_loop) = if full {
                (second, false)
            } else {
                (first, before.head.loop_start)
            };
            slot.get_or_insert_with(|| Self::at(row, starts_loop))
                .push(row);
        }
        blocks
    }

    /// Bytes so far, the head left out.
    fn bytes(&self) -> usize {
        self.body.len() + run_bytes(self.run.0, self.run.2) + self.rows.len()
    }

    fn changes(&self, row: &Row) -> [i64; 2] {
        let [a, b] = self.steps;
        [
            row.rotors.a.step.wrapping_sub(a),
            row.rotors.b.step.wrapping_sub(b),
        ]
    }

    fn has_room(&self, row: &Row) -> bool {
        let wide = |change: i64| {
            if change.abs() <= NARROW {
                0
            } else {
                signed_bytes(change)
            }
        };
        let [a, b] = self.changes(row);
        let same_run = (self.run.1, self.run.2) == (row.beam, row.cue);
        let runs = run_bytes(self.run.0 + u64::from(same_run), self.run.2)
            + if same_run { 0 } else { run_bytes(1, row.cue) };
        let head = BlockHead {
            ticks: self.head.ticks + 1,
            ..self.head
        };
        head.bytes() + self.body.len() + self.rows.len() + runs + 1 + wide(a) + wide(b)
            <= BLOCK_BYTES
    }

    fn push(&mut self, row: &Row) {
        if (self.run.1, self.run.2) != (row.beam, row.cue) {
            self.end_run();
            self.run = (0, row.beam, row.cue);
        }
        let changes = self.changes(row);
        let narrow = changes.map(|change| {
            if change.abs() <= NARROW {
                (change + NARROW) as u8
            } else {
                WIDE
            }
        });
        let [a, b] = narrow;
        self.rows.push(a << 4 | b);
        for (change, narrow) in changes.into_iter().zip(narrow) {
            if narrow == WIDE {
                put_signed(&mut self.rows, change);
            }
        }
        self.steps = [RotorId::A, RotorId::B].map(|id| row.rotors.of(id).step);
        self.taken.push(*row);
        self.run.0 += 1;
        self.head.ticks += 1;
    }

    fn end_run(&mut self) {
        let (rows, beam, cue) = self.run;
        if rows > 0 {
            put_unsigned(&mut self.body, rows);
            self.body.push(beam);
            put_unsigned(&mut self.body, u64::from(cue));
            self.body.append(&mut self.rows);
        }
    }
}

fn run_bytes(rows: u64, cue: u32) -> usize {
    unsigned_bytes(rows) + 1 + unsigned_bytes(u64::from(cue))
}
