//! The electron configuration that a file's occupations say, as far as they say one.
//!
//! Here: which complete sets are part-filled, or why the open shell is no configuration of whole sets.
//! Not here: what terms a configuration has (`states`).

use super::{SetLabel, SpinLabels};
use crate::group::PointGroup;
use crate::model::Spin;
use std::collections::BTreeMap;

/// Electrons of an open set may miss a whole number by this much.
const WHOLE_ELECTRONS: f64 = 0.02;
/// Fraction of the capacity that still counts as empty, or as missing from a full set.
const FILLED: f64 = 0.01;

/// A part-filled set: electrons of both spins in the orbitals of one irrep.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct OpenShell {
    /// Index of the irrep.
    pub irrep: usize,
    /// Running number of the set.
    pub number: u32,
    /// Electrons in it.
    pub electrons: u32,
}

/// Why the occupations are no configuration.
#[derive(Debug, Clone, PartialEq)]
pub enum Obstacle {
    /// The file gives no occupations.
    NoOccupations,
    /// Orbitals with electrons that belong to no irrep: symmetry is broken.
    Unlabelled {
        /// Spin.
        spin: Spin,
        /// Orbital indices from 0.
        orbitals: Vec<usize>,
    },
    /// A set whose partners are missing or lie at another energy.
    Incomplete {
        /// Spin.
        spin: Spin,
        /// Index of the irrep.
        irrep: usize,
        /// Running number.
        number: usize,
        /// Orbital indices from 0.
        orbitals: Vec<usize>,
        /// Partners that a complete set has.
        wanted: usize,
        /// Largest difference of their energies, hartree.
        spread_hartree: f64,
    },
    /// Electrons that make no whole number.
    Fractional {
        /// Index of the irrep.
        irrep: usize,
        /// Running number.
        number: usize,
        /// Electrons in the set.
        electrons: f64,
        /// The limit on the distance from a whole number.
        limit: f64,
    },
}

/// The open shells in order of energy, or everything that stands against a configuration.
///
/// With one set of orbitals each holds two electrons. With two sets the k-th set of an irrep of alpha spin and the k-th of beta
/// spin are one shell.
///
/// # Errors
/// All [`Obstacle`]s found.
pub fn open_shells(group: &PointGroup, spins: &[SpinLabels]) -> Result<Vec<OpenShell>, Vec<Obstacle>> {
    let capacity = if spins.len() == 1 { 2.0 } else { 1.0 };
    let mut obstacles = Vec::new();
    // (irrep, running number) → electrons; in order of first appearance in energy.
    let mut shells: BTreeMap<(usize, usize), f64> = BTreeMap::new();
    let mut order: Vec<(usize, usize)> = Vec::new();
    for labels in spins {
        for set in &labels.sets {
            let Some(electrons) = set.electrons else { return Err(vec![Obstacle::NoOccupations]) };
            let places = capacity * set.orbitals.len() as f64;
            let full = electrons >= (1.0 - FILLED) * places;
            let empty = electrons <= FILLED * places;
            if empty || (full && spins.len() == 1) {
                continue;
            }
            match set.irrep {
                None => obstacles.push(Obstacle::Unlabelled { spin: labels.spin, orbitals: set.orbitals.clone() }),
                Some(irrep) if set.complete => {
                    let key = (irrep, set.number);
                    if !shells.contains_key(&key) {
                        order.push(key);
                    }
                    *shells.entry(key).or_insert(0.0) += electrons;
                }
                Some(irrep) => obstacles.push(incomplete(labels.spin, irrep, set)),
            }
        }
    }
    let mut open = Vec::new();
    for key in order {
        let (irrep, number) = key;
        let electrons = shells[&key];
        let places = 2.0 * group.irreps()[irrep].dimension as f64;
        if electrons >= (1.0 - FILLED) * places {
            continue;
        }
        let whole = electrons.round();
        if (electrons - whole).abs() > WHOLE_ELECTRONS {
            obstacles.push(Obstacle::Fractional { irrep, number, electrons, limit: WHOLE_ELECTRONS });
            continue;
        }
        #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "between 0 and 10")]
        let electrons = whole as u32;
        open.push(OpenShell { irrep, number: u32::try_from(number).unwrap_or(u32::MAX), electrons });
    }
    if obstacles.is_empty() { Ok(open) } else { Err(obstacles) }
}

fn incomplete(spin: Spin, irrep: usize, set: &SetLabel) -> Obstacle {
    Obstacle::Incomplete {
        spin,
        irrep,
        number: set.number,
        orbitals: set.orbitals.clone(),
        wanted: set.degeneracy,
        spread_hartree: set.spread,
    }
}
