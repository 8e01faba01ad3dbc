//! The verb `transitions`: label the orbitals, pair the sets asked for, deliver.

use super::arguments::{Format, Transitions};
use super::explain::Ground;
use super::placing::choice;
use super::progress::Progress;
use super::verbs::{for_paper, json, molden, refuse, rows};
use super::{CliError, Status, output, use_threads};
use crate::labelling::{self, Thresholds};
use crate::model::ANGSTROM_PER_BOHR;
use crate::report::text::EV_PER_HARTREE;
use crate::report::transitions_text::transitions_text;
use crate::report::{build, csv, sheets};
use crate::selection::Choice;
use std::io::Write;

pub fn transitions(arguments: &Transitions, out: &mut dyn Write, errors: &mut dyn Write) -> Result<Status, CliError> {
    use_threads(&arguments.common)?;
    let path = &arguments.file;
    let (_, mut molecule) = molden(path, &arguments.common, errors)?;
    let tolerance_bohr = arguments.tolerance / ANGSTROM_PER_BOHR;
    let thresholds = Thresholds { tolerance_bohr, ..Thresholds::STANDARD };
    let placed = choice(&arguments.placing, &molecule)?;
    let progress = Progress::start(&arguments.common, "labels");
    let labelled = labelling::label_watched(&mut molecule, &thresholds, &placed, &progress.watch())
        .map_err(|source| CliError::Label { path: path.clone(), source })?;
    let name = path.display().to_string();
    if let Some([from, to]) = arguments.explain.as_deref() {
        drop(progress);
        let ground = Ground { name: &name, molecule: &molecule, labelled: &labelled, common: &arguments.common };
        return ground.transition(from, to, out);
    }
    let choice = Choice {
        from: arguments.from.clone(),
        to: arguments.to.clone(),
        window: arguments.window,
        largest_gap: arguments.max_ev.map(|ev| ev / EV_PER_HARTREE),
    };
    progress.stage("moments of the transitions");
    let document =
        build::transitions_document(&name, &molecule, &labelled, &thresholds, &choice, arguments.allowed_only)
            .map_err(|error| CliError::Usage(format!("{name}: {error}")))?;
    drop(progress);
    let printed = match arguments.common.format {
        Format::Text => transitions_text(&document).into_bytes(),
        Format::Json => json(&document)?,
        Format::Latex | Format::Md => for_paper(arguments.common.format, &sheets::transition_sheets(&document)),
        Format::Csv => rows(|out| csv::write_transitions(&document, out))?,
        format @ (Format::Svg | Format::Html) => {
            return Err(refuse("transitions", "text, json, csv, latex or md", format));
        }
    };
    output::deliver(arguments.common.output.as_deref(), &printed, out)?;
    Ok(Status::Done)
}
