//! Orbitals that belong to several irreps, and degenerate partners turned among themselves.
//!
//! Not here: weights (`labelling`), densities.

use super::Limits;
use crate::group::GroupName;
use crate::labelling::Labelled;
use crate::model::Molecule;
use crate::wavefunction::Rows;
use ndarray::{Array2, Axis};

/// An orbital of several irreps.
#[derive(Debug, Clone, PartialEq)]
pub struct Mixed {
    /// Index into the spins.
    pub spin_idx: usize,
    /// Orbital, from 0.
    pub orbital: usize,
    /// Weight outside its largest irrep.
    pub impurity: f64,
    /// The operations keep it among orbitals of its own energy.
    pub at_one_energy: bool,
    /// Every operation carries it onto itself or one other, with which it shares atoms: a localised orbital. Its energy
    /// is an expectation value, equal to that of its copies by symmetry, and says nothing of degenerate levels.
    pub localised: bool,
    /// It holds electrons.
    pub occupied: bool,
}

impl Mixed {
    /// Nothing is lost: turning orbitals at one energy gives pure ones.
    #[must_use]
    pub fn is_harmless(&self) -> bool {
        self.at_one_energy && !self.localised
    }
}

/// An operation carries an orbital onto one other when that holds at least this much of the image.
const ONTO_ONE: f64 = 0.98;
/// Two orbitals share atoms from this common population on: bonds at one atom share nearly a half, cores of two atoms a
/// thousandth.
const SHARED: f64 = 0.05;

/// All orbitals with more than `limits.pure` allows outside one irrep, worst first.
#[must_use]
pub fn mixed(molecule: &Molecule, labelled: &Labelled, limits: &Limits) -> Vec<Mixed> {
    let mut found: Vec<Mixed> =
        (0..labelled.spins.len()).flat_map(|spin_idx| mixed_of_spin(molecule, labelled, limits, spin_idx)).collect();
    found.sort_by(|a, b| b.impurity.total_cmp(&a.impurity).then((a.spin_idx, a.orbital).cmp(&(b.spin_idx, b.orbital))));
    found
}

fn mixed_of_spin(molecule: &Molecule, labelled: &Labelled, limits: &Limits, spin_idx: usize) -> Vec<Mixed> {
    let labels = &labelled.spins[spin_idx].orbitals;
    let set = &molecule.orbital_sets[spin_idx];
    let impure: Vec<usize> = (0..labels.len()).filter(|&i| labels[i].purity < limits.pure).collect();
    if impure.is_empty() {
        return Vec::new();
    }
    let energy = |i: usize| set.orbitals[i].energy;
    let near = |i: usize, j: usize| matches!((energy(i), energy(j)), (Some(a), Some(b)) if (a - b).abs() <= limits.degeneracy_hartree);
    let beside: Vec<usize> = (0..labels.len()).filter(|&j| impure.iter().any(|&i| near(i, j))).collect();
    let select = |chosen: &[usize]| {
        let products = labelled.settled.products[spin_idx].select(Axis(0), chosen);
        (set.coefficients.select(Axis(0), chosen), products)
    };
    let (of_bras, of_kets) = (select(&beside), select(&impure));
    let populations = populations(labelled, molecule.atoms.len(), &of_bras);
    let n_operations = labelled.operations.count();
    let mut inside = vec![0.0; impure.len()];
    let mut onto_one = vec![true; impure.len()];
    let mut shares = vec![false; impure.len()];
    for element in 0..n_operations {
        let bras = Rows { coefficients: of_bras.0.view(), products: of_bras.1.view() };
        let kets = Rows { coefficients: of_kets.0.view(), products: of_kets.1.view() };
        let elements = labelled.operations.elements(element, bras, kets);
        for (k, &i) in impure.iter().enumerate() {
            let mut best = (0, 0.0);
            for (b, _) in beside.iter().enumerate().filter(|(_, j)| near(i, **j)) {
                let square = elements[(b, k)] * elements[(b, k)];
                inside[k] += square / n_operations as f64;
                if square > best.1 {
                    best = (b, square);
                }
            }
            onto_one[k] &= best.1 >= ONTO_ONE;
            if beside[best.0] != i
                && let Some(own) = beside.iter().position(|&j| j == i)
            {
                let common: f64 =
                    populations.row(own).iter().zip(populations.row(best.0)).map(|(a, b)| a.min(*b).max(0.0)).sum();
                shares[k] |= common >= SHARED;
            }
        }
    }
    let entry = |(k, &orbital): (usize, &usize)| Mixed {
        spin_idx,
        orbital,
        impurity: 1.0 - labels[orbital].purity,
        at_one_energy: inside[k] >= limits.pure,
        localised: onto_one[k] && shares[k],
        occupied: set.orbitals[orbital].occupation.is_some_and(|n| n > 1e-8),
    };
    impure.iter().enumerate().map(entry).collect()
}

/// Gross population of each orbital on each atom: n_orbitals × n_atoms.
fn populations(labelled: &Labelled, n_atoms: usize, orbitals: &(Array2<f64>, Array2<f64>)) -> Array2<f64> {
    let mut populations = Array2::zeros((orbitals.0.nrows(), n_atoms));
    for shell in labelled.settled.basis.shells() {
        for function in shell.range() {
            for (row, (c, sc)) in orbitals.0.column(function).iter().zip(orbitals.1.column(function)).enumerate() {
                populations[(row, shell.atom_idx)] += c * sc;
            }
        }
    }
    populations
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
