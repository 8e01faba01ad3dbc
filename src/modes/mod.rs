//! Vibrations: what the nuclei alone say of them, and the irreps of the modes of a file.
//!
//! Reading order: `motion` (translations, rotations and vibrations by irrep), `assignment` (modes of a file).

pub mod assignment;
pub mod motion;

pub use assignment::{Assignment, Kind, ModeThresholds, assign};
pub use motion::{Motion, motion};
