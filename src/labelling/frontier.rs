//! What the occupations say: highest filled, part-filled and lowest empty sets, electrons per irrep,
//! the irrep of the determinant, and windows around the frontier.
//!
//! Not here: terms of open shells (one determinant is not a term), transitions.

use super::{SetLabel, SpinLabels};
use crate::group::PointGroup;

/// How far a set is filled.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Filling {
    /// As many electrons as it can hold, to within 1 %.
    Full,
    /// Something between.
    Part,
    /// None, to within 1 %.
    Empty,
}

/// Fraction of the capacity that still counts as empty, or as missing from a full set.
const FILLING_LIMIT: f64 = 0.01;

/// Filling of a set whose orbitals hold `capacity` electrons each (2 restricted, 1 for spin orbitals);
/// None where the file gives no occupation.
#[must_use]
pub fn filling(set: &SetLabel, capacity: f64) -> Option<Filling> {
    let fraction = set.electrons? / (capacity * set.orbitals.len() as f64);
    Some(match fraction {
        f if f <= FILLING_LIMIT => Filling::Empty,
        f if f >= 1.0 - FILLING_LIMIT => Filling::Full,
        _ => Filling::Part,
    })
}

/// The sets at the frontier of one spin, as indices into its sets.
#[derive(Debug, Clone, PartialEq, Eq, Default)]
pub struct Frontier {
    /// Highest full set.
    pub homo: Option<usize>,
    /// Part-filled sets, lowest first.
    pub somo: Vec<usize>,
    /// Lowest empty set.
    pub lumo: Option<usize>,
    /// An empty set lies below a full one.
    pub out_of_order: bool,
}

/// Finds the frontier in sets ordered by energy; empty where the file gives no occupations.
#[must_use]
pub fn frontier(sets: &[SetLabel], capacity: f64) -> Frontier {
    let with = |wanted: Filling| {
        sets.iter().enumerate().filter(move |(_, set)| filling(set, capacity) == Some(wanted)).map(|(i, _)| i)
    };
    let (homo, lumo) = (with(Filling::Full).next_back(), with(Filling::Empty).next());
    let out_of_order = matches!((homo, lumo), (Some(homo), Some(lumo)) if lumo < homo);
    Frontier { homo, somo: with(Filling::Part).collect(), lumo, out_of_order }
}

/// Electrons in orbitals of each irrep, in the order of the group's irreps, and those without an irrep.
#[must_use]
pub fn electrons_per_irrep(spins: &[SpinLabels], n_irreps: usize) -> (Vec<f64>, f64) {
    let mut counts = vec![0.0; n_irreps];
    let mut unlabelled = 0.0;
    for set in spins.iter().flat_map(|spin| &spin.sets) {
        let electrons = set.electrons.unwrap_or(0.0);
        match set.irrep {
            Some(irrep) => counts[irrep] += electrons,
            None => unlabelled += electrons,
        }
    }
    (counts, unlabelled)
}

/// What the occupied orbitals make together.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Configuration {
    /// All occupied sets are full and complete: the determinant belongs to this one-dimensional irrep.
    Closed(usize),
    /// Some set is part-filled; its irreps, one entry a set. The states are those of the open shells.
    Open(Vec<usize>),
    /// Occupied orbitals without an irrep, incomplete sets, or no occupations: nothing is claimed.
    Unknown,
}

/// The irrep of the determinant of full sets: Π over spin orbitals' sets of det D(R).
///
/// # Holds
/// Doubly filled sets give det² = 1, so a closed shell is totally symmetric.
#[must_use]
pub fn configuration(group: &PointGroup, spins: &[SpinLabels], capacity: f64) -> Configuration {
    let mut open = Vec::new();
    let mut determinant = vec![1.0; group.elements().len()];
    for set in spins.iter().flat_map(|spin| &spin.sets) {
        match (filling(set, capacity), set.irrep) {
            (Some(Filling::Empty), _) => {}
            (Some(Filling::Full), Some(irrep)) if set.complete => {
                if capacity < 1.5 {
                    for (value, matrix) in determinant.iter_mut().zip(&group.irreps()[irrep].matrices) {
                        *value *= matrix.determinant();
                    }
                }
            }
            (Some(Filling::Part), Some(irrep)) => open.push(irrep),
            _ => return Configuration::Unknown,
        }
    }
    if !open.is_empty() {
        return Configuration::Open(open);
    }
    let matches = |irrep: &crate::group::Irrep| {
        irrep.dimension == 1
            && group
                .elements()
                .iter()
                .zip(&determinant)
                .all(|(element, value)| (irrep.characters[element.class_idx] - value).abs() < 1e-6)
    };
    group.irreps().iter().position(matches).map_or(Configuration::Unknown, Configuration::Closed)
}

/// Sets around the frontier and how they cut.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Window {
    /// Indices of the sets touched, in order of energy.
    pub sets: Vec<usize>,
    /// Orbital indices from 0 in the window, in order of energy.
    pub orbitals: Vec<usize>,
    /// Sets of which only some orbitals are inside.
    pub cut: Vec<usize>,
}

/// The `below` highest orbitals with electrons and the `above` lowest empty ones.
#[must_use]
pub fn window(sets: &[SetLabel], capacity: f64, below: usize, above: usize) -> Window {
    let orbitals_of = |wanted: fn(Filling) -> bool| -> Vec<usize> {
        sets.iter()
            .filter(|set| filling(set, capacity).is_some_and(wanted))
            .flat_map(|set| set.orbitals.iter().copied())
            .collect()
    };
    let occupied = orbitals_of(|filling| filling != Filling::Empty);
    let empty = orbitals_of(|filling| filling == Filling::Empty);
    let mut orbitals = occupied[occupied.len().saturating_sub(below)..].to_vec();
    orbitals.extend(empty.iter().take(above));
    let inside = |set: &SetLabel| set.orbitals.iter().filter(|i| orbitals.contains(i)).count();
    let touched: Vec<usize> = (0..sets.len()).filter(|&i| inside(&sets[i]) > 0).collect();
    let cut = touched.iter().copied().filter(|&i| inside(&sets[i]) < sets[i].orbitals.len()).collect();
    Window { sets: touched, orbitals, cut }
}
