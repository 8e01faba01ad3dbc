//! From labels to the document: names instead of indices, the units of the JSON keys.

use super::document::{
    AbelianEntry, BasisSummary, DBlockEntry, DLevelEntry, Document, FrontierEntry, Geometry, OrbitalEntry, RungEntry,
    SCHEMA, SetEntry, SettingEntry, ShareEntry, Source, SpinFrontier, ThresholdEntry, Weight, WindowEntry,
};
use super::placement::placement_entry;
use super::transitions::{self, Context, TransitionEntry};
use crate::group::{Detection, GroupName, IrrepName, PointGroup, Rung, Symmetry};
use crate::labelling::composition::{Grouping, Share, ranges};
use crate::labelling::descent::sum_of_irreps;
use crate::labelling::frontier::{self, Configuration};
use crate::labelling::sets::content;
use crate::labelling::{Labelled, SetLabel, Thresholds, d_block};
use crate::model::{ANGSTROM_PER_BOHR, Atom, Molecule, elements};
use crate::selection::{self, Choice, SelectError};
use ndarray::{Array2, Axis};
use serde_json::{Map, json};
use std::fmt::Write as _;

/// Shares below this are not listed.
const SHARE_FLOOR: f64 = 0.01;

/// What `label` was asked to tell beside the labels.
#[derive(Debug, Clone, Copy, Default)]
pub struct Wanted {
    /// Orbitals below and above the frontier to list as an active space.
    pub window: Option<(usize, usize)>,
    /// Transitions at the frontier: their moments cost several times the overlap.
    pub frontier_transitions: bool,
}

/// Running number and symbol of a set.
#[must_use]
pub fn set_label(group: &PointGroup, set: &SetLabel) -> Option<String> {
    set.irrep.map(|irrep| format!("{}{}", set.number, group.irreps()[irrep].name.symbol()))
}

/// The source block; electrons and charge only where the file gives occupations.
#[must_use]
pub fn source(file: &str, molecule: &Molecule) -> Source {
    let occupations = molecule.orbital_sets.iter().flat_map(|set| &set.orbitals).map(|orbital| orbital.occupation);
    let electrons: Option<f64> =
        if molecule.orbital_sets.is_empty() { None } else { occupations.sum::<Option<f64>>().filter(|n| *n > 0.0) };
    let nuclei: f64 = molecule
        .atoms
        .iter()
        .zip(cores_left_out(molecule))
        .filter(|(atom, _)| !atom.ghost)
        .map(|(atom, left_out)| f64::from(atom.element) - f64::from(atom.core_electrons + left_out))
        .sum();
    Source {
        file: file.to_owned(),
        title: molecule.title.clone(),
        atoms: molecule.atoms.len(),
        formula: elements::formula(&molecule.atoms),
        electrons,
        charge: electrons.map(|electrons| nuclei - electrons),
    }
}

/// Another choice of axes with the names that swap.
#[must_use]
pub fn setting_entry(description: &str, swaps: &[(IrrepName, IrrepName)]) -> SettingEntry {
    SettingEntry {
        description: description.to_owned(),
        swaps: swaps.iter().map(|(here, there)| (here.to_string(), json!(there.to_string()))).collect(),
    }
}

/// More atoms or bonds than this on one axis are counted, not named.
const NAMED_ON_AXIS: usize = 8;

/// The convention, then the atoms and bonds that each axis passes through by name.
fn axes_in_words(molecule: &Molecule, symmetry: &Symmetry) -> String {
    let atom = |i: &usize| format!("{}{}", elements::label(&molecule.atoms[*i]), i + 1);
    let bond = |(i, j): &(usize, usize)| format!("{}–{}", atom(i), atom(j));
    let list = |names: Vec<String>, what: &str| match names.len() {
        0 => None,
        n if n > NAMED_ON_AXIS => Some(format!("{n} {what}")),
        _ => Some(names.join(" ")),
    };
    let mut text = symmetry.frame.convention.clone();
    let free = molecule.atoms.len() < 2 || symmetry.group.name() == GroupName::C1;
    // What all three pass is the centre and tells nothing.
    let [x, y, z] = &symmetry.passages;
    let central_atom = |i: &usize| [x, y, z].iter().all(|passage| passage.atoms.contains(i));
    let central_bond = |bond: &(usize, usize)| [x, y, z].iter().all(|passage| passage.bonds.contains(bond));
    for (axis, passage) in ["x", "y", "z"].iter().zip(&symmetry.passages).filter(|_| !free) {
        let atoms = list(passage.atoms.iter().filter(|i| !central_atom(i)).map(atom).collect(), "atoms");
        let bonds = list(passage.bonds.iter().filter(|pair| !central_bond(pair)).map(bond).collect(), "bonds");
        let parts: Vec<String> = [atoms, bonds].into_iter().flatten().collect();
        if !parts.is_empty() {
            let _ = write!(text, "; {axis} passes {}", parts.join(" and "));
        }
    }
    text
}

