//! Which orbitals form one degenerate set, found from how the operations connect them.
//!
//! Here: linking orbitals into sets, completeness, running numbers.
//! Not here: weights (`labelling::weights`), anything about occupation (`labelling::frontier`).

use super::{OrbitalLabel, SetLabel, Thresholds};
use crate::group::PointGroup;
use crate::model::{Orbital, Spin};
use crate::wavefunction::{Operations, Rows};
use ndarray::Array2;
use rayon::prelude::*;
use std::collections::BTreeMap;

/// Orbitals of one spin with what the operations make of them.
pub struct Connected<'a> {
    /// The orbitals' energies and occupations.
    pub orbitals: &'a [Orbital],
    /// Their coefficients.
    pub rows: Rows<'a>,
    /// One an element of the group, or a fixed sample of the full rotation group.
    pub operations: &'a Operations,
    /// ⟨i|R|i⟩ over the same operations.
    pub expectations: &'a Array2<f64>,
}

/// Neighbours in file order that are tried where the energies say nothing.
const NEIGHBOURS_WITHOUT_ENERGY: usize = 16;
/// A connection of two orbitals of one irrep counts from this fraction of 1/d on.
const LINK_SAME_IRREP: f64 = 0.3;
/// A connection of two orbitals at one energy, one of them without a label, counts from here on.
const LINK_MIXED: f64 = 0.05;
/// A set is closed when the operations keep at least this much of each member inside.
const CLOSED: f64 = 0.90;

/// Orbital indices in order of energy; file order where energies are missing or equal.
fn energy_order(orbitals: &[Orbital]) -> Vec<usize> {
    let mut order: Vec<usize> = (0..orbitals.len()).collect();
    if orbitals.iter().all(|orbital| orbital.energy.is_some()) {
        order.sort_by(|&a, &b| {
            let energy = |i: usize| orbitals[i].energy.unwrap_or(0.0);
            energy(a).total_cmp(&energy(b))
        });
    }
    order
}

/// Whether the energies tell orbitals apart at all (a file may give none, or zeros throughout).
fn energies_tell(orbitals: &[Orbital]) -> bool {
    let first = orbitals.first().and_then(|orbital| orbital.energy);
    orbitals.iter().all(|orbital| orbital.energy.is_some()) && orbitals.iter().any(|orbital| orbital.energy != first)
}

/// Joins orbitals into sets, in order of energy, with running numbers within irrep.
///
/// Two orbitals of one irrep belong together when the mean of ⟨i|R|j⟩² is near 1/d and their energies
/// differ by no more than `thresholds.window_hartree`; orbitals without a label are joined only at one
/// energy. Energy alone never joins: accidental degeneracy leaves two sets.
#[must_use]
pub fn join(
    connected: &Connected<'_>,
    group: &PointGroup,
    labels: &[OrbitalLabel],
    spin: Spin,
    thresholds: &Thresholds,
) -> Vec<SetLabel> {
    let order = energy_order(connected.orbitals);
    let tell = energies_tell(connected.orbitals);
    let candidates: Vec<(usize, Vec<usize>)> = (0..order.len())
        .into_par_iter()
        .map(|at| (order[at], candidates(connected, group, labels, thresholds, &order[at..], tell)))
        .collect();
    let strengths = connected.operations.connections(connected.rows, &candidates);
    let links: Vec<(usize, usize, f64)> = candidates
        .iter()
        .zip(&strengths)
        .flat_map(|((ket, bras), strengths)| bras.iter().zip(strengths).map(|(&i, &strength)| (*ket, i, strength)))
        .filter(|&(ket, i, strength)| match (labels[ket].irrep, labels[i].irrep) {
            (Some(a), Some(_)) => strength >= LINK_SAME_IRREP / group.irreps()[a].dimension as f64,
            _ => strength >= LINK_MIXED,
        })
        .collect();
    let mut parents: Vec<usize> = (0..order.len()).collect();
    for &(i, j, _) in &links {
        let (a, b) = (root(&parents, i), root(&parents, j));
        parents[a.max(b)] = a.min(b);
    }
    let mut members: BTreeMap<usize, Vec<usize>> = BTreeMap::new();
    for i in 0..order.len() {
        members.entry(root(&parents, i)).or_default().push(i);
    }
    let mut kept: Vec<f64> = connected
        .expectations
        .outer_iter()
        .map(|row| row.iter().map(|value| value * value).sum::<f64>() / row.len() as f64)
        .collect();
    for &(i, j, strength) in &links {
        kept[i] += strength;
        kept[j] += strength;
    }
    let place: BTreeMap<usize, usize> = order.iter().enumerate().map(|(at, &i)| (i, at)).collect();
    let mut sets: Vec<Vec<usize>> = members.into_values().collect();
    sets.sort_by_key(|set| set.iter().map(|i| place[i]).min());
    number(
        sets.into_iter().map(|set| describe(connected, group, labels, spin, thresholds, set, &kept)).collect(),
        group,
    )
}

