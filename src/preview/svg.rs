//! A drawing in the making: text of an SVG file, with the few shapes that the pictures use.
//!
//! Coordinates are pixels, y down, written with at most two decimals. Text stays text.

use std::borrow::Cow;
use std::fmt::{Display, Write};

/// A comment that every file of `preview` and `atlas` carries near its start: it tells own files from foreign ones.
pub const MARK: &str = "<!-- drawn by phasewright preview -->";

/// A colour, as SVG and CSS write it.
pub type Ink = &'static str;

/// The sheet behind everything.
pub const PAPER: Ink = "#f6f4ee";
/// Text.
pub const TEXT: Ink = "#1d2128";
/// Labels and small print.
pub const FAINT: Ink = "#666d78";
/// Frames and grids.
pub const HAIR: Ink = "#d8d4c9";
/// The dark wall.
pub const WALL: Ink = "#0a0d13";
/// Rotor a.
pub const ROTOR_A: Ink = "#1c5d99";
/// Rotor b.
pub const ROTOR_B: Ink = "#b4530a";
/// Errors, and whatever is past a limit.
pub const ERROR: Ink = "#b3221c";
/// Warnings.
pub const WARNING: Ink = "#8a6200";

const STYLE: &str = "text{font-family:'Noto Sans',sans-serif;font-size:13px;fill:#1d2128}\
.b{font-weight:bold}.f{fill:#666d78}.s{font-size:11px}.xs{font-size:10px}.l{font-size:16px;font-weight:bold}\
.xl{font-size:26px;font-weight:bold}.m{text-anchor:middle}.e{text-anchor:end}\
.err{fill:#b3221c}.warn{fill:#8a6200}.onw{fill:#aab3c2}.ra{fill:#1c5d99}.rb{fill:#b4530a}\
.hl{paint-order:stroke;stroke:#f6f4ee;stroke-width:5px;stroke-linejoin:round}\
.lt path,.lt use{fill:none;stroke-linecap:round;stroke-linejoin:round}";

/// A drawing.
#[derive(Clone, Debug)]
pub struct Svg {
    body: String,
    ids: u32,
}

/// A rectangle in pixels.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Frame {
    /// Left edge.
    pub x: f64,
    /// Upper edge.
    pub y: f64,
    /// Width.
    pub width: f64,
    /// Height.
    pub height: f64,
}

impl Frame {
    /// A square with its upper left corner here.
    #[must_use]
    pub fn square(x: f64, y: f64, side: f64) -> Self {
        Self {
            x,
            y,
            width: side,
            height: side,
        }
    }
    /// The right edge.
    #[must_use]
    pub fn right(self) -> f64 {
        self.x + self.width
    }
    /// The lower edge.
    #[must_use]
    pub fn bottom(self) -> f64 {
        self.y + self.height
    }
    /// The middle.
    #[must_use]
    pub fn centre(self) -> (f64, f64) {
        (self.x + self.width / 2.0, self.y + self.height / 2.0)
    }
}

impl Default for Svg {
    fn default() -> Self {
        Self::new()
    }
}

