//! Level diagrams: the verb `levels`, and what `label --format svg` draws.

use super::arguments::{CountFrom, Drawing, Format, Label, Levels, PaperWidth, Zero};
use super::placing::choice;
use super::verbs::{CHARACTER_LIMIT, molden, refuse};
use super::{CliError, Status, output, use_threads};
use crate::diagram::{self, Count, DiagramError, Options, Width};
use crate::labelling::{self, Thresholds};
use crate::model::ANGSTROM_PER_BOHR;
use crate::report::build::{self, Wanted};
use crate::report::document::Document;
use crate::wavefunction;
use std::io::Write;
use std::path::Path;

pub fn levels(arguments: &Levels, out: &mut dyn Write, errors: &mut dyn Write) -> Result<Status, CliError> {
    use_threads(&arguments.common)?;
    match arguments.common.format {
        // Text is what stands there when nothing was said.
        Format::Svg | Format::Text => {}
        format => return Err(refuse("levels", "svg", format)),
    }
    if arguments.files.iter().filter(|file| file.as_os_str() == "-").count() > 1 {
        return Err(CliError::Usage("standard input can be read only once".to_owned()));
    }
    let options = Options {
        names: arguments.names.clone(),
        zero: match arguments.zero {
            Zero::Absolute => diagram::Zero::Absolute,
            Zero::Homo => diagram::Zero::Homo,
        },
        count: match arguments.count {
            CountFrom::Lowest => Count::Lowest,
            CountFrom::Frontier => Count::Frontier,
        },
        way: arguments.way,
        ..options(&arguments.drawing)
    };
    // One file after the other: only the documents stay in memory.
    let documents: Vec<Document> =
        arguments.files.iter().map(|file| document(file, arguments, errors)).collect::<Result<_, _>>()?;
    let drawn = diagram::series_svg(&documents, &options).map_err(|error| failed(&error))?;
    if !arguments.common.quiet {
        for caution in &drawn.cautions {
            // A closed standard error must not stop the result.
            let _ = writeln!(errors, "orbsieve: {caution}");
        }
    }
    output::deliver(arguments.common.output.as_deref(), drawn.svg.as_bytes(), out)?;
    Ok(Status::Done)
}

fn document(path: &Path, arguments: &Levels, errors: &mut dyn Write) -> Result<Document, CliError> {
    let (_, mut molecule) = molden(path, &arguments.common, errors)?;
    let tolerance_bohr = arguments.tolerance / ANGSTROM_PER_BOHR;
    let thresholds = Thresholds { tolerance_bohr, ..Thresholds::STANDARD };
    let choice = choice(&arguments.placing, &molecule)?;
    let labelled = labelling::label_in(&mut molecule, &thresholds, &choice)
        .map_err(|source| CliError::Label { path: path.to_owned(), source })?;
    let small = molecule.n_functions() <= CHARACTER_LIMIT;
    let lowdin = small.then(|| wavefunction::lowdin(&labelled.settled, &molecule)).flatten();
    let wanted = Wanted { window: None, frontier_transitions: false };
    let name = path.display().to_string();
    Ok(build::label_document(&name, &molecule, &labelled, lowdin.as_deref(), &thresholds, wanted))
}

/// The diagram of `label`.
pub(super) fn of_label(document: &Document, arguments: &Label) -> Result<Vec<u8>, CliError> {
    let options = Options { transitions: arguments.transitions, ..options(&arguments.drawing) };
    diagram::levels_svg(document, &options).map(String::into_bytes).map_err(|error| failed(&error))
}

fn options(drawing: &Drawing) -> Options {
    let width = drawing.width.map(|width| match width {
        PaperWidth::Single => Width::Single,
        PaperWidth::Double => Width::Double,
    });
    Options { range: drawing.range, width, ..Options::default() }
}

fn failed(error: &DiagramError) -> CliError {
    match error {
        DiagramError::NoLevels { .. } => CliError::Input { drawn: error.to_string() },
        DiagramError::Range { .. } | DiagramError::Names { .. } | DiagramError::Way { .. } => {
            CliError::Usage(error.to_string())
        }
    }
}
