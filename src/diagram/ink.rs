//! Marks of SVG: lines, arrows, text made of runs; numbers rounded, names escaped.
//!
//! Here: how a mark is written. Not here: where it stands (`diagram::column`, `diagram::figure`).

use super::palette::Colour;
use super::symbol::{Run, SMALL, Style};
use std::fmt::Write as _;
use svg::node::Blob;
use svg::node::element::{Group, Path};

/// Size of the common text, points.
pub const TEXT: f64 = 7.5;
/// Size of notes and spins, points.
pub const NOTE: f64 = 6.0;

/// A length with two decimals at most.
#[must_use]
pub fn n(value: f64) -> String {
    // Adding zero turns −0 into 0.
    let text = format!("{:.2}", (value * 100.0).round() / 100.0 + 0.0);
    text.trim_end_matches('0').trim_end_matches('.').to_owned()
}

/// Text safe inside XML: marks of markup as entities, what XML 1.0 cannot hold replaced.
#[must_use]
pub fn escape(text: &str) -> String {
    let mut safe = String::with_capacity(text.len());
    for c in text.chars() {
        match c {
            '&' => safe.push_str("&amp;"),
            '<' => safe.push_str("&lt;"),
            '>' => safe.push_str("&gt;"),
            '"' => safe.push_str("&quot;"),
            '\'' => safe.push_str("&#39;"),
            c if c.is_control() || matches!(c, '\u{fffe}' | '\u{ffff}') => safe.push('\u{fffd}'),
            c => safe.push(c),
        }
    }
    safe
}

/// What XML 1.0 cannot hold replaced; for values that the `svg` crate escapes.
#[must_use]
pub fn printable(text: &str) -> String {
    text.chars().map(|c| if c.is_control() || matches!(c, '\u{fffe}' | '\u{ffff}') { '\u{fffd}' } else { c }).collect()
}

/// Where text hangs on its place.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Anchor {
    /// Begins there.
    Start,
    /// Is centred there.
    Middle,
    /// Ends there.
    End,
}

/// One line of text.
#[derive(Debug, Clone)]
pub struct Line<'a> {
    /// What it says.
    pub runs: &'a [Run],
    /// Place of the anchor.
    pub x: f64,
    /// Base line.
    pub y: f64,
    /// Font size.
    pub size: f64,
    /// Anchor.
    pub anchor: Anchor,
    /// Colour.
    pub colour: Colour,
    /// Turned so that it reads upwards.
    pub upwards: bool,
}

impl<'a> Line<'a> {
    /// Text of the common size in ink, beginning at a place.
    #[must_use]
    pub fn at(x: f64, y: f64, runs: &'a [Run]) -> Self {
        let colour = super::palette::INK;
        Self { runs, x, y, size: TEXT, anchor: Anchor::Start, colour, upwards: false }
    }
}

/// Text as text; runs without blanks between them, which a pretty-printed element would put there.
#[must_use]
pub fn text(line: &Line<'_>) -> Blob {
    // Writing into a String cannot fail.
    let mut spans = String::new();
    // Shifts of the base line add up, so each run says how far it is from the one before.
    let mut shifted = 0.0;
    for run in line.runs {
        let (shift, small, slanted) = match run.style {
            Style::Upright => (0.0, false, false),
            Style::Italic => (0.0, false, true),
            Style::Sub => (0.24 * line.size, true, false),
            Style::Super => (-0.36 * line.size, true, false),
        };
        let mut attributes = String::new();
        if f64::abs(shift - shifted) > 1e-9 {
            let _ = write!(attributes, " dy=\"{}\"", n(shift - shifted));
        }
        if small {
            let _ = write!(attributes, " font-size=\"{}\"", n(line.size * SMALL));
        }
        if slanted {
            attributes.push_str(" font-style=\"italic\"");
        }
        shifted = shift;
        let words = escape(&run.text);
        let _ = if attributes.is_empty() {
            write!(spans, "{words}")
        } else {
            write!(spans, "<tspan{attributes}>{words}</tspan>")
        };
    }
    let anchor = match line.anchor {
        Anchor::Start => "",
        Anchor::Middle => " text-anchor=\"middle\"",
        Anchor::End => " text-anchor=\"end\"",
    };
    let turn =
        if line.upwards { format!(" transform=\"rotate(-90 {} {})\"", n(line.x), n(line.y)) } else { String::new() };
    Blob::new(format!(
        "<text class=\"{} fill\" x=\"{}\" y=\"{}\" font-size=\"{}\" fill=\"{}\"{anchor}{turn}>{spans}</text>",
        line.colour.name,
        n(line.x),
        n(line.y),
        n(line.size),
        line.colour.light,
    ))
}

/// A drawn line: `path` is the data of an SVG path.
#[must_use]
pub fn stroke(path: String, colour: Colour, width: f64) -> Path {
    Path::new()
        .set("d", path)
        .set("class", format!("{} stroke", colour.name))
        .set("stroke", colour.light)
        .set("stroke-width", n(width))
        .set("fill", "none")
}

/// From one point to another.
#[must_use]
pub fn segment((x1, y1): (f64, f64), (x2, y2): (f64, f64)) -> String {
    format!("M{} {}L{} {}", n(x1), n(y1), n(x2), n(y2))
}

/// An upright arrow from `from` to `to` at `x`, with a head of two barbs.
#[must_use]
pub fn arrow(x: f64, from: f64, to: f64, head: f64) -> String {
    let shaft = segment((x, from), (x, to));
    format!("{shaft}{}", barbs(x, to, if to < from { head } else { -head }))
}

/// The head alone, its barbs `back` below the tip; above it where that is negative.
#[must_use]
pub fn barbs(x: f64, to: f64, back: f64) -> String {
    let barb = 0.62 * back.abs();
    format!("M{} {}L{x} {}L{} {}", n(x - barb), n(to + back), n(to), n(x + barb), n(to + back), x = n(x))
}

/// A group that says what it is.
#[must_use]
pub fn group(class: &str) -> Group {
    Group::new().set("class", class)
}
