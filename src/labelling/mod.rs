//! From a molecule to the irrep, partner and set of every orbital.
//!
//! Reading order: `sites` (what may be carried onto what), `weights`, `atom` (the full rotation group),
//! `sets`, then what is read off the sets: `partners`, `frontier`, `composition`, `d_block`.

mod atom;
pub mod composition;
pub mod configuration;
pub mod d_block;
pub mod descent;
pub mod frame_atoms;
pub mod frontier;
pub mod partners;
pub mod placement;
pub mod reasoning;
pub mod sets;
pub mod sites;
mod weights;

use crate::group::{Detection, GroupName, Symmetry};
use crate::model::{Molecule, Spin};
use crate::wavefunction::{Operations, Rows, Settled};
use ndarray::{Array2, ArrayView1, Axis};
use placement::{Choice, Derivation, Placement};

/// Every limit that decides a label, passed explicitly and told back in the report.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Thresholds {
    /// Sites may lie this far from the symmetric arrangement, bohr.
    pub tolerance_bohr: f64,
    /// An orbital gets an irrep when one irrep holds at least this weight.
    pub purity: f64,
    /// An orbital gets a partner when one partner holds at least this share of the irrep's weight.
    pub partner: f64,
    /// Orbitals within this energy are at one energy, hartree.
    pub degeneracy_hartree: f64,
    /// Partners of one set are looked for within this energy, hartree: wider, since a distorted geometry splits a set.
    pub window_hartree: f64,
    /// Largest |CᵀSC − 1| under which orbitals count as orthonormal.
    pub orthonormality: f64,
}

impl Thresholds {
    /// The limits of the program when nothing else is asked for: 0.01 Å, purity 0.90.
    pub const STANDARD: Self = Self {
        tolerance_bohr: 0.01 / crate::model::ANGSTROM_PER_BOHR,
        purity: 0.90,
        partner: 0.90,
        degeneracy_hartree: 1e-3,
        window_hartree: 0.05,
        orthonormality: 5e-3,
    };
}

/// What takes time while labels are found, in this order.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Stage {
    /// The group of the nuclei.
    Group,
    /// Overlap of the functions and the convention of the file.
    Overlap,
    /// Operations on the functions.
    Operations,
    /// Weights and sets of the orbitals.
    Orbitals,
}

/// What symmetry says of one orbital. Indices point into `group.irreps()` and its partners.
#[derive(Debug, Clone, PartialEq)]
pub struct OrbitalLabel {
    /// None where no irrep reaches the purity asked for.
    pub irrep: Option<usize>,
    /// The partner, where one dominates.
    pub partner: Option<usize>,
    /// Largest weight of one irrep.
    pub purity: f64,
    /// Weights above 1e-11, largest first.
    pub weights: Vec<(usize, f64)>,
    /// Irrep in the abelian subgroup, where one reaches the purity asked for.
    pub abelian: Option<usize>,
    /// Index into the sets of this spin.
    pub set: usize,
}

/// Orbitals that the operations turn into each other at one energy.
#[derive(Debug, Clone, PartialEq)]
pub struct SetLabel {
    /// Spin of its orbitals.
    pub spin: Spin,
    /// The irrep that all members share.
    pub irrep: Option<usize>,
    /// Running number within irrep and spin, from 1; 0 without an irrep.
    pub number: usize,
    /// Orbital indices from 0, in file order.
    pub orbitals: Vec<usize>,
    /// Dimension of the irrep; without one, the number of orbitals.
    pub degeneracy: usize,
    /// Mean energy, hartree, where every member has one.
    pub energy: Option<f64>,
    /// Largest difference of the members' energies, hartree.
    pub spread: f64,
    /// Σ occupations, where every member has one.
    pub electrons: Option<f64>,
    /// All partners are there, at one energy, and the operations keep them among themselves.
    pub complete: bool,
}

/// Labels of the orbitals of one spin.
#[derive(Debug, Clone, PartialEq)]
pub struct SpinLabels {
    /// Alpha, also for restricted orbitals.
    pub spin: Spin,
    /// In file order.
    pub orbitals: Vec<OrbitalLabel>,
    /// In order of energy.
    pub sets: Vec<SetLabel>,
    /// ⟨i|R|i⟩, n_orbitals × n_operations.
    pub expectations: Array2<f64>,
}

