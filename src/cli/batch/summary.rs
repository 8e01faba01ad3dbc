//! What is said at the end of a batch on standard error, and its exit status.

use super::super::Status;
use super::journal::Head;
use indicatif::{ProgressBar, ProgressStyle};
use std::collections::BTreeMap;
use std::io::{self, Write};

/// More failures than this are counted, not named.
const NAMED: usize = 10;

/// Counts over all records.
#[derive(Debug)]
pub struct Summary {
    files: usize,
    kept: usize,
    groups: BTreeMap<String, usize>,
    statuses: BTreeMap<u8, usize>,
    failures: Vec<(String, String)>,
    progress: ProgressBar,
}

impl Summary {
    /// Nothing counted; progress towards `expected` is drawn on a terminal only.
    pub fn new(expected: usize) -> Self {
        let progress = if expected == 0 { ProgressBar::hidden() } else { ProgressBar::new(expected as u64) };
        if let Ok(style) = ProgressStyle::with_template("{bar:30} {pos}/{len} files, {eta} left") {
            progress.set_style(style);
        }
        Self { files: 0, kept: 0, groups: BTreeMap::new(), statuses: BTreeMap::new(), failures: Vec::new(), progress }
    }

    /// One record more.
    pub fn count(&mut self, head: &Head, kept: bool) {
        self.files += 1;
        self.kept += usize::from(kept);
        if let Some(geometry) = &head.geometry {
            *self.groups.entry(geometry.point_group.clone()).or_default() += 1;
        }
        if head.exit_status != 0 {
            *self.statuses.entry(head.exit_status).or_default() += 1;
            if self.failures.len() < NAMED {
                let reason = head.error.as_deref().unwrap_or_default().lines().next().unwrap_or_default();
                self.failures.push((head.file.clone(), reason.to_owned()));
            }
        }
        self.progress.inc(1);
    }

    /// Done, or what was worst: numbers that fail their own check, else inputs that cannot be used.
    pub fn status(&self) -> Status {
        if self.statuses.contains_key(&(Status::NumbersFail as u8)) {
            Status::NumbersFail
        } else if self.statuses.is_empty() {
            Status::Done
        } else {
            Status::BadInput
        }
    }

    /// A few lines for a person; no times, so that equal runs say the same.
    ///
    /// # Errors
    /// Whatever the writer reports.
    pub fn write(&self, out: &mut dyn Write) -> io::Result<()> {
        self.progress.finish_and_clear();
        let failed: usize = self.statuses.values().sum();
        write!(out, "{} files: {} labelled, {failed} failed", self.files, self.files - failed)?;
        if self.kept > 0 {
            write!(out, "; {} records kept from an earlier run", self.kept)?;
        }
        writeln!(out)?;
        let mut groups: Vec<(&String, &usize)> = self.groups.iter().collect();
        groups.sort_by_key(|(name, count)| (std::cmp::Reverse(**count), *name));
        if !groups.is_empty() {
            let list: Vec<String> = groups.iter().map(|(name, count)| format!("{name} {count}")).collect();
            writeln!(out, "Point groups  {}", list.join(", "))?;
        }
        for (file, reason) in &self.failures {
            writeln!(out, "Failed        {file}: {reason}")?;
        }
        if failed > self.failures.len() {
            writeln!(out, "              and {} more: records with an `error`", failed - self.failures.len())?;
        }
        Ok(())
    }
}
