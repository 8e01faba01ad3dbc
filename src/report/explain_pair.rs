//! Why a transition between two sets is allowed or not, as data: product, reduction, operators, moments, vibrations.
//!
//! Here: the document of `label --explain-transition` and `transitions --explain`. Not here: the rules (`selection`), the
//! text (`report::explain_text`).

use super::build::{set_label, source};
use super::document::{SCHEMA, Source};
use super::explain::ReductionEntry;
use super::rule::{AXES, ROTATIONS};
use super::transitions::{CAUTIONS, Context, TransitionEntry};
use crate::group::PointGroup;
use crate::labelling::Labelled;
use crate::model::Molecule;
use crate::selection::rules::QUADRATIC;
use crate::selection::{FoundSet, Operators, Pair, Strengths, strengths};
use schemars::JsonSchema;
use serde::Serialize;

/// Why a transition is allowed or not.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct ExplainTransitionDocument {
    /// Name and version of the layout.
    #[schemars(extend("const" = SCHEMA))]
    pub schema: &'static str,
    /// The input.
    pub source: Source,
    /// The group that the labels are in.
    pub point_group: String,
    /// Its order, of a continuous group that of its finite stand-in.
    pub operations: usize,
    /// Irrep of the first set; null where it has none.
    pub from_irrep: Option<String>,
    /// Irrep of the second.
    pub to_irrep: Option<String>,
    /// Characters of both and of their product by class; empty without irreps, and for atoms.
    pub characters: Vec<ProductCharacter>,
    /// The product reduced: n(Γ) = (1/h) Σ g χ_A χ_B χ_Γ.
    pub reduction: Vec<ReductionEntry>,
    /// Every component of every operator.
    pub operators: Vec<OperatorComponent>,
    /// The same pair as in the list of transitions: strengths, states, vibrations with their counts, remarks.
    pub transition: TransitionEntry,
    /// Cautions that belong to the numbers.
    pub cautions: Vec<String>,
}

/// Characters under one class.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct ProductCharacter {
    /// Symbol of the class.
    pub class: String,
    /// Operations in it.
    pub size: usize,
    /// Of the first irrep.
    pub from: f64,
    /// Of the second.
    pub to: f64,
    /// Of the product.
    pub product: f64,
}

/// One component of an operator.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct OperatorComponent {
    /// `electric dipole`, `magnetic dipole` or `electric quadrupole`.
    #[schemars(extend("enum" = ["electric dipole", "magnetic dipole", "electric quadrupole"]))]
    pub operator: &'static str,
    /// `x`, `Rz`, `xy` …; xx, yy, zz less a third of r².
    pub component: &'static str,
    /// Irreps that it has a part in.
    pub irreps: Vec<String>,
    /// Whether the product holds one of them; null where a set has no irrep.
    pub allowed: Option<bool>,
    /// Σ over partners of the squared moment, atomic units.
    pub strength_au: f64,
}

/// What a transition needs, and what it has.
#[must_use]
pub fn explain_pair(
    file: &str,
    molecule: &Molecule,
    labelled: &Labelled,
    pair: Pair,
) -> Option<ExplainTransitionDocument> {
    let group = &labelled.symmetry.group;
    let context = Context::new(molecule, labelled);
    let transition = context.entries(&[pair]).pop()?;
    let strengths = strengths(molecule, labelled, &[pair]).pop()?;
    let sets = &labelled.spins[pair.spin_idx].sets;
    let irreps = sets[pair.from].irrep.zip(sets[pair.to].irrep);
    let name = |irrep: usize| group.irreps()[irrep].name.to_string();
    Some(ExplainTransitionDocument {
        schema: SCHEMA,
        source: source(file, molecule),
        point_group: group.name().to_string(),
        operations: group.order(),
        from_irrep: sets[pair.from].irrep.map(name),
        to_irrep: sets[pair.to].irrep.map(name),
        characters: irreps.map(|pair| characters(group, pair)).unwrap_or_default(),
        reduction: irreps.map(|pair| reduction(group, pair)).unwrap_or_default(),
        operators: operators(group, &context.operators, irreps, &strengths),
        transition,
        cautions: CAUTIONS.map(str::to_owned).to_vec(),
    })
}

