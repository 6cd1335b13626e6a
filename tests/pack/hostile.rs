//! Packs that are truncated, flipped, foreign or made to harm.

use crate::audit::plan;
use crate::rows::{pack_of, points_of};
use phasewright::setpoint::pack::{Content, PackFault, Reader, crc32};

/// A table of a few hundred rows, or its knots.
fn small(content: Content) -> Vec<u8> {
    pack_of(&plan(), content)
}

/// Reads until the end or the first fault.
fn read_through(bytes: &[u8]) -> Result<u64, PackFault> {
    let mut reader = Reader::new(bytes)?;
    let mut ticks = 0;
    while reader.next_point()?.is_some() {
        ticks += 1;
        if ticks > 200_000 {
            break;
        }
    }
    Ok(ticks)
}

#[test]
fn every_flipped_bit_and_every_truncation_is_found() {
    for content in [Content::Rows, Content::Knots(1)] {
        let bytes = small(content);
        assert!(!points_of(&bytes).is_empty());
        for length in 0..bytes.len() {
            assert!(read_through(&bytes[..length]).is_err(), "{length} bytes");
        }
        for at in 0..bytes.len() {
            for bit in 0..8 {
                let mut damaged = bytes.clone();
                damaged[at] ^= 1 << bit;
                assert!(read_through(&damaged).is_err(), "byte {at}, bit {bit}");
            }
        }
        let mut longer = bytes.clone();
        longer.push(0);
        assert_eq!(read_through(&longer), Err(PackFault::Trailing));
        assert_eq!(
            read_through(b"tick,time_s,cue\n0,0.000,0\n"),
            Err(PackFault::Foreign)
        );
    }
}

#[test]
fn unknown_versions_and_flags_are_refused_by_name() {
    let bytes = small(Content::Rows);
    let with = |at: usize, value: u8| {
        let mut other = bytes.clone();
        other[at] = value;
        let size = usize::from(u16::from_le_bytes([other[8], other[9]]));
        let crc = crc32(0, &other[..size - 4]);
        other[size - 4..size].copy_from_slice(&crc.to_le_bytes());
        read_through(&other)
    };
    assert_eq!(with(4, 2), Err(PackFault::Version(2)));
    assert_eq!(with(5, 2), Err(PackFault::Form(2)));
    assert_eq!(with(6, 3), Err(PackFault::Flags(3)));
    // Flags that a reader may skip.
    assert!(with(7, 0xFF).is_ok());
}

/// A generator of no account but its period (the MMIX constants of D. E. Knuth, from memory).
struct Chance(u64);

impl Chance {
    fn below(&mut self, most: usize) -> usize {
        self.0 = self
            .0
            .wrapping_mul(6_364_136_223_846_793_005)
            .wrapping_add(1_442_695_040_888_963_407);
        ((self.0 >> 33) as usize) % most
    }
}

/// Makes every checksum right again, so that what is damaged is reached.
pub(crate) fn repaired(bytes: &mut [u8]) {
    let size = usize::from(u16::from_le_bytes([bytes[8], bytes[9]])).clamp(12, bytes.len());
    let crc = crc32(0, &bytes[..size - 4]);
    bytes[size - 4..size].copy_from_slice(&crc.to_le_bytes());
    let mut at = size;
    while at + 8 <= bytes.len() {
        let length = usize::from(u16::from_le_bytes([bytes[at + 4], bytes[at + 5]]))
            .clamp(8, bytes.len() - at);
        let crc = crc32(0, &bytes[at + 4..at + length]);
        bytes[at..at + 4].copy_from_slice(&crc.to_le_bytes());
        at += length;
    }
}

/// Damages packs and reads them, `runs` times; how many were read to an end.
fn damaged_and_read(runs: usize) -> usize {
    let sources = [small(Content::Rows), small(Content::Knots(1))];
    let mut chance = Chance(1);
    let mut whole = 0;
    for run in 0..runs {
        let mut bytes = sources[run % 2].clone();
        for _ in 0..1 + chance.below(6) {
            let at = chance.below(bytes.len());
            bytes[at] = match chance.below(4) {
                0 => 0xFF,
                1 => 0,
                2 => bytes[at] ^ (1 << chance.below(8)),
                _ => chance.below(256) as u8,
            };
        }
        if chance.below(8) == 0 {
            bytes.truncate(chance.below(bytes.len()).max(12));
        }
        if run % 8 != 0 {
            repaired(&mut bytes);
        }
        whole += usize::from(read_through(&bytes).is_ok());
    }
    whole
}

#[test]
fn damaged_packs_are_read_without_harm() {
    let runs = std::env::var("PACK_RUNS")
        .ok()
        .and_then(|runs| runs.parse().ok())
        .unwrap_or(4000);
    let whole = damaged_and_read(runs);
    // Some damage changes nothing that a checksum or a rule forbids; most of it does.
    assert!(whole < runs / 2, "{whole} of {runs} were read to an end");
}