/// Orbitals after the first of `order` that may belong to its set.
fn candidates(
    connected: &Connected<'_>,
    group: &PointGroup,
    labels: &[OrbitalLabel],
    thresholds: &Thresholds,
    order: &[usize],
    energies_tell: bool,
) -> Vec<usize> {
    let Some((&ket, later)) = order.split_first() else { return Vec::new() };
    let energy = |i: usize| connected.orbitals[i].energy.unwrap_or(0.0);
    let apart = |i: usize| if energies_tell { (energy(i) - energy(ket)).abs() } else { 0.0 };
    later
        .iter()
        .copied()
        .enumerate()
        .take_while(|&(step, i)| {
            if energies_tell { apart(i) <= thresholds.window_hartree } else { step < NEIGHBOURS_WITHOUT_ENERGY }
        })
        .map(|(_, i)| i)
        .filter(|&i| match (labels[ket].irrep, labels[i].irrep) {
            (Some(a), Some(b)) => a == b && group.irreps()[a].dimension > 1,
            _ => apart(i) <= thresholds.degeneracy_hartree && shared_weight(&labels[ket], &labels[i]) > LINK_MIXED,
        })
        .collect()
}

/// Σ over irreps of the smaller of two weights.
fn shared_weight(a: &OrbitalLabel, b: &OrbitalLabel) -> f64 {
    a.weights
        .iter()
        .filter_map(|&(irrep, weight)| b.weights.iter().find(|other| other.0 == irrep).map(|other| weight.min(other.1)))
        .sum()
}

fn root(parents: &[usize], mut at: usize) -> usize {
    while parents[at] != at {
        at = parents[at];
    }
    at
}

fn describe(
    connected: &Connected<'_>,
    group: &PointGroup,
    labels: &[OrbitalLabel],
    spin: Spin,
    thresholds: &Thresholds,
    mut orbitals: Vec<usize>,
    kept: &[f64],
) -> SetLabel {
    orbitals.sort_unstable();
    let irrep = labels[orbitals[0]].irrep.filter(|&first| orbitals.iter().all(|&i| labels[i].irrep == Some(first)));
    let energies: Option<Vec<f64>> = orbitals.iter().map(|&i| connected.orbitals[i].energy).collect();
    let energy = energies.as_ref().map(|energies| energies.iter().sum::<f64>() / energies.len() as f64);
    let spread = energies.map_or(0.0, |energies| {
        energies.iter().copied().fold(f64::MIN, f64::max) - energies.iter().copied().fold(f64::MAX, f64::min)
    });
    let electrons: Option<f64> = orbitals.iter().map(|&i| connected.orbitals[i].occupation).sum();
    let degeneracy = irrep.map_or(orbitals.len(), |irrep| group.irreps()[irrep].dimension);
    let complete = irrep.is_some()
        && orbitals.len() == degeneracy
        && spread <= thresholds.degeneracy_hartree
        // Of an orbital that is pure to w, the operations can keep no more than w² in sight.
        && orbitals.iter().all(|&i| kept[i] >= CLOSED * labels[i].purity.powi(2));
    SetLabel { spin, irrep, number: 0, orbitals, degeneracy, energy, spread, electrons, complete }
}

/// Weights of a set's orbitals may miss whole sets of partners together by this much.
const WHOLE_SETS: f64 = 0.02;

/// The irreps that the orbitals of a set without one make together, (irrep, how often), where they make whole ones:
/// partners of several irreps at one energy, turned among themselves.
#[must_use]
pub fn content(group: &PointGroup, labels: &[OrbitalLabel], set: &SetLabel) -> Option<Vec<(usize, usize)>> {
    let mut sums = vec![0.0; group.irreps().len()];
    for (irrep, weight) in set.orbitals.iter().flat_map(|&i| &labels[i].weights) {
        sums[*irrep] += weight;
    }
    let mut content = Vec::new();
    for (irrep, sum) in sums.into_iter().enumerate() {
        let times = sum / group.irreps()[irrep].dimension as f64;
        if (times - times.round()).abs() > WHOLE_SETS {
            return None;
        }
        #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "rounded, not negative")]
        if times > 0.5 {
            content.push((irrep, times.round() as usize));
        }
    }
    Some(content)
}

/// Counts the sets within each irrep, from 1, in the order given.
fn number(mut sets: Vec<SetLabel>, group: &PointGroup) -> Vec<SetLabel> {
    let mut counts = vec![0; group.irreps().len()];
    for set in &mut sets {
        if let Some(irrep) = set.irrep {
            counts[irrep] += 1;
            set.number = counts[irrep];
        }
    }
    sets
}