/// Electrons of each atom's noble-gas core that the file leaves out without saying so.
///
/// An atom with fewer s shells than its neutral atom fills cannot hold its core (valence-only bases).
fn cores_left_out(molecule: &Molecule) -> Vec<u32> {
    const NOBLE: [u8; 6] = [2, 10, 18, 36, 54, 86];
    let mut s_shells = vec![0; molecule.atoms.len()];
    for shell in molecule.shells.iter().filter(|shell| shell.l == 0) {
        s_shells[shell.atom_idx] += 1;
    }
    let left_out = |(atom, s_shells): (&Atom, usize)| {
        let filled = elements::occupied_shells(atom.element).iter().filter(|shell| shell.1 == 0).count();
        let core = NOBLE.iter().rev().find(|noble| **noble < atom.element).copied().unwrap_or(0);
        // Atoms without any function (point charges, dummies) tell nothing.
        if atom.core_electrons == 0 && (1..filled).contains(&s_shells) { u32::from(core) } else { 0 }
    };
    molecule.atoms.iter().zip(s_shells).map(left_out).collect()
}

/// What Σ occupations and the nuclear charges say against each other.
fn electron_cautions(molecule: &Molecule) -> Vec<String> {
    let source = source("", molecule);
    let (Some(electrons), Some(charge)) = (source.electrons, source.charge) else {
        return vec!["the file gives no occupations: nothing is said of HOMO, LUMO and electrons".to_owned()];
    };
    let mut cautions = Vec::new();
    if (electrons - electrons.round()).abs() > 1e-3 {
        cautions.push(format!("the occupations sum to {electrons:.4}, which is no whole number of electrons"));
    }
    let left_out: u32 = cores_left_out(molecule).iter().sum();
    if left_out > 0 {
        cautions.push(format!(
            "some atoms have fewer s shells than they fill: a basis for valence electrons only, so {left_out} core \
             electrons are counted as left out"
        ));
    }
    if charge.abs() > 8.0 {
        cautions.push(format!(
            "nuclei less electrons give a charge of {charge:+.0}: occupations or atomic numbers may be wrong"
        ));
    }
    cautions
}

/// A group this many times the tolerance away is worth a word.
const NEAR: f64 = 3.0;

/// What to know before trusting the group: a higher one close by, nuclei that reach the tolerance, a search cut short.
fn geometry_warnings(detection: &Detection, symmetry: &Symmetry, tolerance_bohr: f64) -> Vec<String> {
    let angstrom = |bohr: f64| bohr * ANGSTROM_PER_BOHR;
    let mut warnings = Vec::new();
    let higher = |rung: &&Rung| rung.deviation.max > tolerance_bohr && rung.deviation.max <= NEAR * tolerance_bohr;
    if let Some(rung) = detection.ladder.iter().find(higher) {
        warnings.push(format!(
            "the nuclei have {} at {:.4} Å, just beyond the tolerance: labels in it with a larger --tolerance",
            rung.name,
            angstrom(rung.deviation.max)
        ));
    }
    if symmetry.deviation.max > 0.5 * tolerance_bohr && symmetry.deviation.max <= tolerance_bohr {
        warnings.push(format!(
            "the nuclei use {:.0} % of the tolerance: a tighter --tolerance gives a lower group",
            100.0 * symmetry.deviation.max / tolerance_bohr
        ));
    }
    if detection.searched_bohr < tolerance_bohr {
        warnings.push(format!(
            "so many nuclei look alike that groups were searched up to {:.4} Å only, below the tolerance",
            angstrom(detection.searched_bohr)
        ));
    }
    warnings
}

