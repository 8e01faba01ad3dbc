//! Orbitals that belong to several irreps, and degenerate partners turned among themselves.
//!
//! Not here: weights (`labelling`), densities.

use super::Limits;
use crate::group::GroupName;
use crate::labelling::Labelled;
use crate::model::Molecule;
use crate::wavefunction::Rows;

/// An orbital of several irreps.
#[derive(Debug, Clone, PartialEq)]
pub struct Mixed {
    /// Index into the spins.
    pub spin_idx: usize,
    /// Orbital, from 0.
    pub orbital: usize,
    /// Weight outside its largest irrep.
    pub impurity: f64,
    /// The operations keep it among orbitals of its own energy: nothing is lost.
    pub at_one_energy: bool,
    /// It holds electrons.
    pub occupied: bool,
}

/// All orbitals with more than `limits.pure` allows outside one irrep, worst first.
#[must_use]
pub fn mixed(molecule: &Molecule, labelled: &Labelled, limits: &Limits) -> Vec<Mixed> {
    let mut found = Vec::new();
    for (spin_idx, spin) in labelled.spins.iter().enumerate() {
        let set = &molecule.orbital_sets[spin_idx];
        let rows = Rows { coefficients: set.coefficients.view(), products: labelled.settled.products[spin_idx].view() };
        let impure: Vec<usize> = (0..spin.orbitals.len()).filter(|&i| spin.orbitals[i].purity < limits.pure).collect();
        let beside = |i: usize| {
            let energy = |j: usize| set.orbitals[j].energy;
            (0..spin.orbitals.len())
                .filter(|&j| {
                    matches!((energy(i), energy(j)), (Some(a), Some(b)) if (a - b).abs() <= limits.degeneracy_hartree)
                })
                .collect::<Vec<usize>>()
        };
        let candidates: Vec<(usize, Vec<usize>)> = impure.iter().map(|&i| (i, beside(i))).collect();
        let inside = labelled.operations.connections(rows, &candidates);
        found.extend(impure.iter().zip(inside).map(|(&orbital, inside)| Mixed {
            spin_idx,
            orbital,
            impurity: 1.0 - spin.orbitals[orbital].purity,
            at_one_energy: inside.iter().sum::<f64>() >= limits.pure,
            occupied: set.orbitals[orbital].occupation.is_some_and(|n| n > 1e-8),
        }));
    }
    found.sort_by(|a, b| b.impurity.total_cmp(&a.impurity).then((a.spin_idx, a.orbital).cmp(&(b.spin_idx, b.orbital))));
    found
}

/// Number of orbitals of degenerate irreps in which no standard partner dominates.
///
/// Real pairs of complex-conjugate irreps have no partners, nor has a single atom a preferred axis.
#[must_use]
pub fn turned_partners(labelled: &Labelled) -> usize {
    let group = &labelled.symmetry.group;
    if group.name() == GroupName::K {
        return 0;
    }
    let orbitals = labelled.spins.iter().flat_map(|spin| &spin.orbitals);
    orbitals
        .filter(|label| {
            label.partner.is_none()
                && label.irrep.is_some_and(|irrep| {
                    let irrep = &group.irreps()[irrep];
                    irrep.dimension > 1 && irrep.constituents == 1
                })
        })
        .count()
}
