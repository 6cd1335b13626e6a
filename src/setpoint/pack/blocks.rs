//! Blocks on their way out: each waits until the size of the one after it is known.

use super::bytes::{crc32, put_unsigned, unsigned_bytes};
use super::head::PackHead;
use std::io::{self, Write};

/// Bytes of a block before its first number: checksum, size, size of the next, flags.
const FIXED: usize = 9;

/// Flag: the loop starts with this block.
const LOOP_START: u8 = 1;

/// The head of a block.
#[derive(Clone, Copy, Debug)]
pub(super) struct BlockHead {
    pub(super) first_tick: u64,
    /// At least 1.
    pub(super) ticks: u64,
    pub(super) loop_start: bool,
}

impl BlockHead {
    /// Bytes of it.
    pub(super) fn bytes(&self) -> usize {
        FIXED + unsigned_bytes(self.first_tick) + unsigned_bytes(self.ticks - 1)
    }
}

/// Writes head and blocks.
pub(super) struct Blocks<'w> {
    head: PackHead,
    out: &'w mut dyn Write,
    waiting: Option<Vec<u8>>,
    written: u64,
}

impl<'w> Blocks<'w> {
    pub(super) fn new(head: PackHead, out: &'w mut dyn Write) -> Self {
        Self {
            head,
            out,
            waiting: None,
            written: 0,
        }
    }

    pub(super) fn head(&self) -> &PackHead {
        &self.head
    }

    /// Takes one more block.
    pub(super) fn push(&mut self, head: &BlockHead, body: &[u8]) -> io::Result<()> {
        let size = head.bytes() + body.len();
        let mut block = Vec::with_capacity(size);
        block.extend([0; 4]);
        block.extend(short(size).to_le_bytes());
        block.extend([0; 2]);
        block.push(if head.loop_start { LOOP_START } else { 0 });
        put_unsigned(&mut block, head.first_tick);
        put_unsigned(&mut block, head.ticks - 1);
        block.extend(body);
        match self.waiting.replace(block) {
            Some(before) => self.send(before, short(size)),
            None => {
                let head = self.head.encode(short(size));
                self.written = head.len() as u64;
                self.out.write_all(&head)
            }
        }
    }

    /// Writes the last block; gives the bytes of the whole table.
    pub(super) fn finish(mut self) -> io::Result<u64> {
        if let Some(last) = self.waiting.take() {
            self.send(last, 0)?;
        }
        Ok(self.written)
    }

    fn send(&mut self, mut block: Vec<u8>, next: u16) -> io::Result<()> {
        if let Some(field) = block.get_mut(6..8) {
            field.copy_from_slice(&next.to_le_bytes());
        }
        let crc = crc32(0, block.get(4..).unwrap_or_default());
        if let Some(field) = block.get_mut(..4) {
            field.copy_from_slice(&crc.to_le_bytes());
        }
        self.written += block.len() as u64;
        self.out.write_all(&block)
    }
}

/// Blocks are at most [`super::BLOCK_BYTES`] long, so that every size fits.
fn short(size: usize) -> u16 {
    u16::try_from(size).unwrap_or(u16::MAX)
}
