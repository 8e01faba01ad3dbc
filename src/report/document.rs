//! The document of `label`, `transitions` and `audit` as plain data: every key of the JSON output.
//!
//! Here: names, units (in the keys) and order of the fields. Not here: how the numbers come about.
//! Irreps are ASCII Mulliken names; orbitals count from 1 within one spin, in file order.

use schemars::JsonSchema;
use serde::Serialize;
use std::collections::BTreeMap;

/// Name and version of the JSON layout.
pub const SCHEMA: &str = "orbsieve/1";

/// The whole document.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct Document {
    /// Name and version of the layout.
    #[schemars(extend("const" = SCHEMA))]
    pub schema: &'static str,
    /// Where the numbers come from.
    pub source: Source,
    /// Point group and axes.
    pub geometry: Geometry,
    /// Basis functions and the convention found.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub basis: Option<BasisSummary>,
    /// One entry an orbital, alpha first.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub orbitals: Option<Vec<OrbitalEntry>>,
    /// Degenerate sets, alpha first, in order of energy.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub sets: Option<Vec<SetEntry>>,
    /// What the occupations say.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub frontier: Option<FrontierEntry>,
    /// The sets with most metal d.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub d_block: Vec<DBlockEntry>,
    /// Sets around the frontier, where a window was asked for.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub active_window: Vec<WindowEntry>,
    /// Pairs of sets with rules and strengths: those at the frontier, or those asked for.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub transitions: Option<Vec<super::transitions::TransitionEntry>>,
    /// Degenerate sets and the vibrations that split them when part-filled.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub jahn_teller: Vec<super::transitions::JahnTellerEntry>,
    /// Whether the wavefunction keeps the symmetry, where it was asked.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub audit: Option<super::audit::AuditEntry>,
    /// Limits that decided the labels.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub thresholds: Option<ThresholdEntry>,
    /// Cautions that belong to the numbers.
    pub cautions: Vec<String>,
}

/// The input.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct Source {
    /// File name as given, `-` for standard input.
    pub file: String,
    /// Title of the file.
    pub title: String,
    /// Number of atoms, ghosts included.
    pub atoms: usize,
    /// Sum formula of the real atoms, Hill order.
    pub formula: String,
    /// Σ occupations, null where the file gives none.
    pub electrons: Option<f64>,
    /// Nuclear charge less core electrons (of pseudopotentials, or plainly left out of the basis) less Σ occupations.
    pub charge: Option<f64>,
}

/// The nuclei.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct Geometry {
    /// The group that the labels are in.
    pub point_group: String,
    /// Number of operations, null for a continuous group.
    pub order: Option<usize>,
    /// The group of the nuclei within the tolerance.
    pub nuclear_group: String,
    /// Number of proper operations (1 for C∞v and an atom, 2 for D∞h).
    pub rotational_symmetry_number: usize,
    /// Tolerance asked for.
    pub tolerance_angstrom: f64,
    /// Largest distance of a nucleus from its symmetric place.
    pub deviation_max_angstrom: f64,
    /// Root mean square of the same.
    pub deviation_rms_angstrom: f64,
    /// Centre of the group in the file's coordinates.
    pub centre_bohr: [f64; 3],
    /// Unit vectors x, y, z in the file's coordinates.
    pub axes: [[f64; 3]; 3],
    /// In words: where the axes lie and by which rule.
    pub axes_convention: String,
    /// The abelian subgroup that most engines would use; null for an atom.
    pub abelian_subgroup: Option<AbelianEntry>,
    /// Labels that swap under another legal choice of axes.
    pub other_settings: Vec<SettingEntry>,
    /// Groups near the nuclei, lowest first.
    pub ladder: Vec<RungEntry>,
    /// How the group came about, where it is not simply that of the nuclei.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub placement: Option<super::placement::PlacementEntry>,
    /// What to know before trusting the group.
    pub warnings: Vec<String>,
}

/// The largest abelian subgroup among D2h and its subgroups.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct AbelianEntry {
    /// Its name.
    pub point_group: String,
    /// How its axes lie in those of the group.
    pub axes: String,
}

/// Another legal choice of axes.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct SettingEntry {
    /// In words.
    pub description: String,
    /// Irrep here → irrep there, only those that change.
    #[schemars(with = "BTreeMap<String, String>")]
    pub swaps: serde_json::Map<String, serde_json::Value>,
}

/// One group near the nuclei.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct RungEntry {
    /// Its name.
    pub point_group: String,
    /// Largest distance of a nucleus from its place under this group.
    pub deviation_max_angstrom: f64,
    /// Root mean square of the same.
    pub deviation_rms_angstrom: f64,
}

/// The basis.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct BasisSummary {
    /// Number of functions.
    pub functions: usize,
    /// Shells by letter.
    #[schemars(with = "BTreeMap<String, usize>")]
    pub shells: serde_json::Map<String, serde_json::Value>,
    /// Null when some shells are pure and some Cartesian.
    pub pure: Option<bool>,
    /// Normalisation and order found, in words.
    pub convention: String,
    /// Largest |CᵀSC − 1|.
    pub orthonormality_residual: f64,
}

/// A weight of one irrep.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct Weight {
    /// Irrep.
    pub irrep: String,
    /// 0 to 1.
    pub weight: f64,
}

