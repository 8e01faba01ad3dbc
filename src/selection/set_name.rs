//! One set as a person names it: a selector, of an unrestricted file with its spin in front (`beta:7`).
//!
//! Not here: pairs of sets (`selection::pairs`).

use super::pairs::{SelectError, Selector, known, named};
use crate::group::PointGroup;
use crate::labelling::SpinLabels;
use crate::model::Spin;
use std::fmt;
use std::str::FromStr;

/// A set of orbitals by name.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct SetName {
    /// The spin; without one the first that the file has.
    pub spin: Option<Spin>,
    /// Which of its sets.
    pub selector: Selector,
}

impl FromStr for SetName {
    type Err = SelectError;

    fn from_str(text: &str) -> Result<Self, SelectError> {
        let (spin, rest) = match text.split_once(':') {
            None => (None, text),
            Some((spin, rest)) => match spin.trim().to_lowercase().as_str() {
                "alpha" | "a" | "α" => (Some(Spin::Alpha), rest),
                "beta" | "b" | "β" => (Some(Spin::Beta), rest),
                _ => return Err(SelectError::NotASelector(text.chars().take(40).collect())),
            },
        };
        Ok(Self { spin, selector: rest.parse()? })
    }
}

impl fmt::Display for SetName {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self.spin {
            None => write!(f, "{}", self.selector),
            Some(Spin::Alpha) => write!(f, "alpha {}", self.selector),
            Some(Spin::Beta) => write!(f, "beta {}", self.selector),
        }
    }
}

/// A set among those of a molecule.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct FoundSet {
    /// Index of the spin.
    pub spin_idx: usize,
    /// Index of the set.
    pub set: usize,
    /// The orbital, where one was named.
    pub orbital: Option<usize>,
}

/// Finds the set that a name means.
///
/// # Errors
/// [`SelectError::NoSuchSet`] with what there is.
pub fn find(spins: &[SpinLabels], group: &PointGroup, name: &SetName) -> Result<FoundSet, SelectError> {
    let capacity = if spins.len() > 1 { 1.0 } else { 2.0 };
    let spin_idx = spins.iter().position(|spin| name.spin.is_none_or(|wanted| wanted == spin.spin));
    let missing = |known: String| SelectError::NoSuchSet { selector: name.to_string(), known };
    let spin_idx = spin_idx.ok_or_else(|| missing("the file has one set of orbitals for both spins".to_owned()))?;
    let set = named(&spins[spin_idx], group, capacity, &name.selector).first().copied();
    let set = set.ok_or_else(|| missing(known(&spins[spin_idx..=spin_idx], group, &name.selector)))?;
    let orbital = if let Selector::Orbital(number) = name.selector { Some(number - 1) } else { None };
    Ok(FoundSet { spin_idx, set, orbital })
}
