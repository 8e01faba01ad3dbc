//! Which orbitals form one degenerate set, found from how the operations connect them.
//!
//! Here: linking orbitals into sets, completeness, running numbers.
//! Not here: weights (`labelling::weights`), anything about occupation (`labelling::frontier`).

use super::{OrbitalLabel, SetLabel, Thresholds};
use crate::group::PointGroup;
use crate::model::{Orbital, Spin};
use crate::wavefunction::{Operations, Pair, Rows};
use ndarray::{Array2, ArrayView1};
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
pub fn join<'a>(
    connected: &'a Connected<'a>,
    group: &'a PointGroup,
    labels: &'a [OrbitalLabel],
    spin: Spin,
    thresholds: &Thresholds,
) -> Vec<SetLabel> {
    let order = energy_order(connected.orbitals);
    let tell = energies_tell(connected.orbitals);
    let mut links = Links::new(connected, group, labels);
    if tell {
        links.look_at(&plain_sets(connected, group, labels, thresholds, &order));
    }
    // By Bessel's inequality ⟨i|R|j⟩² summed over all i is 1: what is found to keep together needs no further looking.
    let pairs: Vec<Pair> = (0..order.len())
        .into_par_iter()
        .flat_map_iter(|at| {
            let ket = order[at];
            // Most are settled by now, and spare the search.
            let others =
                links.may_go_on(ket).then(|| candidates(connected, group, labels, thresholds, &order[at..], tell));
            let links = &links;
            others.into_iter().flatten().map(move |bra| (bra, ket)).filter(|&pair| links.open(pair))
        })
        .collect();
    links.look_at(&pairs);
    let mut parents: Vec<usize> = (0..order.len()).collect();
    for &(i, j) in &links.found {
        let (a, b) = (root(&parents, i), root(&parents, j));
        parents[a.max(b)] = a.min(b);
    }
    let mut members: BTreeMap<usize, Vec<usize>> = BTreeMap::new();
    for i in 0..order.len() {
        members.entry(root(&parents, i)).or_default().push(i);
    }
    let kept = links.kept;
    let place: BTreeMap<usize, usize> = order.iter().enumerate().map(|(at, &i)| (i, at)).collect();
    let mut sets: Vec<Vec<usize>> = members.into_values().collect();
    sets.sort_by_key(|set| set.iter().map(|i| place[i]).min());
    number(
        sets.into_iter().map(|set| describe(connected, group, labels, spin, thresholds, set, &kept)).collect(),
        group,
    )
}

/// Which orbitals hang together, as far as it is known.
struct Links<'a> {
    connected: &'a Connected<'a>,
    group: &'a PointGroup,
    labels: &'a [OrbitalLabel],
    /// Sorted.
    found: Vec<Pair>,
    /// Mean over the operations of the part of each image that lies in the orbital and those linked to it.
    kept: Vec<f64>,
}

impl<'a> Links<'a> {
    fn new(connected: &'a Connected<'a>, group: &'a PointGroup, labels: &'a [OrbitalLabel]) -> Self {
        let mean = |row: ArrayView1<'_, f64>| row.iter().map(|value| value * value).sum::<f64>() / row.len() as f64;
        let kept = connected.expectations.outer_iter().map(mean).collect();
        Self { connected, group, labels, found: Vec::new(), kept }
    }

    /// Links the pairs, each new, that the operations connect.
    fn look_at(&mut self, pairs: &[Pair]) {
        let strengths = self.connected.operations.connections(self.connected.rows, pairs);
        for (&(i, j), strength) in pairs.iter().zip(strengths) {
            let least = match (self.labels[i].irrep, self.labels[j].irrep) {
                (Some(irrep), Some(_)) => LINK_SAME_IRREP / self.group.irreps()[irrep].dimension as f64,
                _ => LINK_MIXED,
            };
            if strength >= least {
                self.kept[i] += strength;
                self.kept[j] += strength;
                self.found.push((i, j));
            }
        }
        self.found.sort_unstable();
    }

    /// Whether it makes sense to look at a pair: both may go on, and they are not linked yet.
    fn open(&self, pair: Pair) -> bool {
        self.may_go_on(pair.0) && self.may_go_on(pair.1) && self.found.binary_search(&pair).is_err()
    }

    /// Whether enough of the images lies elsewhere for another link.
    fn may_go_on(&self, i: usize) -> bool {
        let least = match self.labels[i].irrep {
            Some(irrep) => LINK_MIXED.min(LINK_SAME_IRREP / self.group.irreps()[irrep].dimension as f64),
            None => LINK_MIXED,
        };
        1.0 - self.kept[i] >= least
    }
}

/// All pairs within every run of as many orbitals of one irrep at one energy as the irrep has partners: nearly all
/// sets are such.
fn plain_sets(
    connected: &Connected<'_>,
    group: &PointGroup,
    labels: &[OrbitalLabel],
    thresholds: &Thresholds,
    order: &[usize],
) -> Vec<Pair> {
    let mut of_irrep: Vec<Vec<usize>> = vec![Vec::new(); group.irreps().len()];
    for &i in order {
        if let Some(irrep) = labels[i].irrep {
            of_irrep[irrep].push(i);
        }
    }
    let energy = |i: usize| connected.orbitals[i].energy.unwrap_or(0.0);
    let mut pairs = Vec::new();
    for (irrep, orbitals) in group.irreps().iter().zip(&of_irrep).filter(|(irrep, _)| irrep.dimension > 1) {
        for run in orbitals.chunk_by(|&a, &b| energy(b) - energy(a) <= thresholds.degeneracy_hartree) {
            if run.len() == irrep.dimension {
                pairs.extend(
                    run.iter().enumerate().flat_map(|(at, &ket)| run[at + 1..].iter().map(move |&bra| (bra, ket))),
                );
            }
        }
    }
    pairs
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
