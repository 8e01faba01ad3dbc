//! What an orbital is made of: Löwdin shares by atoms of one kind and shell.
//!
//! Here: grouping of atoms and functions, names such as `3d`. Not here: the populations themselves
//! (`wavefunction::population`).

use crate::group::Symmetry;
use crate::model::{Atom, Molecule, elements};
use crate::wavefunction::Basis;
use ndarray::ArrayView1;
use std::collections::BTreeMap;

/// A share of an orbital.
#[derive(Debug, Clone, PartialEq)]
pub struct Share {
    /// Atoms that the operations carry onto each other, by index from 0.
    pub orbit: usize,
    /// Angular momentum.
    pub l: usize,
    /// `3d` where the element fills just one such shell, else the letter alone.
    pub shell: String,
    /// Löwdin share, 0 to 1.
    pub share: f64,
}

fn alike(one: &Atom, other: &Atom) -> bool {
    (one.element, one.ghost) == (other.element, other.ghost)
}

/// Groups functions by atoms of one kind and by angular momentum.
#[derive(Debug, Clone, PartialEq)]
pub struct Grouping {
    /// Name of each orbit of atoms: `Fe`, or `C 2-11` where an element has several orbits.
    pub orbit_names: Vec<String>,
    /// Orbit of each atom.
    pub orbit_of_atom: Vec<usize>,
    /// (orbit, l) and name of each group.
    groups: Vec<(usize, usize, String)>,
    /// Group of each function.
    group_of_function: Vec<usize>,
}

/// The letter of an angular momentum.
#[must_use]
pub fn letter(l: usize) -> char {
    "spdfghi".chars().nth(l).unwrap_or('?')
}

/// `3d` where the element fills just one shell of this l outside its pseudopotential's core, else `d`.
fn shell_name(atom: &Atom, l: usize) -> String {
    let mut shells = elements::occupied_shells(atom.element);
    shells.sort_unstable();
    let mut core = atom.core_electrons;
    let outside: Vec<(u8, u8)> = shells
        .into_iter()
        .filter(|&(_, l)| {
            let capacity = 4 * u32::from(l) + 2;
            let inside = core >= capacity;
            core -= if inside { capacity } else { 0 };
            !inside
        })
        .collect();
    let mut of_l = outside.iter().filter(|shell| usize::from(shell.1) == l);
    match (of_l.next(), of_l.next()) {
        (Some((n, _)), None) => format!("{n}{}", letter(l)),
        _ => letter(l).to_string(),
    }
}

/// `2-5, 9` from sorted indices counted from 0.
#[must_use]
pub fn ranges(indices: &[usize]) -> String {
    let mut runs: Vec<(usize, usize)> = Vec::new();
    for &i in indices {
        match runs.last_mut() {
            Some(run) if run.1 + 1 == i => run.1 = i,
            _ => runs.push((i, i)),
        }
    }
    let text = |&(first, last): &(usize, usize)| {
        if first == last { format!("{}", first + 1) } else { format!("{}-{}", first + 1, last + 1) }
    };
    runs.iter().map(text).collect::<Vec<_>>().join(",")
}

impl Grouping {
    /// Orbits of atoms under the operations, those of one element that are truly turned together, then (orbit, l) groups of functions.
    #[must_use]
    pub fn new(molecule: &Molecule, basis: &Basis, symmetry: &Symmetry, turned: &[usize]) -> Self {
        let n_atoms = molecule.atoms.len();
        let mut orbit_of_atom = vec![usize::MAX; n_atoms];
        let mut orbits: Vec<Vec<usize>> = Vec::new();
        for atom in 0..n_atoms {
            if orbit_of_atom[atom] != usize::MAX {
                continue;
            }
            let mut orbit: Vec<usize> = symmetry.permutations.iter().map(|permutation| permutation[atom]).collect();
            if turned.binary_search(&atom).is_ok() {
                orbit.extend(turned.iter().filter(|&&other| alike(&molecule.atoms[other], &molecule.atoms[atom])));
            }
            orbit.sort_unstable();
            orbit.dedup();
            for &member in &orbit {
                orbit_of_atom[member] = orbits.len();
            }
            orbits.push(orbit);
        }
        let name = |orbit: &Vec<usize>| {
            let atom = &molecule.atoms[orbit[0]];
            let symbol = elements::label(atom);
            if orbits.iter().filter(|other| alike(&molecule.atoms[other[0]], atom)).count() > 1 {
                format!("{symbol} {}", ranges(orbit))
            } else {
                symbol
            }
        };
        let orbit_names = orbits.iter().map(name).collect();
        let mut keys: BTreeMap<(usize, usize), usize> = BTreeMap::new();
        let mut groups = Vec::new();
        let mut group_of_function = Vec::with_capacity(basis.n_functions());
        for shell in basis.shells() {
            let orbit = orbit_of_atom[shell.atom_idx];
            let group = *keys.entry((orbit, shell.l)).or_insert_with(|| {
                groups.push((orbit, shell.l, shell_name(&molecule.atoms[shell.atom_idx], shell.l)));
                groups.len() - 1
            });
            group_of_function.extend(std::iter::repeat_n(group, shell.n_functions()));
        }
        Self { orbit_names, orbit_of_atom, groups, group_of_function }
    }

    /// Shares above `floor`, largest first, from one orbital's Löwdin weights (one a function, sum 1).
    #[must_use]
    pub fn shares(&self, weights: ArrayView1<'_, f64>, floor: f64) -> Vec<Share> {
        let mut sums = vec![0.0; self.groups.len()];
        for (&group, weight) in self.group_of_function.iter().zip(weights) {
            sums[group] += weight;
        }
        let mut shares: Vec<Share> = self
            .groups
            .iter()
            .zip(sums)
            .filter(|(_, share)| *share >= floor)
            .map(|((orbit, l, shell), share)| Share { orbit: *orbit, l: *l, shell: shell.clone(), share })
            .collect();
        // Equal shares (to rounding) keep the order of the file.
        shares.sort_by(|a, b| (b.share * 1e6).round().total_cmp(&(a.share * 1e6).round()));
        shares
    }
}
