//! Pictures: shaded surfaces of orbitals as PNG, the molecule with its symmetry elements as SVG.
//!
//! Reading order: `grid` (where values are taken), `surface` (triangles), `view` (which way we look), `raster` (pixels with depth),
//! `skeleton` (atoms and bonds), `ink` (colours and the PNG), `orbital`, `elements`. Everything is in the standard frame of
//! the group, bohr. Not here: pages and captions (`page`), values of functions (`wavefunction::values`).

pub mod elements;
pub mod grid;
pub mod ink;
pub mod orbital;
mod raster;
pub mod skeleton;
pub mod surface;
pub mod view;

pub use elements::symmetry_elements;
pub use orbital::{OrbitalPicture, orbital_pictures};
pub use skeleton::Skeleton;
pub use view::View;
