//! Why one set of orbitals has its label, as data: characters, reduction, projection, partners, degeneracy.
//!
//! Here: the document of `label --explain`. Not here: the numbers (`labelling::reasoning`), the text
//! (`report::explain_text`), pairs of sets (`report::explain_pair`).

use super::build::{set_label, source};
use super::document::{SCHEMA, Source, ThresholdEntry, Weight};
use super::unicode::pretty;
use crate::group::{GroupName, PointGroup, exact_character};
use crate::labelling::reasoning::{Reasoning, reasoning};
use crate::labelling::{Labelled, OrbitalLabel, SetLabel, Thresholds};
use crate::model::{Molecule, Spin};
use crate::selection::FoundSet;
use nalgebra::Matrix3;
use schemars::JsonSchema;
use serde::Serialize;

/// Why one set has its label.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct ExplainDocument {
    /// Name and version of the layout.
    #[schemars(extend("const" = SCHEMA))]
    pub schema: &'static str,
    /// The input.
    pub source: Source,
    /// The group that the labels are in.
    pub point_group: String,
    /// Operations summed over: the order, of a continuous group those of its finite stand-in.
    pub operations: usize,
    /// The set as asked for.
    pub asked: String,
    /// The set explained.
    pub set: ExplainedSet,
    /// Traces by class; empty for an atom. Of a continuous group one class stands for each kind.
    pub characters: Vec<CharacterEntry>,
    /// How often each irrep is in the set.
    pub reduction: Vec<ReductionEntry>,
    /// Each orbital of the set.
    pub orbitals: Vec<ExplainedOrbital>,
    /// Mean over the operations of ⟨i|R|j⟩² between the set's orbitals, row by row.
    pub connections: Vec<Vec<f64>>,
    /// What that mean is for partners of the set's irrep: 1/d.
    pub connection_of_partners: Option<f64>,
    /// The orbital nearest in energy that is not in the set.
    pub nearest_outside: Option<OutsideEntry>,
    /// The steps in words.
    pub conclusions: Vec<String>,
    /// Limits that decided the label.
    pub thresholds: ThresholdEntry,
}

/// The set explained.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct ExplainedSet {
    /// Number of the set, from 1 over both spins.
    pub set: usize,
    /// `alpha` or `beta`.
    pub spin: Spin,
    /// Running number and lower-case symbol; null without an irrep.
    pub label: Option<String>,
    /// The irrep that all members share.
    pub irrep: Option<String>,
    /// Orbitals by index from 1.
    pub orbitals: Vec<usize>,
    /// Mean energy.
    pub energy_hartree: Option<f64>,
    /// Largest difference within the set.
    pub energy_spread_hartree: f64,
    /// Σ occupations.
    pub electrons: Option<f64>,
    /// All partners are there, at one energy.
    pub complete: bool,
}

/// The trace of the set under one class.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct CharacterEntry {
    /// Symbol of the class.
    pub class: String,
    /// Operations in it.
    pub size: usize,
    /// Angle of the operations that stand for a class of a continuous group; null elsewhere.
    pub angle_degrees: Option<f64>,
    /// Σ⟨i|R|i⟩ over the set's orbitals, mean over the class.
    pub measured: f64,
    /// Largest distance of one operation from that mean.
    pub spread: f64,
    /// Character of the set's irrep; null without one.
    pub table: Option<f64>,
    /// The same as a whole number or cosines.
    pub exact: Option<String>,
}

/// n(Γ) = (1/h) Σ g χ χ_Γ, halved for a real pair of complex-conjugate irreps.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct ReductionEntry {
    /// Γ.
    pub irrep: String,
    /// Its dimension.
    pub dimension: usize,
    /// 2 for a real pair of complex-conjugate irreps, else 1.
    pub constituents: usize,
    /// g χ χ_Γ class by class; empty for continuous groups.
    pub terms: Vec<f64>,
    /// n(Γ).
    pub multiplicity: f64,
}

