//! Which transitions symmetry allows.

pub mod rules;

pub use rules::{Allowed, Helper, Operators};
