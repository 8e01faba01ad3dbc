//! Records that are already there: the journal beside an output, and the output of an earlier run.
//!
//! A journal `FILE.part` holds whole lines, one a record, in the order in which they were finished; it only grows, so a
//! kill costs at most its last line. When all records are there the output is made from it and it goes away.

use super::super::{CliError, output};
use super::arguments::{Batch, BatchFormat};
use super::forms::Form;
use crate::report::rows::{self, Rows};
use serde::Deserialize;
use std::collections::HashMap;
use std::fs::{File, OpenOptions, TryLockError};
use std::io::{self, BufRead, BufReader, Read, Seek, SeekFrom, Write};
use std::path::{Path, PathBuf};

/// What is asked of a line without reading the rest.
#[derive(Debug, Clone, PartialEq, Eq, Deserialize)]
pub struct Head {
    /// As given.
    pub file: String,
    /// Null where the file could not be read.
    pub hash: Option<String>,
    /// That of `label`.
    pub exit_status: u8,
    /// Why there are no labels.
    pub error: Option<String>,
    /// Where there are labels.
    pub geometry: Option<Geometry>,
}

impl Head {
    /// What a row of any table says.
    fn of_row(row: &csv::StringRecord) -> Option<Self> {
        let text = |cell: &str| (!cell.is_empty()).then(|| cell.to_owned());
        let [file, hash, exit_status, point_group] = [0, 1, 2, 3].map(|at| row.get(at));
        Some(Self {
            file: file?.to_owned(),
            hash: hash.and_then(text),
            exit_status: exit_status?.parse().ok()?,
            error: row.get(row.len().checked_sub(1)?).and_then(text),
            geometry: point_group.and_then(text).map(|point_group| Geometry { point_group }),
        })
    }
}

/// The group of the labels.
#[derive(Debug, Clone, PartialEq, Eq, Deserialize)]
pub struct Geometry {
    /// Schoenflies.
    pub point_group: String,
}

/// Where a record lies.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Place {
    source: Source,
    offset: u64,
    length: usize,
}

impl Place {
    fn stretch(&mut self, end: u64) {
        self.length = usize::try_from(end.saturating_sub(self.offset)).unwrap_or(usize::MAX);
    }
}

#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Source {
    Journal,
    Output,
}

/// Records of earlier runs by the name of their file.
#[derive(Debug, Default)]
pub struct Kept {
    by_file: HashMap<String, (Place, Head)>,
}

impl Kept {
    /// The record of this file with these contents under the same settings.
    pub fn find(&self, file: &str, hash: &str) -> Option<(Place, Head)> {
        let (place, head) = self.by_file.get(file)?;
        (head.hash.as_deref() == Some(hash)).then(|| (*place, head.clone()))
    }

    /// Takes what the output of an earlier run holds; without the file, or of another form, nothing.
    ///
    /// # Errors
    /// [`CliError::Read`] when it is there and cannot be read.
    pub fn read_output(&mut self, path: &Path, arguments: &Batch) -> Result<(), CliError> {
        let failed = |source: io::Error| CliError::Read { path: path.to_owned(), source };
        let file = match File::open(path) {
            Ok(file) => file,
            Err(error) if error.kind() == io::ErrorKind::NotFound => return Ok(()),
            Err(error) => return Err(failed(error)),
        };
        match arguments.format {
            BatchFormat::Json => self.read_lines(file, Source::Output).map(drop).map_err(failed),
            BatchFormat::Csv => self.read_csv(file, arguments.rows()).map_err(failed),
            // Its columns cannot be taken over a file at a time: see `finished`.
            BatchFormat::Parquet => Ok(()),
        }
    }

    /// Takes the rows of each file in a CSV output with the same columns.
    fn read_csv(&mut self, file: File, rows: Rows) -> io::Result<()> {
        let mut reader = csv::ReaderBuilder::new().has_headers(false).flexible(true).from_reader(BufReader::new(file));
        let mut row = csv::StringRecord::new();
        let columns = rows::columns(rows);
        let mut begun: Option<(Place, Head)> = None;
        for number in 0.. {
            let more = match reader.read_record(&mut row) {
                Err(error) if error.is_io_error() => return Err(error.into()),
                // What is no such table is made anew.
                Err(_) => return Ok(()),
                Ok(more) => more,
            };
            if number == 0 {
                if !row.iter().eq(columns.iter().map(|column| column.0)) {
                    return Ok(());
                }
                continue;
            }
            let offset = row.position().map_or(0, csv::Position::byte);
            let next = if more { Head::of_row(&row) } else { None };
            match (&mut begun, &next) {
                (Some((place, head)), Some(next)) if head.file == next.file => place.stretch(reader.position().byte()),
                _ => {
                    if let Some((place, head)) = begun.take() {
                        self.by_file.insert(head.file.clone(), (place, head));
                    }
                    let Some(head) = next else { return Ok(()) };
                    let mut place = Place { source: Source::Output, offset, length: 0 };
                    place.stretch(reader.position().byte());
                    begun = Some((place, head));
                }
            }
        }
        Ok(())
    }

