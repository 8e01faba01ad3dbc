//! How the group of the labels came about, where it is not simply that of the nuclei.
//!
//! Here: the entry and its lines of text. Not here: the choice itself (`labelling::placement`).

use super::text::head;
use super::unicode::pretty;
use crate::labelling::Labelled;
use crate::labelling::composition::ranges;
use crate::model::{ANGSTROM_PER_BOHR, Molecule, elements};
use schemars::JsonSchema;
use serde::Serialize;
use serde_json::{Map, Value, json};
use std::collections::BTreeMap;

/// Descent, parent, or frame of chosen atoms.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct PlacementEntry {
    /// Group of the frame's atoms, or of all nuclei, within the tolerance.
    pub found: String,
    /// Atoms that alone define the symmetry; null when all do.
    pub frame: Option<String>,
    /// All others; null without a frame.
    pub set_aside: Option<String>,
    /// Atoms that some operation carries onto no like atom: their functions are turned in space, not permuted.
    pub truly_turned: Option<String>,
    /// Largest distance at which an operation misses a like atom, over atoms truly turned.
    pub missed_by_max_angstrom: f64,
    /// Root mean square distance by which the operations of a fitted group miss like atoms.
    pub misfit_rms_angstrom: Option<f64>,
    /// Orientation taken of those that a subgroup of this name can have, from 1.
    pub orientation: Option<usize>,
    /// All of them, in words.
    pub orientations: Vec<String>,
    /// Irrep of the group found → sum of irreps of the subgroup.
    #[schemars(with = "BTreeMap<String, String>")]
    pub correlation: Map<String, Value>,
}

/// `Co 1, N 2-7`.
fn named(molecule: &Molecule, atoms: &[usize]) -> String {
    let mut of_element: BTreeMap<String, Vec<usize>> = BTreeMap::new();
    let mut order: Vec<String> = Vec::new();
    for &atom in atoms {
        let label = elements::label(&molecule.atoms[atom]);
        if !order.contains(&label) {
            order.push(label.clone());
        }
        of_element.entry(label).or_default().push(atom);
    }
    order.iter().map(|label| format!("{label} {}", ranges(&of_element[label]))).collect::<Vec<_>>().join(", ")
}

/// Highest angular momentum of the basis.
pub(super) fn highest_l(labelled: &Labelled) -> usize {
    labelled.settled.basis.shells().iter().map(|shell| shell.l).max().unwrap_or(0)
}

/// None for the group that the nuclei have.
#[must_use]
pub fn placement_entry(molecule: &Molecule, labelled: &Labelled) -> Option<PlacementEntry> {
    let derivation = &labelled.derivation;
    let found = derivation.found?;
    if derivation.frame.is_none() && found == labelled.symmetry.group.name() {
        return None;
    }
    let set_aside = derivation.frame.as_ref().map(|frame| {
        let others: Vec<usize> = (0..molecule.atoms.len()).filter(|atom| frame.binary_search(atom).is_err()).collect();
        named(molecule, &others)
    });
    let correlation = derivation.descent.as_ref().map(|descent| {
        let irreps = descent.parents_up_to(highest_l(labelled));
        irreps.map(|(at, name)| (name.to_string(), json!(descent.correlation_text(at)))).collect()
    });
    Some(PlacementEntry {
        found: found.to_string(),
        frame: derivation.frame.as_ref().map(|frame| named(molecule, frame)),
        set_aside,
        truly_turned: (!derivation.turned.is_empty()).then(|| named(molecule, &derivation.turned)),
        missed_by_max_angstrom: derivation.turned_distance_bohr * ANGSTROM_PER_BOHR,
        misfit_rms_angstrom: derivation.misfit_bohr.map(|misfit| misfit * ANGSTROM_PER_BOHR),
        orientation: derivation.descent.as_ref().map(|_| derivation.orientation + 1),
        orientations: derivation.orientations.clone(),
        correlation: correlation.unwrap_or_default(),
    })
}

/// Lines for the head of a report; `group` is that of the labels, `nuclei` that of all nuclei.
pub(super) fn placement_lines(out: &mut String, entry: &PlacementEntry, group: &str, nuclei: &str) {
    let (group, found) = (pretty(group), pretty(&entry.found));
    let all = format!("all nuclei have {}", pretty(nuclei));
    match (&entry.frame, entry.orientation, entry.misfit_rms_angstrom) {
        (Some(frame), _, _) => {
            head(out, "Frame", &format!("{frame} alone define the symmetry ({found}); {all}"));
        }
        (None, Some(_), _) => head(out, "Descent", &format!("from {found}, which the nuclei have")),
        (None, None, _) => head(out, "Parent", &format!("{group} over nuclei that have {found}")),
    }
    if let Some(misfit) = entry.misfit_rms_angstrom {
        head(
            out,
            "",
            &format!("operations of {group} miss like atoms by {misfit:.3} Å rms where they fit best (0.79 Å at most)"),
        );
    }
    if let Some(set_aside) = &entry.set_aside {
        head(out, "Set aside", set_aside);
    }
    if let Some(turned) = &entry.truly_turned {
        let text = format!(
            "{turned}: operations miss like atoms by up to {:.3} Å, so functions are turned in space; a larger --tolerance \
             permutes those that are near",
            entry.missed_by_max_angstrom
        );
        head(out, "Truly turned", &text);
    }
    if let Some(taken) = entry.orientation {
        for (at, words) in entry.orientations.iter().enumerate() {
            let mark = if at + 1 == taken { "taken" } else { "another, by --orientation" };
            let number = if at + 1 == taken { String::new() } else { format!(" {}", at + 1) };
            head(out, if at == 0 { "Orientation" } else { "" }, &format!("{words} ({mark}{number})"));
        }
        let parts: Vec<String> = entry
            .correlation
            .iter()
            .map(|(above, below)| format!("{} → {}", pretty(above), pretty(below.as_str().unwrap_or_default())))
            .collect();
        head(out, "Correlation", &parts.join(", "));
        head(
            out,
            "",
            &format!("partners that the file turns among themselves stay together; purify --group {group} parts them"),
        );
    }
}
