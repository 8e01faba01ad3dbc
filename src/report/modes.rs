//! Modes as data: the decomposition from the nuclei, and each mode of the file with its irrep and activity.
//!
//! Here: the document of `modes`. Not here: printing (`report::modes_text`), how irreps are found (`modes`).

use super::build::{geometry, source};
use super::document::{Geometry, SCHEMA, Source};
use super::rule::axes;
use super::transitions::ModeReference;
use crate::group::{Detection, GroupError, GroupName, PointGroup, Symmetry};
use crate::model::{Atom, Molecule};
use crate::modes::assignment::{self, ModeSet, Weighting};
use crate::modes::motion::{self, Motion};
use crate::modes::{Assignment, Kind};
use crate::selection::Operators;
use schemars::JsonSchema;
use serde::Serialize;
use serde_json::{Map, json};
use std::collections::BTreeMap;

/// Everything `modes` tells.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct ModesDocument {
    /// Name and version of the layout.
    #[schemars(extend("const" = SCHEMA))]
    pub schema: &'static str,
    /// The input.
    pub source: Source,
    /// The nuclei.
    pub geometry: Geometry,
    /// From permutations of nuclei alone.
    pub decomposition: DecompositionEntry,
    /// How the file's displacements were read, in words; null without modes.
    pub displacements: Option<String>,
    /// Largest |cosine| between two modes under that reading, mass-weighted.
    pub orthogonality_residual: Option<f64>,
    /// In file order of each set's first mode.
    pub sets: Vec<ModeSetEntry>,
    /// Irreps of which the file has more or fewer vibrations than the nuclei.
    pub differences: Vec<DifferenceEntry>,
    /// Whether file and nuclei agree irrep by irrep; null without modes.
    pub agrees: Option<bool>,
    /// What belongs to the numbers.
    pub cautions: Vec<String>,
}

/// Counts by irrep.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct DecompositionEntry {
    /// 3N − 6, or 3N − 5.
    pub n_vibrations: usize,
    /// Irrep → number of translations.
    #[schemars(with = "BTreeMap<String, usize>")]
    pub translations: Map<String, serde_json::Value>,
    /// Irrep → number of rotations.
    #[schemars(with = "BTreeMap<String, usize>")]
    pub rotations: Map<String, serde_json::Value>,
    /// Irrep → number of vibrations.
    #[schemars(with = "BTreeMap<String, usize>")]
    pub vibrations: Map<String, serde_json::Value>,
    /// Irrep → number of bond stretches, where the bonds are plain.
    #[schemars(with = "Option<BTreeMap<String, usize>>")]
    pub stretches: Option<Map<String, serde_json::Value>>,
    /// Irrep → number of the others: bends, torsions, out-of-plane motions.
    #[schemars(with = "Option<BTreeMap<String, usize>>")]
    pub bends: Option<Map<String, serde_json::Value>>,
    /// Activity of each irrep that vibrations have.
    pub activity: Vec<ActivityEntry>,
}

/// What light does with vibrations of one irrep.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct ActivityEntry {
    /// The irrep.
    pub irrep: String,
    /// How many.
    pub n: usize,
    /// By symmetry.
    pub infrared: bool,
    /// Axes of the transition moment.
    #[schemars(inner(regex(pattern = "^[xyz]$")))]
    pub polarisation: Vec<&'static str>,
    /// By symmetry.
    pub raman: bool,
}

/// Modes that are partners.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct ModeSetEntry {
    /// `translation`, `rotation` or `vibration`.
    #[schemars(extend("enum" = ["translation", "rotation", "vibration"]))]
    pub kind: &'static str,
    /// Irrep; null where none reaches the purity asked for.
    pub irrep: Option<String>,
    /// Modes with wavenumber, from 1 in file order.
    pub modes: Vec<ModeReference>,
    /// Smallest purity of the members.
    pub purity: f64,
    /// All partners are there.
    pub complete: bool,
    /// Largest share of rigid motion in a vibration, or of vibration in a rigid motion.
    pub foreign_share: f64,
    /// The file gives a negative wavenumber.
    pub imaginary: bool,
    /// By symmetry; null without an irrep.
    pub infrared: Option<bool>,
    /// Axes of the transition moment.
    #[schemars(inner(regex(pattern = "^[xyz]$")))]
    pub polarisation: Vec<&'static str>,
    /// By symmetry; null without an irrep.
    pub raman: Option<bool>,
    /// Σ of the file's infrared intensities.
    pub intensity: Option<f64>,
    /// What is unusual.
    pub remarks: Vec<String>,
}

