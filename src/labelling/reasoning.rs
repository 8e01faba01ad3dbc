//! The steps that lead from ⟨i|R|j⟩ to the label of one set, as they would be done by hand.
//!
//! Here: characters of the set, their reduction, partners, connections, each as a number. Not here: the labels themselves
//! (`labelling`), words for a reader (`report::explain`).

use super::weights;
use super::{Labelled, SetLabel};
use crate::group::{GroupName, PointGroup};
use crate::model::Molecule;
use crate::wavefunction::{Pair, Rows};
use ndarray::{Array2, Axis};

/// The trace of a set under the operations of one class.
#[derive(Debug, Clone, PartialEq)]
pub struct ClassTrace {
    /// Index of the class.
    pub class: usize,
    /// Mean over the class of Σ ⟨i|R|i⟩.
    pub mean: f64,
    /// Largest distance of one operation from that mean: 0 for orbitals that keep the symmetry.
    pub spread: f64,
}

/// How often an irrep is in the set: n(Γ) = (1/h) Σ g χ χ_Γ, halved for a pair of complex conjugates.
#[derive(Debug, Clone, PartialEq)]
pub struct Reduction {
    /// Index of the irrep.
    pub irrep: usize,
    /// g χ χ_Γ of each class of the group; empty for an atom, whose operations are only a sample.
    pub terms: Vec<f64>,
    /// n(Γ).
    pub multiplicity: f64,
}

/// The orbital nearest in energy that is not in the set.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Outside {
    /// Its index.
    pub orbital: usize,
    /// Its energy less that of the set, hartree.
    pub distance: f64,
    /// Mean over the operations of Σ ⟨i|R|j⟩² over the set's orbitals i.
    pub connection: f64,
}

/// The numbers behind one set.
#[derive(Debug, Clone)]
pub struct Reasoning {
    /// One a class of the group; empty for an atom.
    pub traces: Vec<ClassTrace>,
    /// One an irrep.
    pub reduction: Vec<Reduction>,
    /// Mean over the operations of ⟨i|R|j⟩² between the set's orbitals.
    pub connections: Array2<f64>,
    /// None where energies are missing or every orbital is in the set.
    pub outside: Option<Outside>,
    /// Of each orbital: weight of each partner of its largest irrep; None where there are none to tell apart.
    pub partners: Vec<Option<Vec<f64>>>,
    /// Of each orbital: weight of each irrep of the abelian subgroup; None for an atom.
    pub abelian: Option<Array2<f64>>,
}

/// Works out the numbers behind the set `set_idx` of spin `spin_idx`.
#[must_use]
pub fn reasoning(molecule: &Molecule, labelled: &Labelled, spin_idx: usize, set_idx: usize) -> Reasoning {
    let spin = &labelled.spins[spin_idx];
    let set = &spin.sets[set_idx];
    let group = &labelled.symmetry.group;
    let values = spin.expectations.select(Axis(0), &set.orbitals);
    let is_atom = group.name() == GroupName::K;
    let traces = if is_atom { Vec::new() } else { traces(group, &values) };
    let reduction = (0..group.irreps().len())
        .map(|irrep| {
            if is_atom {
                let of = |&i: &usize| spin.orbitals[i].weights.iter().find(|weight| weight.0 == irrep);
                let sum: f64 = set.orbitals.iter().filter_map(of).map(|weight| weight.1).sum();
                let multiplicity = sum / group.irreps()[irrep].dimension as f64;
                Reduction { irrep, terms: Vec::new(), multiplicity }
            } else {
                reduction(group, irrep, &traces)
            }
        })
        .collect();
    let partners = set.orbitals.iter().zip(values.outer_iter()).map(|(&i, row)| {
        let (irrep, _) = *spin.orbitals[i].weights.first()?;
        let degenerate = group.irreps()[irrep].dimension > 1 && !is_atom;
        degenerate.then(|| weights::partner_weights(group, irrep, row)).flatten()
    });
    let partners = partners.collect();
    let abelian = (!is_atom).then(|| {
        let subgroup = group.abelian_subgroup();
        values.select(Axis(1), &subgroup.embedding).dot(&weights::projection(&subgroup.group))
    });
    let outside = nearest_outside(molecule, labelled, spin_idx, set);
    Reasoning {
        traces,
        reduction,
        connections: connections(molecule, labelled, spin_idx, &set.orbitals, &set.orbitals),
        outside,
        partners,
        abelian,
    }
}

fn traces(group: &PointGroup, values: &Array2<f64>) -> Vec<ClassTrace> {
    let of_element = values.sum_axis(Axis(0));
    let trace = |(class, of_class): (usize, &crate::group::Class)| {
        let n = of_class.members.len().max(1) as f64;
        let mean = of_class.members.iter().map(|&member| of_element[member]).sum::<f64>() / n;
        let spread = of_class.members.iter().map(|&member| (of_element[member] - mean).abs()).fold(0.0, f64::max);
        ClassTrace { class, mean, spread }
    };
    group.classes().iter().enumerate().map(trace).collect()
}

fn reduction(group: &PointGroup, irrep: usize, traces: &[ClassTrace]) -> Reduction {
    let of = &group.irreps()[irrep];
    let terms: Vec<f64> = traces
        .iter()
        .map(|trace| group.classes()[trace.class].members.len() as f64 * trace.mean * of.characters[trace.class])
        .collect();
    let multiplicity = terms.iter().sum::<f64>() / group.order() as f64 / of.constituents as f64;
    Reduction { irrep, terms, multiplicity }
}

/// Mean of ⟨i|R|j⟩² for bras i (rows) and kets j (columns).
fn connections(
    molecule: &Molecule,
    labelled: &Labelled,
    spin_idx: usize,
    bras: &[usize],
    kets: &[usize],
) -> Array2<f64> {
    let coefficients = molecule.orbital_sets[spin_idx].coefficients.view();
    let rows = Rows { coefficients, products: labelled.settled.products[spin_idx].view() };
    let pairs: Vec<Pair> = bras.iter().flat_map(|&bra| kets.iter().map(move |&ket| (bra, ket))).collect();
    let found = labelled.operations.connections(rows, &pairs);
    Array2::from_shape_vec((bras.len(), kets.len()), found).unwrap_or_default()
}

fn nearest_outside(molecule: &Molecule, labelled: &Labelled, spin_idx: usize, set: &SetLabel) -> Option<Outside> {
    let energy = set.energy?;
    let orbitals = &molecule.orbital_sets[spin_idx].orbitals;
    let distance = |i: usize| orbitals[i].energy.map(|other| other - energy);
    let others = (0..orbitals.len()).filter(|i| !set.orbitals.contains(i));
    let (orbital, distance) = others
        .filter_map(|i| Some((i, distance(i)?)))
        .min_by(|a, b| a.1.abs().total_cmp(&b.1.abs()).then(a.0.cmp(&b.0)))?;
    let connection = connections(molecule, labelled, spin_idx, &set.orbitals, &[orbital]).sum();
    Some(Outside { orbital, distance, connection })
}
