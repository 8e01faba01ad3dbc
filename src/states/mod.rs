//! From orbitals to states: terms of open shells, their spin–orbit components, and what symmetry allows between them.
//!
//! Reading order: `configuration`, `terms`, `ground`, `spin_orbit`, `transitions`, `jahn_teller`, `correlation`. Everything is worked
//! out from characters of a single or double group; no term list is typed in. Not here: orbitals of a molecule, energies.

pub mod configuration;
pub mod correlation;
pub mod error;
pub mod ground;
pub mod jahn_teller;
pub mod spin_orbit;
pub mod terms;
pub mod transitions;

pub use configuration::{Configuration, Shell};
pub use correlation::{Correlation, correlation};
pub use error::StatesError;
pub use ground::{Certainty, Ground, ground};
pub use jahn_teller::JahnTeller;
pub use terms::{Term, terms};
pub use transitions::{Transition, transitions};
