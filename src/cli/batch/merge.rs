//! `--merge`: results in JSON Lines joined in the order given, in any form.

use super::super::{CliError, output};
use super::arguments::Batch;
use super::forms::Form;
use super::journal::Head;
use super::summary::Summary;
use std::collections::HashSet;
use std::fs::File;
use std::io::{self, BufRead, BufReader, Write};
use std::path::{Path, PathBuf};

/// Joins `results` into the output of `arguments`.
///
/// # Errors
/// [`CliError::Input`] for a line that is no whole record and for a file that has two; nothing is written then.
pub fn merge(
    arguments: &Batch,
    results: &[PathBuf],
    summary: &mut Summary,
    out: &mut dyn Write,
) -> Result<(), CliError> {
    let Some(path) = arguments.output.as_deref() else {
        let failed = |source: io::Error| CliError::Write { path: None, source };
        let mut form = Form::new(arguments, out).map_err(failed)?;
        join(results, &mut form, summary)?;
        return form.finish().map_err(failed);
    };
    let mut wrong = None;
    let written = output::replace(path, |file| {
        let mut form = Form::to_file(arguments, file)?;
        wrong = join(results, &mut form, summary).err();
        match wrong {
            None => form.finish(),
            // Keeps the file that is there; the reason is told below.
            Some(_) => Err(io::Error::other("not merged")),
        }
    });
    wrong.map_or(written, Err)
}

fn join(results: &[PathBuf], form: &mut Form<'_>, summary: &mut Summary) -> Result<(), CliError> {
    let mut met = HashSet::new();
    for path in results {
        let failed = |source: io::Error| CliError::Read { path: path.clone(), source };
        let mut reader = BufReader::new(File::open(path).map_err(failed)?);
        let mut line = Vec::new();
        for number in 1.. {
            line.clear();
            if reader.read_until(b'\n', &mut line).map_err(failed)? == 0 {
                break;
            }
            let head = record(&line, path, number)?;
            if !met.insert(head.file.clone()) {
                let drawn = format!("{}:{number}: a second record of {}", path.display(), head.file);
                return Err(CliError::Input { drawn });
            }
            form.add(&line).map_err(|source| CliError::Write { path: None, source })?;
            summary.count(&head, false);
        }
    }
    Ok(())
}

fn record(line: &[u8], path: &Path, number: usize) -> Result<Head, CliError> {
    let wrong = |what: &str| CliError::Input { drawn: format!("{}:{number}: {what}", path.display()) };
    if !line.ends_with(b"\n") {
        return Err(wrong("the line breaks off: the run that wrote it did not end"));
    }
    serde_json::from_slice(line).map_err(|_| wrong("no record of batch in JSON Lines"))
}