/// One orbital of the set.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct ExplainedOrbital {
    /// From 1 within the spin, file order.
    pub index: usize,
    /// As the file gives it.
    pub energy_hartree: Option<f64>,
    /// As the file gives it.
    pub occupation: Option<f64>,
    /// By projection, largest first.
    pub weights: Vec<Weight>,
    /// Largest weight.
    pub purity: f64,
    /// Null where the purity is below the limit.
    pub irrep: Option<String>,
    /// Weight of each partner of the largest irrep; empty where there is one only, or partners cannot be told apart.
    pub partners: Vec<PartnerEntry>,
    /// The partner that the orbital is.
    pub component: Option<String>,
    /// What decided the component, in words.
    pub component_reason: String,
    /// Weights in the abelian subgroup, largest first; empty for an atom.
    pub abelian_weights: Vec<Weight>,
    /// Irrep in the abelian subgroup.
    pub abelian_irrep: Option<String>,
}

/// Weight of one partner.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct PartnerEntry {
    /// Name of the partner function.
    pub partner: String,
    /// 0 to 1.
    pub weight: f64,
}

/// The nearest orbital outside the set.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct OutsideEntry {
    /// From 1 within the spin.
    pub index: usize,
    /// Its label, or null.
    pub label: Option<String>,
    /// Its energy less that of the set.
    pub distance_hartree: f64,
    /// Mean over the operations of Σ⟨i|R|j⟩² over the set's orbitals i: 0 where no operation joins them.
    pub connection: f64,
}

/// Weights below this are not listed.
const LISTED: f64 = 1e-6;

/// Why the set found has its label.
#[must_use]
pub fn explain(
    file: &str,
    asked: &str,
    molecule: &Molecule,
    labelled: &Labelled,
    thresholds: &Thresholds,
    found: FoundSet,
) -> ExplainDocument {
    let spin = &labelled.spins[found.spin_idx];
    let set = &spin.sets[found.set];
    let group = &labelled.symmetry.group;
    let numbers = reasoning(molecule, labelled, found.spin_idx, found.set);
    let before: usize = labelled.spins[..found.spin_idx].iter().map(|spin| spin.sets.len()).sum();
    let orbitals = set.orbitals.iter().enumerate().map(|(at, &orbital)| {
        let in_file = &molecule.orbital_sets[found.spin_idx].orbitals[orbital];
        let label = &spin.orbitals[orbital];
        let mut entry = explained_orbital(group, label, &numbers, at, thresholds);
        entry.index = orbital + 1;
        entry.energy_hartree = in_file.energy;
        entry.occupation = in_file.occupation;
        entry
    });
    let orbitals: Vec<ExplainedOrbital> = orbitals.collect();
    let nearest_outside = numbers.outside.map(|outside| OutsideEntry {
        index: outside.orbital + 1,
        label: set_label(group, &spin.sets[spin.orbitals[outside.orbital].set]),
        distance_hartree: outside.distance,
        connection: outside.connection,
    });
    let explained = ExplainedSet {
        set: before + found.set + 1,
        spin: spin.spin,
        label: set_label(group, set),
        irrep: set.irrep.map(|irrep| group.irreps()[irrep].name.to_string()),
        orbitals: set.orbitals.iter().map(|orbital| orbital + 1).collect(),
        energy_hartree: set.energy,
        energy_spread_hartree: set.spread,
        electrons: set.electrons,
        complete: set.complete,
    };
    ExplainDocument {
        schema: SCHEMA,
        source: source(file, molecule),
        point_group: group.name().to_string(),
        operations: labelled.operations.count(),
        asked: asked.to_owned(),
        set: explained,
        characters: characters(group, set, &numbers),
        reduction: reduction(group, &numbers),
        conclusions: conclusions(group, set, &numbers, &orbitals, thresholds),
        orbitals,
        connections: numbers.connections.outer_iter().map(|row| row.to_vec()).collect(),
        connection_of_partners: set.irrep.map(|irrep| 1.0 / group.irreps()[irrep].dimension as f64),
        nearest_outside,
        thresholds: super::build::threshold_entry(thresholds),
    }
}

