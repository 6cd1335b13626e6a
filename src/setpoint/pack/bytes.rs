//! Numbers of a pack as bytes.

/// The CRC-32 of IEEE 802.3 (reflected, polynomial 0x04C11DB7, all ones before and after), going on from `crc`; 0 to start.
#[must_use]
pub fn crc32(crc: u32, bytes: &[u8]) -> u32 {
    let mut state = !crc;
    for byte in bytes {
        let index = (state ^ u32::from(*byte)) & 0xFF;
        state = (state >> 8) ^ TABLE.get(index as usize).copied().unwrap_or_default();
    }
    !state
}

const TABLE: [u32; 256] = table();

#[expect(
    clippy::indexing_slicing,
    reason = "evaluated at compile time, where a wrong index fails the build"
)]
const fn table() -> [u32; 256] {
    let mut all = [0; 256];
    let mut index = 0;
    while index < 256 {
        let mut value = index as u32;
        let mut bit = 0;
        while bit < 8 {
            value = (value >> 1) ^ (0xEDB8_8320 * (value & 1));
            bit += 1;
        }
        all[index] = value;
        index += 1;
    }
    all
}

/// Appends an unsigned number in groups of seven bits, the highest first; every byte but the last has its top bit set.
pub(super) fn put_unsigned(out: &mut Vec<u8>, value: u64) {
    for group in (0..unsigned_bytes(value)).rev() {
        let more = if group > 0 { 0x80 } else { 0 };
        out.push((value >> (7 * group)) as u8 & 0x7F | more);
    }
}

/// Appends a signed number: 0, −1, 1, −2 … as 0, 1, 2, 3 …
pub(super) fn put_signed(out: &mut Vec<u8>, value: i64) {
    put_unsigned(out, zigzag(value));
}

/// 0, −1, 1, −2 … as 0, 1, 2, 3 …
pub(super) fn zigzag(value: i64) -> u64 {
    ((value << 1) ^ (value >> 63)).cast_unsigned()
}

/// The signed number that an unsigned one stands for.
pub(super) fn unzigzag(value: u64) -> i64 {
    (value >> 1).cast_signed() ^ -(value & 1).cast_signed()
}

/// Bytes of an unsigned number.
#[must_use]
pub fn unsigned_bytes(value: u64) -> usize {
    (64 - (value | 1).leading_zeros() as usize).div_ceil(7)
}

/// Bytes of a signed number.
#[must_use]
pub fn signed_bytes(value: i64) -> usize {
    unsigned_bytes(zigzag(value))
}

/// Bytes taken one after the other from the front; every reading past the end is `None`.
#[derive(Clone, Copy, Debug)]
pub(super) struct Cursor<'b> {
    bytes: &'b [u8],
}

impl<'b> Cursor<'b> {
    pub(super) fn new(bytes: &'b [u8]) -> Self {
        Self { bytes }
    }

    /// How many bytes are left.
    pub(super) fn rest(&self) -> usize {
        self.bytes.len()
    }

    pub(super) fn take(&mut self, count: usize) -> Option<&'b [u8]> {
        let (taken, rest) = self.bytes.split_at_checked(count)?;
        self.bytes = rest;
        Some(taken)
    }

    pub(super) fn array<const N: usize>(&mut self) -> Option<[u8; N]> {
        self.take(N)?.try_into().ok()
    }

    pub(super) fn byte(&mut self) -> Option<u8> {
        self.array::<1>().map(|[byte]| byte)
    }

    pub(super) fn u16(&mut self) -> Option<u16> {
        self.array().map(u16::from_le_bytes)
    }

    pub(super) fn u32(&mut self) -> Option<u32> {
        self.array().map(u32::from_le_bytes)
    }

    pub(super) fn u64(&mut self) -> Option<u64> {
        self.array().map(u64::from_le_bytes)
    }

    /// A number in groups of seven bits; `None` past ten groups, 64 bits or the end.
    pub(super) fn unsigned(&mut self) -> Option<u64> {
        let mut value = 0_u64;
        for _ in 0..10 {
            let byte = self.byte()?;
            if value >> 57 != 0 {
                return None;
            }
            value = value << 7 | u64::from(byte & 0x7F);
            if byte & 0x80 == 0 {
                return Some(value);
            }
        }
        None
    }

    pub(super) fn signed(&mut self) -> Option<i64> {
        self.unsigned().map(unzigzag)
    }

    pub(super) fn unsigned32(&mut self) -> Option<u32> {
        u32::try_from(self.unsigned()?).ok()
    }
}

#[cfg(test)]
mod tests {
    use super::{Cursor, crc32, put_signed, put_unsigned, signed_bytes, unsigned_bytes};

    #[test]
    fn the_checksum_has_its_published_check_values() {
        // Check value of CRC-32/ISO-HDLC as catalogued (docs.rs wire-codec); zlib's crc32 gives the other two.
        assert_eq!(crc32(0, b"123456789"), 0xCBF4_3926);
        assert_eq!(crc32(0, b""), 0);
        assert_eq!(crc32(0, &[0; 4]), 0x2144_DF1C);
        assert_eq!(crc32(crc32(0, b"1234"), b"56789"), 0xCBF4_3926);
    }

    #[test]
    fn numbers_come_back_and_take_the_bytes_that_are_said() {
        for value in [
            0,
            1,
            63,
            64,
            127,
            128,
            16_383,
            16_384,
            u64::from(u32::MAX),
            u64::MAX - 1,
            u64::MAX,
        ] {
            let mut out = Vec::new();
            put_unsigned(&mut out, value);
            assert_eq!(out.len(), unsigned_bytes(value));
            assert_eq!(Cursor::new(&out).unsigned(), Some(value));
            for signed in [value.cast_signed(), value.cast_signed().wrapping_neg()] {
                let mut out = Vec::new();
                put_signed(&mut out, signed);
                assert_eq!(out.len(), signed_bytes(signed));
                assert_eq!(Cursor::new(&out).signed(), Some(signed));
            }
        }
        // 2⁶⁴ has ten groups too, and does not fit.
        let mut above = [0x80; 10];
        above[0] = 0x82;
        above[9] = 0;
        assert_eq!(Cursor::new(&above).unsigned(), None);
        assert_eq!(Cursor::new(&[0x80; 9]).unsigned(), None);
        assert_eq!(Cursor::new(&[0x80; 11]).unsigned(), None);
    }
}
