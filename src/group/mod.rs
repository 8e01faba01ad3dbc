//! Point groups: operations, characters, irreps, their names, and finding them in a set of sites.
//!
//! Knows no molecule, basis or file.

pub mod operation;
pub mod harmonics;
pub mod symmetry;

pub use operation::Operation;