/// The angle of a proper or improper turn, degrees.
fn angle_degrees(matrix: &Matrix3<f64>) -> f64 {
    let sign = matrix.determinant().signum();
    (0.5 * (matrix.trace() - sign)).clamp(-1.0, 1.0).acos().to_degrees()
}

fn characters(group: &PointGroup, set: &SetLabel, numbers: &Reasoning) -> Vec<CharacterEntry> {
    if numbers.traces.is_empty() {
        return Vec::new();
    }
    let irrep = set.irrep.map(|irrep| &group.irreps()[irrep]);
    let entry = |class_idx: usize| {
        let (class, trace) = (&group.classes()[class_idx], &numbers.traces[class_idx]);
        let turns = class.symbol.contains("phi");
        let matrix = class.members.first().map(|&member| group.elements()[member].operation.matrix());
        CharacterEntry {
            class: class.symbol.clone(),
            size: class.members.len(),
            angle_degrees: matrix.filter(|_| turns).map(angle_degrees),
            measured: trace.mean,
            spread: trace.spread,
            table: irrep.map(|irrep| irrep.characters[class_idx]),
            exact: irrep.map(|irrep| exact_character(group, class, irrep, irrep.characters[class_idx])),
        }
    };
    group.printed_classes().into_iter().map(entry).collect()
}

fn reduction(group: &PointGroup, numbers: &Reasoning) -> Vec<ReductionEntry> {
    let printed = if group.is_continuous() { Vec::new() } else { group.printed_classes() };
    let entry = |reduction: &crate::labelling::reasoning::Reduction| {
        let irrep = &group.irreps()[reduction.irrep];
        ReductionEntry {
            irrep: irrep.name.to_string(),
            dimension: irrep.dimension,
            constituents: irrep.constituents,
            terms: printed.iter().filter_map(|&class| reduction.terms.get(class).copied()).collect(),
            multiplicity: reduction.multiplicity,
        }
    };
    numbers.reduction.iter().map(entry).collect()
}

fn ranked(group: &PointGroup, weights: impl Iterator<Item = (usize, f64)>) -> Vec<Weight> {
    let mut listed: Vec<(usize, f64)> = weights.filter(|weight| weight.1.abs() > LISTED).collect();
    listed.sort_by(|a, b| b.1.total_cmp(&a.1));
    let weight = |(irrep, weight): (usize, f64)| Weight { irrep: group.irreps()[irrep].name.to_string(), weight };
    listed.into_iter().map(weight).collect()
}

fn explained_orbital(
    group: &PointGroup,
    label: &OrbitalLabel,
    numbers: &Reasoning,
    at: usize,
    thresholds: &Thresholds,
) -> ExplainedOrbital {
    let largest = label.weights.first().map(|&(irrep, _)| &group.irreps()[irrep]);
    let partners: Vec<PartnerEntry> = largest
        .zip(numbers.partners[at].as_ref())
        .map(|(irrep, weights)| {
            let named = irrep.partners.iter().zip(weights);
            named.map(|(partner, &weight)| PartnerEntry { partner: partner.clone(), weight }).collect()
        })
        .unwrap_or_default();
    let component = label.irrep.zip(label.partner).map(|(irrep, at)| group.irreps()[irrep].partners[at].clone());
    let limit = thresholds.partner;
    let component_reason = match (largest, &component) {
        _ if label.irrep.is_none() => "no irrep, so no partner".to_owned(),
        (Some(irrep), _) if irrep.dimension == 1 => "one-dimensional: its own only partner".to_owned(),
        (Some(irrep), _) if irrep.constituents > 1 => {
            "real pair of complex conjugates: no operation tells its two partners apart".to_owned()
        }
        (_, Some(component)) => format!("{component} holds at least {limit:.2} of the irrep's weight"),
        _ if group.name() == GroupName::K => "all directions of an atom are alike".to_owned(),
        _ => format!("no partner holds {limit:.2} of the irrep's weight: turned freely among the partners"),
    };
    let abelian = numbers.abelian.as_ref().map(|weights| (group.abelian_subgroup().group, weights.row(at)));
    ExplainedOrbital {
        index: 0,
        energy_hartree: None,
        occupation: None,
        weights: ranked(group, label.weights.iter().copied()),
        purity: label.purity,
        irrep: label.irrep.map(|irrep| group.irreps()[irrep].name.to_string()),
        partners,
        component,
        component_reason,
        abelian_weights: abelian
            .as_ref()
            .map(|(subgroup, row)| ranked(subgroup, row.iter().copied().enumerate()))
            .unwrap_or_default(),
        abelian_irrep: abelian.zip(label.abelian).map(|((group, _), at)| group.irreps()[at].name.to_string()),
    }
}

