//! Pictures of the window, as PNG.

use bubblepoint_ui::AppWindow;
use slint::{ComponentHandle, Rgba8Pixel, SharedPixelBuffer};
use std::fs::File;
use std::io::{self, BufWriter};
use std::path::Path;

pub type Picture = SharedPixelBuffer<Rgba8Pixel>;

/// The window's pixels as the software renderer draws them.
pub fn draw(window: &AppWindow) -> Picture {
    window.window().take_snapshot().expect("the software renderer draws")
}

/// Writes a picture as PNG.
///
/// # Errors
/// What the file system says.
pub fn save(picture: &Picture, path: &Path) -> io::Result<()> {
    let mut encoder = png::Encoder::new(BufWriter::new(File::create(path)?), picture.width(), picture.height());
    encoder.set_color(png::ColorType::Rgba);
    encoder.set_depth(png::BitDepth::Eight);
    let mut writer = encoder.write_header().map_err(io::Error::other)?;
    writer.write_image_data(picture.as_bytes()).map_err(io::Error::other)
}
