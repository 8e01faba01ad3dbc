//! Basis functions, their overlap, the conventions of files, and operations on orbitals.
//!
//! Reading order: `cartesian` (functions of one shell), `basis`, `overlap`, `moments`, `convention`, `turn`, `turned`,
//! `operations`, `population`, `values`.

pub mod basis;
pub mod cartesian;
pub mod convention;
pub mod moments;
pub mod operations;
pub mod overlap;
pub mod population;
mod product;
pub mod turn;
pub mod turned;
pub mod values;

pub use basis::Basis;
pub use cartesian::angular_projector;
pub use convention::{ConventionError, Settled, settle};
pub use moments::{Moments, moments};
pub use operations::{Operations, Pair, Rows};
pub use overlap::{overlap, overlap_between};
pub use population::lowdin;
pub use product::product;
pub use turn::{Turning, TurningError, overlap_with_turned};
pub use turned::{PartialPermutation, Turned};
pub use values::values;
