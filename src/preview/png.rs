//! A drawing as pixels.

use resvg::tiny_skia::{Pixmap, Transform};
use resvg::usvg::{Options, Tree, fontdb};
use std::sync::{Arc, OnceLock};

/// Most pixels of a picture: a longer sheet is drawn smaller.
const MOST_PIXELS: f64 = 48_000_000.0;

/// What a PNG says of who made it, by which own files are told from foreign ones.
pub const MADE_BY: &str = "phasewright preview";

const REGULAR: &[u8] = include_bytes!("font/NotoSans-Regular.ttf");
const BOLD: &[u8] = include_bytes!("font/NotoSans-Bold.ttf");

/// The fonts that come with the program, and no other: a picture is the same on every machine.
fn fonts() -> Arc<fontdb::Database> {
    static FONTS: OnceLock<Arc<fontdb::Database>> = OnceLock::new();
    let make = || {
        let mut fonts = fontdb::Database::new();
        fonts.load_font_data(REGULAR.to_vec());
        fonts.load_font_data(BOLD.to_vec());
        fonts.set_sans_serif_family("Noto Sans");
        Arc::new(fonts)
    };
    Arc::clone(FONTS.get_or_init(make))
}

/// An SVG file as a PNG file of the size that it shows itself at, or smaller where that would be too many pixels.
///
/// # Errors
///
/// In one sentence, where the drawing cannot be read or there is no memory for its pixels.
pub fn png(svg: &str) -> Result<Vec<u8>, String> {
    let options = Options {
        fontdb: fonts(),
        font_family: "Noto Sans".to_owned(),
        ..Options::default()
    };
    let tree = Tree::from_str(svg, &options).map_err(|error| error.to_string())?;
    let size = tree.size();
    let (width, height) = (f64::from(size.width()), f64::from(size.height()));
    let scale = libm::sqrt(MOST_PIXELS / (width * height)).min(1.0);
    #[expect(
        clippy::cast_possible_truncation,
        clippy::cast_sign_loss,
        reason = "at most the number of pixels"
    )]
    let pixels = |length: f64| libm::ceil(length * scale).max(1.0) as u32;
    let mut pixmap = Pixmap::new(pixels(width), pixels(height))
        .ok_or_else(|| "there is no memory for the picture".to_owned())?;
    #[expect(clippy::cast_possible_truncation, reason = "a scale of at most 1")]
    let transform = Transform::from_scale(scale as f32, scale as f32);
    resvg::render(&tree, transform, &mut pixmap.as_mut());
    encoded(&pixmap).map_err(|error| error.to_string())
}

/// The paper behind every picture is opaque, so colours are what they are and the fourth channel says nothing.
fn encoded(pixmap: &Pixmap) -> Result<Vec<u8>, ::png::EncodingError> {
    let mut out = Vec::new();
    let mut encoder = ::png::Encoder::new(&mut out, pixmap.width(), pixmap.height());
    encoder.set_color(::png::ColorType::Rgb);
    encoder.set_depth(::png::BitDepth::Eight);
    encoder.add_text_chunk("Software".to_owned(), MADE_BY.to_owned())?;
    let colours: Vec<u8> = pixmap
        .pixels()
        .iter()
        .flat_map(|pixel| [pixel.red(), pixel.green(), pixel.blue()])
        .collect();
    let mut writer = encoder.write_header()?;
    writer.write_image_data(&colours)?;
    writer.finish()?;
    Ok(out)
}
