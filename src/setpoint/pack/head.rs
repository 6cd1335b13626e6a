//! The head of a pack: what the table is, in short.

use super::bytes::{Cursor, crc32};
use super::fault::PackFault;
use super::{BLOCK_BYTES, Content, MOST_BLOCK_BYTES, PACK_VERSION};
use crate::exact::{Rational, whole};
use crate::plan::Plan;
use crate::rig::{Pair, Rotor, RotorId};
use crate::setpoint::beam::latency_ticks;
use crate::setpoint::table_id;
use num_traits::ToPrimitive;

/// The first four bytes.
const MAGIC: [u8; 4] = *b"PHWT";

/// Flag: the table loops.
const LOOPED: u8 = 1;

/// Bytes of the smallest head: every field, no titles.
pub(super) const LEAST_BYTES: usize = 106;

/// Bytes of a title at most; a longer one is cut.
const MOST_TITLE_BYTES: usize = 255;

/// Rows or knots.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum PackForm {
    /// One row a tick.
    Rows,
    /// Pieces of constant change of speed.
    Knots,
}

/// What the head says of a rotor.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct PackRotor {
    /// Position counts in a motor turn.
    pub counts: u32,
    /// Limit of slowing down, in 2⁻³² counts a tick², rounded down, at least 1.
    pub deceleration: u64,
    /// Motor turns : mirror turns.
    pub gear: (u32, u32),
    /// +1 where forward draws counter-clockwise, else −1.
    pub sense: i8,
    /// Whether it has an index mark to stand on before row 0.
    pub index: bool,
}

/// The head of a pack.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct PackHead {
    /// Rows or knots.
    pub form: PackForm,
    /// Counts by which a tick may differ from the row table; 0 for rows.
    pub tolerance: u16,
    /// The table's ID.
    pub id: u32,
    /// Set-points of the table.
    pub ticks: u64,
    /// The tick at which the loop starts; `None` where the table ends at rest.
    pub loop_start: Option<u64>,
    /// The tick in seconds, numerator and denominator.
    pub tick: (u64, u64),
    /// Ticks by which the beam is sent early.
    pub latency: u32,
    /// Both rotors.
    pub rotors: Pair<PackRotor>,
    /// Title of the show, empty where it has none.
    pub show: String,
    /// Title of the rig.
    pub rig: String,
    /// Bytes of a block at most.
    pub largest: u16,
    /// Flags that a reader may skip.
    pub optional: u8,
}

impl PackHead {
    /// The head of a plan's pack.
    #[must_use]
    pub fn of(plan: &Plan, content: Content) -> Self {
        let (form, tolerance) = match content {
            Content::Rows => (PackForm::Rows, 0),
            Content::Knots(tolerance) => (
                PackForm::Knots,
                u16::try_from(tolerance).unwrap_or(u16::MAX),
            ),
        };
        let tick = plan.tick().value();
        Self {
            form,
            tolerance,
            id: u32::from_str_radix(&table_id(plan), 16).unwrap_or_default(),
            ticks: plan.rows(),
            loop_start: plan.loop_start().map(|tick| tick.0),
            tick: (
                tick.numer().to_u64().unwrap_or_default(),
                tick.denom().to_u64().unwrap_or_default(),
            ),
            latency: u32::try_from(latency_ticks(plan)).unwrap_or(u32::MAX),
            rotors: Pair::each(|id: RotorId| rotor(plan.rig.rotor(id), tick)),
            show: cut(plan.show.title.as_deref()),
            rig: cut(plan.rig.title.as_deref()),
            largest: BLOCK_BYTES as u16,
            optional: 0,
        }
    }

    /// The head as bytes, with the size of the first block.
    pub(super) fn encode(&self, first_block: u16) -> Vec<u8> {
        let mut out = Vec::with_capacity(LEAST_BYTES + self.show.len() + self.rig.len());
        let size = LEAST_BYTES + self.show.len() + self.rig.len();
        out.extend(MAGIC);
        out.push(PACK_VERSION);
        out.push(u8::from(self.form == PackForm::Knots));
        out.push(if self.loop_start.is_some() { LOOPED } else { 0 });
        out.push(self.optional);
        out.extend((size as u16).to_le_bytes());
        out.extend(first_block.to_le_bytes());
        out.extend(self.largest.to_le_bytes());
        out.extend(self.tolerance.to_le_bytes());
        out.extend(self.id.to_le_bytes());
        out.extend(self.ticks.to_le_bytes());
        out.extend(self.loop_start.unwrap_or_default().to_le_bytes());
        out.extend(self.tick.0.to_le_bytes());
        out.extend(self.tick.1.to_le_bytes());
        out.extend(self.latency.to_le_bytes());
        for rotor in [&self.rotors.a, &self.rotors.b] {
            out.extend(rotor.counts.to_le_bytes());
            out.extend(rotor.deceleration.to_le_bytes());
            out.extend(rotor.gear.0.to_le_bytes());
            out.extend(rotor.gear.1.to_le_bytes());
            out.extend(rotor.sense.to_le_bytes());
            out.push(u8::from(rotor.index));
        }
        for title in [&self.show, &self.rig] {
            out.push(title.len() as u8);
            out.extend(title.as_bytes());
        }
        let crc = crc32(0, &out);
        out.extend(crc.to_le_bytes());
        out
    }

