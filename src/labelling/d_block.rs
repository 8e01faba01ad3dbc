//! The sets with most metal d, for a complex of a transition metal.
//!
//! Not here: ligand-field parameters; the gap printed is one of orbitals.

use super::composition::Grouping;
use super::{SetLabel, SpinLabels};
use crate::group::{PointGroup, Symmetry};
use crate::model::{Atom, Molecule};
use ndarray::Array2;

/// One set of the d block.
#[derive(Debug, Clone, PartialEq)]
pub struct DLevel {
    /// Index into `spins`.
    pub spin_idx: usize,
    /// Index into that spin's sets.
    pub set_idx: usize,
    /// Mean Löwdin share of the metals' d functions over the set's orbitals.
    pub share: f64,
}

/// The d block of the metals of one orbit.
#[derive(Debug, Clone, PartialEq)]
pub struct DBlock {
    /// Metal atoms, index from 0.
    pub metals: Vec<usize>,
    /// Sets in order of spin, then energy.
    pub levels: Vec<DLevel>,
}

/// Groups 3 to 12 of the periodic table.
#[must_use]
pub fn is_transition_metal(atom: &Atom) -> bool {
    !atom.ghost && matches!(atom.element, 21..=30 | 39..=48 | 57 | 71..=80 | 103..=112)
}

/// The d block of each orbit of transition-metal atoms that carries d functions.
///
/// For one metal on the centre the irreps of the d functions are known from the group, and of each the
/// set (or sets) with the largest d share is taken; otherwise the sets with the largest d share, until
/// five orbitals a metal are reached.
#[must_use]
pub fn d_blocks(
    molecule: &Molecule,
    symmetry: &Symmetry,
    grouping: &Grouping,
    function_shells: &[(usize, usize)],
    lowdin: &[Array2<f64>],
    spins: &[SpinLabels],
) -> Vec<DBlock> {
    let mut blocks = Vec::new();
    for orbit in 0..grouping.orbit_names.len() {
        let metals: Vec<usize> =
            (0..molecule.atoms.len()).filter(|&atom| grouping.orbit_of_atom[atom] == orbit).collect();
        if metals.is_empty() || !is_transition_metal(&molecule.atoms[metals[0]]) {
            continue;
        }
        let functions: Vec<usize> = function_shells
            .iter()
            .enumerate()
            .filter(|(_, (atom, l))| *l == 2 && metals.contains(atom))
            .map(|(function, _)| function)
            .collect();
        if functions.is_empty() {
            continue;
        }
        let mut levels = Vec::new();
        for (spin_idx, (spin, weights)) in spins.iter().zip(lowdin).enumerate() {
            let share = |set: &SetLabel| {
                let sum: f64 = set.orbitals.iter().flat_map(|&i| functions.iter().map(move |&f| weights[(i, f)])).sum();
                sum / set.orbitals.len() as f64
            };
            let mut of_spin: Vec<DLevel> = spin
                .sets
                .iter()
                .enumerate()
                .map(|(set_idx, set)| DLevel { spin_idx, set_idx, share: share(set) })
                .collect();
            of_spin.sort_by(|a, b| b.share.total_cmp(&a.share).then(a.set_idx.cmp(&b.set_idx)));
            let mut wanted = wanted_sets(&symmetry.group, &metals);
            let mut left = 5 * metals.len();
            let mut chosen: Vec<DLevel> = Vec::new();
            for level in of_spin {
                let set = &spin.sets[level.set_idx];
                let take = match (&mut wanted, set.irrep) {
                    (Some(counts), Some(irrep)) if counts[irrep] > 0 => {
                        counts[irrep] -= 1;
                        true
                    }
                    (Some(_), _) => false,
                    (None, _) => left >= set.orbitals.len(),
                };
                if take && level.share > 0.0 {
                    left = left.saturating_sub(set.orbitals.len());
                    chosen.push(level);
                }
            }
            chosen.sort_by_key(|level| level.set_idx);
            levels.extend(chosen);
        }
        blocks.push(DBlock { metals, levels });
    }
    blocks
}

/// How often each irrep occurs among the d functions of a metal on the centre; None for metals elsewhere.
fn wanted_sets(group: &PointGroup, metals: &[usize]) -> Option<Vec<usize>> {
    if metals.len() != 1 {
        return None;
    }
    let mut counts = vec![0; group.irreps().len()];
    for (irrep, count) in group.decompose(&group.shell_characters(2)).ok()? {
        counts[irrep] = count;
    }
    Some(counts)
}
