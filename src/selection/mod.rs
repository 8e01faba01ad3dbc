//! Which transitions symmetry allows, and how strong one-electron moments make them.
//!
//! Reading order: `rules` (between two irreps), `states` (of configurations), `pairs` (which sets), `moments` (numbers),
//! `agreement` (of rule and number).

pub mod agreement;
pub mod moments;
pub mod pairs;
pub mod rules;
pub mod set_name;

pub use moments::{Strengths, strengths};
pub use pairs::{Choice, Pair, SelectError, Selector, choose};
pub use rules::{Allowed, Helper, Operators};
pub use set_name::{FoundSet, SetName};
