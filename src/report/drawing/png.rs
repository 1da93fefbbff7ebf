//! SVG to PNG, with the font carried along: nothing of the machine shows in a picture.

use std::sync::Arc;

use resvg::{tiny_skia, usvg};

/// Largest picture, in pixels either way.
const LARGEST_PX: f32 = 16_000.0;

/// Why a picture could not be made.
#[derive(Debug, thiserror::Error)]
pub enum PngError {
    /// The drawing is not a picture.
    #[error("the drawing cannot be read back: {0}")]
    Unreadable(#[from] usvg::Error),
    /// Larger than allowed.
    #[error(
        "a picture of {width} × {height} pixels is larger than 16000 either way; draw fewer panels"
    )]
    TooLarge {
        /// Pixels across.
        width: f32,
        /// Pixels up.
        height: f32,
    },
    /// The encoder refused.
    #[error("the picture cannot be encoded: {0}")]
    NotEncoded(String),
}

/// Renders an SVG at `zoom` pixels a unit.
///
/// # Errors
/// When the drawing cannot be read back, is too large, or cannot be encoded.
pub fn png(svg: &str, zoom: f32) -> Result<Vec<u8>, PngError> {
    let mut fonts = usvg::fontdb::Database::new();
    fonts.load_font_data(dejavu::sans::regular().to_vec());
    fonts.set_sans_serif_family("DejaVu Sans");
    let options = usvg::Options {
        font_family: "DejaVu Sans".to_owned(),
        fontdb: Arc::new(fonts),
        ..usvg::Options::default()
    };
    let tree = usvg::Tree::from_str(svg, &options)?;
    let size = tree.size();
    let (width, height) = ((size.width() * zoom).ceil(), (size.height() * zoom).ceil());
    let mut pixels = (width <= LARGEST_PX && height <= LARGEST_PX)
        .then(|| tiny_skia::Pixmap::new(width as u32, height as u32))
        .flatten()
        .ok_or(PngError::TooLarge { width, height })?;
    let zoom = tiny_skia::Transform::from_scale(zoom, zoom);
    resvg::render(&tree, zoom, &mut pixels.as_mut());
    pixels.encode_png().map_err(|error| PngError::NotEncoded(error.to_string()))
}