/// The pair of two sets by name; None when they are of different spins or the same set.
#[must_use]
pub fn pair_of(from: FoundSet, to: FoundSet) -> Option<Pair> {
    let differ = from.spin_idx == to.spin_idx && from.set != to.set;
    differ.then_some(Pair { spin_idx: from.spin_idx, from: from.set, to: to.set })
}

/// The label of a set, or its number among those of its spin.
#[must_use]
pub fn name_of(labelled: &Labelled, found: FoundSet) -> String {
    let set = &labelled.spins[found.spin_idx].sets[found.set];
    set_label(&labelled.symmetry.group, set).unwrap_or_else(|| format!("set {}", found.set + 1))
}

fn characters(group: &PointGroup, (from, to): (usize, usize)) -> Vec<ProductCharacter> {
    if group.irreps()[from].characters.is_empty() {
        return Vec::new();
    }
    let entry = |class: usize| {
        let (a, b) = (group.irreps()[from].characters[class], group.irreps()[to].characters[class]);
        let of = &group.classes()[class];
        ProductCharacter { class: of.symbol.clone(), size: of.members.len(), from: a, to: b, product: a * b }
    };
    group.printed_classes().into_iter().map(entry).collect()
}

/// The product in numbers; of a continuous group the multiplicities alone, as its classes are without number.
fn reduction(group: &PointGroup, (from, to): (usize, usize)) -> Vec<ReductionEntry> {
    let (a, b) = (&group.irreps()[from].characters, &group.irreps()[to].characters);
    let in_table = group.is_continuous().then(|| group.product(from, to).unwrap_or_default());
    let entry = |(irrep_idx, irrep): (usize, &crate::group::Irrep)| {
        let terms: Vec<f64> = if in_table.is_some() {
            Vec::new()
        } else {
            let term = |class: usize| {
                group.classes()[class].members.len() as f64 * a[class] * b[class] * irrep.characters[class]
            };
            group.printed_classes().into_iter().map(term).collect()
        };
        let multiplicity = match &in_table {
            Some(product) => product.iter().find(|term| term.0 == irrep_idx).map_or(0.0, |term| term.1 as f64),
            None => terms.iter().sum::<f64>() / group.order() as f64 / irrep.constituents as f64,
        };
        ReductionEntry {
            irrep: irrep.name.to_string(),
            dimension: irrep.dimension,
            constituents: irrep.constituents,
            terms,
            multiplicity,
        }
    };
    group.irreps().iter().enumerate().map(entry).collect()
}

fn operators(
    group: &PointGroup,
    operators: &Operators,
    irreps: Option<(usize, usize)>,
    strengths: &Strengths,
) -> Vec<OperatorComponent> {
    let allowed = irreps.and_then(|(from, to)| operators.between(group, from, to).ok());
    let names = |irreps: &[usize]| irreps.iter().map(|&irrep| group.irreps()[irrep].name.to_string()).collect();
    let mut listed = Vec::new();
    let mut list = |operator, labels: &[&'static str], parts: &[Vec<usize>], held: Option<&[usize]>, sums: &[f64]| {
        for (at, ((component, parts), &strength_au)) in labels.iter().zip(parts).zip(sums).enumerate() {
            listed.push(OperatorComponent {
                operator,
                component,
                irreps: names(parts),
                allowed: held.map(|held| held.contains(&at)),
                strength_au,
            });
        }
    };
    let held = allowed.as_ref();
    let dipole = held.map(|rule| rule.electric_dipole.as_slice());
    list("electric dipole", &AXES, operators.of_dipole(), dipole, &strengths.length);
    let magnetic = held.map(|rule| rule.magnetic_dipole.as_slice());
    list("magnetic dipole", &ROTATIONS, operators.of_rotation(), magnetic, &strengths.magnetic);
    let quadrupole = held.map(|rule| rule.quadrupole.as_slice());
    list("electric quadrupole", &QUADRATIC, operators.of_quadrupole(), quadrupole, &strengths.quadrupole);
    listed
}
