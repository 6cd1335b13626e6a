//! Light on a piece of dark wall, as SVG.

use super::light::{HOT, LEVELS, Piece};
use super::svg::{Frame, Svg, WALL, number};
use crate::optics::Optics;
use crate::optics::colour::{Rgb, UNKNOWN, of_wavelength};
use kurbo::Point;
use std::fmt::Write;

/// Narrowest line, in pixels, on a small tile and on a large one: a thinner one would only be drawn fainter.
const NARROWEST: (f64, f64) = (1.15, 1.6);
/// Room between the farthest spot and the edge of a tile, as a share of half its side.
const MARGIN: f64 = 0.9;
/// Units of a path to a pixel: whole numbers are shorter, and a tenth of a pixel is less than any tolerance here.
const UNITS: f64 = 10.0;
/// How opaque each level of brightness is once all below it are drawn.
const OPACITY: [f64; LEVELS as usize] = [0.22, 0.36, 0.5, 0.66, 0.82, 1.0];

/// A trace of what would be lit.
const GHOST: Rgb = Rgb {
    r: 0x7d,
    g: 0x88,
    b: 0x9c,
};
/// A trace of what cannot be.
const SHADE: Rgb = Rgb {
    r: 0x6a,
    g: 0x6f,
    b: 0x78,
};

/// How light is drawn on tiles of one size.
#[derive(Clone, Copy, Debug)]
pub struct Style {
    /// Side of the tile in pixels.
    pub side: f64,
    /// Pixels to a unit of the optics.
    pub scale: f64,
    /// Width of the line in pixels.
    pub width: f64,
    colour: Rgb,
}

impl Style {
    /// The style of tiles with this side.
    #[must_use]
    pub fn new(optics: &Optics, side: f64) -> Self {
        let beam = optics.beam();
        let scale = side / 2.0 * MARGIN / optics.extent().max(f64::MIN_POSITIVE);
        let narrowest = if side < 150.0 {
            NARROWEST.0
        } else {
            NARROWEST.1
        };
        Self {
            side,
            scale,
            width: (beam.width * scale).clamp(narrowest, side / 8.0),
            colour: beam.wavelength.map_or(UNKNOWN, of_wavelength),
        }
    }
    /// How finely light must be cut for these tiles: an error below a quarter of the line as drawn.
    #[must_use]
    pub fn grain(&self) -> super::light::Grain {
        super::light::Grain {
            // Rounding to tenths of a pixel takes the rest, 0.07 of a pixel at most.
            tolerance: (0.25 * self.width - 0.08) / self.scale,
            width: self.width / self.scale,
        }
    }
}

/// How the light of a tile is to be understood.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Lit {
    /// The laser is on, at this share.
    On(f64),
    /// It is dark: what would be there is drawn as a grey trace.
    Dark,
    /// It cannot be: a grey trace on a light ground.
    Never,
}

/// Draws a tile with its light in a frame.
pub fn tile(svg: &mut Svg, frame: Frame, style: Style, pieces: &[Piece], lit: Lit) {
    svg.area(frame, frame.width * 0.03 + 1.0, WALL);
    light(svg, frame.centre(), style, pieces, lit);
}

/// Draws light around a middle.
pub fn light(svg: &mut Svg, centre: (f64, f64), style: Style, pieces: &[Piece], lit: Lit) {
    if pieces.is_empty() {
        return;
    }
    let (colour, opacity) = match lit {
        // Stevens' power law again: a dimmer beam looks less dim than it is.
        Lit::On(share) => (style.colour, libm::cbrt(share.clamp(0.0, 1.0))),
        Lit::Dark => (GHOST, 1.0),
        Lit::Never => (SHADE, 1.0),
    };
    svg.raw(format_args!(
        "<g class=\"lt\" transform=\"translate({} {}) scale({})\" stroke=\"{}\" opacity=\"{}\">",
        number(centre.0),
        number(centre.1),
        1.0 / UNITS,
        colour.hex(),
        number(opacity)
    ));
    let shining = matches!(lit, Lit::On(_));
    let width = style.width * UNITS;
    let base = svg.id();
    svg.raw(format_args!(
        "<path id=\"{base}\" d=\"{}\" stroke-width=\"{}\" stroke-opacity=\"{}\"/>",
        way(pieces, 1, style.scale),
        number(width),
        if shining { OPACITY[0] } else { 0.6 }
    ));
    if shining {
        svg.raw(format_args!(
            "<use href=\"#{base}\" stroke-width=\"{}\" stroke-opacity=\".1\"/>",
            number(width * 3.6)
        ));
        brighter(svg, style, pieces);
    }
    if let Some(at) = resting(pieces, width / (style.scale * UNITS)) {
        ring(svg, at, style, width);
    }
    svg.raw("</g>");
}

