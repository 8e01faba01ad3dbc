//! `label --format html`: the audit, the pictures and the table that the page shows beside the labels.

use super::CliError;
use super::arguments::Label;
use crate::audit::{self, Limits};
use crate::labelling::partners::standard_partners;
use crate::labelling::{Labelled, SpinLabels, Thresholds, frontier};
use crate::model::Molecule;
use crate::page::{self, Report, SetPictures};
use crate::picture::{Skeleton, View, elements, orbital_pictures, symmetry_elements};
use crate::report::audit::audit_document;
use crate::report::document::Document;
use crate::report::table;
use ndarray::{Array2, Axis};
use std::io;

/// The page of a labelled file.
pub fn page(
    document: &Document,
    molecule: &Molecule,
    labelled: Labelled,
    thresholds: &Thresholds,
    arguments: &Label,
) -> Result<Vec<u8>, CliError> {
    let view = View::standard();
    let skeleton = Skeleton::new(molecule, &labelled.symmetry);
    let drawing = symmetry_elements(&skeleton, &labelled.symmetry.group, &view);
    let kinds = elements::elements(&labelled.symmetry.group).kinds();
    let drawn = frontier_pictures(molecule, &labelled, &skeleton, &view, arguments.pictures)
        .map_err(|source| CliError::Write { path: None, source })?;
    let characters = table::build(&document.geometry.point_group).ok();
    let limits = Limits { degeneracy_hartree: thresholds.degeneracy_hartree, ..Limits::STANDARD };
    let audited = audit::audit(molecule, labelled, thresholds, &limits)
        .map(|(labelled, found)| audit_document(&document.source.file, molecule, &labelled, &found, thresholds).audit);
    let reason = audited.as_ref().err().map(ToString::to_string).unwrap_or_default();
    let audit = audited.as_ref().ok().and_then(Option::as_ref).ok_or(reason.as_str());
    // Without energies there are no levels, and the page has no diagram.
    let has_levels = document.sets.iter().flatten().any(|set| set.energy_hartree.is_some());
    let levels = has_levels.then(|| super::levels::of_label(document, arguments)).transpose()?;
    let levels = levels.map(|svg| String::from_utf8_lossy(&svg).into_owned());
    let report = Report {
        document,
        audit,
        table: characters.as_ref(),
        elements: &drawing,
        kinds: &kinds,
        levels: levels.as_deref(),
        pictures: &drawn,
        view: &view.description,
    };
    Ok(page::html(&report).into_bytes())
}

/// The sets around the frontier of each spin, highest first, every partner drawn.
fn frontier_pictures(
    molecule: &Molecule,
    labelled: &Labelled,
    skeleton: &Skeleton,
    view: &View,
    (below, above): (usize, usize),
) -> io::Result<Vec<SetPictures>> {
    let capacity = if labelled.spins.len() > 1 { 1.0 } else { 2.0 };
    let mut first = 0;
    let mut drawn = Vec::new();
    for (spin_idx, (spin, orbitals)) in labelled.spins.iter().zip(&molecule.orbital_sets).enumerate() {
        let occupations: Vec<Option<f64>> = orbitals.orbitals.iter().map(|orbital| orbital.occupation).collect();
        for set_idx in chosen(spin, capacity, below, above) {
            let set = &spin.sets[set_idx];
            let mut rows = orbitals.coefficients.select(Axis(0), &set.orbitals);
            // Partners that the file has turned among themselves are drawn as the standard ones.
            let turned = set.orbitals.iter().any(|&orbital| spin.orbitals[orbital].partner.is_none());
            let standard = turned
                .then(|| standard_partners(labelled, spin_idx, set, orbitals.coefficients.view(), &occupations))
                .flatten();
            if let Some(columns) = &standard {
                rows = Array2::from_shape_fn((rows.nrows(), rows.nrows()), |(k, j)| columns[(j, k)]).dot(&rows);
            }
            let names = standard.and(set.irrep).map(|irrep| labelled.symmetry.group.irreps()[irrep].partners.clone());
            let partners =
                orbital_pictures(skeleton, &labelled.symmetry.frame, &labelled.settled.basis, rows.view(), view)?;
            drawn.push(SetPictures { set: first + set_idx + 1, partners, turned_to: names });
        }
        first += spin.sets.len();
    }
    Ok(drawn)
}

/// Indices of sets with electrons and of empty ones next to the frontier, highest energy first; none without occupations.
fn chosen(spin: &SpinLabels, capacity: f64, below: usize, above: usize) -> Vec<usize> {
    let filling = |at: &usize| frontier::filling(&spin.sets[*at], capacity);
    let all = || 0..spin.sets.len();
    let empty = all().filter(|at| filling(at) == Some(frontier::Filling::Empty)).take(above);
    let filled = all().rev().filter(|at| filling(at).is_some_and(|filling| filling != frontier::Filling::Empty));
    let mut chosen: Vec<usize> = empty.chain(filled.take(below)).collect();
    chosen.sort_unstable_by(|a, b| b.cmp(a));
    chosen
}