/// The geometry block.
#[must_use]
pub fn geometry(molecule: &Molecule, detection: &Detection, symmetry: &Symmetry, tolerance_bohr: f64) -> Geometry {
    let group = &symmetry.group;
    let angstrom = |bohr: f64| bohr * ANGSTROM_PER_BOHR;
    let axes = &symmetry.frame.axes;
    Geometry {
        point_group: group.name().to_string(),
        order: (!group.name().is_continuous()).then(|| group.elements().len()),
        nuclear_group: detection.at(tolerance_bohr).name.to_string(),
        rotational_symmetry_number: symmetry.rotational_symmetry_number,
        tolerance_angstrom: angstrom(tolerance_bohr),
        deviation_max_angstrom: angstrom(symmetry.deviation.max),
        deviation_rms_angstrom: angstrom(symmetry.deviation.rms),
        centre_bohr: symmetry.frame.centre.coords.into(),
        axes: std::array::from_fn(|row| std::array::from_fn(|column| axes[(row, column)])),
        axes_convention: axes_in_words(molecule, symmetry),
        abelian_subgroup: (group.name() != GroupName::K).then(|| {
            let abelian = group.abelian_subgroup();
            AbelianEntry { point_group: abelian.group.name().to_string(), axes: abelian.description }
        }),
        other_settings: symmetry
            .other_settings
            .iter()
            .map(|setting| setting_entry(&setting.description, &setting.swaps))
            .collect(),
        ladder: detection
            .ladder
            .iter()
            .map(|rung| RungEntry {
                point_group: rung.name.to_string(),
                deviation_max_angstrom: angstrom(rung.deviation.max),
                deviation_rms_angstrom: angstrom(rung.deviation.rms),
            })
            .collect(),
        placement: None,
        warnings: geometry_warnings(detection, symmetry, tolerance_bohr),
    }
}

/// Everything `label` finds, as a document. `lowdin` holds one matrix of Löwdin weights a spin, or nothing.
#[must_use]
pub fn label_document(
    file: &str,
    molecule: &Molecule,
    labelled: &Labelled,
    lowdin: Option<&[Array2<f64>]>,
    thresholds: &Thresholds,
    wanted: Wanted,
) -> Document {
    let group = &labelled.symmetry.group;
    let grouping = Grouping::new(molecule, &labelled.settled.basis, &labelled.symmetry, &labelled.derivation.turned);
    let builder = Builder { molecule, labelled, group, grouping: &grouping, lowdin };
    let mut cautions = electron_cautions(molecule);
    if lowdin.is_none() {
        cautions.push("populations were not computed for this size of basis; ask for them with --character".to_owned());
    }
    if !wanted.frontier_transitions {
        cautions.push("frontier transitions were not computed for this size of basis; `transitions` does".to_owned());
    }
    let sets = builder.sets(thresholds);
    let mut geometry = geometry(molecule, &labelled.detection, &labelled.symmetry, thresholds.tolerance_bohr);
    geometry.placement = placement_entry(molecule, labelled);
    Document {
        schema: SCHEMA,
        source: source(file, molecule),
        geometry,
        basis: Some(builder.basis()),
        orbitals: Some(builder.orbitals()),
        frontier: Some(builder.frontier()),
        d_block: builder.d_block(),
        active_window: wanted.window.map(|(below, above)| builder.window(below, above)).unwrap_or_default(),
        sets: Some(sets),
        transitions: wanted.frontier_transitions.then(|| frontier_transitions(molecule, labelled)).flatten(),
        jahn_teller: Vec::new(),
        audit: None,
        thresholds: Some(threshold_entry(thresholds)),
        cautions,
    }
}

/// The limits that decide labels.
#[must_use]
pub fn threshold_entry(thresholds: &Thresholds) -> ThresholdEntry {
    ThresholdEntry {
        purity: thresholds.purity,
        partner: thresholds.partner,
        degeneracy_hartree: thresholds.degeneracy_hartree,
        window_hartree: thresholds.window_hartree,
        orthonormality: thresholds.orthonormality,
    }
}

/// Transitions among the two highest occupied and two lowest empty sets; None where the file gives no occupations.
fn frontier_transitions(molecule: &Molecule, labelled: &Labelled) -> Option<Vec<TransitionEntry>> {
    let choice = Choice { from: Vec::new(), to: Vec::new(), window: (2, 2), largest_gap: None };
    let pairs = selection::choose(&labelled.spins, &labelled.symmetry.group, &choice).ok()?;
    Some(Context::new(molecule, labelled).entries(&pairs))
}