/// Where the light stands still: all of it within three widths of the line.
fn resting(pieces: &[Piece], width: f64) -> Option<Point> {
    let first = pieces.first()?.curve.p0;
    let near = |point: Point| (point - first).hypot() < 3.0 * width;
    pieces
        .iter()
        .all(|piece| near(piece.curve.p1) && near(piece.curve.p3))
        .then_some(first)
}

/// A ring around a spot at rest, which would be too small to be found.
fn ring(svg: &mut Svg, at: Point, style: Style, width: f64) {
    svg.raw(format_args!(
        "<circle cx=\"{}\" cy=\"{}\" r=\"{}\" fill=\"none\" stroke-width=\"{}\"/>",
        number(at.x * style.scale * UNITS),
        number(-at.y * style.scale * UNITS),
        number(4.0 * width),
        number(width)
    ));
}

fn brighter(svg: &mut Svg, style: Style, pieces: &[Piece]) {
    let width = style.width * UNITS;
    for (level, pair) in (2_u8..).zip(OPACITY.windows(2)) {
        let &[below, here] = pair else { continue };
        let d = way(pieces, level, style.scale);
        if !d.is_empty() {
            let step = (here - below) / (1.0 - below);
            svg.raw(format_args!(
                "<path d=\"{d}\" stroke-width=\"{}\" stroke-opacity=\"{}\"/>",
                number(width),
                number(step)
            ));
        }
    }
    let hot = way(pieces, HOT, style.scale);
    if !hot.is_empty() {
        svg.raw(format_args!(
            "<path d=\"{hot}\" stroke=\"{}\" stroke-width=\"{}\"/>",
            paler(style.colour).hex(),
            number(width * 1.25)
        ));
    }
}

/// Halfway to white.
fn paler(colour: Rgb) -> Rgb {
    let half = |channel: u8| 128 + channel / 2;
    Rgb {
        r: half(colour.r),
        g: half(colour.g),
        b: half(colour.b),
    }
}

/// The `d` of all pieces that are at least this bright, in tenths of pixels, relative, y down.
fn way(pieces: &[Piece], least: u8, scale: f64) -> String {
    let place = |point: Point| {
        #[expect(clippy::cast_possible_truncation, reason = "some thousand units")]
        let whole = |value: f64| libm::round(value * scale * UNITS) as i64;
        (whole(point.x), whole(-point.y))
    };
    let mut d = String::new();
    let mut pen = None;
    for piece in pieces {
        if piece.level < least {
            pen = None;
            continue;
        }
        let start = place(piece.curve.p0);
        let from = match pen {
            Some(from) => from,
            None => {
                let _ = write!(d, "M{} {}c", start.0, start.1);
                start
            }
        };
        let mut first = pen.is_none();
        for point in [piece.curve.p1, piece.curve.p2, piece.curve.p3] {
            let (x, y) = place(point);
            let (x, y) = (x - from.0, y - from.1);
            // A minus sign parts numbers as well as a blank does.
            if !first && x >= 0 {
                d.push(' ');
            }
            let gap = if y >= 0 { " " } else { "" };
            let _ = write!(d, "{x}{gap}{y}");
            first = false;
        }
        pen = Some(place(piece.curve.p3));
    }
    d
}
