//! The C form: one self-contained C99 header with the table, in its pack form, and the player.

use super::pack::{Content, write_pack};
use super::{program, table_id};
use crate::plan::Plan;
use std::io::{self, Write};

/// The player, as it stands in every header.
pub const PLAYER: &str = include_str!("../../player/phw_player.h");

/// Bytes of the table in a line of the header.
const BYTES_A_LINE: usize = 16;

/// Digits of a byte in hexadecimal.
const DIGITS: &[u8; 16] = b"0123456789abcdef";

/// The identifier of a header that is called `file` (its name without the ending): letters, digits and `_` stay, all else
/// becomes `_`; `table_` goes before what does not start with a letter, and before what names parts of the player.
#[must_use]
pub fn identifier(file: &str) -> String {
    let plain = |sign: char| {
        if sign.is_ascii_alphanumeric() {
            sign
        } else {
            '_'
        }
    };
    let name: String = file.chars().map(plain).collect();
    let starts_well = name.starts_with(|sign: char| sign.is_ascii_alphabetic());
    let reserved = name.to_ascii_lowercase().starts_with("phw");
    if starts_well && !reserved {
        name
    } else {
        format!("table_{name}")
    }
}

/// Everything before the bytes of the table.
///
/// The include guard names the table's ID too: two files of one identifier but different tables do not compile together, where the
/// second would otherwise silently be left out.
#[must_use]
pub fn header_start(plan: &Plan, name: &str) -> String {
    let title = commentable(plan.show.title.as_deref().unwrap_or("untitled"));
    let (id, program) = (table_id(plan), program());
    format!(
        "/* {title}\n \
         * Table {id}, made by {program}. Include this where the set-points are played:\n \
         *\n \
         *   phw_player player;\n \
         *   phw_open(&player, {name}_table, {name}_table_size)\n \
         */\n\
         #ifndef PHW_TABLE_{name}_{id}_H\n\
         #define PHW_TABLE_{name}_{id}_H\n\
         \n\
         {PLAYER}\n\
         static const uint8_t {name}_table[] PHW_STORE = {{\n"
    )
}

/// Everything after the bytes of the table.
#[must_use]
pub fn header_end(plan: &Plan, name: &str, bytes: u64) -> String {
    let id = table_id(plan);
    format!(
        "}};\n\
         #define {name}_table_size {bytes}UL\n\
         #define {name}_id 0x{id}UL\n\
         \n\
         #endif /* PHW_TABLE_{name}_{id}_H */\n"
    )
}

/// Writes the header of a plan; see [`write_pack`].
///
/// # Errors
/// Those of `out`.
pub fn write_header(
    plan: &Plan,
    content: Content,
    name: &str,
    out: &mut dyn Write,
    progress: &mut dyn FnMut(u64),
) -> io::Result<()> {
    out.write_all(header_start(plan, name).as_bytes())?;
    let mut array = Array {
        out,
        line: Vec::new(),
        in_line: 0,
    };
    let bytes = write_pack(plan, content, &mut array, progress)?;
    array.end()?;
    out.write_all(header_end(plan, name, bytes).as_bytes())
}

/// Bytes of a header whose table takes `bytes` as a pack.
#[must_use]
pub fn header_bytes(plan: &Plan, name: &str, bytes: u64) -> u64 {
    // Four signs before a line and its end, six for each byte, the blank before the first of a line left out.
    let lines = bytes.div_ceil(BYTES_A_LINE as u64);
    let text = header_start(plan, name).len() + header_end(plan, name, bytes).len();
    text as u64 + bytes * 6 + lines * 4
}

/// The bytes that the elements of an array in C stand for; stops at the first that is none.
#[must_use]
pub fn elements(text: &str) -> Vec<u8> {
    let byte = |element: &str| {
        let digits = element
            .trim()
            .strip_prefix("0x")
            .filter(|digits| digits.len() == 2)?;
        u8::from_str_radix(digits, 16).ok()
    };
    text.split(',').map_while(byte).collect()
}

/// Text in which nothing ends a comment or starts another, or is anything but itself.
fn commentable(text: &str) -> String {
    let plain = |sign: char| {
        let stays = sign.is_alphanumeric() || " ,.-:;'()+!&".contains(sign);
        if stays { sign } else { '.' }
    };
    text.chars().map(plain).collect()
}

/// Bytes as the elements of an array.
struct Array<'w> {
    out: &'w mut dyn Write,
    line: Vec<u8>,
    in_line: usize,
}

impl Array<'_> {
    fn put(&mut self, byte: u8) -> io::Result<()> {
        let digit = |value: u8| DIGITS.get(usize::from(value)).copied().unwrap_or(b'0');
        self.line
            .extend(if self.in_line == 0 { "    0x" } else { " 0x" }.as_bytes());
        self.line.extend([digit(byte >> 4), digit(byte & 15), b',']);
        self.in_line += 1;
        if self.in_line == BYTES_A_LINE {
            self.end()
        } else {
            Ok(())
        }
    }

    fn end(&mut self) -> io::Result<()> {
        if self.in_line > 0 {
            self.line.push(b'\n');
            self.out.write_all(&self.line)?;
        }
        self.line.clear();
        self.in_line = 0;
        Ok(())
    }
}

impl Write for Array<'_> {
    fn write(&mut self, bytes: &[u8]) -> io::Result<usize> {
        for byte in bytes {
            self.put(*byte)?;
        }
        Ok(bytes.len())
    }

    fn flush(&mut self) -> io::Result<()> {
        self.out.flush()
    }
}

#[cfg(test)]
mod tests {
    use super::{commentable, identifier};

    #[test]
    fn any_file_name_becomes_an_identifier() {
        for (file, name) in [
            ("evening", "evening"),
            ("quillmere-evening", "quillmere_evening"),
            ("2nd show", "table_2nd_show"),
            ("_x", "table__x"),
            ("fête", "f_te"),
            ("", "table_"),
            ("phw_player", "table_phw_player"),
        ] {
            assert_eq!(identifier(file), name);
        }
    }

    #[test]
    fn no_title_ends_a_comment() {
        assert_eq!(commentable("a */ b ??/ \u{202e}c \\"), "a .. b ... .c .");
    }
}
