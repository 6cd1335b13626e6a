//! Run sheets without what changes for no reason of theirs.

/// The sizes of C headers, which change with every comment in the player, as `#`.
pub(crate) fn steady(sheet: &str) -> String {
    let mut text = sheet.to_owned();
    for before in ["C header ", "\"c\":", "\"c_knots\":"] {
        let parts: Vec<&str> = text.split(before).collect();
        let kept = parts.iter().enumerate().map(|(index, part)| {
            let number = |sign: char| sign.is_ascii_digit() || sign == ' ';
            match index {
                0 => (*part).to_owned(),
                _ => format!("{before}#{}", part.trim_start_matches(number)),
            }
        });
        text = kept.collect();
    }
    text
}
