//! The verb `modes`: place the nuclei, assign the file's modes where it has some, deliver.

use super::arguments::{Format, Modes};
use super::verbs::{for_paper, json, molden_or_xyz, refuse, rows};
use super::{CliError, Status, output, use_threads};
use crate::labelling::placement::{self, Choice, Placement};
use crate::labelling::{LabelError, sites};
use crate::model::{ANGSTROM_PER_BOHR, Molecule};
use crate::modes::{ModeThresholds, assign, assignment};
use crate::report::modes::modes_document;
use crate::report::modes_text::modes_text;
use crate::report::{csv, sheets};
use std::io::Write;

pub fn modes(arguments: &Modes, out: &mut dyn Write, errors: &mut dyn Write) -> Result<Status, CliError> {
    use_threads(&arguments.common)?;
    let path = &arguments.file;
    let molecule = molden_or_xyz(path, &arguments.common, errors)?;
    let tolerance_bohr = arguments.tolerance / ANGSTROM_PER_BOHR;
    let failed = |source: LabelError| CliError::Label { path: path.clone(), source };
    let atoms = molecule
        .vibrations
        .as_ref()
        .map_or_else(|| molecule.atoms.clone(), |vibrations| assignment::atoms_of_modes(&molecule.atoms, vibrations));
    // Basis functions play no part in how nuclei move.
    let nuclei = Molecule {
        atoms,
        shells: Vec::new(),
        orbital_sets: Vec::new(),
        title: molecule.title.clone(),
        vibrations: None,
    };
    let Placement { detection, symmetry, .. } =
        placement::place(&nuclei, tolerance_bohr, &Choice::default()).map_err(failed)?;
    let thresholds = ModeThresholds::STANDARD;
    let assigned =
        molecule.vibrations.as_ref().map(|vibrations| assign(&nuclei.atoms, vibrations, &symmetry, &thresholds));
    let document = modes_document(
        &path.display().to_string(),
        &molecule,
        &nuclei.atoms,
        &sites::bonds(&nuclei),
        (&detection, &symmetry),
        assigned.as_ref(),
        tolerance_bohr,
    )
    .map_err(|error| failed(error.into()))?;
    let printed = match arguments.common.format {
        Format::Text => modes_text(&document).into_bytes(),
        Format::Json => json(&document)?,
        Format::Latex | Format::Md => for_paper(arguments.common.format, &sheets::mode_sheets(&document)),
        Format::Csv => rows(|out| csv::write_modes(&document, out))?,
        format @ (Format::Svg | Format::Html) => return Err(refuse("modes", "text, json, csv, latex or md", format)),
    };
    output::deliver(arguments.common.output.as_deref(), &printed, out)?;
    Ok(Status::Done)
}