/// File and nuclei do not agree.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct DifferenceEntry {
    /// The irrep.
    pub irrep: String,
    /// Vibrations in the file over the dimension of the irrep.
    pub in_file: f64,
    /// From the nuclei.
    pub from_nuclei: usize,
}

/// An intensity below this fraction of the file's largest counts as none.
const DARK: f64 = 1e-3;
/// Wavenumbers of rigid motions beyond this deserve a word, cm⁻¹.
const RESIDUAL_WAVENUMBER: f64 = 50.0;
/// A set below this purity deserves a word.
const PURE_ENOUGH: f64 = 0.99;
/// A share of the other kind of motion above this deserves a word.
const FOREIGN: f64 = 0.01;

fn counted(group: &PointGroup, terms: &[(usize, usize)]) -> Map<String, serde_json::Value> {
    terms.iter().map(|&(irrep, n)| (group.irreps()[irrep].name.to_string(), json!(n))).collect()
}

/// Works out the document of `modes`. `atoms` are those of the displacements, or of the molecule without modes.
///
/// # Errors
/// [`GroupError`] when the nuclei do not decompose, which permutations of a group always do.
pub fn modes_document(
    file: &str,
    molecule: &Molecule,
    atoms: &[Atom],
    bonds: &[(usize, usize)],
    placed: (&Detection, &Symmetry),
    assignment: Option<&Assignment>,
    tolerance_bohr: f64,
) -> Result<ModesDocument, GroupError> {
    let (detection, symmetry) = placed;
    let group = &symmetry.group;
    let operators = Operators::new(group);
    let motion = motion::motion(atoms, symmetry)?;
    let sets = assignment.map(|assignment| set_entries(molecule, assignment, group, &operators)).unwrap_or_default();
    let differences: Vec<DifferenceEntry> = assignment
        .map(|assignment| assignment::differences(assignment, &motion, group))
        .unwrap_or_default()
        .into_iter()
        .map(|(irrep, in_file, from_nuclei)| DifferenceEntry {
            irrep: group.irreps()[irrep].name.to_string(),
            in_file,
            from_nuclei,
        })
        .collect();
    let labelled_all = sets.iter().all(|set| set.kind != "vibration" || set.irrep.is_some());
    Ok(ModesDocument {
        schema: SCHEMA,
        source: source(file, molecule),
        geometry: geometry(molecule, detection, symmetry, tolerance_bohr),
        decomposition: decomposition(atoms, bonds, symmetry, &motion, &operators),
        displacements: assignment.map(|assignment| reading(assignment.weighting)),
        orthogonality_residual: assignment.map(|assignment| assignment.residual),
        agrees: assignment.map(|_| differences.is_empty() && labelled_all),
        sets,
        differences,
        cautions: cautions(group, assignment),
    })
}

fn decomposition(
    atoms: &[Atom],
    bonds: &[(usize, usize)],
    symmetry: &Symmetry,
    motion: &Motion,
    operators: &Operators,
) -> DecompositionEntry {
    let group = &symmetry.group;
    let parts = motion::stretches(atoms, bonds, symmetry, motion);
    let activity = |&(irrep, n): &(usize, usize)| {
        let polarisation = axes(&operators.polarisation(irrep));
        ActivityEntry {
            irrep: group.irreps()[irrep].name.to_string(),
            n,
            infrared: !polarisation.is_empty(),
            polarisation,
            raman: operators.is_raman_active(irrep),
        }
    };
    DecompositionEntry {
        n_vibrations: motion.vibrations.iter().map(|&(irrep, n)| n * group.irreps()[irrep].dimension).sum(),
        translations: counted(group, &motion.translations),
        rotations: counted(group, &motion.rotations),
        vibrations: counted(group, &motion.vibrations),
        stretches: parts.as_ref().map(|(stretches, _)| counted(group, stretches)),
        bends: parts.as_ref().map(|(_, bends)| counted(group, bends)),
        activity: motion.vibrations.iter().map(activity).collect(),
    }
}

fn reading(weighting: Weighting) -> String {
    match weighting {
        Weighting::Cartesian => "displacements of nuclei, not mass-weighted: orthogonal once multiplied with √m",
        Weighting::MassWeighted => "mass-weighted displacements: orthogonal as they stand",
    }
    .to_owned()
}

