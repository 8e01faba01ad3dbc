//! Records on their way out: lines as they are, or rows as CSV or Parquet.
//!
//! Every form is made from the JSON line, so that a record kept from an earlier run gives the same bytes as a new one.

use super::super::CliError;
use super::arguments::{Batch, BatchFormat};
use crate::report::rows::{self, Line, Rows};
use std::fs::File;
use std::io::{self, BufWriter, Write};

/// A form and where it goes.
pub enum Form<'a> {
    /// Lines of JSON as they are.
    Lines(Box<dyn Write + 'a>),
    /// Rows of CSV below a header.
    Csv(Rows, Box<dyn Write + 'a>),
    /// Rows in columns.
    #[cfg(feature = "parquet")]
    Parquet(Box<crate::report::parquet::Table<&'a mut File>>),
}

/// What this build or this way of writing cannot do.
///
/// # Errors
/// [`CliError::Usage`].
pub fn check(arguments: &Batch) -> Result<(), CliError> {
    let usage = |text: &str| Err(CliError::Usage(text.to_owned()));
    match arguments.format {
        BatchFormat::Parquet if !cfg!(feature = "parquet") => usage(
            "this build writes no Parquet: install it with `cargo install --path . --features parquet`, or take --format csv",
        ),
        BatchFormat::Parquet if arguments.output.is_none() => usage("Parquet is no text: name a file with --output"),
        BatchFormat::Json if arguments.rows.is_some() => {
            usage("--rows is for csv and parquet: a line of JSON holds the whole record")
        }
        _ => Ok(()),
    }
}

impl<'a> Form<'a> {
    /// A form as text, with the header of CSV written.
    ///
    /// # Errors
    /// Whatever the writer reports.
    pub fn new(arguments: &Batch, mut out: impl Write + 'a) -> io::Result<Self> {
        Ok(match arguments.format {
            BatchFormat::Csv => {
                out.write_all(&rows::csv_header(arguments.rows()))?;
                Self::Csv(arguments.rows(), Box::new(out))
            }
            BatchFormat::Json | BatchFormat::Parquet => Self::Lines(Box::new(out)),
        })
    }

    /// Any form.
    ///
    /// # Errors
    /// Whatever the file reports.
    pub fn to_file(arguments: &Batch, file: &'a mut File) -> io::Result<Self> {
        #[cfg(feature = "parquet")]
        if arguments.format == BatchFormat::Parquet {
            let table = crate::report::parquet::Table::new(arguments.rows(), file);
            return table.map(|table| Self::Parquet(Box::new(table))).map_err(io::Error::other);
        }
        Self::new(arguments, BufWriter::new(file))
    }

    /// Adds one record, a line with its newline.
    ///
    /// # Errors
    /// Whatever the writer reports.
    pub fn add(&mut self, line: &[u8]) -> io::Result<()> {
        match self {
            Self::Lines(out) => out.write_all(line),
            Self::Csv(rows, out) => out.write_all(&rows::csv_rows(&parsed(line)?, *rows)),
            #[cfg(feature = "parquet")]
            Self::Parquet(table) => table.add(&parsed(line)?).map_err(io::Error::other),
        }
    }

    /// Adds what an output of the same form holds of one record.
    ///
    /// # Errors
    /// Whatever the writer reports.
    pub fn copy(&mut self, bytes: &[u8]) -> io::Result<()> {
        match self {
            Self::Lines(out) | Self::Csv(_, out) => out.write_all(bytes),
            #[cfg(feature = "parquet")]
            Self::Parquet(_) => Err(io::Error::new(io::ErrorKind::Unsupported, "Parquet holds no records to copy")),
        }
    }

    /// Writes what is left.
    ///
    /// # Errors
    /// Whatever the writer reports.
    pub fn finish(self) -> io::Result<()> {
        match self {
            Self::Lines(mut out) | Self::Csv(_, mut out) => out.flush(),
            #[cfg(feature = "parquet")]
            Self::Parquet(table) => table.finish().map_err(io::Error::other),
        }
    }
}

fn parsed(line: &[u8]) -> io::Result<Line> {
    serde_json::from_slice(line).map_err(io::Error::from)
}
