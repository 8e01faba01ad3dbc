//! A free ion's shell in a field: its terms brought down to the group, and the terms of all ways to fill the split shell.
//!
//! The two lists, weak and strong field, must agree in every kind of term. Not here: energies.

use super::configuration::Configuration;
use super::error::StatesError;
use super::spin_orbit::level_in_field;
use super::terms::{Term, terms};
use crate::group::irrep_name::Parity;
use crate::group::products::Decomposition;
use crate::group::{DoubleGroup, IrrepName, PointGroup};

/// lⁿ in a group.
#[derive(Debug, Clone)]
pub struct Correlation {
    /// The free ion's configuration.
    pub free: Configuration,
    /// Terms of the free ion, in irreps of the atom's group, each with the irreps it becomes.
    pub weak_field: Vec<(Term, Decomposition)>,
    /// The orbitals of the shell in the group.
    pub orbitals: Decomposition,
    /// Each way to fill them, with its terms.
    pub strong_field: Vec<(Configuration, Vec<Term>)>,
}

/// n electrons of a shell of angular momentum l, from free ion to strong field; `atom` is the full rotation group.
///
/// # Errors
/// [`StatesError::Overfull`] for more than 2(2l + 1) electrons, [`StatesError::BeyondTable`] for shells beyond f.
pub fn correlation(
    atom: &PointGroup,
    group: &PointGroup,
    double: &DoubleGroup,
    l: u8,
    electrons: u32,
) -> Result<Correlation, StatesError> {
    let shell = atom.orbital_irrep(usize::from(l)).unwrap_or(atom.irreps().len() - 1);
    let free = Configuration::new(atom, &[(shell, None, electrons)])?;
    let mut weak_field = Vec::new();
    for term in terms(atom, &free)? {
        weak_field.push((term, term_in_field(atom, double, &term)?));
    }
    let orbitals = group.decompose(&group.shell_characters(usize::from(l)))?;
    let mut shells: Vec<(usize, Option<u32>)> = Vec::new();
    // Largest sets first: t2g before eg.
    let mut by_size = orbitals.clone();
    by_size.sort_by_key(|&(irrep, _)| std::cmp::Reverse(group.irreps()[irrep].dimension));
    for &(irrep, count) in &by_size {
        let count = u32::try_from(count).unwrap_or(1);
        shells.extend((1..=count).map(|number| (irrep, (count > 1).then_some(number))));
    }
    let places: Vec<u32> = shells
        .iter()
        .map(|&(irrep, _)| u32::try_from(2 * group.irreps()[irrep].dimension).unwrap_or(u32::MAX))
        .collect();
    let mut strong_field = Vec::new();
    for filling in fillings(&places, electrons) {
        let occupied: Vec<(usize, Option<u32>, u32)> = shells
            .iter()
            .zip(filling)
            .map(|(&(irrep, number), electrons)| (irrep, number, electrons))
            .filter(|(_, _, electrons)| *electrons > 0)
            .collect();
        let configuration = Configuration::new(group, &occupied)?;
        let list = terms(group, &configuration)?;
        strong_field.push((configuration, list));
    }
    Ok(Correlation { free, weak_field, orbitals, strong_field })
}

/// The irreps that the orbital part of a free ion's term becomes.
fn term_in_field(atom: &PointGroup, double: &DoubleGroup, term: &Term) -> Result<Decomposition, StatesError> {
    let (twice_l, parity) = match atom.irreps()[term.irrep].name {
        IrrepName::Atomic { l, parity } => (2 * u16::from(l), parity),
        _ => (0, Parity::Even),
    };
    level_in_field(double, twice_l, parity)
}

impl Correlation {
    /// All terms counted in the weak field: (multiplicity, irrep, count), highest spin first.
    #[must_use]
    pub fn weak_total(&self) -> Vec<Term> {
        let split = self.weak_field.iter().flat_map(|(term, irreps)| {
            irreps.iter().map(|&(irrep, count)| Term {
                multiplicity: term.multiplicity,
                irrep,
                count: count * term.count,
            })
        });
        collected(split)
    }

    /// All terms counted in the strong field.
    #[must_use]
    pub fn strong_total(&self) -> Vec<Term> {
        collected(self.strong_field.iter().flat_map(|(_, terms)| terms.iter().copied()))
    }
}

/// Terms of one kind added up: highest spin first, then in the order of the irreps.
fn collected(terms: impl Iterator<Item = Term>) -> Vec<Term> {
    let mut counts = std::collections::BTreeMap::new();
    for term in terms {
        *counts.entry((std::cmp::Reverse(term.multiplicity), term.irrep)).or_insert(0) += term.count;
    }
    counts
        .into_iter()
        .map(|((multiplicity, irrep), count)| Term { multiplicity: multiplicity.0, irrep, count })
        .collect()
}

/// Every way to put n electrons into shells with so many places, the first shells fullest first.
fn fillings(places: &[u32], n: u32) -> Vec<Vec<u32>> {
    let Some((&first, rest)) = places.split_first() else {
        return if n == 0 { vec![Vec::new()] } else { Vec::new() };
    };
    let here = |electrons: u32| {
        fillings(rest, n - electrons).into_iter().map(move |filling| [vec![electrons], filling].concat())
    };
    (0..=first.min(n)).rev().flat_map(here).collect()
}
