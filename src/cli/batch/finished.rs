//! A finished Parquet output: whether it already says all that is asked for.
//!
//! Its columns cannot be taken over a file at a time, as lines and rows can (`journal`): it is current or made anew.

use super::super::CliError;
use super::arguments::Batch;
use super::in_order::{self, Threads};
use super::journal::{Geometry, Head};
use super::summary::Summary;
use super::work::{self, Settings};
use crate::report::parquet::{RowHead, heads};
use std::fs::File;
use std::path::{Path, PathBuf};

/// Whether `path` holds exactly the records of these files as they are; then they are counted.
///
/// What cannot be read as a table with the same columns is not current.
///
/// # Errors
/// [`CliError::Usage`] when threads cannot be started.
pub fn is_current(
    path: &Path,
    names: &[PathBuf],
    settings: &Settings<'_>,
    arguments: &Batch,
    summary: &mut Summary,
) -> Result<bool, CliError> {
    let Ok(file) = File::open(path) else { return Ok(false) };
    let Ok(heads) = heads(file, arguments.rows()) else { return Ok(false) };
    let named = names.iter().map(|name| name.display().to_string());
    if !heads.iter().map(|head| &head.file).eq(named.collect::<Vec<_>>().iter()) {
        return Ok(false);
    }
    let mut current = true;
    in_order::run(
        names.len(),
        Threads::share(arguments.threads, names.len()),
        |i| work::hash(&names[i], settings),
        |i, hash| {
            current &= heads[i].hash == hash;
            Ok(())
        },
    )?;
    for head in heads.into_iter().filter(|_| current) {
        let RowHead { file, hash, exit_status, point_group, error } = head;
        let geometry = point_group.map(|point_group| Geometry { point_group });
        summary.count(&Head { file, hash, exit_status, error, geometry }, true);
    }
    Ok(current)
}