impl Svg {
    /// An empty drawing; its size is told at the end.
    #[must_use]
    pub fn new() -> Self {
        Self {
            body: String::new(),
            ids: 0,
        }
    }
    /// A name that no other element of the drawing has.
    pub fn id(&mut self) -> String {
        self.ids += 1;
        format!("p{}", self.ids)
    }
    /// Markup as it is.
    pub fn raw(&mut self, markup: impl Display) {
        // Writing to a String cannot fail.
        let _ = writeln!(self.body, "{markup}");
    }
    /// A filled rectangle with rounded corners.
    pub fn area(&mut self, frame: Frame, radius: f64, fill: &str) {
        self.raw(format_args!(
            "<rect x=\"{}\" y=\"{}\" width=\"{}\" height=\"{}\" rx=\"{}\" fill=\"{fill}\"/>",
            number(frame.x),
            number(frame.y),
            number(frame.width),
            number(frame.height),
            number(radius)
        ));
    }
    /// A straight line; `dash` is a dash pattern or empty.
    pub fn line(&mut self, from: (f64, f64), to: (f64, f64), stroke: &str, width: f64, dash: &str) {
        let dash = dashes(dash);
        self.raw(format_args!(
            "<line x1=\"{}\" y1=\"{}\" x2=\"{}\" y2=\"{}\" stroke=\"{stroke}\" stroke-width=\"{}\"{dash}/>",
            number(from.0),
            number(from.1),
            number(to.0),
            number(to.1),
            number(width)
        ));
    }
    /// A stroked path from its `d`.
    pub fn path(&mut self, d: &str, stroke: &str, width: f64, dash: &str) {
        let dash = dashes(dash);
        self.raw(format_args!(
            "<path d=\"{d}\" fill=\"none\" stroke=\"{stroke}\" stroke-width=\"{}\" stroke-linejoin=\"round\"{dash}/>",
            number(width)
        ));
    }
    /// A filled path from its `d`.
    pub fn shape(&mut self, d: &str, fill: &str) {
        self.raw(format_args!("<path d=\"{d}\" fill=\"{fill}\"/>"));
    }
    /// Text with its baseline's start (middle or end, by class) here.
    pub fn text(&mut self, at: (f64, f64), class: &str, text: &str) {
        self.raw(format_args!(
            "<text x=\"{}\" y=\"{}\" class=\"{class}\">{}</text>",
            number(at.0),
            number(at.1),
            escape(text)
        ));
    }
    /// The whole file: `width` by `height` pixels of drawing, shown `shown` pixels wide.
    #[must_use]
    pub fn finish(self, width: f64, height: f64, shown: f64, title: &str, about: &str) -> String {
        let tall = height * shown / width;
        format!(
            "<svg xmlns=\"http://www.w3.org/2000/svg\" viewBox=\"0 0 {w} {h}\" width=\"{}\" height=\"{}\" role=\"img\" \
             aria-labelledby=\"title about\">\n{MARK}\n<title id=\"title\">{}</title>\n<desc id=\"about\">{}</desc>\n\
             <style>{STYLE}</style>\n<rect width=\"{w}\" height=\"{h}\" fill=\"{PAPER}\"/>\n{}</svg>\n",
            number(shown),
            number(libm::round(tall)),
            escape(title),
            escape(about),
            self.body,
            w = number(width),
            h = number(height),
        )
    }
}

fn dashes(pattern: &str) -> String {
    if pattern.is_empty() {
        String::new()
    } else {
        format!(" stroke-dasharray=\"{pattern}\"")
    }
}

/// At most two decimals, none needlessly; never `-0`.
#[must_use]
pub fn number(value: f64) -> String {
    let rounded = libm::round(value * 100.0) / 100.0;
    if rounded == 0.0 {
        return "0".to_owned();
    }
    format!("{rounded}")
}

/// Text as XML content; signs that XML cannot hold become U+FFFD.
#[must_use]
pub fn escape(text: &str) -> Cow<'_, str> {
    let plain = |sign: char| !matches!(sign, '&' | '<' | '>' | '"') && allowed(sign);
    if text.chars().all(plain) {
        return Cow::Borrowed(text);
    }
    let mut out = String::with_capacity(text.len() + 16);
    for sign in text.chars() {
        match sign {
            '&' => out.push_str("&amp;"),
            '<' => out.push_str("&lt;"),
            '>' => out.push_str("&gt;"),
            '"' => out.push_str("&quot;"),
            sign if allowed(sign) => out.push(sign),
            _ => out.push('\u{fffd}'),
        }
    }
    Cow::Owned(out)
}

fn allowed(sign: char) -> bool {
    (sign >= ' ' || sign == '\t' || sign == '\n') && !matches!(sign, '\u{fffe}' | '\u{ffff}')
}

/// Text cut to about `width` pixels at a font of `size` pixels, with `…` where something is missing.
///
/// The font is not measured: a letter counts 0.54 of its size, a wide one (East Asian) twice as much.
#[must_use]
pub fn fitted(text: &str, size: f64, width: f64) -> String {
    let columns = columns(size, width);
    if textwrap::core::display_width(text) <= columns {
        return text.to_owned();
    }
    let mut kept = String::new();
    for sign in text.chars() {
        kept.push(sign);
        if textwrap::core::display_width(&kept) + 1 > columns {
            kept.pop();
            break;
        }
    }
    format!("{}…", kept.trim_end())
}

/// Text in lines of about `width` pixels, at most `lines` of them.
#[must_use]
pub fn wrapped(text: &str, size: f64, width: f64, lines: usize) -> Vec<String> {
    let mut all: Vec<String> = textwrap::wrap(text, columns(size, width))
        .into_iter()
        .map(Cow::into_owned)
        .collect();
    if all.len() > lines {
        all.truncate(lines);
        if let Some(last) = all.last_mut() {
            last.push('…');
        }
    }
    all
}

fn columns(size: f64, width: f64) -> usize {
    #[expect(
        clippy::cast_possible_truncation,
        clippy::cast_sign_loss,
        reason = "some hundred columns at most"
    )]
    let columns = (width / (0.54 * size)).clamp(1.0, 1000.0) as usize;
    columns
}
