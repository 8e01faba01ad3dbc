//! Group theory for computed orbitals.
//!
//! From a Molden-format file to the point group, the irrep and partner of every orbital, allowed
//! transitions and a verdict on symmetry breaking, with the numbers behind each.
//!
//! Modules stand in reading order; each uses only those above it (`tests/layers.rs` holds that).

pub mod diagnostic;
pub mod grammar;
pub mod model;
pub mod group;
pub mod states;
pub mod wavefunction;
pub mod labelling;
pub mod audit;
pub mod purify;
pub mod selection;
pub mod modes;
pub mod report;
pub mod diagram;
pub mod picture;
pub mod page;
pub mod cli;
