//! Colours of diagrams: our own, told apart in grey and with two kinds of cones.
//!
//! Every colour stands twice: as an attribute, which every program that draws SVG knows, and as a custom property of CSS of the same
//! name, with which a page turns them for a dark ground. Meaning never hangs on colour alone: lines differ in dashes too.

/// A colour with its name in CSS.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Colour {
    /// Class and custom property: `ink` → class `ink-…`, property `--orbsieve-ink`.
    pub name: &'static str,
    /// On white paper.
    pub light: &'static str,
}

/// Bars, arrows, text.
pub const INK: Colour = Colour { name: "ink", light: "#16181d" };
/// Axis, ticks, second lines.
pub const QUIET: Colour = Colour { name: "quiet", light: "#5c616b" };
/// Leader lines from bars to labels: no meaning of their own.
pub const FAINT: Colour = Colour { name: "faint", light: "#9aa0aa" };
/// The gap and transitions.
pub const ACCENT: Colour = Colour { name: "accent", light: "#9c2f63" };
/// Ground behind text.
pub const PAPER: Colour = Colour { name: "paper", light: "#ffffff" };

/// Lines between equal irreps, darkest first.
pub const LINES: [Colour; 4] = [
    Colour { name: "line-1", light: "#1d2f6f" },
    Colour { name: "line-2", light: "#8a3a12" },
    Colour { name: "line-3", light: "#0f7f86" },
    Colour { name: "line-4", light: "#b3871c" },
];

/// Dashes of lines in points; with [`LINES`] they make twelve kinds.
pub const DASHES: [&str; 3] = ["", "4 2", "1.2 1.8"];

/// All colours.
pub const ALL: [Colour; 9] = [INK, QUIET, FAINT, ACCENT, PAPER, LINES[0], LINES[1], LINES[2], LINES[3]];
