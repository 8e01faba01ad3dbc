//! Colours of the pictures, and pixels as a PNG.
//!
//! Lobes differ in lightness and one of them is hatched, so that they can be told apart in grey and by any eye.

use std::io;

/// Red, green, blue, 0 to 1.
pub type Colour = [f64; 3];

/// Lobes where ψ is above zero: light straw.
pub const POSITIVE: Colour = [0.93, 0.80, 0.50];
/// Lobes where ψ is below zero: deep plum, hatched.
pub const NEGATIVE: Colour = [0.42, 0.22, 0.44];
/// The hatch on it.
pub const HATCH: Colour = [0.80, 0.66, 0.80];
/// Axes and their letters: told from light and from dark paper.
pub const AXES: Colour = [0.48, 0.48, 0.50];

/// Grey of an element, from light hydrogen to dark heavy atoms.
#[must_use]
pub fn grey(element: u8) -> Colour {
    let lightness = match element {
        0 => 0.95,
        _ => 0.86 - 0.52 * (f64::from(element) / 86.0).sqrt().min(1.0),
    };
    [lightness, lightness, lightness + 0.015]
}

/// A square of pixels: red, green, blue and opacity, 0 to 1, row by row from the top.
#[derive(Debug, Clone, PartialEq)]
pub struct Pixels {
    /// Pixels a side.
    pub side: usize,
    /// side² of them.
    pub rgba: Vec<[f64; 4]>,
}

/// Shades of a channel: nearer ones the eye can hardly tell, and repeated ones pack well, better without a filter.
const COARSE: f64 = 47.0;

impl Pixels {
    /// As a PNG with opacity.
    ///
    /// # Errors
    /// What the writer says; memory does not fail by itself.
    pub fn to_png(&self) -> io::Result<Vec<u8>> {
        let side = u32::try_from(self.side).map_err(io::Error::other)?;
        let mut bytes = Vec::new();
        let mut encoder = png::Encoder::new(&mut bytes, side, side);
        encoder.set_color(png::ColorType::Rgba);
        encoder.set_depth(png::BitDepth::Eight);
        encoder.set_compression(png::Compression::High);
        encoder.set_filter(png::Filter::NoFilter);
        let mut writer = encoder.write_header().map_err(io::Error::other)?;
        let data: Vec<u8> = self.rgba.iter().flat_map(|pixel| pixel.map(byte)).collect();
        writer.write_image_data(&data).map_err(io::Error::other)?;
        writer.finish().map_err(io::Error::other)?;
        Ok(bytes)
    }
}

#[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "clamped to 0..=255")]
fn byte(value: f64) -> u8 {
    ((value.clamp(0.0, 1.0) * COARSE).round() / COARSE * 255.0).round() as u8
}