/// The document of `transitions`: nuclei, sets and the pairs asked for.
///
/// # Errors
/// [`SelectError`] when a name fits no set.
pub fn transitions_document(
    file: &str,
    molecule: &Molecule,
    labelled: &Labelled,
    thresholds: &Thresholds,
    choice: &Choice,
    allowed_only: bool,
) -> Result<Document, SelectError> {
    let pairs = selection::choose(&labelled.spins, &labelled.symmetry.group, choice)?;
    let context = Context::new(molecule, labelled);
    let mut entries = context.entries(&pairs);
    if allowed_only {
        entries.retain(|entry| entry.electric_dipole.allowed == Some(true));
    }
    let mut document = label_document(file, molecule, labelled, None, thresholds, Wanted::default());
    document.orbitals = None;
    document.transitions = Some(entries);
    document.jahn_teller = context.jahn_teller();
    document.cautions = transitions::CAUTIONS.map(str::to_owned).to_vec();
    Ok(document)
}

/// The document of `geometry`: nuclei only.
#[must_use]
pub fn geometry_document(
    file: &str,
    molecule: &Molecule,
    detection: &Detection,
    symmetry: &Symmetry,
    tolerance_bohr: f64,
) -> Document {
    Document {
        schema: SCHEMA,
        source: source(file, molecule),
        geometry: geometry(molecule, detection, symmetry, tolerance_bohr),
        basis: None,
        orbitals: None,
        sets: None,
        frontier: None,
        d_block: Vec::new(),
        active_window: Vec::new(),
        transitions: None,
        jahn_teller: Vec::new(),
        audit: None,
        thresholds: None,
        cautions: Vec::new(),
    }
}

/// The text of each orbital's `Sym=` line, spin by spin: its label, or the largest irrep in question marks.
#[must_use]
pub fn sym_labels(labelled: &Labelled) -> Vec<Vec<String>> {
    let group = &labelled.symmetry.group;
    let of_spin = |spin: &crate::labelling::SpinLabels| {
        let text = |label: &crate::labelling::OrbitalLabel| {
            set_label(group, &spin.sets[label.set]).filter(|_| label.irrep.is_some()).unwrap_or_else(|| {
                let largest =
                    label.weights.first().map_or("?".to_owned(), |&(irrep, _)| group.irreps()[irrep].name.symbol());
                format!("?{largest}?")
            })
        };
        spin.orbitals.iter().map(text).collect()
    };
    labelled.spins.iter().map(of_spin).collect()
}

struct Builder<'a> {
    molecule: &'a Molecule,
    labelled: &'a Labelled,
    group: &'a PointGroup,
    grouping: &'a Grouping,
    lowdin: Option<&'a [Array2<f64>]>,
}

