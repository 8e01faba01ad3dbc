//! Atoms as sites: which are alike, which are bonded.
//!
//! Not here: the search for operations (`group::detect`).

use crate::group::Site;
use crate::model::{Molecule, elements};
use std::collections::{BTreeMap, BTreeSet};

/// Two atoms are bonded when they are nearer than this times the sum of their covalent radii (common practice).
const BOND_FACTOR: f64 = 1.3;

/// Atoms as sites: of one kind when element, charge, ghost status, core and shells are alike.
///
/// Kinds are numbered by what the atoms are (element first), whatever their order in the file.
#[must_use]
pub fn sites(molecule: &Molecule) -> Vec<Site> {
    let mut keys: Vec<Vec<u64>> = molecule
        .atoms
        .iter()
        .map(|atom| {
            vec![u64::from(atom.element), u64::from(atom.ghost), u64::from(atom.core_electrons), atom.charge.to_bits()]
        })
        .collect();
    for shell in &molecule.shells {
        let key = &mut keys[shell.atom_idx];
        key.extend([shell.l as u64, u64::from(shell.pure), shell.exponents.len() as u64]);
        key.extend(shell.exponents.iter().chain(&shell.coefficients).map(|value| value.to_bits()));
    }
    let kinds: BTreeSet<&Vec<u64>> = keys.iter().collect();
    let numbers: BTreeMap<&Vec<u64>, u32> = kinds.into_iter().zip(0..).collect();
    molecule.atoms.iter().zip(&keys).map(|(atom, key)| Site { kind: numbers[key], position: atom.position }).collect()
}

/// Pairs of atoms nearer than 1.3 times the sum of their covalent radii, each pair once, first index smaller.
#[must_use]
pub fn bonds(molecule: &Molecule) -> Vec<(usize, usize)> {
    let atoms: Vec<(usize, f64)> = molecule
        .atoms
        .iter()
        .enumerate()
        .filter(|(_, atom)| !atom.ghost)
        .filter_map(|(i, atom)| Some((i, elements::covalent_radius_bohr(atom.element)?)))
        .collect();
    let longest = 2.0 * BOND_FACTOR * atoms.iter().map(|atom| atom.1).fold(0.0, f64::max);
    // Sorted along x, so that only near neighbours are compared.
    let x = |i: usize| molecule.atoms[i].position.x;
    let mut along_x = atoms;
    along_x.sort_by(|a, b| x(a.0).total_cmp(&x(b.0)));
    let mut bonds = Vec::new();
    for (at, &(i, radius)) in along_x.iter().enumerate() {
        for &(j, other) in along_x[at + 1..].iter().take_while(|other| x(other.0) - x(i) <= longest) {
            let distance = (molecule.atoms[i].position - molecule.atoms[j].position).norm();
            if distance <= BOND_FACTOR * (radius + other) {
                bonds.push((i.min(j), i.max(j)));
            }
        }
    }
    bonds.sort_unstable();
    bonds
}
