//! One function a verb: open, call the layers below, deliver.

use super::arguments::{Common, Format, Geometry, Label, Placing, Table};
use super::input::{self, Bytes};
use super::placing::choice;
use super::{CliError, Status, draw, levels, output, use_threads};
use crate::labelling::placement::{self, Choice, Placement};
use crate::labelling::{self, Labelled, Thresholds};
use crate::model::{self, ANGSTROM_PER_BOHR, Molecule, Reading};
use crate::report::build::{self, Wanted};
use crate::report::document::Document;
use crate::report::text::{self, TextOptions};
use crate::report::{csv, rule, table};
use crate::wavefunction;
use clap::ValueEnum;
use std::io::Write;
use std::path::Path;

/// Populations need the square root of the overlap matrix, n³: above this many functions only on demand.
pub(super) const CHARACTER_LIMIT: usize = 1200;

/// Bytes and meaning of a Molden file; warnings go to `errors`.
pub(super) fn molden(path: &Path, common: &Common, errors: &mut dyn Write) -> Result<(Bytes, Molecule), CliError> {
    let bytes = input::open(path)?;
    let molecule = meaning(model::read_molden(&bytes), path, &bytes, common, errors)?;
    Ok((bytes, molecule))
}

/// Nuclei, and whatever else there is, of a Molden or plain XYZ file; warnings go to `errors`.
pub(super) fn molden_or_xyz(path: &Path, common: &Common, errors: &mut dyn Write) -> Result<Molecule, CliError> {
    let bytes = input::open(path)?;
    let result = if model::looks_like_molden(&bytes) { model::read_molden(&bytes) } else { model::read_xyz(&bytes) };
    meaning(result, path, &bytes, common, errors)
}

/// What was read, or all findings drawn.
fn meaning(
    result: Reading,
    path: &Path,
    bytes: &[u8],
    common: &Common,
    errors: &mut dyn Write,
) -> Result<Molecule, CliError> {
    let name = path.display().to_string();
    match result {
        Ok((molecule, warnings)) => {
            if !common.quiet && !warnings.is_empty() {
                // A closed standard error must not stop the result.
                let _ = writeln!(errors, "{}", draw(&warnings, &name, bytes));
            }
            Ok(molecule)
        }
        Err(findings) => Err(CliError::Input { drawn: draw(&findings, &name, bytes) }),
    }
}

/// What is asked of the labels of one file.
#[derive(Debug, Clone, Copy)]
pub(super) struct Labelling<'a> {
    /// Every limit.
    pub thresholds: Thresholds,
    /// Which group.
    pub placing: &'a Placing,
    /// Orbitals below and above the frontier to list.
    pub window: Option<(usize, usize)>,
    /// Populations whatever they cost.
    pub character: bool,
}

/// The labels of one file and their document.
///
/// # Errors
/// [`CliError::Label`] for what the file does not allow, [`CliError::Usage`] for a group or frame it does not have.
pub(super) fn labels(
    path: &Path,
    molecule: &mut Molecule,
    asked: Labelling<'_>,
) -> Result<(Labelled, Document), CliError> {
    let choice = choice(asked.placing, molecule)?;
    let labelled = labelling::label_in(molecule, &asked.thresholds, &choice)
        .map_err(|source| CliError::Label { path: path.to_owned(), source })?;
    let small = molecule.n_functions() <= CHARACTER_LIMIT;
    let lowdin = (small || asked.character).then(|| wavefunction::lowdin(&labelled.settled, molecule)).flatten();
    let name = path.display().to_string();
    let wanted = Wanted { window: asked.window, frontier_transitions: small };
    let document = build::label_document(&name, molecule, &labelled, lowdin.as_deref(), &asked.thresholds, wanted);
    Ok((labelled, document))
}