impl Builder<'_> {
    /// Electrons an orbital can hold.
    fn capacity(&self) -> f64 {
        if self.labelled.spins.len() > 1 { 1.0 } else { 2.0 }
    }

    /// Number, from 1 over both spins, of a spin's first set less one.
    fn first_set(&self, spin_idx: usize) -> usize {
        self.labelled.spins[..spin_idx].iter().map(|spin| spin.sets.len()).sum()
    }

    fn basis(&self) -> BasisSummary {
        let shells = &self.molecule.shells;
        let mut counts = Map::new();
        for l in 0..=shells.iter().map(|shell| shell.l).max().unwrap_or(0) {
            let count = shells.iter().filter(|shell| shell.l == l).count();
            counts.insert(crate::labelling::composition::letter(l).to_string(), json!(count));
        }
        let above_p: Vec<bool> = shells.iter().filter(|shell| shell.l > 1).map(|shell| shell.pure).collect();
        let all_alike = above_p.windows(2).all(|pair| pair[0] == pair[1]);
        BasisSummary {
            functions: self.molecule.n_functions(),
            shells: counts,
            pure: all_alike.then(|| above_p.first().copied().unwrap_or(true)),
            convention: self.labelled.settled.convention.describe(),
            orthonormality_residual: self.labelled.settled.residual,
        }
    }

    fn shares(&self, spin_idx: usize, orbitals: &[usize]) -> Vec<ShareEntry> {
        let Some(lowdin) = self.lowdin else { return Vec::new() };
        let Some(mean) = lowdin[spin_idx].select(Axis(0), orbitals).mean_axis(Axis(0)) else { return Vec::new() };
        let entry = |share: Share| ShareEntry {
            atoms: self.grouping.orbit_names[share.orbit].clone(),
            shell: share.shell,
            share: share.share,
        };
        self.grouping.shares(mean.view(), SHARE_FLOOR).into_iter().map(entry).collect()
    }

    fn orbitals(&self) -> Vec<OrbitalEntry> {
        let abelian = self.group.abelian_subgroup();
        let mut entries = Vec::new();
        for (spin_idx, spin) in self.labelled.spins.iter().enumerate() {
            let file = &self.molecule.orbital_sets[spin_idx].orbitals;
            for (i, (label, orbital)) in spin.orbitals.iter().zip(file).enumerate() {
                let set = &spin.sets[label.set];
                entries.push(OrbitalEntry {
                    index: i + 1,
                    spin: spin.spin,
                    energy_hartree: orbital.energy,
                    occupation: orbital.occupation,
                    irrep: label.irrep.map(|irrep| self.group.irreps()[irrep].name.to_string()),
                    label: label.irrep.and_then(|_| set_label(self.group, set)),
                    component: label
                        .irrep
                        .zip(label.partner)
                        .map(|(irrep, partner)| self.group.irreps()[irrep].partners[partner].clone()),
                    purity: label.purity,
                    abelian_irrep: label.abelian.map(|irrep| abelian.group.irreps()[irrep].name.to_string()),
                    weights: label
                        .weights
                        .iter()
                        .map(|&(irrep, weight)| Weight { irrep: self.group.irreps()[irrep].name.to_string(), weight })
                        .collect(),
                    set: self.first_set(spin_idx) + label.set + 1,
                    character: self.shares(spin_idx, &[i]),
                });
            }
        }
        entries
    }

    fn sets(&self, thresholds: &Thresholds) -> Vec<SetEntry> {
        let mut entries = Vec::new();
        let abelian = (self.group.name() != GroupName::K).then(|| self.group.abelian_subgroup());
        let descended = |irrep: usize| {
            let abelian = abelian.as_ref()?;
            Some(super::table::sum(&abelian.group, &self.group.subduce(abelian, irrep).ok()?))
        };
        for (spin_idx, spin) in self.labelled.spins.iter().enumerate() {
            let first = self.first_set(spin_idx);
            for (set_idx, set) in spin.sets.iter().enumerate() {
                let near = |other: &SetLabel| matches!((set.energy, other.energy), (Some(a), Some(b)) if (a - b).abs() <= thresholds.degeneracy_hartree);
                let accidental_with = (0..spin.sets.len())
                    .filter(|&other| other != set_idx && near(&spin.sets[other]))
                    .map(|other| first + other + 1);
                entries.push(SetEntry {
                    set: first + set_idx + 1,
                    spin: spin.spin,
                    irrep: set.irrep.map(|irrep| self.group.irreps()[irrep].name.to_string()),
                    label: set_label(self.group, set),
                    content: if set.irrep.is_none() { content(self.group, &spin.orbitals, set) } else { None }
                        .map(|sum| sum_of_irreps(self.group, &sum)),
                    orbitals: set.orbitals.iter().map(|i| i + 1).collect(),
                    abelian_irreps: set.irrep.and_then(&descended),
                    degeneracy: set.degeneracy,
                    energy_hartree: set.energy,
                    energy_spread_hartree: set.spread,
                    electrons: set.electrons,
                    complete: set.complete,
                    purity: set.orbitals.iter().map(|&i| spin.orbitals[i].purity).fold(1.0, f64::min),
                    accidental_with: accidental_with.collect(),
                    character: self.shares(spin_idx, &set.orbitals),
                });
            }
        }
        entries
    }

    fn frontier(&self) -> FrontierEntry {
        let spins = &self.labelled.spins;
        let of_spin = |(spin_idx, spin): (usize, &crate::labelling::SpinLabels)| {
            let found = frontier::frontier(&spin.sets, self.capacity());
            let number = |set: usize| self.first_set(spin_idx) + set + 1;
            let energy = |set: Option<usize>| set.and_then(|set| spin.sets[set].energy);
            SpinFrontier {
                spin: spin.spin,
                homo: found.homo.map(number),
                somo: found.somo.iter().copied().map(number).collect(),
                lumo: found.lumo.map(number),
                gap_hartree: energy(found.lumo).zip(energy(found.homo)).map(|(lumo, homo)| lumo - homo),
            }
        };
        let (counts, unlabelled) = frontier::electrons_per_irrep(spins, self.group.irreps().len());
        let mut electrons_per_irrep = Map::new();
        for (irrep, electrons) in self.group.irreps().iter().zip(counts).filter(|(_, electrons)| *electrons > 1e-9) {
            electrons_per_irrep.insert(irrep.name.to_string(), json!(electrons));
        }
        if unlabelled > 1e-9 {
            electrons_per_irrep.insert("none".to_owned(), json!(unlabelled));
        }
        FrontierEntry {
            spins: spins.iter().enumerate().map(of_spin).collect(),
            electrons_per_irrep,
            determinant: self.determinant(),
        }
    }

    fn determinant(&self) -> String {
        let name = |irrep: usize| self.group.irreps()[irrep].name.to_string();
        match frontier::configuration(self.group, &self.labelled.spins, self.capacity()) {
            Configuration::Closed(irrep) if self.capacity() > 1.5 => format!("{} (closed shell)", name(irrep)),
            Configuration::Closed(irrep) => format!("{} (full sets of spin orbitals)", name(irrep)),
            Configuration::Open(irreps) => {
                format!("open: {}", irreps.iter().map(|&irrep| name(irrep)).collect::<Vec<_>>().join(" × "))
            }
            Configuration::Unknown => {
                "not established: some occupied orbitals have no irrep, a set is incomplete, or occupations are missing"
                    .to_owned()
            }
        }
    }

    fn d_block(&self) -> Vec<DBlockEntry> {
        let Some(lowdin) = self.lowdin else { return Vec::new() };
        let functions: Vec<(usize, usize)> = self
            .labelled
            .settled
            .basis
            .shells()
            .iter()
            .flat_map(|shell| std::iter::repeat_n((shell.atom_idx, shell.l), shell.n_functions()))
            .collect();
        let spins = &self.labelled.spins;
        d_block::d_blocks(self.molecule, &self.labelled.symmetry, self.grouping, &functions, lowdin, spins)
            .into_iter()
            .map(|block| {
                let mut levels: Vec<DLevelEntry> = Vec::new();
                for level in block.levels {
                    let set = &spins[level.spin_idx].sets[level.set_idx];
                    let before =
                        levels.last().filter(|last| last.spin == set.spin).and_then(|last| last.energy_hartree);
                    levels.push(DLevelEntry {
                        set: self.first_set(level.spin_idx) + level.set_idx + 1,
                        label: set_label(self.group, set),
                        spin: set.spin,
                        d_share: level.share,
                        energy_hartree: set.energy,
                        gap_to_previous_hartree: set.energy.zip(before).map(|(here, before)| here - before),
                    });
                }
                let symbol = elements::label(&self.molecule.atoms[block.metals[0]]);
                DBlockEntry { metals: format!("{symbol} {}", ranges(&block.metals)), levels }
            })
            .collect()
    }

    fn window(&self, below: usize, above: usize) -> Vec<WindowEntry> {
        let mut entries = Vec::new();
        for (spin_idx, spin) in self.labelled.spins.iter().enumerate() {
            let window = frontier::window(&spin.sets, self.capacity(), below, above);
            for &set_idx in &window.sets {
                let set = &spin.sets[set_idx];
                let before: usize = spin.sets[..set_idx]
                    .iter()
                    .filter(|other| other.irrep == set.irrep)
                    .map(|other| other.orbitals.len())
                    .sum();
                entries.push(WindowEntry {
                    set: self.first_set(spin_idx) + set_idx + 1,
                    spin: spin.spin,
                    label: set_label(self.group, set),
                    orbitals: set.orbitals.iter().map(|i| i + 1).collect(),
                    orbitals_from_zero: set.orbitals.clone(),
                    within_irrep: (before + 1..=before + set.orbitals.len()).collect(),
                    cut: window.cut.contains(&set_idx),
                });
            }
        }
        entries
    }
}
