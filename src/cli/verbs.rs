//! One function a verb: open, call the layers below, deliver.

use super::arguments::{Common, Format, Geometry, Label, Placing, Table};
use super::explain::Ground;
use super::input::{self, Bytes};
use super::placing::choice;
use super::progress::Progress;
use super::{CliError, Status, draw, levels, output, use_threads};
use crate::labelling::placement::{self, Choice, Placement};
use crate::labelling::{self, Labelled, Thresholds};
use crate::model::{self, ANGSTROM_PER_BOHR, Molecule, Reading};
use crate::report::build::{self, Wanted};
use crate::report::document::Document;
use crate::report::text::{self, TextOptions};
use crate::report::typeset::{self, Sheet};
use crate::report::{csv, rule, sheets, table};
use crate::wavefunction;
use std::io::Write;
use std::path::Path;

/// Populations need the square root of the overlap matrix, n³: above this many functions only on demand.
pub(super) const CHARACTER_LIMIT: usize = 1200;

/// Bytes and meaning of a Molden file; warnings go to `errors`.
pub(super) fn molden(path: &Path, common: &Common, errors: &mut dyn Write) -> Result<(Bytes, Molecule), CliError> {
    let progress = Progress::start(common, "reading");
    let bytes = input::open(path)?;
    let read = read(&bytes);
    drop(progress);
    let molecule = meaning(read, path, &bytes, common, errors)?;
    Ok((bytes, molecule))
}

fn read(bytes: &Bytes) -> Reading {
    model::read_molden_passing(bytes, &|span| bytes.release(span))
}

/// Nuclei, and whatever else there is, of a Molden or plain XYZ file; warnings go to `errors`.
pub(super) fn molden_or_xyz(path: &Path, common: &Common, errors: &mut dyn Write) -> Result<Molecule, CliError> {
    let bytes = input::open(path)?;
    let result = if model::looks_like_molden(&bytes) { read(&bytes) } else { model::read_xyz(&bytes) };
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

/// The labels of one file.
///
/// # Errors
/// [`CliError::Label`] for what the file does not allow, [`CliError::Usage`] for a group or frame it does not have.
fn labelled(
    path: &Path,
    molecule: &mut Molecule,
    asked: Labelling<'_>,
    progress: &Progress,
) -> Result<Labelled, CliError> {
    let choice = choice(asked.placing, molecule)?;
    labelling::label_watched(molecule, &asked.thresholds, &choice, &progress.watch())
        .map_err(|source| CliError::Label { path: path.to_owned(), source })
}

/// The document of one file's labels.
fn document(
    path: &Path,
    molecule: &Molecule,
    labelled: &Labelled,
    asked: Labelling<'_>,
    progress: &Progress,
) -> Document {
    progress.stage("what orbitals are made of");
    let small = molecule.n_functions() <= CHARACTER_LIMIT;
    let lowdin = (small || asked.character).then(|| wavefunction::lowdin(&labelled.settled, molecule)).flatten();
    progress.stage("transitions at the frontier");
    let wanted = Wanted { window: asked.window, frontier_transitions: small };
    build::label_document(&path.display().to_string(), molecule, labelled, lowdin.as_deref(), &asked.thresholds, wanted)
}

/// The labels of one file as a document, told to nobody.
///
/// # Errors
/// As [`CliError::Label`] and [`CliError::Usage`] say.
pub(super) fn labels(path: &Path, molecule: &mut Molecule, asked: Labelling<'_>) -> Result<Document, CliError> {
    let labelled = labelled(path, molecule, asked, &Progress::none())?;
    Ok(document(path, molecule, &labelled, asked, &Progress::none()))
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
    let progress = Progress::start(&arguments.common, "labels");
    let labelled = labelled(path, &mut molecule, asked, &progress)?;
    let name = path.display().to_string();
    let ground = Ground { name: &name, molecule: &molecule, labelled: &labelled, common: &arguments.common };
    if let Some(asked) = &arguments.explain {
        drop(progress);
        return ground.set(asked, &thresholds, out);
    }
    if let Some([from, to]) = arguments.explain_transition.as_deref() {
        drop(progress);
        return ground.transition(from, to, out);
    }
    let document = document(path, &molecule, &labelled, asked, &progress);
    let sym_labels = arguments.write_labels.as_ref().map(|_| build::sym_labels(&labelled));
    let printed = match arguments.common.format {
        Format::Svg => levels::of_label(&document, arguments)?,
        Format::Html => {
            progress.stage("pictures of the orbitals");
            super::page::page(&document, &molecule, labelled, &thresholds, arguments)?
        }
        _ => print(&document, &arguments.common, arguments.all, || {
            text::label_text(&document, TextOptions { all: arguments.all })
        })?,
    };
    drop(progress);
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
    let printed = print(&document, &arguments.common, false, || text::geometry_text(&document))?;
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
            other => return Err(refuse("table --transition", "text or json", other)),
        };
        output::deliver(arguments.common.output.as_deref(), &printed, out)?;
        return Ok(Status::Done);
    }
    let document = table::build(&arguments.group).map_err(|error| CliError::Usage(error.to_string()))?;
    let printed = match arguments.common.format {
        Format::Text => table::text(&document).into_bytes(),
        Format::Json => json(&document)?,
        Format::Latex | Format::Md => for_paper(arguments.common.format, &sheets::table_sheets(&document)),
        other => return Err(refuse("table", "text, json, latex or md", other)),
    };
    output::deliver(arguments.common.output.as_deref(), &printed, out)?;
    Ok(Status::Done)
}

/// The document in the form asked for.
fn print(document: &Document, common: &Common, all: bool, text: impl FnOnce() -> String) -> Result<Vec<u8>, CliError> {
    match common.format {
        Format::Text => Ok(text().into_bytes()),
        Format::Json => json(document),
        other if document.sets.is_none() => Err(refuse("geometry", "text or json", other)),
        Format::Latex | Format::Md => {
            Ok(for_paper(common.format, &sheets::label_sheets(document, TextOptions { all })))
        }
        Format::Csv => rows(|out| csv::write_sets(document, out)),
        other => Err(refuse("geometry", "text or json", other)),
    }
}

/// Tables for papers.
pub(super) fn for_paper(format: Format, sheets: &[Sheet]) -> Vec<u8> {
    if format == Format::Latex { typeset::latex(sheets) } else { typeset::markdown(sheets) }.into_bytes()
}

/// A verb that has no such form says what it prints.
pub(super) fn refuse(verb: &str, prints: &str, format: Format) -> CliError {
    CliError::Usage(format!("{verb} prints {prints}, not {}", format.name()))
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