pub fn label(arguments: &Label, out: &mut dyn Write, errors: &mut dyn Write) -> Result<Status, CliError> {
    use_threads(&arguments.common)?;
    if arguments.common.format != Format::Svg && (arguments.transitions || arguments.drawing.is_asked()) {
        let text = "--range, --width and --transitions belong to the level diagram: add --format svg";
        return Err(CliError::Usage(text.to_owned()));
    }
    let path = &arguments.file;
    let (bytes, mut molecule) = molden(path, &arguments.common, errors)?;
    let thresholds = Thresholds {
        tolerance_bohr: arguments.tolerance / ANGSTROM_PER_BOHR,
        degeneracy_hartree: arguments.degeneracy,
        purity: arguments.purity,
        ..Thresholds::STANDARD
    };
    let asked =
        Labelling { thresholds, placing: &arguments.placing, window: arguments.window, character: arguments.character };
    let (labelled, document) = labels(path, &mut molecule, asked)?;
    let sym_labels = arguments.write_labels.as_ref().map(|_| build::sym_labels(&labelled));
    let printed = match arguments.common.format {
        Format::Svg => levels::of_label(&document, arguments)?,
        Format::Html => super::page::page(&document, &molecule, labelled, &thresholds, arguments)?,
        _ => print(&document, &arguments.common, || text::label_text(&document, TextOptions { all: arguments.all }))?,
    };
    if let Some((target, labels)) = arguments.write_labels.as_ref().zip(sym_labels) {
        output::deliver(Some(target), &model::write_labels(&bytes, &molecule, &labels), out)?;
    }
    output::deliver(arguments.common.output.as_deref(), &printed, out)?;
    Ok(Status::Done)
}

pub fn geometry(arguments: &Geometry, out: &mut dyn Write, errors: &mut dyn Write) -> Result<Status, CliError> {
    use_threads(&arguments.common)?;
    let path = &arguments.file;
    let molecule = molden_or_xyz(path, &arguments.common, errors)?;
    let tolerance_bohr = arguments.tolerance / ANGSTROM_PER_BOHR;
    let Placement { detection, symmetry, .. } = placement::place(&molecule, tolerance_bohr, &Choice::default())
        .map_err(|source| CliError::Label { path: path.clone(), source })?;
    let document =
        build::geometry_document(&path.display().to_string(), &molecule, &detection, &symmetry, tolerance_bohr);
    let printed = print(&document, &arguments.common, || text::geometry_text(&document))?;
    output::deliver(arguments.common.output.as_deref(), &printed, out)?;
    Ok(Status::Done)
}

pub fn table(arguments: &Table, out: &mut dyn Write) -> Result<Status, CliError> {
    use_threads(&arguments.common)?;
    if arguments.double {
        return super::states::double_table(arguments, out);
    }
    if let Some([from, to]) = arguments.transition.as_deref() {
        let document = rule::build(&arguments.group, from, to).map_err(|error| CliError::Usage(error.to_string()))?;
        let printed = match arguments.common.format {
            Format::Text => rule::text(&document).into_bytes(),
            Format::Json => json(&document)?,
            format => return Err(refuse("table", "text or json", format)),
        };
        output::deliver(arguments.common.output.as_deref(), &printed, out)?;
        return Ok(Status::Done);
    }
    let document = table::build(&arguments.group).map_err(|error| CliError::Usage(error.to_string()))?;
    let printed = match arguments.common.format {
        Format::Text => table::text(&document).into_bytes(),
        Format::Json => json(&document)?,
        format => return Err(refuse("table", "text or json", format)),
    };
    output::deliver(arguments.common.output.as_deref(), &printed, out)?;
    Ok(Status::Done)
}

/// The document in the form asked for.
fn print(document: &Document, common: &Common, text: impl FnOnce() -> String) -> Result<Vec<u8>, CliError> {
    match common.format {
        Format::Text => Ok(text().into_bytes()),
        Format::Json => json(document),
        Format::Csv if document.sets.is_none() => {
            Err(CliError::Usage("geometry prints text or json: csv has one row a set of orbitals".to_owned()))
        }
        Format::Csv => rows(|out| csv::write_sets(document, out)),
        format @ (Format::Svg | Format::Html) => Err(refuse("geometry", "text or json", format)),
    }
}

/// A form that a verb does not print.
pub(super) fn refuse(verb: &str, prints: &str, format: Format) -> CliError {
    let name = format.to_possible_value().map_or(String::new(), |value| value.get_name().to_owned());
    CliError::Usage(format!("{verb} prints {prints}, not {name}"))
}

/// Comma-separated rows in memory.
pub(super) fn rows(write: impl FnOnce(&mut dyn Write) -> ::csv::Result<()>) -> Result<Vec<u8>, CliError> {
    let mut bytes = Vec::new();
    write(&mut bytes).map_err(|error| CliError::Write { path: None, source: std::io::Error::other(error) })?;
    Ok(bytes)
}

/// Indented JSON with a newline at its end.
pub(super) fn json(document: &impl serde::Serialize) -> Result<Vec<u8>, CliError> {
    let mut bytes = serde_json::to_vec_pretty(document)
        .map_err(|error| CliError::Write { path: None, source: std::io::Error::other(error) })?;
    bytes.push(b'\n');
    Ok(bytes)
}
