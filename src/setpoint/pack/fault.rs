//! What a reader of packs gives, and what it says where it gives nothing.

use std::fmt;

/// One set-point of a pack.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct PackPoint {
    /// Ticks since row 0.
    pub tick: u64,
    /// The number of the cue.
    pub cue: u32,
    /// Positions of rotor a and b in counts.
    pub counts: [u32; 2],
    /// Counts that each moves until the next tick.
    pub steps: [i64; 2],
    /// Laser level.
    pub beam: u8,
}

/// What is wrong with a pack.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum PackFault {
    /// It does not start like one.
    Foreign,
    /// A version that this program does not know.
    Version(u8),
    /// A form that this program does not know.
    Form(u8),
    /// Flags that a reader must know, and this one does not.
    Flags(u8),
    /// It ends before its end.
    Truncated,
    /// Something of the head cannot be.
    Head(&'static str),
    /// Something of a block cannot be.
    Block {
        /// Where it starts, in bytes from the start of the table.
        offset: u64,
        /// What.
        what: &'static str,
    },
    /// Bytes follow the last block.
    Trailing,
    /// The stream failed.
    Stream(String),
}

impl fmt::Display for PackFault {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Foreign => write!(out, "this is no pack"),
            Self::Version(version) => {
                write!(out, "version {version} of the pack form is not known here")
            }
            Self::Form(form) => write!(out, "form {form} of a pack is not known here"),
            Self::Flags(flags) => write!(
                out,
                "the pack has flags that are not known here: {flags:#04x}"
            ),
            Self::Truncated => write!(out, "the pack ends early"),
            Self::Head(what) => write!(out, "the head of the pack is damaged: {what}"),
            Self::Block { offset, what } => {
                write!(out, "the block at byte {offset} is damaged: {what}")
            }
            Self::Trailing => write!(out, "bytes follow the last block"),
            Self::Stream(what) => write!(out, "{what}"),
        }
    }
}
