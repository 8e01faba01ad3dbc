//! From orbitals to states: terms of open shells, their spin–orbit components, and what symmetry allows between them.
//!
//! Reading order: `configuration`, `terms`, `ground`, `spin_orbit`, `transitions`, `jahn_teller`, `correlation`. Everything is worked
//! out from characters of a single or double group; no term list is typed in. Not here: orbitals of a molecule, energies.
//!
//! ```
//! use orbsieve::group::PointGroup;
//! use orbsieve::states::{Configuration, ground, terms};
//!
//! # fn main() -> Result<(), orbsieve::states::StatesError> {
//! let group = PointGroup::standard("Oh".parse()?)?;
//! let configuration = Configuration::parse(&group, "t2g^2")?;
//! let list = terms(&group, &configuration)?;
//! let symbols: Vec<String> = list.iter().map(|term| term.symbol(&group)).collect();
//! assert_eq!(symbols, ["3T1g", "1A1g", "1Eg", "1T2g"]);
//! assert_eq!(ground(&group, &configuration, &list).terms, [0]);
//! # Ok(())
//! # }
//! ```

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