/// A share of an orbital.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct ShareEntry {
    /// Atoms of one kind.
    pub atoms: String,
    /// Shell, such as `3d`, or a letter.
    pub shell: String,
    /// Löwdin share, 0 to 1.
    pub share: f64,
}

/// One orbital.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct OrbitalEntry {
    /// From 1 within the spin, file order.
    pub index: usize,
    /// `alpha` or `beta`.
    pub spin: crate::model::Spin,
    /// As the file gives it.
    pub energy_hartree: Option<f64>,
    /// As the file gives it.
    pub occupation: Option<f64>,
    /// Null where the purity is below the limit.
    pub irrep: Option<String>,
    /// Label of its set, null without an irrep.
    pub label: Option<String>,
    /// Partner within the irrep; null for a single one, or where freely turned.
    pub component: Option<String>,
    /// Largest weight.
    pub purity: f64,
    /// Irrep in the abelian subgroup.
    pub abelian_irrep: Option<String>,
    /// Largest first.
    pub weights: Vec<Weight>,
    /// Number of the set, from 1 over both spins.
    pub set: usize,
    /// Largest first; empty where populations were not computed.
    pub character: Vec<ShareEntry>,
}

/// One degenerate set.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct SetEntry {
    /// From 1 over both spins.
    pub set: usize,
    /// `alpha` or `beta`.
    pub spin: crate::model::Spin,
    /// Null where the members share none.
    pub irrep: Option<String>,
    /// Running number and lower-case symbol; null without an irrep.
    pub label: Option<String>,
    /// Without an irrep: those that the orbitals make together, turned among themselves at one energy.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub content: Option<String>,
    /// Orbitals by index from 1.
    pub orbitals: Vec<usize>,
    /// What the irrep becomes in the abelian subgroup, such as `B2g + B3g`; null without an irrep, or for an atom.
    pub abelian_irreps: Option<String>,
    /// Dimension of the irrep; without one the number of orbitals.
    pub degeneracy: usize,
    /// Mean energy.
    pub energy_hartree: Option<f64>,
    /// Largest difference within the set.
    pub energy_spread_hartree: f64,
    /// Σ occupations.
    pub electrons: Option<f64>,
    /// All partners are there, at one energy.
    pub complete: bool,
    /// Smallest purity of its members.
    pub purity: f64,
    /// Other sets at the same energy: accidental, not by symmetry.
    #[serde(skip_serializing_if = "Vec::is_empty")]
    pub accidental_with: Vec<usize>,
    /// Mean over the members, largest first.
    pub character: Vec<ShareEntry>,
}

/// Frontier and totals.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct FrontierEntry {
    /// One entry a spin.
    pub spins: Vec<SpinFrontier>,
    /// Electrons in orbitals of each irrep.
    #[schemars(with = "BTreeMap<String, f64>")]
    pub electrons_per_irrep: serde_json::Map<String, serde_json::Value>,
    /// Irrep of the determinant of closed shells, or the open shells it depends on.
    pub determinant: String,
}

/// Frontier of one spin.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct SpinFrontier {
    /// `alpha` or `beta`.
    pub spin: crate::model::Spin,
    /// Set number of the highest full set.
    pub homo: Option<usize>,
    /// Set numbers of part-filled sets.
    pub somo: Vec<usize>,
    /// Set number of the lowest empty set.
    pub lumo: Option<usize>,
    /// Orbital-energy difference LUMO − HOMO.
    pub gap_hartree: Option<f64>,
}

/// d block of the metals of one kind.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct DBlockEntry {
    /// Metal atoms.
    pub metals: String,
    /// In order of spin, then energy.
    pub levels: Vec<DLevelEntry>,
}

/// One set of a d block.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct DLevelEntry {
    /// Set number.
    pub set: usize,
    /// Label of the set.
    pub label: Option<String>,
    /// `alpha` or `beta`.
    pub spin: crate::model::Spin,
    /// Mean share of metal d.
    pub d_share: f64,
    /// Energy of the set.
    pub energy_hartree: Option<f64>,
    /// Above the set before of the same spin: orbital gap.
    pub gap_to_previous_hartree: Option<f64>,
}

/// A set touched by the window asked for.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct WindowEntry {
    /// Set number.
    pub set: usize,
    /// `alpha` or `beta`.
    pub spin: crate::model::Spin,
    /// Label of the set.
    pub label: Option<String>,
    /// Orbital indices in the file, from 1.
    pub orbitals: Vec<usize>,
    /// The same from 0.
    pub orbitals_from_zero: Vec<usize>,
    /// Position among the orbitals of its irrep in order of energy, from 1.
    pub within_irrep: Vec<usize>,
    /// The window holds only some of the set's orbitals.
    pub cut: bool,
}

/// Limits used.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct ThresholdEntry {
    /// Smallest weight that gives an irrep.
    pub purity: f64,
    /// Smallest share that gives a partner.
    pub partner: f64,
    /// Energies this near are one energy.
    pub degeneracy_hartree: f64,
    /// Partners are looked for within this energy.
    pub window_hartree: f64,
    /// Largest |CᵀSC − 1| accepted.
    pub orthonormality: f64,
}