    /// The size that a head says it has, from its first ten bytes.
    ///
    /// # Errors
    /// Where they do not start a pack of this version.
    pub fn size(start: &[u8; 10]) -> Result<usize, PackFault> {
        let mut cursor = Cursor::new(start);
        if cursor.array() != Some(MAGIC) {
            return Err(PackFault::Foreign);
        }
        match cursor.byte() {
            Some(PACK_VERSION) => {}
            version => return Err(PackFault::Version(version.unwrap_or_default())),
        }
        let _form_and_flags = cursor.array::<3>();
        match cursor.u16().map(usize::from) {
            Some(size) if size >= LEAST_BYTES => Ok(size),
            _ => Err(PackFault::Head("its size cannot be")),
        }
    }

    /// The head of a pack that starts with these bytes.
    ///
    /// # Errors
    /// Where they do not start a pack of this version, or end within its head.
    pub fn read(start: &[u8]) -> Result<Self, PackFault> {
        let size = Self::size(start.first_chunk().ok_or(PackFault::Truncated)?)?;
        let bytes = start.get(..size).ok_or(PackFault::Truncated)?;
        Self::decode(bytes).map(|(head, _)| head)
    }

    /// Reads a whole head; also gives the size of the first block.
    pub(super) fn decode(bytes: &[u8]) -> Result<(Self, usize), PackFault> {
        let body = bytes
            .len()
            .checked_sub(4)
            .and_then(|end| bytes.split_at_checked(end));
        let Some((body, crc)) = body else {
            return Err(PackFault::Truncated);
        };
        if crc != crc32(0, body).to_le_bytes() {
            return Err(PackFault::Head("its checksum is wrong"));
        }
        Fields(Cursor::new(body))
            .read()
            .unwrap_or(Err(PackFault::Truncated))
    }
}

/// The fields of a head, one after the other; `None` where the bytes end early.
struct Fields<'b>(Cursor<'b>);

impl Fields<'_> {
    fn read(mut self) -> Option<Result<(PackHead, usize), PackFault>> {
        let cursor = &mut self.0;
        cursor.take(5)?;
        let form = match cursor.byte()? {
            0 => PackForm::Rows,
            1 => PackForm::Knots,
            form => return Some(Err(PackFault::Form(form))),
        };
        let flags = cursor.byte()?;
        if flags & !LOOPED != 0 {
            return Some(Err(PackFault::Flags(flags)));
        }
        let optional = cursor.byte()?;
        let _size_of_the_head = cursor.u16()?;
        let first_block = usize::from(cursor.u16()?);
        let largest = cursor.u16()?;
        if usize::from(largest) > MOST_BLOCK_BYTES {
            return Some(Err(PackFault::Head(
                "its blocks are larger than 4096 bytes",
            )));
        }
        let tolerance = cursor.u16()?;
        let id = cursor.u32()?;
        let ticks = cursor.u64()?;
        let start = cursor.u64()?;
        let loop_start = (flags & LOOPED != 0).then_some(start);
        if ticks == 0 || loop_start.is_some_and(|start| start >= ticks) {
            return Some(Err(PackFault::Head("its ticks cannot be")));
        }
        let tick = (cursor.u64()?, cursor.u64()?);
        let latency = cursor.u32()?;
        let rotors = Pair {
            a: self.rotor()?,
            b: self.rotor()?,
        };
        if [&rotors.a, &rotors.b].iter().any(|rotor| {
            rotor.counts == 0
                || rotor.counts > 1 << 30
                || rotor.deceleration == 0
                || rotor.deceleration >> 62 != 0
        }) {
            return Some(Err(PackFault::Head("a rotor of it cannot be")));
        }
        let head = PackHead {
            form,
            tolerance,
            id,
            ticks,
            loop_start,
            tick,
            latency,
            rotors,
            show: self.title()?,
            rig: self.title()?,
            largest,
            optional,
        };
        Some(Ok((head, first_block)))
    }

    fn rotor(&mut self) -> Option<PackRotor> {
        Some(PackRotor {
            counts: self.0.u32()?,
            deceleration: self.0.u64()?,
            gear: (self.0.u32()?, self.0.u32()?),
            sense: self.0.byte()?.cast_signed(),
            index: self.0.byte()? != 0,
        })
    }

    fn title(&mut self) -> Option<String> {
        let length = usize::from(self.0.byte()?);
        Some(String::from_utf8_lossy(self.0.take(length)?).into_owned())
    }
}

fn rotor(rotor: &Rotor, tick: &Rational) -> PackRotor {
    let a_tick = rotor.deceleration.value.value()
        * tick
        * tick
        * whole(i128::from(rotor.counts))
        * whole(1 << 32);
    PackRotor {
        counts: rotor.counts,
        deceleration: a_tick
            .floor()
            .to_integer()
            .to_u64()
            .unwrap_or(u64::MAX)
            .clamp(1, (1 << 62) - 1),
        gear: (rotor.gear.value.motor, rotor.gear.value.mirror),
        sense: if rotor.sense < 0 { -1 } else { 1 },
        index: rotor.index.is_some(),
    }
}

/// A title of at most [`MOST_TITLE_BYTES`] bytes, whole characters only.
fn cut(title: Option<&str>) -> String {
    let title = title.unwrap_or_default();
    let mut end = title.len().min(MOST_TITLE_BYTES);
    while !title.is_char_boundary(end) {
        end -= 1;
    }
    title.get(..end).unwrap_or_default().to_owned()
}