/// The nuclei's symmetry and every orbital's place in it.
#[derive(Debug)]
pub struct Labelled {
    /// All groups near the nuclei.
    pub detection: Detection,
    /// The group that the labels are in, placed on the nuclei.
    pub symmetry: Symmetry,
    /// How the group of the labels came about.
    pub derivation: Derivation,
    /// Basis, overlap, products and the convention found; coefficients are canonical.
    pub settled: Settled,
    /// Operations on orbitals, one an element of the group.
    pub operations: Operations,
    /// Alpha, then beta where there is one.
    pub spins: Vec<SpinLabels>,
}

/// Weights that are worth keeping: those left out must not show in the sum, 1 to 1e-9.
const WEIGHT_FLOOR: f64 = 1e-11;

/// Why a file gets no labels.
#[derive(Debug, thiserror::Error)]
pub enum LabelError {
    /// The file has no basis or no orbitals.
    #[error("the file holds no {0}: there is nothing to label")]
    Nothing(&'static str),
    /// The nuclei admit no symmetry search.
    #[error(transparent)]
    Geometry(#[from] crate::group::DetectError),
    /// The group found is not supported.
    #[error(transparent)]
    Group(#[from] crate::group::GroupError),
    /// No convention makes the orbitals orthonormal.
    #[error(transparent)]
    Convention(#[from] crate::wavefunction::ConventionError),
    /// The atoms of a frame are all at one place.
    #[error("the atoms of the frame are at one place: any group fits them; name one with --group, or add atoms")]
    SphericalFrame,
    /// A continuous group that the atoms do not come near to.
    #[error(
        "{wanted} has infinitely many operations; it can be asked for only where the atoms nearly have it, and they have {found}"
    )]
    Continuous {
        /// The group asked for.
        wanted: GroupName,
        /// That of the atoms.
        found: GroupName,
    },
    /// A subgroup has fewer orientations.
    #[error("{group} has {} orientations here, asked for number {asked}: {}", orientations.len(), orientations.join("; "))]
    Orientation {
        /// From 1.
        asked: usize,
        /// The subgroup.
        group: GroupName,
        /// In words.
        orientations: Vec<String>,
    },
    /// An operation carries a shell onto an atom without its like.
    #[error(transparent)]
    Turning(#[from] crate::wavefunction::TurningError),
}

/// Finds the group of the nuclei, settles the file's convention and labels every orbital.
///
/// The coefficients of `molecule` are rewritten to the canonical convention in place.
///
/// # Errors
/// [`LabelError`] when nuclei coincide, when no convention makes the orbitals orthonormal, or when an
/// operation carries an atom onto one with other functions.
pub fn label(molecule: &mut Molecule, thresholds: &Thresholds) -> Result<Labelled, LabelError> {
    label_in(molecule, thresholds, &Choice::default())
}

/// As [`label`], in a group of one's choice: a subgroup, a parent, that of some atoms.
///
/// # Errors
/// As [`label`], and when the group asked for cannot be laid over the atoms.
pub fn label_in(molecule: &mut Molecule, thresholds: &Thresholds, choice: &Choice) -> Result<Labelled, LabelError> {
    label_watched(molecule, thresholds, choice, &|_| {})
}

/// As [`label_in`], telling `watch` each stage as it begins.
///
/// # Errors
/// As [`label_in`].
pub fn label_watched(
    molecule: &mut Molecule,
    thresholds: &Thresholds,
    choice: &Choice,
    watch: &dyn Fn(Stage),
) -> Result<Labelled, LabelError> {
    if molecule.shells.is_empty() {
        return Err(LabelError::Nothing("basis functions ([GTO])"));
    }
    if molecule.orbital_sets.iter().all(|set| set.orbitals.is_empty()) {
        return Err(LabelError::Nothing("orbitals ([MO])"));
    }
    watch(Stage::Group);
    let placement = placement::place(molecule, thresholds.tolerance_bohr, choice)?;
    watch(Stage::Overlap);
    let settled = crate::wavefunction::settle(molecule, thresholds.orthonormality)?;
    watch(Stage::Operations);
    let operations = placement::operations(&settled, &placement)?;
    watch(Stage::Orbitals);
    let Placement { detection, symmetry, derivation } = placement;
    let spins = label_spins(molecule, &settled, &symmetry, &operations, thresholds);
    Ok(Labelled { detection, symmetry, derivation, settled, operations, spins })
}

fn label_spins(
    molecule: &Molecule,
    settled: &Settled,
    symmetry: &Symmetry,
    operations: &Operations,
    thresholds: &Thresholds,
) -> Vec<SpinLabels> {
    (0..molecule.orbital_sets.len())
        .map(|spin_idx| label_spin(molecule, spin_idx, settled, symmetry, operations, thresholds))
        .collect()
}

/// The same orbitals with the same group in other axes.
///
/// # Errors
/// [`LabelError::Turning`] when an operation carries an atom onto one with other functions.
pub fn relabelled(
    molecule: &Molecule,
    labelled: Labelled,
    symmetry: Symmetry,
    thresholds: &Thresholds,
) -> Result<Labelled, LabelError> {
    let Labelled { detection, derivation, settled, .. } = labelled;
    let placement = Placement { detection, symmetry, derivation };
    let operations = placement::operations(&settled, &placement)?;
    let Placement { detection, symmetry, derivation } = placement;
    let spins = label_spins(molecule, &settled, &symmetry, &operations, thresholds);
    Ok(Labelled { detection, symmetry, derivation, settled, operations, spins })
}

fn label_spin(
    molecule: &Molecule,
    spin_idx: usize,
    settled: &Settled,
    symmetry: &Symmetry,
    operations: &Operations,
    thresholds: &Thresholds,
) -> SpinLabels {
    let set = &molecule.orbital_sets[spin_idx];
    let (coefficients, products) = (set.coefficients.view(), settled.products[spin_idx].view());
    let group = &symmetry.group;
    let rows = Rows { coefficients, products };
    let expectations = operations.expectations(rows);
    let (all_weights, abelian_weights) = if group.name() == GroupName::K {
        (atom::weights(&settled.basis, group, coefficients, products), None)
    } else {
        let abelian = group.abelian_subgroup();
        let within = expectations.select(Axis(1), &abelian.embedding);
        (expectations.dot(&weights::projection(group)), Some(within.dot(&weights::projection(&abelian.group))))
    };
    let mut orbitals: Vec<OrbitalLabel> = all_weights
        .outer_iter()
        .enumerate()
        .map(|(i, row)| {
            let weights = ranked(row);
            let (best, purity) = weights.first().copied().unwrap_or((0, 0.0));
            let irrep = (purity >= thresholds.purity).then_some(best);
            let partner = irrep.filter(|&irrep| group.irreps()[irrep].dimension > 1).and_then(|irrep| {
                let partners = weights::partner_weights(group, irrep, expectations.row(i))?;
                partners.iter().position(|weight| *weight >= thresholds.partner * purity)
            });
            let abelian = abelian_weights
                .as_ref()
                .and_then(|all| all.row(i).iter().position(|weight| *weight >= thresholds.purity));
            OrbitalLabel { irrep, partner, purity, weights, abelian, set: 0 }
        })
        .collect();
    let connected = sets::Connected { orbitals: &set.orbitals, rows, operations, expectations: &expectations };
    let sets = sets::join(&connected, group, &orbitals, set.spin, thresholds);
    for (set_idx, set) in sets.iter().enumerate() {
        for &orbital in &set.orbitals {
            orbitals[orbital].set = set_idx;
        }
    }
    SpinLabels { spin: set.spin, orbitals, sets, expectations }
}

/// Weights above the floor, largest first; equal ones in the order of the irreps.
fn ranked(row: ArrayView1<'_, f64>) -> Vec<(usize, f64)> {
    let mut weights: Vec<(usize, f64)> =
        row.iter().copied().enumerate().filter(|entry| entry.1 > WEIGHT_FLOOR).collect();
    weights.sort_by(|a, b| b.1.total_cmp(&a.1));
    weights
}
