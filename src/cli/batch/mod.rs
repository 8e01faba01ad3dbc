//! `batch`: many files, one record each, in the order given, whatever happens to single files.
//!
//! Reading order: `arguments`, `inputs` (which files), `work` (one file, its record), `in_order` (many at a time),
//! `journal` (what is already there), `forms` (JSON Lines, CSV, Parquet), `summary`.
//! Not here: the keys of a record (`report::record`), the columns of a table (`report::rows`).

mod arguments;
#[cfg(feature = "parquet")]
mod finished;
mod forms;
mod in_order;
mod inputs;
mod journal;
mod merge;
mod summary;
mod work;

pub use arguments::Batch;

use super::{CliError, Status, output};
use forms::Form;
use in_order::Threads;
use journal::{Journal, Kept, Place};
use std::io::{self, Write};
use std::path::{Path, PathBuf};
use summary::Summary;
use work::{Outcome, Settings};

/// Labels all files; see [`Batch`].
///
/// A file that fails is a record. The status is 0 when none did, else 4 when numbers of one failed their own check, else 3.
///
/// # Errors
/// [`CliError`] when there is nothing to do, or the result cannot be written.
pub fn batch(arguments: &Batch, out: &mut dyn Write, errors: &mut dyn Write) -> Result<Status, CliError> {
    forms::check(arguments)?;
    let names = inputs::names(arguments)?;
    let mut summary = Summary::new(if arguments.quiet { 0 } else { names.len() });
    if arguments.merge {
        merge::merge(arguments, &names, &mut summary, out)?;
    } else {
        let settings = Settings::new(arguments)?;
        match arguments.output.as_deref().filter(|path| !output::is_stream(path)) {
            Some(path) => into_file(arguments, path, &names, &settings, &mut summary)?,
            None => into_stream(arguments, &names, &settings, &mut summary, out)?,
        }
    }
    if !arguments.quiet {
        // A closed standard error must not change the result.
        let _ = summary.write(errors);
    }
    Ok(summary.status())
}

/// Records go out one by one: standard output, a pipe, a device.
fn into_stream(
    arguments: &Batch,
    names: &[PathBuf],
    settings: &Settings<'_>,
    summary: &mut Summary,
    out: &mut dyn Write,
) -> Result<(), CliError> {
    let path = arguments.output.clone();
    let failed = |source: io::Error| CliError::Write { path: path.clone(), source };
    let mut device = match &path {
        Some(path) => Some(std::fs::OpenOptions::new().write(true).open(path).map_err(failed)?),
        None => None,
    };
    let mut form = match &mut device {
        Some(device) => Form::to_file(arguments, device),
        None => Form::new(arguments, out),
    }
    .map_err(failed)?;
    let none = Kept::default();
    let threads = Threads::share(arguments.threads, names.len());
    in_order::run(
        names.len(),
        threads,
        |i| work::outcome(&names[i], settings, &none),
        |_, outcome| {
            if let Outcome::Made { line, head } = outcome {
                form.add(&line).map_err(failed)?;
                summary.count(&head, false);
            }
            Ok(())
        },
    )?;
    form.finish().map_err(failed)
}

/// Records are kept in a journal beside the file, which appears when all are there.
fn into_file(
    arguments: &Batch,
    path: &Path,
    names: &[PathBuf],
    settings: &Settings<'_>,
    summary: &mut Summary,
) -> Result<(), CliError> {
    let mut kept = Kept::default();
    if arguments.resume {
        #[cfg(feature = "parquet")]
        if arguments.format == arguments::BatchFormat::Parquet
            && finished::is_current(path, names, settings, arguments, summary)?
        {
            return Ok(());
        }
        kept.read_output(path, arguments)?;
    }
    let mut journal = Journal::open(path, arguments.resume, &mut kept)?;
    let mut places: Vec<Place> = Vec::with_capacity(names.len());
    let threads = Threads::share(arguments.threads, names.len());
    in_order::run(
        names.len(),
        threads,
        |i| work::outcome(&names[i], settings, &kept),
        |_, outcome| {
            match outcome {
                Outcome::Made { line, head } => {
                    places.push(journal.append(&line)?);
                    summary.count(&head, false);
                }
                Outcome::Kept { place, head } => {
                    places.push(place);
                    summary.count(&head, true);
                }
            }
            Ok(())
        },
    )?;
    journal.finish(arguments, &places)
}