    /// Takes all whole lines that are records; gives the length of all whole lines.
    fn read_lines(&mut self, file: File, source: Source) -> io::Result<u64> {
        let mut reader = BufReader::new(file);
        let mut line = Vec::new();
        let mut offset = 0;
        loop {
            line.clear();
            let length = reader.read_until(b'\n', &mut line)?;
            if !line.ends_with(b"\n") {
                return Ok(offset);
            }
            if let Ok(head) = serde_json::from_slice::<Head>(&line) {
                self.by_file.insert(head.file.clone(), (Place { source, offset, length }, head));
            }
            offset += length as u64;
        }
    }
}

/// The journal of one output, open for more records.
#[derive(Debug)]
pub struct Journal {
    target: PathBuf,
    path: PathBuf,
    file: File,
    length: u64,
}

impl Journal {
    /// Opens the journal of `target`; to resume, what it holds goes to `kept` and its torn last line away.
    ///
    /// # Errors
    /// [`CliError::Usage`] when another run writes it, or when there is one and nobody said to resume;
    /// [`CliError::Write`] when it cannot be opened.
    pub fn open(target: &Path, resume: bool, kept: &mut Kept) -> Result<Self, CliError> {
        let mut name = target.as_os_str().to_owned();
        name.push(".part");
        let path = PathBuf::from(name);
        let failed = |source: io::Error| CliError::Write { path: Some(path.clone()), source };
        if target.is_dir() {
            let source = io::Error::from(io::ErrorKind::IsADirectory);
            return Err(CliError::Write { path: Some(target.to_owned()), source });
        }
        let there = path.metadata().is_ok_and(|metadata| metadata.len() > 0);
        let mut file =
            OpenOptions::new().read(true).write(true).create(true).truncate(false).open(&path).map_err(failed)?;
        // Where the file system knows no locks, nothing is lost but the warning.
        if matches!(file.try_lock(), Err(TryLockError::WouldBlock)) {
            return Err(CliError::Usage(format!("another run is writing {}", path.display())));
        }
        if there && !resume {
            return Err(CliError::Usage(format!(
                "{} is left of a run that did not end: go on with --resume, or remove it to begin anew",
                path.display()
            )));
        }
        let length = kept.read_lines(file.try_clone().map_err(failed)?, Source::Journal).map_err(failed)?;
        file.set_len(length).and_then(|()| file.seek(SeekFrom::Start(length))).map_err(failed)?;
        Ok(Self { target: target.to_owned(), path, file, length })
    }

    /// Adds a record; a kill after this does not lose it.
    ///
    /// # Errors
    /// [`CliError::Write`].
    pub fn append(&mut self, line: &[u8]) -> Result<Place, CliError> {
        self.file.write_all(line).map_err(|source| CliError::Write { path: Some(self.path.clone()), source })?;
        let place = Place { source: Source::Journal, offset: self.length, length: line.len() };
        self.length += line.len() as u64;
        Ok(place)
    }

    /// Makes the output of the records at `places`, in this order, and takes the journal away.
    ///
    /// # Errors
    /// [`CliError::Write`]; the journal is then still there.
    pub fn finish(self, arguments: &Batch, places: &[Place]) -> Result<(), CliError> {
        let Self { target, path, mut file, length } = self;
        let failed = |source: io::Error| CliError::Write { path: Some(target.clone()), source };
        if arguments.format == BatchFormat::Json && is_whole(places, Source::Journal, 0, length) {
            file.sync_all().map_err(failed)?;
            if let Ok(metadata) = target.metadata() {
                file.set_permissions(metadata.permissions()).map_err(failed)?;
            }
            return std::fs::rename(&path, &target).map_err(failed);
        }
        let old = target.metadata().map_or(0, |metadata| metadata.len());
        let header = if arguments.format == BatchFormat::Csv { rows::csv_header(arguments.rows()).len() } else { 0 };
        if places.is_empty() || !is_whole(places, Source::Output, header as u64, old) {
            let from_output = places.iter().any(|place| place.source == Source::Output);
            let mut earlier = from_output.then(|| File::open(&target)).transpose().map_err(failed)?;
            output::replace(&target, |out| {
                let mut form = Form::to_file(arguments, out)?;
                let mut line = Vec::new();
                for place in places {
                    line.resize(place.length, 0);
                    if let (Source::Output, Some(earlier)) = (place.source, &mut earlier) {
                        read_at(earlier, *place, &mut line)?;
                        form.copy(&line)?;
                    } else {
                        read_at(&mut file, *place, &mut line)?;
                        form.add(&line)?;
                    }
                }
                form.finish()
            })?;
        }
        std::fs::remove_file(&path).map_err(|source| CliError::Write { path: Some(path.clone()), source })
    }
}

fn read_at(file: &mut File, place: Place, bytes: &mut [u8]) -> io::Result<()> {
    file.seek(SeekFrom::Start(place.offset))?;
    file.read_exact(bytes)
}

/// Whether the records, in this order, are all that the file holds from `start` to `length`, its end.
fn is_whole(places: &[Place], source: Source, start: u64, length: u64) -> bool {
    let mut end = start;
    for place in places {
        if place.source != source || place.offset != end {
            return false;
        }
        end += place.length as u64;
    }
    end == length
}
