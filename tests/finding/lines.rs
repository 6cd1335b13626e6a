use phasewright::finding::{Locator, Position, Sources};

/// (line, column) of each byte of a text.
fn positions(text: &str, bytes: &[usize]) -> Vec<(usize, usize)> {
    let mut sources = Sources::default();
    let file = sources.add("x", text);
    let locator = Locator::new(&sources);
    let at = |byte: &usize| {
        let Position { line, column } = locator.position(file, *byte);
        (line, column)
    };
    bytes.iter().map(at).collect()
}

#[test]
fn lines_and_columns_count_from_one() {
    assert_eq!(
        positions("ab\ncd", &[0, 1, 2, 3, 4]),
        [(1, 1), (1, 2), (1, 3), (2, 1), (2, 2)]
    );
}

#[test]
fn a_place_at_or_past_the_end_is_the_end() {
    assert_eq!(positions("ab\n", &[3, 99]), [(2, 1), (2, 1)]);
    assert_eq!(positions("", &[0, 7]), [(1, 1), (1, 1)]);
}

#[test]
fn columns_count_characters_and_not_bytes() {
    // ü has two bytes, 鏡 three; byte 4 lies within 鏡 and counts as its start.
    assert_eq!(
        positions("aü鏡b", &[1, 3, 4, 6]),
        [(1, 2), (1, 3), (1, 3), (1, 4)]
    );
}

#[test]
fn a_carriage_return_belongs_to_its_line_end() {
    assert_eq!(positions("ab\r\ncd\r\n", &[4, 8]), [(2, 1), (3, 1)]);
}

#[test]
fn a_byte_order_mark_is_not_counted() {
    assert_eq!(
        positions("\u{feff}show", &[0, 3, 4]),
        [(1, 1), (1, 1), (1, 2)]
    );
}
