//! Vibrations: what the nuclei alone say of them, and the irreps of the modes of a file.
//!
//! Reading order: `motion` (translations, rotations and vibrations by irrep).

pub mod motion;

pub use motion::{Motion, motion};