/// A multiplicity nearer than this to a whole number is one.
const WHOLE: f64 = 0.02;

/// `A1g + 2 Eg`, or the parts of what is no sum of whole irreps.
fn sum_in_words(group: &PointGroup, numbers: &Reasoning) -> String {
    let parts = numbers.reduction.iter().filter(|part| part.multiplicity > WHOLE).map(|part| {
        let name = pretty(&group.irreps()[part.irrep].name.to_string());
        let n = part.multiplicity;
        match n.round() {
            _ if (n - n.round()).abs() > WHOLE => format!("{n:.3} {name}"),
            1.0 => name,
            whole => format!("{whole:.0} {name}"),
        }
    });
    parts.collect::<Vec<_>>().join(" + ")
}

fn conclusions(
    group: &PointGroup,
    set: &SetLabel,
    numbers: &Reasoning,
    orbitals: &[ExplainedOrbital],
    thresholds: &Thresholds,
) -> Vec<String> {
    let mut said = Vec::new();
    let whole = numbers.reduction.iter().all(|part| (part.multiplicity - part.multiplicity.round()).abs() <= WHOLE);
    let sum = sum_in_words(group, numbers);
    said.push(if whole {
        format!("the set reduces to {sum}")
    } else {
        format!(
            "the set reduces to {sum}, no whole numbers: its orbitals are not all that the operations turn them into"
        )
    });
    let spread = numbers.traces.iter().map(|trace| trace.spread).fold(0.0, f64::max);
    if spread > WHOLE {
        said.push(format!(
            "operations of one class differ by up to {spread:.3} from their mean: the orbitals do not keep {}, and the sums run \
             over operations for that reason",
            pretty(&group.name().to_string())
        ));
    }
    let purity = orbitals.iter().map(|orbital| orbital.purity).fold(1.0, f64::min);
    let limit = thresholds.purity;
    said.push(match set.irrep {
        Some(irrep) => format!(
            "purity {purity:.6} is not below the limit {limit:.2}: {}",
            pretty(&group.irreps()[irrep].name.to_string())
        ),
        None if purity < limit => format!("purity {purity:.6} is below the limit {limit:.2}: no irrep"),
        None => "its orbitals are of different irreps: no irrep for the set".to_owned(),
    });
    if set.orbitals.len() > 1 {
        let diagonal_and_off = numbers.connections.iter().sum::<f64>() / set.orbitals.len() as f64;
        said.push(format!(
            "operations keep {:.2} % of each orbital's image within the set, so its {} orbitals are one level",
            100.0 * diagonal_and_off,
            set.orbitals.len()
        ));
    }
    if set.irrep.is_some() && !set.complete {
        said.push("the set is incomplete: partners are missing, at another energy, or turned out of it".to_owned());
    }
    if group.is_continuous() && group.name() != GroupName::K {
        said.push(
            "characters of the continuous group are sampled on a finite stand-in whose axis is so high that no two irreps \
             of this basis, or of products of two functions, coincide"
                .to_owned(),
        );
    }
    if group.name() == GroupName::K {
        said.push(
            "weights of an atom come from projection onto angular momentum within each shell, not from characters"
                .to_owned(),
        );
    }
    said
}
