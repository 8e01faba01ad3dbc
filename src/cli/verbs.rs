//! One function a verb: open, call the layers below, deliver.

use super::arguments::{Common, Format, Geometry, Label, Table};
use super::explain::Ground;
use super::input::{self, Bytes};
use super::placing::choice;
use super::progress::Progress;
use super::{CliError, Status, draw, output, use_threads};
use crate::labelling::placement::{self, Choice, Placement};
use crate::labelling::{self, LabelError, Thresholds};
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
const CHARACTER_LIMIT: usize = 1200;

/// Bytes and meaning of a Molden file; warnings go to `errors`.
pub(super) fn molden(path: &Path, common: &Common, errors: &mut dyn Write) -> Result<(Bytes, Molecule), CliError> {
    let progress = Progress::start(common, "reading");
    let bytes = input::open(path)?;
    let read = model::read_molden(&bytes);
    drop(progress);
    let molecule = meaning(read, path, &bytes, common, errors)?;
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

pub fn label(arguments: &Label, out: &mut dyn Write, errors: &mut dyn Write) -> Result<Status, CliError> {
    use_threads(&arguments.common)?;
    let path = &arguments.file;
    let (bytes, mut molecule) = molden(path, &arguments.common, errors)?;
    let thresholds = Thresholds {
        tolerance_bohr: arguments.tolerance / ANGSTROM_PER_BOHR,
        degeneracy_hartree: arguments.degeneracy,
        purity: arguments.purity,
        ..Thresholds::STANDARD
    };
    let failed = |source: LabelError| CliError::Label { path: path.clone(), source };
    let choice = choice(&arguments.placing, &molecule)?;
    let progress = Progress::start(&arguments.common, "labels");
    let labelled = labelling::label_watched(&mut molecule, &thresholds, &choice, &progress.watch()).map_err(failed)?;
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
    progress.stage("what orbitals are made of");
    let small = molecule.n_functions() <= CHARACTER_LIMIT;
    let lowdin = (small || arguments.character).then(|| wavefunction::lowdin(&labelled.settled, &molecule)).flatten();
    progress.stage("transitions at the frontier");
    let wanted = Wanted { window: arguments.window, frontier_transitions: small };
    let document = build::label_document(&name, &molecule, &labelled, lowdin.as_deref(), &thresholds, wanted);
    drop(progress);
    let printed = print(&document, &arguments.common, arguments.all, || {
        text::label_text(&document, TextOptions { all: arguments.all })
    })?;
    if let Some(target) = &arguments.write_labels {
        let labels = build::sym_labels(&labelled);
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
        Format::Csv => return Err(refuse("table", "text, json, latex or md", Format::Csv)),
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