fn cautions(group: &PointGroup, assignment: Option<&Assignment>) -> Vec<String> {
    let mut cautions =
        vec!["active means allowed by symmetry, not strong; overtones and combinations are not listed".to_owned()];
    if let Some(assignment) = assignment {
        cautions.push(
            "irreps do not depend on how displacements are mass-weighted, as like nuclei have like masses; a file computed for \
             mixed isotopes shows as impure modes"
                .to_owned(),
        );
        if assignment.residual > 0.05 {
            cautions.push(format!(
                "the modes are orthogonal in neither reading (largest cosine {:.2}): shares of translation and rotation are rough",
                assignment.residual
            ));
        }
    }
    if group.name() == GroupName::K {
        cautions.push("a single atom has no vibrations".to_owned());
    }
    cautions
}

fn set_entries(
    molecule: &Molecule,
    assignment: &Assignment,
    group: &PointGroup,
    operators: &Operators,
) -> Vec<ModeSetEntry> {
    let Some(vibrations) = &molecule.vibrations else { return Vec::new() };
    let largest = vibrations.modes.iter().filter_map(|mode| mode.intensity).fold(0.0, f64::max);
    let entry = |set: &ModeSet| {
        let members = set.modes.iter().map(|&mode| &assignment.modes[mode]);
        let purity = members.clone().map(|mode| mode.purity).fold(1.0, f64::min);
        let foreign_share = members.map(|mode| mode.foreign).fold(0.0, f64::max);
        let wavenumbers: Vec<Option<f64>> = set.modes.iter().map(|&mode| vibrations.modes[mode].wavenumber).collect();
        let intensity: Option<f64> = set.modes.iter().map(|&mode| vibrations.modes[mode].intensity).sum();
        let infrared = set.irrep.map(|irrep| !operators.polarisation(irrep).is_empty());
        let mut entry = ModeSetEntry {
            kind: match set.kind {
                Kind::Translation => "translation",
                Kind::Rotation => "rotation",
                Kind::Vibration => "vibration",
            },
            irrep: set.irrep.map(|irrep| group.irreps()[irrep].name.to_string()),
            modes: set
                .modes
                .iter()
                .zip(&wavenumbers)
                .map(|(&mode, &wavenumber_per_cm)| ModeReference { mode: mode + 1, wavenumber_per_cm })
                .collect(),
            purity,
            complete: set.complete,
            foreign_share,
            imaginary: set.kind == Kind::Vibration && wavenumbers.iter().flatten().any(|&number| number < 0.0),
            infrared,
            polarisation: set.irrep.map(|irrep| axes(&operators.polarisation(irrep))).unwrap_or_default(),
            raman: set.irrep.map(|irrep| operators.is_raman_active(irrep)),
            intensity,
            remarks: Vec::new(),
        };
        entry.remarks = remarks(&entry, largest);
        entry
    };
    assignment.sets.iter().map(entry).collect()
}

fn remarks(set: &ModeSetEntry, largest_intensity: f64) -> Vec<String> {
    let mut remarks = Vec::new();
    let listed = set.purity > 0.0;
    if !listed {
        remarks.push("the file lists no displacements for it".to_owned());
        return remarks;
    }
    // Rigid motions lie together at zero and may be mixed freely.
    match (set.kind, &set.irrep) {
        ("vibration", None) => remarks.push("no irrep reaches the purity limit".to_owned()),
        ("vibration", Some(_)) if set.purity < PURE_ENOUGH => remarks.push("impure".to_owned()),
        (_, None) => remarks.push("mixed freely".to_owned()),
        _ => {}
    }
    if set.irrep.is_some() && !set.complete && set.kind == "vibration" {
        remarks.push("partners missing at this wavenumber".to_owned());
    }
    if set.imaginary {
        remarks.push("imaginary: not a minimum along this mode".to_owned());
    }
    if set.foreign_share > FOREIGN {
        let other = if set.kind == "vibration" { "translation and rotation" } else { "vibration" };
        remarks.push(format!("{:.0} % {other}", 100.0 * set.foreign_share));
    }
    let far = set.modes.iter().filter_map(|mode| mode.wavenumber_per_cm).any(|n| n.abs() > RESIDUAL_WAVENUMBER);
    if set.kind != "vibration" && far {
        remarks.push("not at zero: not projected out".to_owned());
    }
    if set.kind == "vibration" && largest_intensity > 0.0 {
        let bright = set.intensity.is_some_and(|intensity| intensity > DARK * largest_intensity);
        match set.infrared {
            Some(false) if bright => remarks.push("infrared by the file, forbidden by symmetry".to_owned()),
            Some(true) if !bright && set.intensity.is_some() => {
                remarks.push("allowed, yet dark in the file".to_owned());
            }
            _ => {}
        }
    }
    remarks
}
