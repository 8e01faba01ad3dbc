//! The verb `purify`: label, adapt, write, read again as a check, deliver.

use super::arguments::{Format, Purify};
use super::placing::choice;
use super::progress::Progress;
use super::verbs::{json, molden, refuse};
use super::{CliError, Status, output, use_threads};
use crate::audit::{self, Limits};
use crate::grammar::write::{Replacement, rewrite};
use crate::labelling::{self, LabelError, Labelled, Thresholds};
use crate::model::{self, ANGSTROM_PER_BOHR, Molecule};
use crate::purify::{PureSpin, Purified, purify as purified};
use crate::report::audit::audit_document;
use crate::report::build;
use crate::report::purify::{Outcome, purify_document, purify_text};
use crate::wavefunction::basis::Basis;
use crate::wavefunction::overlap;
use ndarray::Array2;
use std::io::Write;

pub fn purify(arguments: &Purify, out: &mut dyn Write, errors: &mut dyn Write) -> Result<Status, CliError> {
    use_threads(&arguments.common)?;
    let path = &arguments.file;
    let name = path.display().to_string();
    let (bytes, mut molecule) = molden(path, &arguments.common, errors)?;
    let tolerance_bohr = arguments.tolerance / ANGSTROM_PER_BOHR;
    let thresholds = Thresholds { tolerance_bohr, ..Thresholds::STANDARD };
    let placed = choice(&arguments.placing, &molecule)?;
    let failed = |source: LabelError| CliError::Label { path: path.clone(), source };
    let progress = Progress::start(&arguments.common, "labels");
    let labelled = labelling::label_watched(&mut molecule, &thresholds, &placed, &progress.watch()).map_err(failed)?;
    progress.stage("projection");
    let nuclei = arguments.geometry.then(|| symmetric_places(&molecule, &labelled));
    let overlap = on_nuclei(&molecule, &labelled, nuclei.as_deref());
    let Purified { spins, changes } =
        purified(&molecule, &labelled, &overlap).map_err(|error| refused(&name, &error))?;
    let written = write(&bytes, &labelled, &spins, nuclei.as_deref());
    progress.stage("labels of the new orbitals");
    // Read again, as whoever takes the file will: what is reported is what stands there.
    let (mut molecule_again, _) = model::read_molden(&written)
        .map_err(|findings| CliError::Input { drawn: super::draw(&findings, &name, &written) })?;
    let again = labelling::label_in(&mut molecule_again, &thresholds, &placed).map_err(failed)?;
    let result = model::write_labels(&written, &molecule_again, &build::sym_labels(&again));
    let moved = nuclei.as_ref().map(|nuclei| farthest(&molecule, nuclei));
    let verdict = audit::audit(&molecule, labelled, &thresholds, &Limits::STANDARD)
        .ok()
        .and_then(|(labelled, found)| audit_document(&name, &molecule, &labelled, &found, &thresholds).audit);
    let document = purify_document(Outcome {
        file: &name,
        output: arguments.common.output.as_ref().map(|path| path.display().to_string()),
        changes,
        geometry: build::label_document(&name, &molecule_again, &again, None, &thresholds, build::Wanted::default())
            .geometry,
        again: &again,
        moved_bohr: moved,
        verdict: verdict.as_ref(),
    });
    drop(progress);
    let report = match arguments.common.format {
        Format::Text => purify_text(&document).into_bytes(),
        Format::Json => json(&document)?,
        other => return Err(refuse("the report of purify", "text or json", other)),
    };
    output::deliver(arguments.common.output.as_deref(), &result, out)?;
    // Without a file the orbitals are the output, and the report goes beside.
    if arguments.common.output.is_some() {
        output::deliver(None, &report, out)?;
    } else if !arguments.common.quiet {
        // A closed standard error must not spoil the result.
        let _ = errors.write_all(&report);
    }
    Ok(Status::Done)
}

fn refused(name: &str, error: &dyn std::error::Error) -> CliError {
    CliError::Refused(format!("{name}: {error}"))
}

/// Where the nuclei would be if they had the group exactly, bohr.
fn symmetric_places(molecule: &Molecule, labelled: &Labelled) -> Vec<[f64; 3]> {
    let symmetry = &labelled.symmetry;
    let centre = symmetry.frame.centre;
    let order = symmetry.permutations.len() as f64;
    (0..molecule.atoms.len())
        .map(|atom| {
            let images = symmetry.permutations.iter().enumerate().map(|(element, permutation)| {
                symmetry.matrix(element).tr_mul(&(molecule.atoms[permutation[atom]].position - centre))
            });
            (centre + images.sum::<nalgebra::Vector3<f64>>() / order).coords.into()
        })
        .collect()
}

fn farthest(molecule: &Molecule, nuclei: &[[f64; 3]]) -> f64 {
    let places = nuclei.iter().map(|place| nalgebra::Point3::from(*place));
    molecule.atoms.iter().zip(places).map(|(atom, place)| (atom.position - place).norm()).fold(0.0, f64::max)
}

/// Overlap of the canonical functions, on moved nuclei where there are some.
fn on_nuclei(molecule: &Molecule, labelled: &Labelled, nuclei: Option<&[[f64; 3]]>) -> Array2<f64> {
    let Some(nuclei) = nuclei else { return labelled.settled.overlap.clone() };
    let mut atoms = molecule.atoms.clone();
    for (atom, place) in atoms.iter_mut().zip(nuclei) {
        atom.position = nalgebra::Point3::from(*place);
    }
    overlap(&Basis::new(&atoms, &molecule.shells, labelled.settled.convention.primitives))
}

/// The file with the new orbitals in its own convention.
fn write(bytes: &[u8], labelled: &Labelled, spins: &[PureSpin], nuclei: Option<&[[f64; 3]]>) -> Vec<u8> {
    let (raw, _) = crate::grammar::read(bytes, &|_| ());
    let in_file: Vec<Array2<f64>> =
        spins.iter().map(|spin| labelled.settled.to_file(spin.coefficients.view())).collect();
    let rows: Vec<Vec<Vec<f64>>> =
        in_file.iter().map(|rows| rows.outer_iter().map(|row| row.to_vec()).collect()).collect();
    let replacements: Vec<Vec<Replacement<'_>>> = spins
        .iter()
        .zip(&rows)
        .map(|(spin, rows)| {
            let each = rows.iter().zip(&spin.energies).zip(&spin.occupations);
            each.map(|((row, &energy), &occupation)| Replacement {
                symmetry: "?",
                energy,
                occupation,
                coefficients: row,
            })
            .collect()
        })
        .collect();
    rewrite(bytes, &raw, &replacements, nuclei, ANGSTROM_PER_BOHR)
}
