//! Which transitions symmetry allows.
//!
//! Reading order: `rules` (between two irreps), `states` (of configurations), `pairs` (which sets).

pub mod pairs;
pub mod rules;
pub mod states;

pub use pairs::{Choice, Pair, SelectError, Selector, choose};
pub use rules::{Allowed, Helper, Operators};
