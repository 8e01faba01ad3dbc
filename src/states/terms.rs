//! The terms of a configuration, from true antisymmetrised powers.
//!
//! n electrons in the orbitals V of one irrep with a of spin up and b of spin down span Λᵃ(V) ⊗ Λᵇ(V). Products over shells give for
//! every M_S = (a − b)/2 a representation of the group; a term of spin S shows in those with |M_S| ≤ S, so the terms of spin S are
//! the difference between M_S = S and S + 1. This is exact for every group, linear molecules and atoms included.
//! Not here: which term is lowest (`states::ground`).

use super::configuration::Configuration;
use super::error::StatesError;
use crate::group::irrep_name::{IrrepName, Parity};
use crate::group::{GroupName, PointGroup};

/// Terms of one spin and irrep.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Term {
    /// 2S + 1.
    pub multiplicity: u16,
    /// Index of the irrep in the point group.
    pub irrep: usize,
    /// How many there are.
    pub count: usize,
}

impl Term {
    /// 2S.
    #[must_use]
    pub fn twice_spin(&self) -> u16 {
        self.multiplicity - 1
    }

    /// `3T1g`, without how many.
    #[must_use]
    pub fn symbol(&self, group: &PointGroup) -> String {
        format!("{}{}", self.multiplicity, group.irreps()[self.irrep].name)
    }

    /// States in all terms of the kind: count × (2S + 1) × dimension.
    #[must_use]
    pub fn states(&self, group: &PointGroup) -> usize {
        self.count * usize::from(self.multiplicity) * group.irreps()[self.irrep].dimension
    }
}

/// All terms of a configuration: highest spin first, then in the order of the irreps.
///
/// # Holds
/// The states of all terms together are the microstates of the configuration; n electrons and n holes give the same terms.
/// # Errors
/// [`StatesError::BeyondTable`] where a linear molecule or an atom reaches irreps that are not kept.
/// # Source
/// Antisymmetrised powers by elementary symmetric functions: common practice; checked against published lists in
/// `tests/states_published.rs`.
pub fn terms(group: &PointGroup, configuration: &Configuration) -> Result<Vec<Term>, StatesError> {
    check_reach(group, configuration)?;
    let n_classes = group.classes().len();
    // Entry [a − b + spread] holds the characters of that excess of up spins.
    let mut by_excess: Vec<Vec<f64>> = vec![vec![1.0; n_classes]];
    for shell in configuration.shells() {
        let powers = group.exterior_powers(shell.irrep);
        let of_shell = excess_characters(&powers, shell.electrons as usize);
        let mut next = vec![vec![0.0; n_classes]; by_excess.len() + of_shell.len() - 1];
        for (i, before) in by_excess.iter().enumerate() {
            for (j, added) in of_shell.iter().enumerate() {
                for ((sum, x), y) in next[i + j].iter_mut().zip(before).zip(added) {
                    *sum += x * y;
                }
            }
        }
        by_excess = next;
    }
    let spread = by_excess.len() / 2;
    let mut terms = Vec::new();
    for excess in (0..=spread).rev() {
        let here = &by_excess[spread + excess];
        let above = by_excess.get(spread + excess + 2);
        let difference: Vec<f64> = match above {
            Some(above) => here.iter().zip(above).map(|(x, y)| x - y).collect(),
            None => here.clone(),
        };
        let multiplicity = u16::try_from(excess + 1).unwrap_or(u16::MAX);
        for (irrep, count) in group.decompose(&difference)? {
            terms.push(Term { multiplicity, irrep, count });
        }
    }
    Ok(terms)
}

/// For each excess a − b of up spins, from −s to s, the characters of Λᵃ ⊗ Λᵇ with a + b = n; zero where n and the excess do not fit.
fn excess_characters(powers: &[Vec<f64>], n: usize) -> Vec<Vec<f64>> {
    let most = n.min(2 * (powers.len() - 1) - n.min(2 * (powers.len() - 1)));
    let n_classes = powers[0].len();
    let mut characters = vec![vec![0.0; n_classes]; 2 * most + 1];
    for (up, of_up) in powers.iter().enumerate().take(n + 1) {
        let Some(of_down) = powers.get(n - up) else { continue };
        let at = most + 2 * up - n;
        characters[at] = of_up.iter().zip(of_down).map(|(x, y)| x * y).collect();
    }
    characters
}

/// Highest M_L or M_Λ that a configuration reaches, against what the group keeps.
fn check_reach(group: &PointGroup, configuration: &Configuration) -> Result<(), StatesError> {
    let reach: u32 = configuration
        .shells()
        .iter()
        .map(|shell| {
            // Projections from the highest down, each with two electrons.
            let projections: Vec<u32> = match shell.name {
                IrrepName::Atomic { l, .. } => (0..=u32::from(l)).rev().collect(),
                IrrepName::Linear { m, .. } => vec![u32::from(m)],
                IrrepName::Mulliken { .. } => Vec::new(),
            };
            // Holes reach as high as electrons.
            let n = shell.electrons.min(shell.places - shell.electrons);
            let places = projections.iter().flat_map(|m| [*m, *m]);
            places.take(n as usize).sum::<u32>()
        })
        .sum();
    let highest = |irrep: &crate::group::Irrep| match irrep.name {
        IrrepName::Atomic { l, .. } => u32::from(l),
        IrrepName::Linear { m, .. } => u32::from(m),
        IrrepName::Mulliken { .. } => u32::MAX,
    };
    let limit = group.irreps().iter().map(highest).max().unwrap_or(0);
    if reach <= limit {
        return Ok(());
    }
    Err(StatesError::BeyondTable {
        configuration: configuration.to_string(),
        quantity: if group.name() == GroupName::K { "L" } else { "Λ" },
        reach: reach.to_string(),
        limit: limit.to_string(),
    })
}

/// For an atom: L and parity of a term.
#[must_use]
pub fn angular_momentum(group: &PointGroup, term: &Term) -> Option<(u8, Parity)> {
    match group.irreps()[term.irrep].name {
        IrrepName::Atomic { l, parity } => Some((l, parity)),
        _ => None,
    }
}
