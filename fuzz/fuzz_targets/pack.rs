//! The reader of packs, with checksums as they come and with checksums made right.
#![no_main]

use libfuzzer_sys::fuzz_target;
use phasewright::setpoint::pack::{PackHead, Reader, crc32};

/// Set-points that are read of one input.
const MOST: usize = 20_000;

fuzz_target!(|bytes: &[u8]| {
    read(bytes);
    let mut right = bytes.to_vec();
    repair(&mut right);
    read(&right);
});

fn read(bytes: &[u8]) {
    let Ok(mut reader) = Reader::new(bytes) else {
        return;
    };
    let turns = [reader.head().rotors.a.counts, reader.head().rotors.b.counts];
    for _ in 0..MOST {
        let Ok(Some(point)) = reader.next_point() else {
            return;
        };
        for (counts, turn) in point.counts.into_iter().zip(turns) {
            assert!(counts < turn, "a position is within its turn");
        }
        let straight = reader.straight();
        if straight > 100 {
            reader.skip(straight - 1);
        }
    }
}

/// Makes the checksums of head and blocks right, so that what stands in them is reached.
fn repair(bytes: &mut [u8]) {
    let Some(Ok(size)) = bytes.first_chunk().map(PackHead::size) else {
        return;
    };
    if size > bytes.len() {
        return;
    }
    let crc = crc32(0, &bytes[..size - 4]);
    bytes[size - 4..size].copy_from_slice(&crc.to_le_bytes());
    let mut at = size;
    while at + 11 <= bytes.len() {
        let size = usize::from(u16::from_le_bytes([bytes[at + 4], bytes[at + 5]]));
        if size < 11 || size > bytes.len() - at {
            return;
        }
        let crc = crc32(0, &bytes[at + 4..at + size]);
        bytes[at..at + 4].copy_from_slice(&crc.to_le_bytes());
        at += size;
    }
}
